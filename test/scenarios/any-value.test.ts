import { describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { InputError } from '../../scenarios/input-error.ts';
import { readScenario } from '../../scenarios/load.ts';
import { CONTROLLER, machineText, memoryFiles, PROTECTION, TURBINE } from './memory-files.ts';

const SCENARIO = 'grid-loss-at-the-crest.yaml';

/** Every path in a file's content, values and what holds them. */
function paths(content: unknown, above = ''): string[] {
  if (typeof content !== 'object' || content === null) return [];
  return Object.entries(content).flatMap(([key, value]) => [`${above}${key}`, ...paths(value, `${above}${key}.`)]);
}

function pathsOf(file: string, lead: string): string[] {
  return paths(parse(machineText(file)), lead);
}

const all = [
  ...pathsOf(SCENARIO, ''),
  ...pathsOf(TURBINE, 'turbine.'),
  ...pathsOf(CONTROLLER, 'controller.'),
  ...pathsOf(PROTECTION, 'protection.'),
];

const junk = [
  'null',
  '-1',
  'nonsense',
  '[]',
  '{}',
  '-1e9 m',
  '.inf',
  'true',
  '0 deg',
  '[[1], {a: 2}]',
  '""',
  '1e6 rpm',
  'x.csv',
];

/** How an attempt to read ends: well, with a message, or badly. */
async function outcome(set: string): Promise<string> {
  try {
    await readScenario(memoryFiles({}), SCENARIO, [set]);
    return 'read';
  } catch (error) {
    if (!(error instanceof InputError)) return `${set}: ${error}`;
    const vague = error.problems.filter(
      ({ message }) => message === '' || /undefined|\[object|Invalid input/.test(message),
    );
    return vague.length > 0 ? `${set}: ${error.message}` : 'told';
  }
}

describe('Whatever value stands wherever in the files', () => {
  it('is either read or answered with a clear message', async () => {
    const stride = Number(process.env.EVERY_VALUE ? 1 : junk.length);
    const sets = all.flatMap((path, p) =>
      junk.filter((_, j) => (j + p) % stride === 0).map((value) => `${path}=${value}`),
    );
    const outcomes = [];
    for (const set of sets) outcomes.push(await outcome(set));
    expect(outcomes.filter((o) => o !== 'read' && o !== 'told')).toEqual([]);
    expect(outcomes.filter((o) => o === 'told').length).toBeGreaterThan(0.8 * outcomes.length);
  });
});
