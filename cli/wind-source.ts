/** Where the wind of the `wind` command comes from: a scenario, or parts on the command line. */
import { join } from 'node:path';
import { loadWind, loadWindParts, shippedFolder } from '../scenarios/disk.ts';
import { refusal } from '../scenarios/input-error.ts';
import type { WindData } from '../scenarios/load.ts';
import { parseQuantity, type QuantityKind } from '../scenarios/quantity.ts';

/** The turbine that stands in a wind that names none. */
const USUAL_TURBINE = join('turbines', 'skerry-3.6-130.yaml');

/** @throws InputError where there is no wind, or two, or something is wrong with it */
export async function windOf(
  file: string | undefined,
  options: { part: string[]; set: string[]; turbine?: string; duration: string; seed: string },
): Promise<WindData> {
  const { part, set, turbine, duration, seed } = options;
  if (file !== undefined) {
    if (part.length > 0) throw refusal('--part', 'a scenario has its own wind: give either a scenario file or parts');
    return loadWind(file, { set });
  }
  if (part.length === 0) {
    throw refusal(
      'wind',
      'no wind is named: give a scenario file, or parts such as --part "{ kind: steady, speed: 12 m/s }"',
    );
  }
  if (set.length > 0) throw refusal('--set', 'changes a scenario file, but none is given');
  if (!/^\d+$/.test(seed) || !Number.isSafeInteger(Number(seed))) {
    throw refusal('--seed', `a whole number from 0 on is due, but it is "${seed}"`);
  }
  return loadWindParts(part, {
    turbine: turbine ?? join(shippedFolder(), USUAL_TURBINE),
    duration: positiveOption('--duration', duration, 'time'),
    seed: Number(seed),
  });
}

/** @throws InputError for what is no quantity of the kind, or not above 0 */
export function positiveOption(option: string, text: string, kind: QuantityKind): number {
  let value: number;
  try {
    value = parseQuantity(text, kind);
  } catch (cause) {
    throw refusal(option, cause instanceof Error ? cause.message : String(cause));
  }
  if (!(value > 0)) throw refusal(option, `must be above 0, but it is "${text}"`);
  return value;
}
