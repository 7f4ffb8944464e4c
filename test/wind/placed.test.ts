import { describe, expect, it } from 'vitest';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { placedWind } from '../../sim/wind/placed.ts';
import { rampWind } from '../../sim/wind/ramp.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { addedWind, sumWind } from '../../sim/wind/sum.ts';
import { turnedWind } from '../../sim/wind/turned.ts';

const velocity = new Float64Array(3);

describe('a part of the wind', () => {
  it('blows later by its delay, with its breakpoints and marks', () => {
    const gust = placedWind(cosineGust({ start: 5, duration: 4, amplitude: 6 }), { delay: 10 });
    expect([5, 7, 15, 17, 19].map(gust.rotorMean)).toEqual([0, 0, 0, 6, 0]);
    gust.velocity(17, 30, -20, velocity);
    expect([...velocity]).toEqual([6, 0, 0]);
    expect(gust.breakpoints(100)).toEqual([15, 19]);
    expect(gust.marks().map(({ time }) => time)).toEqual([15, 17, 19]);
  });

  it('keeps the jump that it had at the start of its own time', () => {
    expect(placedWind(stepWind({ at: 0, rise: 2 }), { delay: 10 }).breakpoints(20)).toEqual([10]);
  });

  it('is scaled, with its cross winds and its turning', () => {
    const field = {
      ...turnedWind(steadyWind({ speed: 10 }), 0.2),
      velocity: (_t: number, y: number, z: number, out: Float64Array) => out.set([10, y, z]),
    };
    const half = placedWind(field, { scale: 0.5 });
    half.velocity(0, 4, 6, velocity);
    expect([...velocity]).toEqual([5, 2, 3]);
    expect(half.rotorMean(0)).toBe(5);
    expect(half.direction?.(0)).toBeCloseTo(0.1, 12);
  });

  it('is let through between the hard edges of its window, the first instant included and the last not', () => {
    const wind = placedWind(steadyWind({ speed: 8 }), { window: { from: 10, to: 20, fade: 0 } });
    expect([9.999, 10, 19.999, 20].map(wind.rotorMean)).toEqual([0, 8, 8, 0]);
    expect(wind.breakpoints(100)).toEqual([10, 20]);
    wind.velocity(5, 0, 0, velocity);
    expect([...velocity]).toEqual([0, 0, 0]);
  });

  it('comes and goes smoothly inside its window where that is asked', () => {
    const wind = placedWind(steadyWind({ speed: 8 }), { window: { from: 10, to: 30, fade: 4 } });
    expect(wind.rotorMean(10)).toBe(0);
    expect(wind.rotorMean(12)).toBeCloseTo(4, 12);
    expect([14, 20, 26].map(wind.rotorMean)).toEqual([8, 8, 8]);
    expect(wind.rotorMean(28)).toBeCloseTo(4, 12);
    expect(wind.breakpoints(100)).toEqual([10, 14, 26, 30]);
  });

  it('drops the breakpoints and marks that its window hides', () => {
    const ramp = placedWind(rampWind({ from: 5, to: 15, rise: 3 }), { window: { from: 10, fade: 0 } });
    expect(ramp.breakpoints(100)).toEqual([10, 15]);
    expect(ramp.marks().map(({ time }) => time)).toEqual([15]);
  });

  it('is refused a window that is too short for its edges', () => {
    const place = (window: { from: number; to: number; fade: number }) => () =>
      placedWind(steadyWind({ speed: 8 }), { window });
    expect(place({ from: 10, to: 15, fade: 3 })).toThrow(/from 10 s to 15 s is too short to come and go over 3 s each/);
    expect(place({ from: 10, to: 10, fade: 0 })).toThrow(/too short/);
  });
});

describe('parts that are added before they are part of a wind', () => {
  it('are turned once, by the wind', () => {
    const part = addedWind([turnedWind(steadyWind({ speed: 6 }), Math.PI / 3), steadyWind({ speed: 4 })]);
    expect(part.rotorMean(0)).toBe(10);
    const wind = sumWind([part]);
    wind.velocity(0, 0, 0, velocity);
    expect(velocity[0]).toBeCloseTo(5, 12);
    expect(wind.rotorMean(0)).toBeCloseTo(5, 12);
  });
});
