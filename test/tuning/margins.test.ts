import { describe, expect, it } from 'vitest';
import { type Complex, power, product, quotient, scaled, sum } from '../../tuning/complex.ts';
import { frequencyGrid, marginsOf } from '../../tuning/margins.ts';

const GRID = frequencyGrid(1e-3, 1e3, 2000);
const real = (re: number): Complex => ({ re, im: 0 });
const s = (frequency: number): Complex => ({ re: 0, im: frequency });

describe('the margins', () => {
  it('of an integrator 1/s are any gain, 90 deg, π/2 s of delay, and a bandwidth of 1 rad/s', () => {
    const found = marginsOf((frequency) => quotient(real(1), s(frequency)), GRID);
    expect(found.gain.factor).toBe(Number.POSITIVE_INFINITY);
    expect(found.gainDown.factor).toBe(0);
    expect(found.phase.angle).toBeCloseTo(Math.PI / 2, 8);
    expect(found.delay.time).toBeCloseTo(Math.PI / 2, 6);
    expect(found.bandwidth).toBeCloseTo(1, 8);
    expect(found.modulus.distance).toBeCloseTo(1, 5);
  });

  it('of 10 (s + 1)²/s³ have a least gain: Routh’s table asks for more than a twentieth', () => {
    const loop = (frequency: number) =>
      quotient(scaled(power(sum(s(frequency), real(1)), 2), 10), power(s(frequency), 3));
    const found = marginsOf(loop, GRID);
    expect(found.gainDown.factor).toBeCloseTo(0.05, 6);
    expect(found.gainDown.frequency).toBeCloseTo(1, 6);
    expect(found.gain.factor).toBe(Number.POSITIVE_INFINITY);
  });

  it('count a lead that only a lag of almost a turn brings to the edge as delay, not as none', () => {
    // 2j/(s + 1) crosses the unit circle at √3 rad/s.
    const loop = (frequency: number) => quotient(product({ re: 0, im: 2 }, real(1)), sum(s(frequency), real(1)));
    const found = marginsOf(loop, GRID);
    expect(found.phase.frequency).toBeCloseTo(Math.sqrt(3), 6);
    // arg L = 90 − 60 = 30 deg: 210 deg of lag, or 150 deg of lead, to −180 deg.
    expect(found.phase.angle).toBeCloseTo((-150 * Math.PI) / 180, 6);
    expect(found.delay.time).toBeCloseTo((210 * Math.PI) / 180 / Math.sqrt(3), 6);
  });

  it('see a narrow resonance between two points of the even grid, for its mode makes the grid dense there', () => {
    const resonance = (frequency: number) => {
      const square = power(s(frequency), 2);
      const below = sum(sum(square, scaled(s(frequency), 2 * 0.001 * 3)), real(9));
      return sum(quotient(real(0.3), s(frequency)), quotient(scaled(s(frequency), -0.0045), below));
    };
    const mode = { pole: { re: -0.003, im: 3 }, frequency: 3, damping: 0.001, participation: [] };
    const coarse = frequencyGrid(0.01, 100, 60);
    const dense = frequencyGrid(0.01, 100, 60, [mode]);
    expect(marginsOf(resonance, coarse).modulus.distance).toBeGreaterThan(0.9);
    expect(marginsOf(resonance, dense).modulus.distance).toBeLessThan(0.3);
  });
});
