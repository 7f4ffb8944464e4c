import { uniformWind } from './uniform.ts';
import type { WindField, WindMark } from './wind.ts';

export interface SineWind {
  /** m/s */
  amplitude: number;
  /** s */
  period: number;
  /** Where the swing starts, upwards from zero, and where it stops, s; from the start of the run and for ever when absent. */
  from?: number;
  to?: number;
}

/**
 * Adds a swing `amplitude · sin(2π(t − from)/period)` between `from` and `to`.
 * @throws RangeError when the period is not positive or the swing does not end after it starts.
 */
export function sineWind({ amplitude, period, from = 0, to = Number.POSITIVE_INFINITY }: SineWind): WindField {
  if (!(period > 0)) throw new RangeError(`the period of a swinging wind must be above 0 s, but it is ${period} s`);
  if (!(to > from)) throw new RangeError(`a swing must end after it starts, but it runs from ${from} s to ${to} s`);
  const frequency = (2 * Math.PI) / period;
  const marks: WindMark[] = [
    { time: from, kind: 'other', text: `wind starts to swing by ±${amplitude} m/s every ${period} s` },
  ];
  if (Number.isFinite(to)) marks.push({ time: to, kind: 'other', text: 'wind stops swinging' });
  return uniformWind({
    speed: (t) => (t < from || t >= to ? 0 : amplitude * Math.sin(frequency * (t - from))),
    jumps: [from, to],
    marks,
  });
}
