/**
 * Check 8: turbulence against the Kaimal spectrum and the exponential coherence of IEC 61400-1's annex (*memory*). Every
 * estimate is held to its own 95 % band (scenarios/welch.ts): at well-separated frequencies five of a hundred fall
 * outside, and the number that does is held to what that chance allows.
 *
 * The expected values are written out here again, from the annex, rather than taken from the code under test:
 *   S(f) = 4 σ² (L/V)/(1 + 6 f L/V)^(5/3), Λ₁ = 42 m, L = 340.2, 113.4, 27.72 m, σ = 1, 0.8, 0.5 of σ₁
 *   Coh(f, r) = exp(−12 √((f r/V)² + (0.12 r/340.2)²))
 */
import { describe, expect, it } from 'vitest';
import {
  coherenceBand,
  incoherentLimit,
  spectrumBand,
  type WelchSpectrum,
  welchCoherence,
  welchSpectrum,
} from '../../scenarios/welch.ts';
import { standardTurbulence } from '../../sim/wind/kaimal.ts';
import { type PolarSeries, pointCount, polarReader } from '../../sim/wind/polar-grid.ts';
import { hubAndRotorSeries, type Turbulence, turbulenceField } from '../../sim/wind/turbulence.ts';

const MEAN_WIND = 12;
const DEVIATION = 2;
const LONG: Turbulence = {
  ...standardTurbulence(MEAN_WIND, DEVIATION, 42),
  grid: { radius: 65, rings: 5, spokes: 12 },
  duration: 3600,
  rate: 4,
  seed: 11,
  variance: 'random',
};
/** Twelve revolutions a minute. */
const PASSAGE = { bladeCount: 3, rotorSpeed: (12 * Math.PI) / 30 };
const SEGMENT = 1024;

function kaimal(component: 0 | 1 | 2, frequency: number): number {
  const deviation = [1, 0.8, 0.5][component] * DEVIATION;
  const passage = [340.2, 113.4, 27.72][component] / MEAN_WIND;
  return (4 * deviation ** 2 * passage) / (1 + 6 * frequency * passage) ** (5 / 3);
}

function coherenceAt(frequency: number, distance: number): number {
  return Math.exp(-12 * Math.hypot((frequency * distance) / MEAN_WIND, (0.12 * distance) / 340.2));
}

/** The series of a component at a point: 0 is the hub, then ring by ring. */
function seriesAt({ grid, samples, values }: PolarSeries, point: number, component: number): Float64Array {
  return Float64Array.from({ length: samples }, (_, n) => values[3 * (n * pointCount(grid) + point) + component]);
}

function step({ period, samples }: { period: number; samples: number }): number {
  return period / samples;
}

/** Bins of a spectrum that lie apart enough to be independent, up to a frequency; the first two are spread by the window. */
function apart(frequency: ArrayLike<number>, upTo: number): number[] {
  const bins: number[] = [];
  for (let k = 3; frequency[k] < upTo; k = Math.max(k + 3, Math.ceil(k * 1.06))) bins.push(k);
  return bins;
}

/** The most of `count` that fall outside a 95 % band but once in a thousand times. */
function mostOutside(count: number): number {
  let probability = 0.95 ** count;
  let sum = probability;
  let outside = 0;
  while (sum < 0.999) {
    probability *= ((count - outside) / (outside + 1)) * (0.05 / 0.95);
    outside++;
    sum += probability;
  }
  return outside;
}

function outsideBand({ frequency, density, averages }: WelchSpectrum, target: (f: number) => number, upTo: number) {
  const { low, high } = spectrumBand(averages);
  const bins = apart(frequency, upTo);
  const outside = bins.filter((k) => {
    const ratio = density[k] / target(frequency[k]);
    return ratio < low || ratio > high;
  });
  return { count: bins.length, outside: outside.length };
}

function meanSquare(series: ArrayLike<number>): number {
  return Array.from(series).reduce((sum, value) => sum + value ** 2, 0) / series.length;
}

const field = turbulenceField(LONG);

describe('the field of one hour', () => {
  it.each([
    { name: 'along the wind', component: 0 },
    { name: 'across it', component: 1 },
    { name: 'upwards', component: 2 },
  ] as const)('has the Kaimal spectrum $name, at the hub and at the tip', ({ component }) => {
    for (const point of [0, 50]) {
      const spectrum = welchSpectrum(seriesAt(field, point, component), step(field), SEGMENT);
      const { count, outside } = outsideBand(spectrum, (f) => kaimal(component, f), 1.9);
      expect(count).toBeGreaterThan(30);
      expect(outside).toBeLessThanOrEqual(mostOutside(count));
      // The band can tell: a spectrum three fifths stronger leaves it far more often.
      expect(outsideBand(spectrum, (f) => 1.6 * kaimal(component, f), 1.9).outside).toBeGreaterThan(
        2 * mostOutside(count),
      );
    }
  });

  it('has a variance within the scatter of an hour, where that is left random', () => {
    // The spectrum up to 2 Hz holds Σ S Δf; its estimate over one period scatters by √(Σ (S Δf)²).
    for (const component of [0, 1, 2] as const) {
      const powers = Array.from({ length: 7199 }, (_, i) => kaimal(component, (i + 1) / 3600) / 3600);
      const due = powers.reduce((a, b) => a + b, 0);
      const spread = Math.sqrt(powers.reduce((a, b) => a + b * b, 0));
      for (const point of [0, 17, 60]) {
        const variance = meanSquare(seriesAt(field, point, component));
        expect(Math.abs(variance - due)).toBeLessThan(3 * spread);
        expect(variance).not.toBeCloseTo(due, 6);
      }
    }
  });

  it('has components that have nothing in common', () => {
    const { coherence, averages, frequency } = welchCoherence(
      seriesAt(field, 0, 0),
      seriesAt(field, 0, 2),
      step(field),
      SEGMENT,
    );
    const bins = apart(frequency, 1.9);
    const above = bins.filter((k) => coherence[k] > incoherentLimit(averages)).length;
    expect(above).toBeLessThanOrEqual(mostOutside(bins.length));
  });
});

describe('the field of four hours', () => {
  const calm = turbulenceField({ ...LONG, duration: 14400, rate: 1, seed: 3 });

  // Rings are 13 m apart; neighbours on the outermost 33.6 m.
  it.each([
    { name: '13 m apart on a spoke', first: 13, second: 25, distance: 13, fewest: 8 },
    { name: '26 m apart across the hub', first: 1, second: 7, distance: 26, fewest: 5 },
    { name: '33.6 m apart at the tip', first: 49, second: 50, distance: 130 * Math.sin(Math.PI / 12), fewest: 4 },
    { name: '65 m apart, hub and tip', first: 0, second: 55, distance: 65, fewest: 2 },
  ])('is as coherent as the annex says at points $name', ({ first, second, distance, fewest }) => {
    const estimates = [0, 1, 2].map((component) =>
      welchCoherence(seriesAt(calm, first, component), seriesAt(calm, second, component), step(calm), 256),
    );
    const { frequency, averages } = estimates[0];
    const bins = Array.from({ length: 50 }, (_, i) => 1 + 2 * i).filter(
      (k) => coherenceAt(frequency[k], distance) > 0.15,
    );
    const outside = (distanceDue: number) =>
      estimates.flatMap(({ coherence }) =>
        bins.filter((k) => {
          const { low, high } = coherenceBand(coherenceAt(frequency[k], distanceDue), averages);
          return coherence[k] < low || coherence[k] > high;
        }),
      ).length;
    expect(bins.length).toBeGreaterThanOrEqual(fewest);
    expect(outside(distance)).toBeLessThanOrEqual(mostOutside(3 * bins.length));
    // The band can tell: points half as far again apart would be less coherent.
    expect(outside(1.5 * distance)).toBeGreaterThan(mostOutside(3 * bins.length));
  });
});

describe('a seed', () => {
  const short: Turbulence = { ...LONG, duration: 120 };

  it('gives the same bytes twice', () => {
    const bytes = (f: PolarSeries) => Buffer.from(f.values.buffer);
    expect(bytes(turbulenceField(short)).equals(bytes(turbulenceField({ ...short })))).toBe(true);
    expect(bytes(turbulenceField(short)).equals(bytes(turbulenceField({ ...short, seed: 12 })))).toBe(false);
  });

  it('gives a field that has nothing in common with that of another', () => {
    const other = turbulenceField({ ...LONG, seed: 12 });
    for (const point of [0, 40]) {
      const { coherence, averages, frequency } = welchCoherence(
        seriesAt(field, point, 0),
        seriesAt(other, point, 0),
        step(field),
        SEGMENT,
      );
      const bins = apart(frequency, 1.9);
      const above = bins.filter((k) => coherence[k] > incoherentLimit(averages)).length;
      expect(bins.length).toBeGreaterThan(30);
      expect(above).toBeLessThanOrEqual(mostOutside(bins.length));
    }
  });

  it('must be a whole number', () => {
    expect(() => turbulenceField({ ...short, seed: 1.5 })).toThrow(/seed.*whole number.*1\.5/);
  });
});

describe('the mean and the variance', () => {
  it('are 0 and, where asked, exactly the square of the deviation at the hub', () => {
    const exact = turbulenceField({ ...LONG, duration: 600, variance: 'exact' });
    for (const point of [0, 3, 60]) {
      const series = seriesAt(exact, point, 0);
      expect(Math.abs(series.reduce((a, b) => a + b, 0) / series.length)).toBeLessThan(1e-6);
    }
    const deviations = [0, 1, 2].map((component) => Math.sqrt(meanSquare(seriesAt(exact, 0, component))));
    expect(deviations[0]).toBeCloseTo(2, 6);
    expect(deviations[1]).toBeCloseTo(1.6, 6);
    expect(deviations[2]).toBeCloseTo(1, 6);
  });

  it('holds for a length that is no power of two and no whole number of samples', () => {
    const odd = turbulenceField({ ...LONG, duration: 611.7, rate: 3.3, variance: 'exact' });
    expect(odd.period).toBe(611.7);
    expect(Math.sqrt(meanSquare(seriesAt(odd, 0, 0)))).toBeCloseTo(2, 6);
  });
});

/** Mean of u along three blades that turn through a field, by area, at each of its samples. */
function alongBlades(series: PolarSeries, rotorSpeed: number): Float64Array {
  const read = polarReader(series);
  const velocity = new Float64Array(3);
  const sections = 130;
  return Float64Array.from({ length: series.samples }, (_, n) => {
    const t = n * step(series);
    let sum = 0;
    for (let blade = 0; blade < 3; blade++) {
      const azimuth = rotorSpeed * t + (2 * Math.PI * blade) / 3;
      for (let section = 0; section < sections; section++) {
        const r = (65 * (section + 0.5)) / sections;
        read(t, -r * Math.sin(azimuth), r * Math.cos(azimuth), velocity);
        sum += (velocity[0] * 2 * (section + 0.5)) / sections ** 2;
      }
    }
    return sum / 3;
  });
}

describe("the rotor's own series", () => {
  const turbulence: Turbulence = { ...LONG, duration: 1800, grid: { radius: 65, rings: 6, spokes: 24 }, rate: 8 };
  const series = hubAndRotorSeries(turbulence, PASSAGE);
  const whole = turbulenceField(turbulence);
  const spectrum = welchSpectrum(Float64Array.from(series.rotor), step(series), SEGMENT);

  it('is what three blades meet on average in the whole field of the same seed', () => {
    // 12 rpm for 1800 s are 1080 passages of a blade: the series turns at just that speed.
    const met = alongBlades(whole, PASSAGE.rotorSpeed);
    const farthest = met.reduce((most, value, n) => Math.max(most, Math.abs(value - series.rotor[n])), 0);
    expect(farthest).toBeLessThan(2e-4);
    expect(seriesAt(whole, 0, 2).every((w, n) => Math.abs(w - series.hub[3 * n + 2]) < 1e-5)).toBe(true);
  });

  it('has the spectrum of the blades in the whole field of another seed, within the band of two estimates', () => {
    const other = alongBlades(turbulenceField({ ...turbulence, seed: 5 }), PASSAGE.rotorSpeed);
    const theirs = welchSpectrum(other, step(series), SEGMENT);
    // The logarithm of the ratio of two χ² of ν = 2n degrees each has a spread of 2/√ν.
    const widest = (1.96 * 2) / Math.sqrt(2 * spectrum.averages);
    const bins = apart(spectrum.frequency, 3.5);
    const outside = bins.filter((k) => Math.abs(Math.log(spectrum.density[k] / theirs.density[k])) > widest).length;
    expect(bins.length).toBeGreaterThan(30);
    expect(outside).toBeLessThanOrEqual(mostOutside(bins.length));
  });

  it('has the low frequencies that a disc of its size leaves of the Kaimal spectrum', () => {
    // Mean of the coherence over all pairs of points of the disc: 400 points of equal area, by the golden angle.
    const points = Array.from({ length: 400 }, (_, i) => {
      const r = 65 * Math.sqrt((i + 0.5) / 400);
      return { y: r * Math.cos(2.399963 * i), z: r * Math.sin(2.399963 * i) };
    });
    const left = (frequency: number) => {
      let sum = 0;
      for (const a of points) for (const b of points) sum += coherenceAt(frequency, Math.hypot(a.y - b.y, a.z - b.z));
      return sum / points.length ** 2;
    };
    const fine = welchSpectrum(Float64Array.from(series.rotor), step(series), 2048);
    const { low, high } = spectrumBand(fine.averages);
    const bins = apart(fine.frequency, 0.1);
    const outside = bins.filter((k) => {
      const ratio = fine.density[k] / (left(fine.frequency[k]) * kaimal(0, fine.frequency[k]));
      return ratio < low || ratio > high;
    });
    expect(left(0.1)).toBeLessThan(0.2);
    expect(bins.length).toBeGreaterThan(3);
    expect(outside.length).toBeLessThanOrEqual(mostOutside(bins.length));
  });

  it('peaks when a blade passes: three and six times a revolution, not in between', () => {
    const near = (frequency: number) => {
      const bins = [...spectrum.frequency.keys()].filter((k) => Math.abs(spectrum.frequency[k] - frequency) < 0.03);
      return bins.reduce((total, k) => total + spectrum.density[k], 0) / bins.length;
    };
    expect(near(0.6)).toBeGreaterThan(5 * near(0.4));
    expect(near(0.6)).toBeGreaterThan(5 * near(0.8));
    expect(near(1.2)).toBeGreaterThan(5 * near(1));
  });
});
