import { describe, expect, it } from 'vitest';
import { rungeKutta } from '../../sim/integrators/runge-kutta.ts';
import { Layout } from '../../sim/layout.ts';
import { PitchDrives } from '../../sim/pitch-drive.ts';
import type { PitchDriveData } from '../../sim/turbine.ts';
import { TURBINE } from './test-turbine.ts';

const DEGREE = Math.PI / 180;
const TICK = 0.01;

/** One drive by itself, moved tick by tick; `demandAt` gives the demand posted at each tick. */
function drive(changes: Partial<PitchDriveData>, from: number, demandAt: (t: number) => number, isRate = false) {
  const layout = new Layout();
  const memoryLayout = new Layout();
  const drives = new PitchDrives({ ...TURBINE.pitchDrive, ...changes }, 1, TICK, layout, memoryLayout);
  const x = new Float64Array(layout.size);
  const memory = new Float64Array(memoryLayout.size);
  x[drives.angleAt] = from;
  drives.start(from, memory);
  const integrator = rungeKutta(
    (_t, state, dx) => {
      dx[drives.angleAt] = state[drives.rateAt];
      dx[drives.rateAt] = drives.acceleration(0, state, memory);
    },
    layout.size,
    0.001,
  );
  let tick = 0;
  const rates: number[] = [];
  return {
    drives,
    memory,
    x,
    rates,
    angle: () => x[drives.angleAt],
    run(seconds: number, gridConnected = true): void {
      for (const end = tick + Math.round(seconds / TICK); tick < end; tick++) {
        drives.post(tick, 0, demandAt(tick * TICK), isRate, memory);
        drives.arrive(tick, drives.delayRest > 0, memory);
        drives.supply(gridConnected, x, memory);
        const split = tick * TICK + drives.delayRest;
        if (drives.delayRest > 0) {
          integrator.advance(tick * TICK, split, x);
          drives.arrive(tick, false, memory);
        }
        integrator.advance(split, (tick + 1) * TICK, x);
        rates.push(x[drives.rateAt]);
      }
    },
  };
}

/** Unit step response of ω²/(s² + 2ζωs + ω²), ζ < 1. */
function stepResponse(t: number): number {
  const { naturalFrequency, dampingRatio: zeta } = TURBINE.pitchDrive;
  const omega = 2 * Math.PI * naturalFrequency;
  const damped = omega * Math.sqrt(1 - zeta * zeta);
  return t <= 0
    ? 0
    : 1 - Math.exp(-zeta * omega * t) * (Math.cos(damped * t) + ((zeta * omega) / damped) * Math.sin(damped * t));
}

describe('The pitch drive', () => {
  it.each([0, 0.04, 0.0437])('answers a small step as a second-order system after its delay of %d s', (delay) => {
    const step = 0.2 * DEGREE;
    const one = drive({ delay }, 10 * DEGREE, () => 10 * DEGREE + step);
    for (const t of [0.1, 0.2, 0.4, 0.8]) {
      one.run(t - one.rates.length * TICK);
      expect((one.angle() - 10 * DEGREE) / step).toBeCloseTo(stepResponse(t - delay), 6);
    }
  });

  it('never turns faster than its rate limit, and comes to rest on its demand', () => {
    const one = drive({}, 0, () => 80 * DEGREE);
    one.run(15);
    expect(Math.max(...one.rates)).toBeLessThanOrEqual(TURBINE.pitchDrive.rateLimit + 1e-12);
    expect(Math.max(...one.rates)).toBeGreaterThan(0.99 * TURBINE.pitchDrive.rateLimit);
    expect(one.angle()).toBeCloseTo(80 * DEGREE, 6);
  });

  it('never speeds up faster than its acceleration limit', () => {
    const one = drive({ accelerationLimit: 5 * DEGREE }, 0, () => 40 * DEGREE);
    one.run(5);
    const fastest = Math.max(...one.rates.map((rate, i) => Math.abs(rate - (one.rates[i - 1] ?? 0)) / TICK));
    expect(fastest).toBeLessThanOrEqual(5 * DEGREE * (1 + 1e-9));
    expect(fastest).toBeGreaterThan(4.99 * DEGREE);
  });

  it('follows a rate demand and stops at the end of its travel', () => {
    const one = drive({}, 85 * DEGREE, () => 3 * DEGREE, true);
    one.run(1);
    expect(one.rates.at(-1)).toBeCloseTo(3 * DEGREE, 4);
    one.run(10);
    expect(one.angle()).toBeCloseTo(90 * DEGREE, 5);
  });

  it('keeps demands inside its travel', () => {
    const one = drive({}, 0, () => -30 * DEGREE);
    one.run(5);
    expect(one.angle()).toBeCloseTo(-2 * DEGREE, 6);
  });

  it('slows down on the backup supply as travel is spent, and stops where that is exhausted', () => {
    const backup = { travel: [0, 20 * DEGREE, 40 * DEGREE], rate: [6 * DEGREE, 3 * DEGREE, 0] };
    const one = drive({ backup }, 0, () => 88 * DEGREE);
    one.run(2, false);
    expect(one.drives.backupRate(10 * DEGREE)).toBeCloseTo(4.5 * DEGREE, 12);
    expect(Math.max(...one.rates)).toBeLessThan(6 * DEGREE);
    one.run(60, false);
    expect(one.angle()).toBeLessThan(40.5 * DEGREE);
    expect(one.angle()).toBeGreaterThan(38 * DEGREE);
  });

  it('that sticks stays where it is', () => {
    const one = drive({}, 0, () => 50 * DEGREE);
    one.run(2);
    one.drives.stick(0, one.x, one.memory);
    const stuckAt = one.angle();
    one.run(5);
    expect(one.angle()).toBe(stuckAt);
  });
});
