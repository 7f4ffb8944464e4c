import { describe, expect, it } from 'vitest';
import { profileFactor, profileWind } from '../../sim/wind/profile.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';

const SITE = { hubHeight: 110, rotorRadius: 65 };
const velocity = new Float64Array(3);

describe('a mean wind with a profile', () => {
  it('is the hub wind at the hub, and follows the power law above and below', () => {
    const wind = profileWind({ speed: 10, profile: { kind: 'power law', exponent: 0.2 }, ...SITE });
    wind.velocity(3, 20, 0, velocity);
    expect([...velocity]).toEqual([10, 0, 0]);
    wind.velocity(3, 0, 55, velocity);
    // 10 · 1.5^0.2
    expect(velocity[0]).toBeCloseTo(10.844718, 6);
    wind.velocity(3, 0, -55, velocity);
    // 10 · 0.5^0.2
    expect(velocity[0]).toBeCloseTo(8.705506, 6);
  });

  it('follows the logarithmic law over rough ground', () => {
    const factor = profileFactor({ kind: 'logarithmic', roughness: 0.03 }, 110);
    // ln(55/0.03)/ln(110/0.03) = 7.5138/8.2070
    expect(factor(55)).toBeCloseTo(0.915542, 5);
    expect([0.03, 0, -1].map(factor)).toEqual([0, 0, 0]);
  });

  it('gives the surface rotor the mean over the disc', () => {
    const linear = profileWind({ speed: 10, profile: { kind: 'power law', exponent: 1 }, ...SITE });
    expect(linear.rotorMean(0)).toBeCloseTo(10, 9);
    const square = profileWind({ speed: 10, profile: { kind: 'power law', exponent: 2 }, ...SITE });
    // Mean of (1 + z/H)² over the disc: 1 + R²/(4H²)
    expect(square.rotorMean(0)).toBeCloseTo(10 * (1 + 65 ** 2 / (4 * 110 ** 2)), 6);
  });

  it('is refused over ground as rough as the hub is high, and for a rotor that reaches the ground', () => {
    expect(() => profileFactor({ kind: 'logarithmic', roughness: 110 }, 110)).toThrow(/roughness length/);
    const profile = { kind: 'power law', exponent: 0.2 } as const;
    expect(() => profileWind({ speed: 10, profile, hubHeight: 60, rotorRadius: 65 })).toThrow(/clear the ground/);
  });
});

describe('a wind that turns', () => {
  const turning = { ...steadyWind({ speed: 2 }), direction: (t: number) => t };
  const wind = sumWind([steadyWind({ speed: 10 }), turning]);

  it('turns all its parts together, towards +y', () => {
    wind.velocity(Math.PI / 6, 0, 0, velocity);
    expect(velocity[0]).toBeCloseTo(12 * Math.cos(Math.PI / 6), 12);
    expect(velocity[1]).toBeCloseTo(6, 12);
    expect(wind.direction?.(0.4)).toBe(0.4);
  });

  it('leaves the surface rotor what blows along its axis', () => {
    expect(wind.rotorMean(Math.PI / 3)).toBeCloseTo(6, 12);
  });

  it('has no direction where no part has one', () => {
    expect(sumWind([steadyWind({ speed: 10 })]).direction).toBeUndefined();
  });
});
