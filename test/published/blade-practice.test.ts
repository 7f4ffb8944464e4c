/**
 * Check 15 (in part) and check 16: how blades are twisted and why that goes well with pitching. *Common practice*.
 * The blade is the invented one of `test/aerodynamics/demo-rotor.ts`.
 */
import { describe, expect, it } from 'vitest';
import { bladeOf, sectionAt } from '../../sim/aerodynamics/blade.ts';
import { velocityTriangles } from '../../sim/aerodynamics/velocity-triangles.ts';
import { AIR_DENSITY, ROTOR } from '../aerodynamics/demo-rotor.ts';

const blade = bladeOf(ROTOR);
const RATED_SPEED = (12 * Math.PI) / 30;
const DEGREE = Math.PI / 180;

describe('check 15', () => {
  it('twist grows from tip to root, until the limit of what can be built holds it', () => {
    for (let percent = 5; percent < 100; percent++) {
      const outer = sectionAt(blade, (65 * (percent + 1)) / 100).twist;
      const inner = sectionAt(blade, (65 * percent) / 100).twist;
      if (inner < 14 * DEGREE - 1e-9) expect(inner).toBeGreaterThan(outer);
      else expect(inner).toBeGreaterThanOrEqual(outer - 1e-12);
    }
    expect(sectionAt(blade, 13).twist - sectionAt(blade, 65).twist).toBeGreaterThan(10 * DEGREE);
  });
});

describe('check 16', () => {
  /** Wind of the design tip-speed ratio at rated speed. */
  const designWind = (RATED_SPEED * 65) / 8.2;
  const stations = Array.from({ length: 15 }, (_, i) => 25 + 5 * i);
  const middle = stations.indexOf(50);

  function anglesOfAttack(windSpeed: number, pitch: number): number[] {
    const point = { windSpeed, rotorSpeed: RATED_SPEED, pitch, airDensity: AIR_DENSITY };
    const radii = stations.map((percent) => (65 * percent) / 100);
    return velocityTriangles(blade, radii, point).map((triangle) => triangle.angleOfAttack);
  }

  /** The pitch that gives mid-span its design angle of attack back: that angle falls as pitch grows. */
  function holdingPitch(windSpeed: number, wanted: number): number {
    let [low, high] = [-20 * DEGREE, 20 * DEGREE];
    for (let i = 0; i < 50; i++) {
      const pitch = (low + high) / 2;
      if (anglesOfAttack(windSpeed, pitch)[middle] > wanted) low = pitch;
      else high = pitch;
    }
    return (low + high) / 2;
  }

  const design = anglesOfAttack(designWind, 0);

  for (const change of [-3, 3]) {
    const windSpeed = designWind + change;
    const unpitched = anglesOfAttack(windSpeed, 0)[middle] - design[middle];
    const pitch = holdingPitch(windSpeed, design[middle]);
    const stray = anglesOfAttack(windSpeed, pitch).map((angle, i) => angle - design[i]);

    it(`with the wind ${change} m/s off design and mid-span pitched back, every other station strays less than mid-span would have`, () => {
      expect(stray[middle]).toBeCloseTo(0, 6);
      for (const angle of stray) expect(Math.abs(angle)).toBeLessThan(Math.abs(unpitched));
      const mean = stray.reduce((sum, angle) => sum + Math.abs(angle), 0) / stray.length;
      expect(mean).toBeLessThan(0.5 * Math.abs(unpitched));
    });

    it(`with the wind ${change} m/s off design, stations inboard stray with the wind and stations outboard against it`, () => {
      expect(Math.sign(unpitched)).toBe(Math.sign(change));
      for (let i = 0; i < middle; i++) expect(Math.sign(stray[i])).toBe(Math.sign(change));
      for (let i = middle + 1; i < stations.length; i++) expect(Math.sign(stray[i])).toBe(-Math.sign(change));
    });
  }

  it('as the wind rises, the stray is less than half of mid-span’s own at every station', () => {
    const unpitched = anglesOfAttack(designWind + 3, 0)[middle] - design[middle];
    const stray = anglesOfAttack(designWind + 3, holdingPitch(designWind + 3, design[middle])).map(
      (a, i) => a - design[i],
    );
    for (const angle of stray) expect(Math.abs(angle)).toBeLessThan(0.5 * unpitched);
  });
});
