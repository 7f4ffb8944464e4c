/**
 * Check 12: orders of convergence and a periodic orbit. Source: Hairer, Nørsett and Wanner, *Solving Ordinary
 * Differential Equations I*, 2nd ed. 1993; the orbit of Arenstorf, section II.0, equations (0.1) and (0.2) (memory).
 */
import { describe, expect, it } from 'vitest';
import type { Derivative, Integrator } from '../../sim/integrators/integrator.ts';
import { odex } from '../../sim/integrators/odex.ts';
import { rungeKutta } from '../../sim/integrators/runge-kutta.ts';

/** y' = −2ty², y(0) = 1, with the solution 1/(1 + t²). */
const rational: Derivative = (t, x, dx) => {
  dx[0] = -2 * t * x[0] * x[0];
};

function errorAt(end: number, integrator: Integrator, intervals = 1): number {
  const x = Float64Array.of(1);
  for (let k = 0; k < intervals; k++) integrator.advance((k * end) / intervals, ((k + 1) * end) / intervals, x);
  return Math.abs(x[0] - 1 / (1 + end * end));
}

describe('The fixed-step Runge–Kutta method', () => {
  it('is of order 4: half the step, a sixteenth of the error', () => {
    const errors = [0.1, 0.05, 0.025, 0.0125].map((step) => errorAt(2, rungeKutta(rational, 1, step)));
    for (let i = 1; i < errors.length; i++) {
      expect(Math.log2(errors[i - 1] / errors[i])).toBeGreaterThan(3.8);
      expect(Math.log2(errors[i - 1] / errors[i])).toBeLessThan(4.3);
    }
  });

  it('divides an interval evenly into steps no longer than asked', () => {
    const times: number[] = [];
    const spy: Derivative = (t, _x, dx) => {
      times.push(t);
      dx[0] = 0;
    };
    rungeKutta(spy, 1, 0.3).advance(0, 1, new Float64Array(1));
    expect(times.length).toBe(16);
    expect(times[4]).toBeCloseTo(0.25, 12);
  });
});

describe('The extrapolation method', () => {
  it('keeps its error within reach of the tolerance', () => {
    for (const tolerance of [1e-4, 1e-6, 1e-8, 1e-10]) {
      expect(errorAt(2, odex(rational, [1], tolerance))).toBeLessThan(20 * tolerance);
    }
  });

  it('is of order 4 over one interval when it takes two columns', () => {
    // A loose tolerance accepts the first estimate: midpoint rule with 2 and 4 steps, extrapolated once.
    const errors = [4, 8, 16].map((intervals) => errorAt(2, odex(rational, [1], 1), intervals));
    for (let i = 1; i < errors.length; i++) expect(Math.log2(errors[i - 1] / errors[i])).toBeGreaterThan(3.7);
  });

  it('comes back to where Arenstorf’s orbit began after its period', () => {
    const mu = 0.012277471;
    const orbit: Derivative = (_t, y, dy) => {
      const first = ((y[0] + mu) ** 2 + y[1] ** 2) ** 1.5;
      const second = ((y[0] - 1 + mu) ** 2 + y[1] ** 2) ** 1.5;
      dy[0] = y[2];
      dy[1] = y[3];
      dy[2] = y[0] + 2 * y[3] - ((1 - mu) * (y[0] + mu)) / first - (mu * (y[0] - 1 + mu)) / second;
      dy[3] = y[1] - 2 * y[2] - ((1 - mu) * y[1]) / first - (mu * y[1]) / second;
    };
    const period = 17.065216560157964;
    const start = [0.994, 0, 0, -2.0015851063790824];
    const x = Float64Array.from(start);
    const integrator = odex(orbit, [1, 1, 1, 1], 1e-10);
    const intervals = 2000;
    for (let k = 0; k < intervals; k++) integrator.advance((k * period) / intervals, ((k + 1) * period) / intervals, x);
    for (let i = 0; i < 2; i++) expect(Math.abs(x[i] - start[i])).toBeLessThan(1e-5);
  });

  it('gives up with a reason where the solution has no continuation', () => {
    // x' = x² from 1 grows without bound towards t = 1.
    const growing: Derivative = (_t, x, dx) => {
      dx[0] = x[0] * x[0];
    };
    expect(() => odex(growing, [1], 1e-6).advance(0, 2, Float64Array.of(1))).toThrow(
      /endless small steps|steps exceeded/,
    );
  });
});
