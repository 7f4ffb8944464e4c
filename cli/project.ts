/** A fresh project folder: shipped files that a user can edit, with schemas for their editor. */
import { mkdir, readdir, readFile, rename, rm, writeFile } from 'node:fs/promises';
import { dirname, join, resolve } from 'node:path';
import { loadScenario, shippedFolder } from '../scenarios/disk.ts';
import { InputError } from '../scenarios/input-error.ts';
import { FILE_KINDS } from '../scenarios/schema/file-kind.ts';
import { CAUTION } from '../scenarios/summary.ts';
import { makeFolder, schemaFileName, writeSchemaFiles, writingFault } from './schema-file.ts';

/** The shipped scenarios that a project starts with; the files they refer to come along. */
const STARTERS = ['04-operating-gust.yaml', '08-grid-loss-at-the-crest.yaml'];

const SCHEMA_FOLDER = 'schemas';

const README = `# A galehold project

An invented turbine, its control, its safety chain, and scenarios that put them to the test. Everything is text: keep
the folder under version control and edit what you like.

| file | says |
|---|---|
| \`turbines/\` | rotor, drivetrain, tower, pitch drives, generator, brake, sensors, ratings |
| \`controllers/\` | control laws, their gains and schedule, and how the machine starts and stops |
| \`protections/\` | guards of the safety chain and the stops that they start |
| \`*.yaml\` | scenarios: wind, events, and the limits that make a run pass or fail |
| \`schemas/\` | JSON Schemas; editors that know YAML use them to complete and check |

Try:

    galehold run ${STARTERS[0]}
    galehold run ${STARTERS[1]} --set "wind.0.speed=20 m/s"
    galehold trim turbines/skerry-3.6-130.yaml

${CAUTION}
`;

/** The editor's hint to the schema of a file that lies `depth` folders down; empty for files that have none. */
function editorHint(text: string, depth: number): string {
  const kind = FILE_KINDS.find((k) => new RegExp(`^galehold: ${k}/`, 'm').test(text));
  if (kind === undefined) return '';
  return `# yaml-language-server: $schema=${depth === 0 ? './' : '../'.repeat(depth)}${SCHEMA_FOLDER}/${schemaFileName(kind)}\n`;
}

/** Paths of the starters and of every file they refer to, relative to the shipped folder. */
async function shippedPaths(): Promise<string[]> {
  const scenarios = await Promise.all(STARTERS.map((name) => loadScenario(join(shippedFolder(), name))));
  return [...new Set(scenarios.flatMap(({ inputs }) => inputs.map(({ path }) => path)))];
}

async function writeProject(folder: string): Promise<void> {
  for (const path of await shippedPaths()) {
    const text = await readFile(join(shippedFolder(), path), 'utf8');
    await mkdir(dirname(join(folder, path)), { recursive: true });
    await writeFile(join(folder, path), editorHint(text, path.split('/').length - 1) + text);
  }
  await writeSchemaFiles(join(folder, SCHEMA_FOLDER), FILE_KINDS);
  await writeFile(join(folder, 'README.md'), README);
}

function unusable(folder: string, message: string): InputError {
  return new InputError([{ file: folder, line: 0, column: 0, message }]);
}

async function entriesOf(folder: string): Promise<string[]> {
  try {
    return await readdir(folder);
  } catch (cause) {
    const { code, message } = cause as NodeJS.ErrnoException;
    if (code === 'ENOENT') return [];
    throw unusable(folder, code === 'ENOTDIR' ? 'is a file; a folder is due' : `cannot be read (${message})`);
  }
}

/**
 * Writes a project whole or not at all.
 * @param folder a new folder inside one that exists, or an empty one
 * @returns the paths written, relative to the folder
 * @throws InputError where the folder is not empty or cannot be written
 */
export async function createProject(folder: string): Promise<string[]> {
  if ((await entriesOf(folder)).length > 0) throw unusable(folder, 'is not empty; init needs a new or an empty folder');
  const target = resolve(folder);
  let isNew = false;
  let moved: string[] = [];
  const draft = join(target, `.galehold-${process.pid}.part`);
  try {
    isNew = await makeFolder(target);
    await writeProject(draft);
    for (const entry of await readdir(draft)) {
      await rename(join(draft, entry), join(target, entry));
      moved = [...moved, entry];
    }
    await rm(draft, { recursive: true });
  } catch (cause) {
    for (const path of [draft, ...moved.map((entry) => join(target, entry)), ...(isNew ? [target] : [])]) {
      await rm(path, { recursive: true, force: true });
    }
    if (cause instanceof InputError) throw cause;
    throw unusable(folder, writingFault(cause));
  }
  const written = await readdir(target, { recursive: true, withFileTypes: true });
  return written
    .filter((e) => e.isFile())
    .map((e) => join(folder, join(e.parentPath, e.name).slice(target.length + 1)));
}
