import { speedChange } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

/** Adds `rise` (m/s) from the instant `at` (s) on, that instant included. */
export function stepWind({ at, rise }: { at: number; rise: number }): WindField {
  return uniformWind({
    speed: (t) => (t < at ? 0 : rise),
    jumps: [at],
    marks: [{ time: at, kind: 'other', text: `wind steps by ${speedChange(rise)}` }],
  });
}
