/**
 * Files kept in memory, as a browser would have them, over those of the folder `machine`: an early state of the shipped
 * ones, kept so that tuning those does not move the lines and numbers that tests name.
 */
import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { posix } from 'node:path';
import { fileURLToPath } from 'node:url';
import { InputError } from '../../scenarios/input-error.ts';
import type { Files } from '../../scenarios/load.ts';

export const MACHINE_FOLDER = fileURLToPath(new URL('machine', import.meta.url));

const machine = new Map(
  readdirSync(MACHINE_FOLDER, { recursive: true, encoding: 'utf8' })
    .filter((path) => path.endsWith('.yaml'))
    .map((path) => [path.replaceAll('\\', '/'), readFileSync(posix.join(MACHINE_FOLDER, path), 'utf8')]),
);

export const TURBINE = 'turbines/skerry-3.6-130.yaml';
export const CONTROLLER = 'controllers/skerry-pi.yaml';
export const PROTECTION = 'protections/skerry-chain.yaml';

export function machineText(path: string): string {
  const text = machine.get(path);
  if (text === undefined) throw new Error(`no file ${path}`);
  return text;
}

/** A file of the machine with one piece of its text replaced. */
export function changed(path: string, from: string | RegExp, to: string): string {
  const text = machineText(path);
  const result = text.replace(from, to);
  if (result === text) throw new Error(`${path} does not contain ${from}`);
  return result;
}

export interface Module {
  text?: string;
  exported: unknown;
}

export function memoryFiles(
  extra: Readonly<Record<string, string>>,
  modules: Readonly<Record<string, Module>> = {},
): Files {
  return {
    async read(path) {
      const text = extra[path] ?? (path in modules ? 'module' : machine.get(path));
      if (text === undefined) throw new Error('no such file');
      return text;
    },
    resolve: (reference, from) => posix.join(from === undefined ? '.' : posix.dirname(from), reference),
    relative: (path, from) => posix.relative(posix.dirname(from), path),
    digest: async (text) => createHash('sha256').update(text).digest('hex'),
    async importDefault(path) {
      const exported = modules[path]?.exported;
      if (exported instanceof Error) throw exported;
      return exported;
    },
  };
}

/** The lines of the message with which an attempt to read fails. */
export async function messagesOf(reading: Promise<unknown>): Promise<string[]> {
  try {
    await reading;
  } catch (error) {
    if (error instanceof InputError) return error.message.split('\n');
    throw error;
  }
  return [];
}

/** A scenario of few lines on that machine. `more` is put at its end. */
export function scenarioText(more = '', without: readonly string[] = []): string {
  const lines = [
    'galehold: scenario/1',
    'title: A test',
    `turbine: ${TURBINE}`,
    `controller: ${CONTROLLER}`,
    `protection: ${PROTECTION}`,
    'wind: [{ kind: steady, speed: 14 m/s }]',
    'start: { kind: trim, wind: 14 m/s }',
    'duration: 60 s',
  ].filter((line) => !without.some((key) => line.startsWith(`${key}:`)));
  return `${[...lines, more].join('\n')}\n`;
}
