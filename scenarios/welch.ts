/**
 * Spectra and coherence of series by Welch's method (1967): means over half-overlapping segments under Hann's window,
 * with the bands in which such an estimate falls 95 times of 100.
 */
import { SeriesSpectrum } from '../sim/wind/fourier.ts';

/** 97.5 % point of the standard normal distribution. */
const QUANTILE = 1.959964;

/** How much two neighbouring segments under Hann's window have in common: the square of 1/6. */
const OVERLAP_SHARE = 1 / 36;

export interface WelchSpectrum {
  /** Hz, from the first above 0 to Nyquist's. */
  frequency: Float64Array;
  /** One-sided power spectral density, unit² per Hz. */
  density: Float64Array;
  /** As many independent segments would scatter alike. */
  averages: number;
}

export interface WelchCoherence {
  frequency: Float64Array;
  /** Magnitude of the cross spectrum over the root of both spectra's product, 0 to 1. */
  coherence: Float64Array;
  averages: number;
}

/**
 * The spectrum of a series.
 * @param step s between samples
 * @param segment samples in one segment, a power of two from 4 on and no more than there are
 * @throws RangeError when the series is shorter than a segment
 */
export function welchSpectrum(series: ArrayLike<number>, step: number, segment: number): WelchSpectrum {
  const { frequency, averages, sums } = welchSums(series, series, step, segment);
  return { frequency, density: sums.first, averages };
}

/**
 * The coherence of two series; arguments and errors as `welchSpectrum`.
 * @throws RangeError also when one series is shorter than the other
 */
export function welchCoherence(
  first: ArrayLike<number>,
  second: ArrayLike<number>,
  step: number,
  segment: number,
): WelchCoherence {
  const { frequency, averages, sums } = welchSums(first, second, step, segment);
  const coherence = sums.first.map(
    (power, k) => Math.hypot(sums.cross[2 * k], sums.cross[2 * k + 1]) / Math.sqrt(power * sums.second[k]),
  );
  return { frequency, coherence, averages };
}

/** Where the estimate falls over the true spectrum, 95 times of 100: χ² over its degrees of freedom. */
export function spectrumBand(averages: number): { low: number; high: number } {
  // Wilson and Hilferty (1931): χ²/ν ≈ (1 − 2/(9ν) ± z √(2/(9ν)))³, ν = two for each average.
  const part = 2 / (9 * 2 * averages);
  const at = (z: number) => Math.max(0, 1 - part + z * Math.sqrt(part)) ** 3;
  return { low: at(-QUANTILE), high: at(QUANTILE) };
}

/**
 * Where the estimate of a true coherence falls, 95 times of 100: artanh of it is nearly normal with variance 1/(2n) and
 * bias 1/(2n − 2) for n averages (Bendat and Piersol, *Random Data*).
 */
export function coherenceBand(coherence: number, averages: number): { low: number; high: number } {
  const centre = Math.atanh(Math.min(coherence, 1 - 1e-12)) + 1 / (2 * averages - 2);
  const spread = QUANTILE / Math.sqrt(2 * averages);
  return { low: Math.max(0, Math.tanh(centre - spread)), high: Math.tanh(centre + spread) };
}

/** What the estimated coherence of two series that have nothing in common exceeds 5 times of 100. */
export function incoherentLimit(averages: number): number {
  // P(γ² > x) = (1 − x)^(n − 1)
  return Math.sqrt(1 - 0.05 ** (1 / (averages - 1)));
}

function welchSums(first: ArrayLike<number>, second: ArrayLike<number>, step: number, segment: number) {
  const samples = first.length;
  if (samples < segment || second.length !== samples) {
    throw new RangeError(`a segment of ${segment} samples does not fit series of ${samples} and ${second.length}`);
  }
  const bins = segment / 2;
  const hann = Float64Array.from({ length: segment }, (_, n) => 0.5 - 0.5 * Math.cos((2 * Math.PI * n) / segment));
  const sums = { first: new Float64Array(bins), second: new Float64Array(bins), cross: new Float64Array(2 * bins) };
  const transforms = [new SeriesSpectrum(segment), new SeriesSpectrum(segment)];
  const means = [meanOf(first), meanOf(second)];
  const windowed = [new Array<number>(segment).fill(0), new Array<number>(segment).fill(0)];
  let segments = 0;
  for (let from = 0; from + segment <= samples; from += segment / 2, segments++) {
    for (let n = 0; n < segment; n++) {
      windowed[0][n] = hann[n] * (first[from + n] - means[0]);
      windowed[1][n] = hann[n] * (second[from + n] - means[1]);
    }
    const a = transforms[0].of(windowed[0]);
    const b = transforms[1].of(windowed[1]);
    for (let k = 0, at = 2; k < bins; k++, at += 2) {
      sums.first[k] += a[at] ** 2 + a[at + 1] ** 2;
      sums.second[k] += b[at] ** 2 + b[at + 1] ** 2;
      sums.cross[2 * k] += a[at] * b[at] + a[at + 1] * b[at + 1];
      sums.cross[2 * k + 1] += a[at] * b[at + 1] - a[at + 1] * b[at];
    }
  }
  // Hann's window has a mean square of 3/8; one-sided, so twice.
  const scale = (2 * step) / (segments * segment * 0.375);
  for (const sum of [sums.first, sums.second, sums.cross]) for (let i = 0; i < sum.length; i++) sum[i] *= scale;
  return {
    frequency: Float64Array.from({ length: bins }, (_, k) => (k + 1) / (segment * step)),
    averages: segments / (1 + 2 * OVERLAP_SHARE * (1 - 1 / segments)),
    sums,
  };
}

function meanOf(series: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < series.length; i++) sum += series[i];
  return sum / series.length;
}
