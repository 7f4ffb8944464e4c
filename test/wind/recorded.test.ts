import { describe, expect, it } from 'vitest';
import { welchSpectrum } from '../../scenarios/welch.ts';
import { gaussian } from '../../sim/noise.ts';
import { recordedWind } from '../../sim/wind/recorded.ts';

const SITE = { hubHeight: 100, rotorRadius: 50 };
const velocity = new Float64Array(3);

function atHub(values: readonly number[], step = 1, start = 0) {
  return recordedWind({ start, step, speeds: [{ height: 100, values }] }, SITE);
}

describe('a record at the hub', () => {
  const noise = Array.from({ length: 2000 }, (_, i) => 10 + gaussian(7, i));

  it('passes through its samples and holds beyond them', () => {
    const wind = atHub(noise, 2, -10);
    for (const i of [0, 1, 2, 777, 1998, 1999]) expect(wind.rotorMean(-10 + 2 * i)).toBeCloseTo(noise[i], 9);
    expect(wind.rotorMean(-50)).toBe(noise[0]);
    expect(wind.rotorMean(1e5)).toBe(noise[1999]);
  });

  it('brings back a wave that its rate can carry, between samples too', () => {
    const wave = (t: number) => 12 + Math.sin(2 * Math.PI * 0.3 * t);
    const wind = atHub(Array.from({ length: 200 }, (_, i) => wave(i)));
    for (const t of [60.25, 60.5, 61.1, 88.77]) expect(wind.rotorMean(t)).toBeCloseTo(wave(t), 3);
  });

  it('holds no energy above its own Nyquist frequency, where straight lines between samples would', () => {
    // White noise at 1 Hz, read at 8 Hz: the share of its energy above 0.55 Hz.
    const shareAbove = (series: number[]) => {
      const { frequency, density } = welchSpectrum(series, 1 / 8, 1024);
      const sum = (from: number) => density.reduce((s, d, k) => (frequency[k] > from ? s + d : s), 0);
      return sum(0.55) / sum(0);
    };
    const instants = Array.from({ length: 8 * 1990 }, (_, i) => i / 8);
    const wind = atHub(noise);
    const straight = (t: number) => {
      const i = Math.floor(t);
      return noise[i] + (t - i) * (noise[i + 1] - noise[i]);
    };
    expect(shareAbove(instants.map(wind.rotorMean))).toBeLessThan(1e-3);
    expect(shareAbove(instants.map(straight))).toBeGreaterThan(0.02);
  });

  it('is refused with one sample, or with series of unequal length', () => {
    expect(() => atHub([10])).toThrow(/two samples/);
    const uneven = { start: 0, step: 1, speeds: [{ height: 100, values: [1, 2] }], direction: [0] };
    expect(() => recordedWind(uneven, SITE)).toThrow(/equally long/);
    expect(() => atHub([1, 2], 0)).toThrow(/step/);
  });
});

describe('a record of several heights', () => {
  const speeds = [
    { height: 80, values: [8, 8, 8] },
    { height: 120, values: [12, 12, 12] },
  ];
  const wind = recordedWind({ start: 0, step: 600, speeds }, SITE);

  it('is linear between them and holds below and above', () => {
    const at = (z: number) => {
      wind.velocity(300, 0, z, velocity);
      return velocity[0];
    };
    expect([-50, -20, -10, 0, 20, 50].map((z) => Number(at(z).toFixed(9)))).toEqual([8, 8, 9, 10, 12, 12]);
  });

  it('gives the surface rotor the mean over its disc', () => {
    expect(wind.rotorMean(300)).toBeCloseTo(10, 6);
    // A lower pair: all of the disc above 80 m has 12, so more than half of it.
    const low = recordedWind(
      {
        start: 0,
        step: 600,
        speeds: [
          { ...speeds[0], height: 40 },
          { ...speeds[1], height: 80 },
        ],
      },
      SITE,
    );
    expect(low.rotorMean(300)).toBeGreaterThan(11.4);
    expect(low.rotorMean(300)).toBeLessThan(12);
  });
});
