import { describe, expect, it } from 'vitest';
import { standardTurbulence } from '../../sim/wind/kaimal.ts';
import { discShares, polarReader, requireFineGrid, usualGrid } from '../../sim/wind/polar-grid.ts';
import { requireTurbulence, type Turbulence, turbulenceField } from '../../sim/wind/turbulence.ts';
import { turbulentWind } from '../../sim/wind/turbulent.ts';

const TURBULENCE: Turbulence = {
  ...standardTurbulence(12, 2, 42),
  grid: { radius: 65, rings: 5, spokes: 12 },
  duration: 60,
  rate: 10,
  seed: 1,
  variance: 'exact',
};
const PASSAGE = { bladeCount: 3, rotorSpeed: 1.2 };
const velocity = new Float64Array(3);

function at(read: (t: number, y: number, z: number, out: Float64Array) => void, t: number, y: number, z: number) {
  read(t, y, z, velocity);
  return [...velocity];
}

describe('a polar series', () => {
  // One ring of four spokes; u numbers the points, v the instants.
  const values = new Float32Array(
    [0, 0, 0, 10, 0, 0, 20, 0, 0, 30, 0, 0, 40, 0, 0].map((v, i) => (i % 3 === 0 ? v : 0)),
  );
  const twice = new Float32Array(30);
  twice.set(values);
  for (let i = 0; i < 15; i++) twice[15 + i] = i % 3 === 1 ? 6 : values[i];
  const read = polarReader({ grid: { radius: 10, rings: 1, spokes: 4 }, period: 8, samples: 2, values: twice });

  it('has its points where the blades pass: up, then in the sense of turning', () => {
    expect(at(read, 0, 0, 0)[0]).toBe(0);
    expect(at(read, 0, 0, 10)[0]).toBeCloseTo(10, 9);
    expect(at(read, 0, -10, 0)[0]).toBeCloseTo(20, 9);
    expect(at(read, 0, 0, -10)[0]).toBeCloseTo(30, 9);
    expect(at(read, 0, 10, 0)[0]).toBeCloseTo(40, 9);
  });

  it('is linear in azimuth, across the top too, in radius, and in time; held beyond the tip', () => {
    const diagonal = 10 / Math.SQRT2;
    expect(at(read, 0, -diagonal, diagonal)[0]).toBeCloseTo(15, 5);
    expect(at(read, 0, diagonal, diagonal)[0]).toBeCloseTo(25, 5);
    expect(at(read, 0, 0, 5)[0]).toBeCloseTo(5, 9);
    expect(at(read, 0, 0, 30)[0]).toBeCloseTo(10, 9);
    expect(at(read, 1, 3, 4)[1]).toBeCloseTo(1.5, 6);
  });

  it('finds every azimuth to within 3e-7 rad', () => {
    // Points of 10, 20, 30, 40 a quarter of a turn apart: u tells the azimuth.
    for (let i = 0; i < 1000; i++) {
      const azimuth = (1.5 * Math.PI * i) / 1000;
      const [u = 0] = at(read, 0, -10 * Math.sin(azimuth), 10 * Math.cos(azimuth));
      expect(Math.abs(((u - 10) * Math.PI) / 20 - azimuth)).toBeLessThan(3e-7);
    }
  });

  it('repeats itself, backwards too', () => {
    expect(at(read, 6, 3, 4)[1]).toBeCloseTo(3, 6);
    expect(at(read, 14, 3, 4)).toEqual(at(read, 6, 3, 4));
    expect(at(read, -2, 3, 4)).toEqual(at(read, 6, 3, 4));
  });
});

describe('the shares of the rings in the disc', () => {
  it('sum to one and weigh a wind that grows with radius as its integral does', () => {
    const shares = discShares({ radius: 65, rings: 5, spokes: 12 });
    expect(shares.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 12);
    // ∫ r 2r dr/R² = 2R/3
    expect(shares.reduce((sum, share, ring) => sum + share * 13 * ring, 0)).toBeCloseTo((2 * 65) / 3, 9);
  });
});

describe('turbulence as a part of the wind', () => {
  it('does not make its field for a rotor that feels only its mean wind and its hub', () => {
    let made = 0;
    const wind = turbulentWind(TURBULENCE, PASSAGE, (turbulence) => {
      made++;
      return turbulenceField(turbulence);
    });
    wind.rotorMean(3);
    wind.velocity(3, 0, 0, velocity);
    expect(made).toBe(0);
    wind.velocity(3, 0, 1, velocity);
    wind.velocity(4, 0, 1, velocity);
    expect(made).toBe(1);
  });

  it('is the same at the hub whether the field is there or not', () => {
    const wind = turbulentWind(TURBULENCE, PASSAGE);
    const read = polarReader(turbulenceField(TURBULENCE));
    for (const t of [0, 7.77, 59.9]) {
      const whole = at(read, t, 0, 0);
      at(wind.velocity, t, 0, 0).forEach((value, i) => {
        expect(value).toBeCloseTo(whole[i], 5);
      });
    }
  });

  it('has a rotor mean that is smooth and comes round with the period', () => {
    const { rotorMean } = turbulentWind(TURBULENCE, PASSAGE);
    const slope = (t: number) => (rotorMean(t + 1e-5) - rotorMean(t)) / 1e-5;
    const instant = (20 * 60) / 1024;
    expect(slope(instant - 1e-5)).toBeCloseTo(slope(instant), 2);
    expect(rotorMean(61.3)).toBeCloseTo(rotorMean(1.3), 9);
  });

  it('is refused a grid that is too coarse for the rotor or does not suit its blades', () => {
    const grid = (rings: number, spokes: number) => () => requireFineGrid({ radius: 65, rings, spokes }, 3);
    expect(grid(3, 24)).toThrow(/3 ring\(s\) is too coarse for a rotor of 130 m.*21\.7 m apart.*4 rings or more/);
    expect(grid(5, 6)).toThrow(/6 spoke\(s\) is too coarse.*68\.1 m apart at the tip.*11 spokes or more/);
    expect(grid(5, 16)).toThrow(/16 spokes do not suit 3 blades/);
    expect(grid(5, 15)).toThrow(/even multiple/);
    expect(grid(5, 12)).not.toThrow();
  });

  it('has a usual grid that is fine enough for any rotor', () => {
    for (const radius of [1, 10, 65, 120, 200]) expect(() => requireFineGrid(usualGrid(radius), 3)).not.toThrow();
  });

  it('is refused a field beyond what memory should hold, and one too short to hold a gust', () => {
    expect(() => requireTurbulence({ ...TURBULENCE, duration: 1e6 })).toThrow(/takes \d+ MB, and 1024 MB is the most/);
    expect(() => requireTurbulence({ ...TURBULENCE, duration: 0.1 })).toThrow(/hold no turbulence/);
    expect(() => requireTurbulence({ ...TURBULENCE, meanWind: 0 })).toThrow(/mean wind/);
    expect(() => requireTurbulence({ ...TURBULENCE, seed: -1 })).toThrow(/seed/);
  });
});
