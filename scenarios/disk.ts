/** Reads scenarios and turbines from the disk. */
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { readdir, readFile } from 'node:fs/promises';
import { dirname, isAbsolute, join, normalize, relative, resolve, sep } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { Turbine } from '../sim/turbine.ts';
import { cachedField } from './field-cache.ts';
import { type Files, readScenario, readTurbine, readWind, readWindParts, type WindData } from './load.ts';
import type { ScenarioData } from './scenario.ts';

const REASONS: Readonly<Record<string, string>> = {
  ENOENT: 'no such file',
  ENOTDIR: 'no such file',
  EISDIR: 'it is a folder, not a file',
  EACCES: 'no permission to read it',
};

function reasonOf(error: unknown): string {
  const code = error instanceof Error && 'code' in error ? String(error.code) : '';
  return REASONS[code] ?? String(error);
}

async function readUtf8(path: string): Promise<string> {
  let bytes: Buffer;
  try {
    bytes = await readFile(path);
  } catch (error) {
    throw new Error(reasonOf(error));
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw new Error('it is not UTF-8 text');
  }
}

export const diskFiles: Files = {
  read: readUtf8,
  resolve: (reference, from) =>
    isAbsolute(reference) || from === undefined ? normalize(reference) : join(dirname(from), reference),
  relative: (path, from) =>
    relative(dirname(resolve(from)), resolve(path))
      .split(sep)
      .join('/'),
  digest: async (text) => createHash('sha256').update(text).digest('hex'),
  importDefault: async (path) => {
    const module: { default?: unknown } = await import(pathToFileURL(resolve(path)).href);
    return module.default;
  },
  turbulence: (turbulence) => cachedField(turbulence),
};

export interface LoadOptions {
  /** Overrides as the command line gives them, `path=value`. */
  set?: readonly string[];
}

/**
 * Reads a scenario file with every file it refers to.
 * @throws InputError with every problem found, each with file, line and column
 */
export function loadScenario(path: string, { set = [] }: LoadOptions = {}): Promise<ScenarioData> {
  return readScenario(diskFiles, path, set);
}

/**
 * Reads a turbine file.
 * @throws InputError with every problem found, each with file, line and column
 */
export function loadTurbine(path: string, { set = [] }: LoadOptions = {}): Promise<Turbine> {
  return readTurbine(diskFiles, path, set);
}

/**
 * Reads the wind of a scenario file.
 * @throws InputError with every problem found, each with file, line and column
 */
export function loadWind(path: string, { set = [] }: LoadOptions = {}): Promise<WindData> {
  return readWind(diskFiles, path, set);
}

/**
 * Reads a wind from its parts, each written as in a scenario's list.
 * @param run the turbine's file, how long the wind blows (s), and the seed
 * @throws InputError with every problem found
 */
export function loadWindParts(
  texts: readonly string[],
  run: { turbine: string; duration: number; seed: number },
): Promise<WindData> {
  return readWindParts(diskFiles, texts, run);
}

/** The folder of the turbines, controllers, protections and scenarios that come with the package. */
export function shippedFolder(): string {
  let folder = dirname(fileURLToPath(import.meta.url));
  while (!existsSync(join(folder, 'package.json')) && dirname(folder) !== folder) folder = dirname(folder);
  return join(folder, 'scenarios', 'shipped');
}

/** Paths of the shipped scenarios, in the order of the story they tell. */
export async function shippedScenarios(): Promise<string[]> {
  const folder = shippedFolder();
  const files = (await readdir(folder)).filter((name) => name.endsWith('.yaml'));
  return files.sort().map((name) => join(folder, name));
}
