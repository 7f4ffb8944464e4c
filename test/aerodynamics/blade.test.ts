import { describe, expect, it } from 'vitest';
import { bladeOf, sectionAt } from '../../sim/aerodynamics/blade.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import type { BladeData, BladeStation, RotorData } from '../../sim/turbine.ts';
import { AIR_DENSITY, AIRFOILS, ROTOR } from './demo-rotor.ts';

const DEGREE = Math.PI / 180;

function withBlade(blade: BladeData): RotorData {
  return { ...ROTOR, aerodynamics: { kind: 'blade', blade, airfoils: AIRFOILS } };
}

describe('the laid-out blade', () => {
  const blade = bladeOf(ROTOR);

  it('keeps within its chord and twist limits and has its round root', () => {
    for (const section of bladeOf(ROTOR, 200).sections) {
      expect(section.chord).toBeLessThanOrEqual(4.2 + 1e-9);
      expect(section.twist).toBeLessThanOrEqual(14 * DEGREE + 1e-9);
    }
    expect(sectionAt(blade, 1.6).chord).toBeCloseTo(2.6, 9);
    expect(sectionAt(blade, 3).airfoil.name).toBe('round');
  });

  it('has the optimum chord and twist where no limit binds: worked by hand at three quarters of the span', () => {
    // λ_r = 8.2 · 0.75 = 6.15; φ = ⅔ atan(1/6.15) = 0.107461 rad; twist = 0.107461 − 0.104720 = 0.002741 rad
    const section = sectionAt(blade, 48.75);
    expect(section.twist).toBeCloseTo(0.002741, 4);
    // 1 − cos φ = 0.0057684; c = 8π · 48.75/(3 · C_l) · 0.0057684 = 2.3558/C_l with C_l = 1.053 at 6° (formula polars)
    expect(section.chord).toBeGreaterThan(2.3558 / 1.07);
    expect(section.chord).toBeLessThan(2.3558 / 1.04);
  });

  it('is tiled by its strips from hub to tip', () => {
    const width = blade.sections.reduce((sum, section) => sum + section.width, 0);
    expect(width).toBeCloseTo(65 - 1.6, 9);
    let end = 1.6;
    for (const section of blade.sections) {
      expect(section.radius - section.width / 2).toBeCloseTo(end, 9);
      end = section.radius + section.width / 2;
    }
  });

  it('gives thrust and torque that settle as strips are made finer: 0.03 % from 40 to 320', () => {
    const coarse = steadyRotor(bladeOf(ROTOR, 40), 10, (8.2 * 10) / 65, 0, AIR_DENSITY);
    const fine = steadyRotor(bladeOf(ROTOR, 320), 10, (8.2 * 10) / 65, 0, AIR_DENSITY);
    expect(Math.abs(coarse.torque / fine.torque - 1)).toBeLessThan(3e-4);
    expect(Math.abs(coarse.thrust / fine.thrust - 1)).toBeLessThan(3e-4);
  });

  it('has a best power coefficient that such a rotor would have', () => {
    let best = 0;
    for (let ratio = 6; ratio <= 10; ratio += 0.25) {
      best = Math.max(best, steadyRotor(blade, 10, (ratio * 10) / 65, 0, AIR_DENSITY).powerCoefficient);
    }
    expect(best).toBeGreaterThan(0.45);
    expect(best).toBeLessThan(0.49);
  });
});

describe('a blade given by stations', () => {
  const stations: BladeStation[] = [
    { radius: 1.6, chord: 2.6, twist: 0.2, airfoil: 'round' },
    { radius: 20, chord: 4, twist: 0.1, airfoil: '30 % thick' },
    { radius: 65, chord: 1, twist: 0, airfoil: '18 % thick' },
  ];

  it('passes through them, and airfoils blend linearly by radius', () => {
    const blade = bladeOf(withBlade({ kind: 'stations', stations }));
    expect(sectionAt(blade, 20)).toMatchObject({ chord: 4, twist: 0.1, airfoil: { name: '30 % thick' } });
    expect(sectionAt(blade, 20 + 0.25 * 45).airfoil.name).toBe('30 % thick to 18 % thick, 25 %');
  });

  it('must cover the span', () => {
    const short = withBlade({ kind: 'stations', stations: stations.slice(0, 2) });
    expect(() => bladeOf(short)).toThrow(/from 1.6 m to 20 m but must cover .* tip radius 65 m/);
  });

  it('must name known airfoils', () => {
    const odd = withBlade({ kind: 'stations', stations: [{ ...stations[0], airfoil: 'rund' }, ...stations.slice(1)] });
    expect(() => bladeOf(odd)).toThrow(/'rund', but the turbine has: round, 40 % thick/);
  });

  it('must have a chord above zero and radii that rise', () => {
    const flat = stations.map((s, i) => (i === 1 ? { ...s, chord: 0 } : s));
    expect(() => bladeOf(withBlade({ kind: 'stations', stations: flat }))).toThrow(/chord at radius 20 m is 0 m/);
    const twice = [stations[0], stations[1], stations[1], stations[2]];
    expect(() => bladeOf(withBlade({ kind: 'stations', stations: twice }))).toThrow(/must rise: 20 follows 20/);
  });
});

it('a rotor given by tables has no blade', () => {
  const tables = { tipSpeedRatio: [], pitch: [], torqueCoefficient: [], thrustCoefficient: [] };
  expect(() => bladeOf({ ...ROTOR, aerodynamics: { kind: 'tables', tables } })).toThrow(/no blade to look at/);
});
