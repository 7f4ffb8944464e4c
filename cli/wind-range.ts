import { refusal } from '../scenarios/input-error.ts';
import { parseQuantity, type QuantityKind } from '../scenarios/quantity.ts';
import type { Turbine } from '../sim/turbine.ts';

/** Wind speeds as the command line gives them; the range of operation where it does not. */
export interface WindRange {
  from?: string;
  to?: string;
  step: string;
}

const MOST = 2000;

/** @throws InputError for a range that makes no sense */
export function windSpeeds({ ratings }: Pick<Turbine, 'ratings'>, { from, to, step }: WindRange): number[] {
  const first = from === undefined ? ratings.cutInWind : optionValue('--from', from, 'speed');
  const last = to === undefined ? ratings.cutOutWind : optionValue('--to', to, 'speed');
  const by = optionValue('--step', step, 'speed');
  if (!(by > 0)) throw refusal('--step', 'must be larger than zero');
  if (!(last >= first)) throw refusal('--to', 'must not lie below the lowest wind speed');
  const count = Math.floor((last - first) / by + 1e-9) + 1;
  if (count > MOST) throw refusal('--step', `makes ${count} wind speeds; ${MOST} are the most`);
  return Array.from({ length: count }, (_, i) => first + i * by);
}

/** `count` wind speeds from cut-in to cut-out. */
export function evenWinds({ ratings }: Pick<Turbine, 'ratings'>, count: number): number[] {
  const { cutInWind, cutOutWind } = ratings;
  return Array.from({ length: count }, (_, i) => cutInWind + ((cutOutWind - cutInWind) * i) / (count - 1));
}

/** A quantity given as an option, in SI. @throws InputError that names the option */
export function optionValue(option: string, text: string, kind: QuantityKind): number {
  try {
    return parseQuantity(text, kind);
  } catch (cause) {
    throw refusal(option, cause instanceof Error ? cause.message : String(cause));
  }
}

/** A bare number given as an option, within limits. @throws InputError that names the option */
export function optionNumber(option: string, text: string, above: number, atMost = Number.POSITIVE_INFINITY): number {
  const value = Number(text);
  if (text.trim() !== '' && value > above && value <= atMost) return value;
  const limit = Number.isFinite(atMost) ? ` and at most ${atMost}` : '';
  throw refusal(option, `must be a number above ${above}${limit}, not "${text}"`);
}
