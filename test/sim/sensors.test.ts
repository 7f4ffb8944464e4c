import { describe, expect, it } from 'vitest';
import { Layout } from '../../sim/layout.ts';
import { gaussian, uniform } from '../../sim/noise.ts';
import { SpeedSensor } from '../../sim/speed-sensor.ts';

function sensor(changes: Partial<ConstructorParameters<typeof SpeedSensor>[1]>, sampleTime = 0.01) {
  const layout = new Layout();
  const data = { timeConstant: 0, resolution: 0, noise: 0, range: 1000, ...changes };
  const made = new SpeedSensor('sensor', data, sampleTime, 5, layout);
  const memory = new Float64Array(layout.size);
  return { made, memory };
}

describe('A speed sensor', () => {
  it('lags a ramp as a first-order filter does, whatever its sample time', () => {
    for (const sampleTime of [0.001, 0.01, 0.05]) {
      const { made, memory } = sensor({ timeConstant: 0.1 }, sampleTime);
      made.start(0, memory);
      const samples = Math.round(0.3 / sampleTime);
      for (let k = 1; k <= samples; k++) made.sample(k, 2 * k * sampleTime, memory);
      // Answer of 1/(τs + 1) to the ramp 2t: 2(t − τ(1 − e^(−t/τ)))
      expect(made.reading(memory)).toBeCloseTo(2 * (0.3 - 0.1 * (1 - Math.exp(-3))), 9);
    }
  });

  it('reports whole steps of its resolution, and no more than its range', () => {
    const { made, memory } = sensor({ resolution: 0.25, range: 5 });
    made.sample(1, 3.39, memory);
    expect(made.reading(memory)).toBe(3.5);
    made.sample(2, 80, memory);
    expect(made.reading(memory)).toBe(5);
  });

  it('that freezes keeps its last reading', () => {
    const { made, memory } = sensor({});
    made.sample(1, 7, memory);
    made.freeze(memory);
    made.sample(2, 9, memory);
    expect(made.reading(memory)).toBe(7);
  });
});

describe('Noise', () => {
  const count = 20_000;
  const values = Array.from({ length: count }, (_, i) => gaussian(3, i));
  const mean = values.reduce((sum, v) => sum + v, 0) / count;

  it('has the mean, spread and tails of a standard normal', () => {
    const moment = (order: number) => values.reduce((sum, v) => sum + (v - mean) ** order, 0) / count;
    expect(Math.abs(mean)).toBeLessThan(4 / Math.sqrt(count));
    expect(Math.abs(moment(2) - 1)).toBeLessThan(4 * Math.sqrt(2 / count));
    expect(Math.abs(moment(4) / moment(2) ** 2 - 3)).toBeLessThan(4 * Math.sqrt(24 / count));
  });

  it('does not repeat itself from sample to sample or from seed to seed', () => {
    const correlation = (other: (i: number) => number) =>
      values.reduce((sum, v, i) => sum + (v - mean) * other(i), 0) / count;
    for (const lag of [1, 2, 3, 10]) {
      expect(Math.abs(correlation((i) => gaussian(3, i + lag)))).toBeLessThan(4 / Math.sqrt(count));
    }
    expect(Math.abs(correlation((i) => gaussian(4, i)))).toBeLessThan(4 / Math.sqrt(count));
    expect(new Set(values).size).toBeGreaterThan(count - 5);
  });

  it('is uniform before it is shaped', () => {
    const bins = new Array<number>(16).fill(0);
    for (let i = 0; i < count; i++) bins[Math.floor(16 * uniform(9, i))]++;
    const chiSquare = bins.reduce((sum, n) => sum + (n - count / 16) ** 2 / (count / 16), 0);
    // 99.9 % point of chi-square with 15 degrees of freedom, by any table.
    expect(chiSquare).toBeLessThan(37.7);
  });
});
