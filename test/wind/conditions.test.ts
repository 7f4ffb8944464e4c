import { describe, expect, it } from 'vitest';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { operatingGust } from '../../sim/wind/operating-gust.ts';
import { rampWind } from '../../sim/wind/ramp.ts';
import { sineWind } from '../../sim/wind/sine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { tableWind } from '../../sim/wind/table.ts';

describe('a step', () => {
  const wind = stepWind({ at: 10, rise: -3 });

  it('takes its new value at its very instant', () => {
    expect([9.999999, 10, 500].map(wind.rotorMean)).toEqual([0, -3, -3]);
  });

  it('cuts the integration at its instant, unless that lies outside the run or on its border', () => {
    expect(wind.breakpoints(20)).toEqual([10]);
    expect(wind.breakpoints(10)).toEqual([]);
    expect(stepWind({ at: 0, rise: 1 }).breakpoints(20)).toEqual([]);
  });

  it('is marked in words', () => {
    expect(wind.marks()).toEqual([{ time: 10, kind: 'other', text: 'wind steps by −3 m/s' }]);
  });
});

describe('a ramp', () => {
  it('rises evenly between its instants and holds', () => {
    const wind = rampWind({ from: 2, to: 6, rise: 8 });
    expect([0, 2, 3, 5, 6, 100].map(wind.rotorMean)).toEqual([0, 0, 2, 6, 8, 8]);
    expect(wind.breakpoints(5)).toEqual([2]);
  });

  it('is refused when it ends before it starts', () => {
    expect(() => rampWind({ from: 6, to: 6, rise: 1 })).toThrow(/from 6 s to 6 s/);
  });
});

describe('a swing', () => {
  const wind = sineWind({ amplitude: 2, period: 8, from: 4, to: 10 });

  it('starts upwards from zero, peaks after a quarter of its period and stops at once', () => {
    expect(wind.rotorMean(3.9)).toBe(0);
    expect(wind.rotorMean(6)).toBeCloseTo(2, 12);
    expect(wind.rotorMean(9.999999)).toBeCloseTo(-2, 6);
    expect(wind.rotorMean(10)).toBe(0);
  });

  it('goes on for ever where no end is given', () => {
    const endless = sineWind({ amplitude: 2, period: 8 });
    expect(endless.rotorMean(802)).toBeCloseTo(2, 9);
    expect(endless.breakpoints(1000)).toEqual([]);
    expect(endless.marks()).toHaveLength(1);
  });

  it('is refused without a period', () => {
    expect(() => sineWind({ amplitude: 1, period: 0 })).toThrow(/period/);
  });
});

describe('a 1 − cos gust', () => {
  const wind = cosineGust({ start: 10, duration: 8, amplitude: 6 });

  it('is half up a quarter of the way, whole half-way, and nothing outside', () => {
    expect([5, 10, 18, 30].map(wind.rotorMean)).toEqual([0, 0, 0, 0]);
    expect(wind.rotorMean(12)).toBeCloseTo(3, 12);
    expect(wind.rotorMean(14)).toBeCloseTo(6, 12);
  });

  it('marks where it starts, peaks and ends, findable by kind', () => {
    expect(wind.marks()).toEqual([
      { time: 10, kind: 'gust start', text: 'gust starts' },
      { time: 14, kind: 'gust peak', text: 'gust at its peak (+6 m/s)' },
      { time: 18, kind: 'gust end', text: 'gust ends' },
    ]);
  });
});

describe('an operating gust', () => {
  const wind = operatingGust({
    edition: 3,
    windClass: 'I',
    turbulence: 'A',
    hubWind: 25,
    rotorDiameter: 42,
    hubHeight: 80,
    start: 30,
  });

  it('adds only what differs from the mean wind', () => {
    expect([0, 30, 40.5, 100].map(wind.rotorMean)).toEqual([0, 0, 0, 0]);
    expect(wind.rotorMean(35.25)).toBeCloseTo(0.74 * 11.688, 6);
  });

  it('marks its peak at the instant of highest wind', () => {
    const peak = wind.marks().find((mark) => mark.kind === 'gust peak');
    expect(peak).toEqual({ time: 35.25, kind: 'gust peak', text: 'gust at its peak (+8.6 m/s)' });
  });
});

describe('a table', () => {
  const wind = tableWind({ time: [0, 10, 20, 50], speed: [8, 12, 11, 11] });

  it('is linear between rows and held at its ends', () => {
    expect([-1, 0, 5, 9.5, 10, 10.5, 12.5].map(wind.rotorMean)).toEqual([8, 8, 10, 11.8, 12, 11.95, 11.75]);
    expect([20, 20.5, 49, 50, 900].map(wind.rotorMean)).toEqual([11, 11, 11, 11, 11]);
  });

  it('cuts the integration at every row inside the run', () => {
    expect(wind.breakpoints(50)).toEqual([10, 20]);
  });

  it('names the row whose time does not rise', () => {
    expect(() => tableWind({ time: [0, 2, 2], speed: [1, 2, 3] })).toThrow(/row 3 has 2 s after 2 s/);
    expect(() => tableWind({ time: [0, Number.NaN], speed: [1, 2] })).toThrow(/row 2/);
    expect(() => tableWind({ time: [], speed: [] })).toThrow(/at least one row/);
    expect(() => tableWind({ time: [0, 1], speed: [1] })).toThrow(/2 times and 1 speeds/);
  });
});

describe('a sum of winds', () => {
  const wind = sumWind([
    steadyWind({ speed: 12 }),
    cosineGust({ start: 20, duration: 10, amplitude: 5 }),
    stepWind({ at: 20, rise: 3 }),
    rampWind({ from: 5, to: 15, rise: -2 }),
  ]);

  it('adds its parts at the hub and anywhere on the disc', () => {
    expect(wind.rotorMean(25)).toBeCloseTo(12 + 5 + 3 - 2, 12);
    const velocity = new Float64Array([9, 9, 9]);
    wind.velocity(25, 12, -30, velocity);
    expect(velocity[0]).toBeCloseTo(18, 12);
    expect([velocity[1], velocity[2]]).toEqual([0, 0]);
  });

  it('lists each break of its parts once, in order', () => {
    expect(wind.breakpoints(100)).toEqual([5, 15, 20, 30]);
  });

  it('lists the marks of its parts in order of time', () => {
    const times = wind.marks().map((mark) => mark.time);
    expect(times).toEqual([5, 15, 20, 20, 25, 30]);
  });

  it('adds sums within sums', () => {
    const nested = sumWind([wind, wind]);
    const velocity = new Float64Array(3);
    nested.velocity(25, 0, 0, velocity);
    expect(velocity[0]).toBeCloseTo(36, 12);
  });
});
