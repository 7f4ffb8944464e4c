import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

/**
 * Wind from rows of time (s, rising) and speed (m/s): linear between rows, held before the first and after the last.
 * @throws RangeError when there is no row, the columns differ in length, or a time does not rise (row counted from 1).
 */
export function tableWind({ time, speed }: { time: ArrayLike<number>; speed: ArrayLike<number> }): WindField {
  const rows = time.length;
  if (rows === 0) throw new RangeError('a wind table needs at least one row');
  if (speed.length !== rows) {
    throw new RangeError(`a wind table needs a speed for every time, but has ${rows} times and ${speed.length} speeds`);
  }
  const times = Float64Array.from(time);
  const speeds = Float64Array.from(speed);
  for (let row = 1; row < rows; row++) {
    if (!(times[row] > times[row - 1])) {
      throw new RangeError(
        `times in a wind table must rise, but row ${row + 1} has ${times[row]} s after ${times[row - 1]} s`,
      );
    }
  }

  function speedAt(t: number): number {
    if (t <= times[0]) return speeds[0];
    if (t >= times[rows - 1]) return speeds[rows - 1];
    let below = 0;
    let above = rows - 1;
    while (above - below > 1) {
      const middle = (below + above) >> 1;
      if (times[middle] <= t) below = middle;
      else above = middle;
    }
    const share = (t - times[below]) / (times[above] - times[below]);
    return speeds[below] + share * (speeds[above] - speeds[below]);
  }

  return uniformWind({ speed: speedAt, jumps: [...times] });
}
