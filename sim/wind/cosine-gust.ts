import { gustMarks } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

/**
 * Adds a gust `½ amplitude (1 − cos(2π(t − start)/duration))`: m/s, s, s. A negative amplitude is a lull.
 * @throws RangeError when the duration is not positive.
 */
export function cosineGust(gust: { start: number; duration: number; amplitude: number }): WindField {
  const { start, duration, amplitude } = gust;
  if (!(duration > 0)) throw new RangeError(`a gust must last longer than 0 s, but its duration is ${duration} s`);
  const end = start + duration;
  const frequency = (2 * Math.PI) / duration;
  return uniformWind({
    speed: (t) => (t <= start || t >= end ? 0 : 0.5 * amplitude * (1 - Math.cos(frequency * (t - start)))),
    jumps: [start, end],
    marks: gustMarks(start, start + duration / 2, end, amplitude),
  });
}
