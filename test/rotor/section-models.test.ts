import { describe, expect, it } from 'vitest';
import { airfoilOf, coefficientsAt } from '../../sim/aerodynamics/airfoil.ts';
import { lateRateRatio, wakeRate } from '../../sim/aerodynamics/dynamic-wake.ts';
import { attachedFlow, laggedLift, staticAttachment } from '../../sim/aerodynamics/lift-lag.ts';
import { lossAt } from '../../sim/aerodynamics/loss-table.ts';
import { addTowerShadow } from '../../sim/aerodynamics/tower-shadow.ts';
import { inclinedWind } from '../../sim/wind/inclined.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { AIRFOILS } from '../aerodynamics/demo-rotor.ts';

const DEGREE = Math.PI / 180;

describe('The lag of separated lift', () => {
  const airfoil = airfoilOf(AIRFOILS[4]);
  const { slope, zeroLiftAngle } = attachedFlow(airfoil);
  const out = { lift: 0, drag: 0 };
  const at = (angle: number) => {
    coefficientsAt(airfoil, angle, out);
    const inviscid = slope * Math.sin(angle - zeroLiftAngle);
    return { lift: out.lift, inviscid, settled: staticAttachment(out.lift, inviscid) };
  };

  it('leaves the static lift where it is, at every angle', () => {
    for (let angle = -Math.PI; angle <= Math.PI; angle += 0.01) {
      const { lift, inviscid, settled } = at(angle);
      expect(laggedLift(lift, inviscid, settled, settled)).toBeCloseTo(lift, 12);
      expect(settled).toBeGreaterThanOrEqual(0);
      expect(settled).toBeLessThanOrEqual(1);
    }
  });

  it('has the flow attached at small angles, partly separated at stall, separated far beyond', () => {
    expect(zeroLiftAngle / DEGREE).toBeCloseTo(-4, 0);
    expect(at(2 * DEGREE).settled).toBeGreaterThan(0.9);
    const stalling = at(airfoil.stall?.positive ?? Number.NaN).settled;
    expect(stalling).toBeGreaterThan(0.2);
    expect(stalling).toBeLessThan(0.9);
    expect(at(45 * DEGREE).settled).toBe(0);
  });

  it('gives the inviscid lift while the flow is still attached, and less once it has been separated', () => {
    const { lift, inviscid, settled } = at(16 * DEGREE);
    expect(laggedLift(lift, inviscid, settled, 1)).toBeCloseTo(inviscid, 9);
    expect(laggedLift(lift, inviscid, settled, 0)).toBeLessThan(lift);
  });
});

describe('The time constants of the wake', () => {
  it('are those of the filter’s formulas', () => {
    // τ₁ = 1.1/(1 − 1.3 · 0.3) · 65/10; τ₂ = (0.39 − 0.26 · 0.7²) τ₁.
    expect(1 / wakeRate(65, 10, 3)).toBeCloseTo((1.1 / (1 - 0.39)) * 6.5, 9);
    expect(1 / lateRateRatio(0.7)).toBeCloseTo(0.39 - 0.26 * 0.49, 12);
  });

  it('hold induction to a half, and stay finite in calm air', () => {
    expect(wakeRate(65, 10, 9)).toBe(wakeRate(65, 10, 5));
    expect(1 / wakeRate(65, 0, 0)).toBeCloseTo(1.1 * 65, 9);
  });
});

it('The table of Prandtl’s factor is the factor', () => {
  let worst = 0;
  for (let s = 0; s < 6; s += 0.00037) {
    worst = Math.max(worst, Math.abs(lossAt(s) - (2 / Math.PI) * Math.acos(Math.exp(-s * s))));
  }
  expect(worst).toBeLessThan(1e-8);
  expect(lossAt(Number.POSITIVE_INFINITY)).toBe(1);
});

describe('The tower’s shadow', () => {
  const tower = { topDiameter: 4, baseDiameter: 4, hubHeight: 100 };
  const shadowed = (x: number, y: number, z = -50) => {
    const wind = Float64Array.of(10, 0, 0);
    addTowerShadow(tower, x, y, z, wind);
    return wind;
  };

  it('slows the air before the tower by (a/x)², speeds it up beside by (a/y)², and turns it outwards', () => {
    // Potential flow about a cylinder of radius 2 m.
    expect(shadowed(-6, 0)[0]).toBeCloseTo(10 * (1 - 4 / 36), 9);
    expect(shadowed(0, 5)[0]).toBeCloseTo(10 * (1 + 4 / 25), 9);
    expect(shadowed(-4, 3)[1]).toBeCloseTo(10 * 2 * 4 * (12 / 625), 9);
    expect(shadowed(-4, -3)[1]).toBeCloseTo(-10 * 2 * 4 * (12 / 625), 9);
  });

  it('begins at the hub and grows without a jump', () => {
    expect(shadowed(-6, 0, 5)[0]).toBe(10);
    expect(shadowed(-6, 0, -1e-4)[0]).toBeCloseTo(10, 6);
    expect(shadowed(-6, 0, -4)[0]).toBeCloseTo(shadowed(-6, 0, -4.001)[0], 6);
  });
});

it('Wind over sloping ground keeps its speed and rises', () => {
  const wind = inclinedWind(steadyWind({ speed: 10 }), 8 * DEGREE);
  const out = new Float64Array(3);
  wind.velocity(0, 0, 0, out);
  expect(Math.hypot(...out)).toBeCloseTo(10, 12);
  expect(Math.atan2(out[2], out[0]) / DEGREE).toBeCloseTo(8, 9);
  expect(wind.rotorMean(0)).toBeCloseTo(10 * Math.cos(8 * DEGREE), 12);
});
