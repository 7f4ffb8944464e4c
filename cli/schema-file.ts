import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import type { FileKind } from '../scenarios/schema/file-kind.ts';
import { jsonSchema } from '../scenarios/schema/json-schema.ts';
import { writeWholeFile } from './whole-file.ts';

export function schemaFileName(kind: FileKind): string {
  return `${kind}.schema.json`;
}

/** Makes a folder inside one that exists. Returns whether it is new; throws what the file system says. */
export async function makeFolder(folder: string): Promise<boolean> {
  try {
    await mkdir(folder);
    return true;
  } catch (cause) {
    if ((cause as NodeJS.ErrnoException).code !== 'EEXIST') throw cause;
    return false;
  }
}

/** Why a folder could not be written, in words. */
export function writingFault(cause: unknown): string {
  const { code, message } = cause as NodeJS.ErrnoException;
  return `cannot be written (${code === 'ENOENT' ? 'the folder around it does not exist' : message})`;
}

/** Writes the JSON Schema of each kind to `folder`, which is made if need be. Throws what the file system says. */
export async function writeSchemaFiles(folder: string, kinds: readonly FileKind[]): Promise<string[]> {
  await makeFolder(folder);
  const paths = kinds.map((kind) => join(folder, schemaFileName(kind)));
  for (const [i, kind] of kinds.entries()) {
    await writeWholeFile(paths[i] ?? '', `${JSON.stringify(jsonSchema(kind), null, 2)}\n`);
  }
  return paths;
}
