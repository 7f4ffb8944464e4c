import { speedChange } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

/**
 * Adds nothing until `from` (s), then evenly more up to `rise` (m/s) at `to` (s), and holds it.
 * @throws RangeError when the ramp does not end after it starts.
 */
export function rampWind({ from, to, rise }: { from: number; to: number; rise: number }): WindField {
  if (!(to > from)) throw new RangeError(`a wind ramp must end after it starts, but it runs from ${from} s to ${to} s`);
  const slope = rise / (to - from);
  return uniformWind({
    speed(t) {
      if (t <= from) return 0;
      return t < to ? slope * (t - from) : rise;
    },
    jumps: [from, to],
    marks: [
      { time: from, kind: 'other', text: `wind starts to change by ${speedChange(rise)}` },
      { time: to, kind: 'other', text: 'wind holds again' },
    ],
  });
}
