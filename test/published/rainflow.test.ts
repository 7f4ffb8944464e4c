/** Check 9: the worked example of ASTM E1049-85, §5.4.4 (figure 6): −2, 1, −3, 5, −1, 3, −4, 4, −2. */
import { describe, expect, it } from 'vitest';
import { Rainflow } from '../../scenarios/rainflow.ts';

/** Cycles per range, counted one value at a time. */
function cyclesOf(history: Iterable<number>): Map<number, number> {
  const cycles = new Map<number, number>();
  const rainflow = new Rainflow((range, count) => cycles.set(range, (cycles.get(range) ?? 0) + count));
  for (const value of history) rainflow.add(value);
  rainflow.finish();
  return cycles;
}

const EXAMPLE = [-2, 1, -3, 5, -1, 3, -4, 4, -2];
// ASTM E1049-85, figure 6: −2 to 1 half of 3; 1 to −3 half of 4; −1 to 3 one of 4; −3 to 5 half of 8; 5 to −4 half of 9;
// −4 to 4 half of 8; 4 to −2 half of 6.
const EXPECTED = new Map([
  [3, 0.5],
  [4, 1.5],
  [6, 0.5],
  [8, 1],
  [9, 0.5],
]);

describe('rainflow counting', () => {
  it('counts the example of ASTM E1049-85 as the standard does', () => {
    expect(cyclesOf(EXAMPLE)).toEqual(EXPECTED);
  });

  it('counts peaks and valleys only: values on the way and plateaus change nothing', () => {
    const onTheWay = EXAMPLE.flatMap((value, i) => {
      const next = EXAMPLE[i + 1] ?? value;
      return [value, value, 0.5 * (value + next), next];
    });
    expect(cyclesOf(onTheWay)).toEqual(EXPECTED);
  });

  it('counts the example turned upside down alike', () => {
    expect(cyclesOf(EXAMPLE.map((value) => -value))).toEqual(EXPECTED);
  });

  it('counts nothing in a load that never moves, and half a cycle in one that only rises', () => {
    expect(cyclesOf([])).toEqual(new Map());
    expect(cyclesOf([7, 7, 7])).toEqual(new Map());
    expect(cyclesOf([1, 2, 5])).toEqual(new Map([[4, 0.5]]));
  });

  it('counts half a cycle per reversal of a growing and of a dying swing, however many are kept', () => {
    const swing = Array.from({ length: 400 }, (_, i) => (i % 2 === 0 ? 1 : -1) * Math.min(i + 1, 400 - i));
    // 400 reversals are joined by 399 ranges, each of which is half a cycle.
    const halves = new Map<number, number>();
    for (let i = 1; i < 400; i++) {
      const range = Math.abs(swing[i] - swing[i - 1]);
      halves.set(range, (halves.get(range) ?? 0) + 0.5);
    }
    expect(cyclesOf(swing)).toEqual(halves);
  });

  it('counts a steady swing as it goes, so that what it remembers does not grow with the run', () => {
    let counted = 0;
    const rainflow = new Rainflow((_range, cycles) => {
      counted += cycles;
    });
    for (let i = 0; i < 2000; i++) rainflow.add(i % 2);
    // 1999 half swings, of which the last two are still open.
    expect(counted).toBeGreaterThanOrEqual(1997 / 2);
  });
});
