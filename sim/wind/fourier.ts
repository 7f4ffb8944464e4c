/** Fourier transforms of real series whose length is a power of two. */
import FFT from 'fft.js';

/** The smallest power of two that is not below `length` (nor below 4). */
export function powerOfTwoFrom(length: number): number {
  let size = 4;
  while (size < length) size *= 2;
  return size;
}

/** Two real series at a time from what they hold at each frequency. */
export class SeriesPair {
  private readonly transform: FFT;
  private readonly spectrum: number[];
  private readonly series: number[];

  /** @param length a power of two from 4 on */
  constructor(readonly length: number) {
    this.transform = new FFT(length);
    this.spectrum = this.transform.createComplexArray();
    this.series = this.transform.createComplexArray();
  }

  /**
   * Writes `Re Σ_k X_k e^(2πi k n/length)` for two sets of amplitudes, `k` from 1.
   * @param first pairs (Re, Im) for k = 1, 2, …, fewer than half the length; `second` likewise
   * @param write told the sample number and both values
   */
  synthesize(
    first: ArrayLike<number>,
    second: ArrayLike<number>,
    write: (sample: number, first: number, second: number) => void,
  ): void {
    const { length, spectrum, series } = this;
    spectrum.fill(0);
    const scale = 0.5 * length;
    for (let i = 0, k = 1; i < first.length; i += 2, k++) {
      // Z = X + iY for k > 0, and conj(X) + i conj(Y) for −k: the real part of the result is x, the imaginary part y.
      const mirrored = 2 * (length - k);
      spectrum[2 * k] = scale * (first[i] - second[i + 1]);
      spectrum[2 * k + 1] = scale * (first[i + 1] + second[i]);
      spectrum[mirrored] = scale * (first[i] + second[i + 1]);
      spectrum[mirrored + 1] = scale * (second[i] - first[i + 1]);
    }
    this.transform.inverseTransform(series, spectrum);
    for (let sample = 0; sample < length; sample++) write(sample, series[2 * sample], series[2 * sample + 1]);
  }
}

/** Spectra of real series. */
export class SeriesSpectrum {
  private readonly transform: FFT;
  private readonly out: number[];

  /** @param length a power of two from 4 on */
  constructor(readonly length: number) {
    this.transform = new FFT(length);
    this.out = this.transform.createComplexArray();
  }

  /** `Σ_n x_n e^(−2πi k n/length)` as pairs (Re, Im) for k = 0 … length/2; overwritten by the next call. */
  of(series: readonly number[]): readonly number[] {
    this.transform.realTransform(this.out, series);
    return this.out;
  }
}
