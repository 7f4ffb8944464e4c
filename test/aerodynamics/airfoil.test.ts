import { describe, expect, it } from 'vitest';
import { type Airfoil, airfoilOf, blend, coefficientsAt } from '../../sim/aerodynamics/airfoil.ts';
import type { AirfoilData } from '../../sim/turbine.ts';
import { AIRFOILS } from './demo-rotor.ts';

const DEGREE = Math.PI / 180;

function at(airfoil: Airfoil, degrees: number): { lift: number; drag: number } {
  const out = { lift: 0, drag: 0 };
  coefficientsAt(airfoil, degrees * DEGREE, out);
  return out;
}

const fullCircle = Array.from({ length: 3601 }, (_, i) => -180 + i / 10);

describe('an airfoil by formula', () => {
  for (const data of AIRFOILS) {
    if (data.kind !== 'formula' || data.thickness === 1) continue;
    const airfoil = airfoilOf(data);

    it(`${data.name}: reaches its maximum lift at the stall angle, and camber takes from the other side`, () => {
      if (!airfoil.stall) throw new Error('a lifting section must stall');
      const { positive, negative } = airfoil.stall;
      expect(at(airfoil, positive / DEGREE).lift).toBeCloseTo(data.maximumLift, 2);
      expect(at(airfoil, negative / DEGREE).lift).toBeCloseTo(
        -(data.maximumLift - data.liftSlope * Math.abs(data.zeroLiftAngle)),
        2,
      );
      expect(at(airfoil, positive / DEGREE - 1).lift).toBeLessThan(data.maximumLift);
      expect(at(airfoil, positive / DEGREE + 1).lift).toBeLessThan(data.maximumLift);
    });

    it(`${data.name}: attached flow has the given slope and zero-lift angle`, () => {
      expect(at(airfoil, data.zeroLiftAngle / DEGREE).lift).toBeCloseTo(0, 2);
      const slope = (at(airfoil, 1).lift - at(airfoil, -1).lift) / (2 * DEGREE);
      expect(slope / data.liftSlope).toBeGreaterThan(0.95);
      expect(slope / data.liftSlope).toBeLessThan(1.001);
    });

    it(`${data.name}: is a flat plate across the wind, and its drag never falls below the bucket`, () => {
      expect(at(airfoil, 90).lift).toBeCloseTo(0, 6);
      expect(at(airfoil, 90).drag).toBeCloseTo(1.11 + 0.018 * data.aspectRatio + data.minimumDrag, 3);
      for (const angle of fullCircle) expect(at(airfoil, angle).drag).toBeGreaterThanOrEqual(0.999 * data.minimumDrag);
    });
  }

  it('a cylinder drags alike from every side, lifts nowhere and does not stall', () => {
    const round = airfoilOf(AIRFOILS[0]);
    for (const angle of fullCircle) {
      expect(at(round, angle).lift).toBe(0);
      expect(at(round, angle).drag).toBeCloseTo(0.6, 12);
    }
    expect(round.stall).toBeUndefined();
  });

  it('lift and drag and their slopes are continuous all round the circle, across 180° too', () => {
    const airfoil = airfoilOf(AIRFOILS[4]);
    const tiny = 1e-5;
    for (let node = 0; node < 720; node++) {
      const here = -180 + node / 2;
      const before = at(airfoil, here - tiny);
      const on = at(airfoil, here);
      const after = at(airfoil, here + tiny);
      for (const coefficient of ['lift', 'drag'] as const) {
        const slopeBefore = (on[coefficient] - before[coefficient]) / tiny;
        const slopeAfter = (after[coefficient] - on[coefficient]) / tiny;
        expect(Math.abs(slopeAfter - slopeBefore)).toBeLessThan(1e-4);
      }
    }
    expect(at(airfoil, 540.25).lift).toBeCloseTo(at(airfoil, 180.25).lift, 12);
    expect(at(airfoil, 540.25).drag).toBeCloseTo(at(airfoil, 180.25).drag, 12);
  });

  it('more camber than the maximum lift allows is refused, and the message says what to change', () => {
    const data: AirfoilData = { ...AIRFOILS[4], kind: 'formula', zeroLiftAngle: -14 * DEGREE } as AirfoilData;
    expect(() => airfoilOf(data)).toThrow(/18 % thick.*zero-lift angle nearer to zero/);
  });
});

describe('an airfoil by table', () => {
  const short: AirfoilData = {
    kind: 'table',
    name: 'measured',
    angle: [-10, -5, 0, 5, 10, 15].map((d) => d * DEGREE),
    lift: [-0.6, -0.1, 0.4, 0.95, 1.35, 1.2],
    drag: [0.02, 0.01, 0.009, 0.01, 0.018, 0.08],
    aspectRatio: 10,
  };

  it('passes through its own points', () => {
    const airfoil = airfoilOf(short);
    short.angle.forEach((angle, i) => {
      expect(at(airfoil, angle / DEGREE).lift).toBeCloseTo(short.lift[i], 9);
      expect(at(airfoil, angle / DEGREE).drag).toBeCloseTo(short.drag[i], 9);
    });
  });

  it('is carried on as Viterna and Corrigan (1982) say: values at 45° worked by hand', () => {
    // C_d,max = 1.11 + 0.018 · 10 = 1.29; at 15°, C_l = 1.2, C_d = 0.08, sin = 0.258819, cos = 0.965926:
    // A₂ = (1.2 − 1.29 · 0.258819 · 0.965926) · 0.258819/0.965926² = 0.243424
    // B₂ = (0.08 − 1.29 · 0.258819²)/0.965926 = −0.006639
    // C_l(45°) = 1.29/2 + A₂ · 0.5/0.707107 = 0.817126; C_d(45°) = 1.29/2 + B₂ · 0.707107 = 0.640305
    const airfoil = airfoilOf(short);
    expect(at(airfoil, 45).lift).toBeCloseTo(0.8171, 3);
    expect(at(airfoil, 45).drag).toBeCloseTo(0.6403, 3);
    expect(at(airfoil, 90).lift).toBeCloseTo(0, 3);
    expect(at(airfoil, 90).drag).toBeCloseTo(1.29, 3);
  });

  it('jumps nowhere on the full circle', () => {
    const airfoil = airfoilOf(short);
    for (const angle of fullCircle) {
      expect(Math.abs(at(airfoil, angle + 0.1).lift - at(airfoil, angle).lift)).toBeLessThan(0.02);
      expect(Math.abs(at(airfoil, angle + 0.1).drag - at(airfoil, angle).drag)).toBeLessThan(0.01);
      expect(at(airfoil, angle).drag).toBeGreaterThan(0);
    }
  });

  it.each([
    ['angles all above zero', { angle: [1, 2, 3, 4, 5, 6].map((d) => d * DEGREE) }, /from below zero to above zero/],
    [
      'an end at 100°',
      { angle: [-10, -5, 0, 5, 10, 100].map((d) => d * DEGREE) },
      /stop short of 90°.*not stop at 100/,
    ],
    ['a drag below zero', { drag: [0.02, 0.01, -0.01, 0.01, 0.018, 0.08] }, /drag must not be negative, but is -0.01/],
    ['a value short', { lift: [0, 1] }, /a lift and a drag for each/],
    ['an open circle', { angle: [-180, -5, 0, 5, 10, 180].map((d) => d * DEGREE) }, /-180° and 180° differ/],
  ])('refuses %s', (_, change, message) => {
    expect(() => airfoilOf({ ...short, ...change })).toThrow(message);
  });
});

describe('a section between two airfoils', () => {
  it('lifts and drags as their linear mixture does', () => {
    const thick = airfoilOf(AIRFOILS[1]);
    const thin = airfoilOf(AIRFOILS[4]);
    const between = blend(thick, thin, 0.3);
    for (const angle of [-100, -12, 3.3, 14, 60]) {
      expect(at(between, angle).lift).toBeCloseTo(0.7 * at(thick, angle).lift + 0.3 * at(thin, angle).lift, 12);
      expect(at(between, angle).drag).toBeCloseTo(0.7 * at(thick, angle).drag + 0.3 * at(thin, angle).drag, 12);
    }
  });
});
