/**
 * Turbulence over a rotor: Kaimal spectra with exponential coherence on a polar grid, by Veers' method in azimuthal
 * orders (`azimuthal-modes.ts`).
 *
 * Every amplitude is a complex normal number that depends on seed, component, order, frequency and ring only, so the
 * hub's series and the rotor's mean can be drawn without the rest of the field and are still those of the field.
 */
import { uniform } from '../noise.ts';
import { AzimuthalModes } from './azimuthal-modes.ts';
import { powerOfTwoFrom, SeriesPair } from './fourier.ts';
import { type Component, coherenceDecay, type KaimalTurbulence, kaimalSpectrum } from './kaimal.ts';
import { discShares, type PolarGrid, type PolarSeries, pointCount } from './polar-grid.ts';

/** All that determines a field. Plain data. */
export interface Turbulence extends KaimalTurbulence {
  grid: PolarGrid;
  /** After which it repeats, s. */
  duration: number;
  /** Twice the highest frequency in it, Hz. */
  rate: number;
  /** A whole number from 0 on. */
  seed: number;
  /**
   * `exact`: the whole field is scaled so that each component has its deviation at the hub; `random`: as drawn, so that
   * ten minutes scatter as ten minutes of weather do.
   */
  variance: 'exact' | 'random';
}

/** How the blades pass through the field. */
export interface BladePassage {
  bladeCount: number;
  /** rad/s */
  rotorSpeed: number;
}

/** What can be had without the whole field, one value a sample, m/s. */
export interface HubAndRotorSeries {
  period: number;
  samples: number;
  /** (u, v, w) at the hub, sample by sample. */
  hub: Float32Array;
  /** Mean of u along all blades, weighted by the area that each part sweeps. */
  rotor: Float32Array;
}

/** Largest field that is made, bytes. */
const LARGEST_FIELD = 2 ** 30;

const COMPONENTS: readonly Component[] = [0, 1, 2];

/** Samples of a period: a power of two, for the transform, from `duration · rate` on. The content ends at `rate/2`. */
function sampleCount({ duration, rate }: Turbulence): number {
  return powerOfTwoFrom(Math.round(duration * rate * 1e6) / 1e6);
}

/** Frequencies k/duration with k from 1 to this. The mean (k = 0) is left out: it stays what it was. */
function frequencyCount(turbulence: Turbulence): number {
  const { duration, rate } = turbulence;
  return Math.min(Math.floor(0.5 * duration * rate + 1e-6), sampleCount(turbulence) / 2 - 1);
}

/**
 * Makes sure that a field can be made.
 * @throws RangeError for a seed that is no whole number, a deviation, scale or duration out of range, or a field that is too large
 */
export function requireTurbulence(turbulence: Turbulence): void {
  const { seed, meanWind, deviation, lengthScale, coherenceScale, duration, rate } = turbulence;
  if (!(Number.isSafeInteger(seed) && seed >= 0)) {
    throw new RangeError(`the seed of turbulence must be a whole number from 0 on, but it is ${seed}`);
  }
  for (const [what, value] of [
    ['mean wind', meanWind],
    ['duration', duration],
    ['rate', rate],
    ['coherence scale', coherenceScale],
    ...lengthScale.map((scale) => ['length scale', scale] as const),
  ] as const) {
    if (!(value > 0 && value < Number.POSITIVE_INFINITY)) {
      throw new RangeError(`the ${what} of turbulence must be above 0, but it is ${value}`);
    }
  }
  if (deviation.some((value) => !(value >= 0 && value < Number.POSITIVE_INFINITY))) {
    throw new RangeError(`the deviations of turbulence must be 0 or more, but they are ${deviation.join(', ')} m/s`);
  }
  if (frequencyCount(turbulence) < 1) {
    throw new RangeError(`${duration} s at ${rate} Hz hold no turbulence: a longer duration or a higher rate is due`);
  }
  const bytes = 12 * pointCount(turbulence.grid) * sampleCount(turbulence);
  if (bytes > LARGEST_FIELD) {
    throw new RangeError(
      `a field of ${pointCount(turbulence.grid)} points over ${duration} s at ${rate} Hz takes ${(bytes / 2 ** 20).toFixed(0)} MB, ` +
        `and ${LARGEST_FIELD / 2 ** 20} MB is the most: fewer points, a shorter duration or a lower rate is due`,
    );
  }
}

/** The amplitudes of one component, frequency by frequency. */
class Amplitudes {
  /** (Re, Im) of each ring at each drawn order: ring-major. Overwritten at each frequency. */
  readonly rings: Float64Array;
  /** (Re, Im) at the hub. */
  readonly hub = new Float64Array(2);
  private readonly modes: AzimuthalModes;
  private readonly streams: readonly number[];
  private readonly draws: Float64Array;
  /** What every drawn amplitude is multiplied by. */
  readonly scale: number;

  /** @param orders the azimuthal orders to draw, 0 first */
  constructor(
    private readonly turbulence: Turbulence,
    private readonly component: Component,
    private readonly orders: readonly number[],
  ) {
    const { grid, seed } = turbulence;
    this.modes = new AzimuthalModes(grid);
    this.streams = orders.map((order) => streamOf(seed, component, order));
    this.rings = new Float64Array(2 * grid.rings * orders.length);
    this.draws = new Float64Array(2 * (grid.rings + 1));
    this.scale = turbulence.variance === 'exact' ? this.scaleToDeviation() : 1;
  }

  /** Draws all amplitudes of frequency number `k`, from 1. */
  at(k: number): void {
    const { turbulence, component, modes, orders, streams, rings, draws } = this;
    const size = turbulence.grid.rings;
    modes.factor(coherenceDecay(turbulence, k / turbulence.duration));
    const amplitude = this.scale * amplitudeAt(turbulence, component, k);
    for (let o = 0; o < orders.length; o++) {
      const first = orders[o] === 0 ? 0 : 1;
      for (let i = first; i <= size; i++) drawTo(draws, 2 * i, streams[o], k * (size + 1) + i);
      if (first === 0) {
        this.hub[0] = amplitude * draws[0];
        this.hub[1] = amplitude * draws[1];
      }
      const start = modes.start(orders[o]);
      for (let i = 1; i <= size; i++) {
        const row = start + (i * (i + 1)) / 2;
        let re = 0;
        let im = 0;
        for (let j = first; j <= i; j++) {
          re += modes.factors[row + j] * draws[2 * j];
          im += modes.factors[row + j] * draws[2 * j + 1];
        }
        const at = 2 * ((i - 1) * orders.length + o);
        rings[at] = amplitude * re;
        rings[at + 1] = amplitude * im;
      }
    }
  }

  /** What brings the hub's variance, ½ Σ |X|², to the square of the component's deviation. */
  private scaleToDeviation(): number {
    const { turbulence, component, draws } = this;
    let variance = 0;
    for (let k = 1; k <= frequencyCount(turbulence); k++) {
      drawTo(draws, 0, this.streams[0], k * (turbulence.grid.rings + 1));
      variance += 0.5 * amplitudeAt(turbulence, component, k) ** 2 * (draws[0] ** 2 + draws[1] ** 2);
    }
    return variance > 0 ? turbulence.deviation[component] / Math.sqrt(variance) : 0;
  }
}

/**
 * What scaling to an exact variance multiplies the spectrum of a component by; 1 where the variance is left random. A
 * short draw has more or less of the slow gusts than is due, and the scaling makes up for it at all frequencies alike.
 */
export function varianceGain(turbulence: Turbulence, component: Component): number {
  return new Amplitudes(turbulence, component, [0]).scale ** 2;
}

/** √(2 S Δf): what a draw of unit mean square is multiplied by, m/s. */
function amplitudeAt(turbulence: Turbulence, component: Component, k: number): number {
  const step = 1 / turbulence.duration;
  return Math.sqrt(2 * kaimalSpectrum(turbulence, component, k * step) * step);
}

/** A seed of its own for each component and azimuthal order. */
function streamOf(seed: number, component: Component, order: number): number {
  return Math.floor(uniform(seed, 4 * order + component) * 2 ** 32);
}

/** A complex normal number with mean square 1, by Box and Muller (1958). */
function drawTo(out: Float64Array, at: number, stream: number, index: number): void {
  const radius = Math.sqrt(-Math.log(uniform(stream, 2 * index)));
  const phase = 2 * Math.PI * uniform(stream, 2 * index + 1);
  out[at] = radius * Math.cos(phase);
  out[at + 1] = radius * Math.sin(phase);
}

/**
 * The whole field: three components at every point of the grid.
 * @throws RangeError as `requireTurbulence`
 */
export function turbulenceField(turbulence: Turbulence): PolarSeries {
  requireTurbulence(turbulence);
  const { grid, duration } = turbulence;
  const samples = sampleCount(turbulence);
  const points = pointCount(grid);
  const values = new Float32Array(3 * points * samples);
  const pair = new SeriesPair(samples);
  for (const component of COMPONENTS) {
    const spectra = pointSpectra(turbulence, component);
    for (let point = 0; point < points; point += 2) {
      const hasSecond = point + 1 < points;
      let at = 3 * point + component;
      pair.synthesize(spectra[point], hasSecond ? spectra[point + 1] : spectra[point], (_sample, first, second) => {
        values[at] = first;
        if (hasSecond) values[at + 3] = second;
        at += 3 * points;
      });
    }
  }
  return { grid, period: duration, samples, values };
}

/** Amplitudes of one component at every point: pairs (Re, Im) for k = 1, 2, … */
function pointSpectra(turbulence: Turbulence, component: Component): Float32Array[] {
  const { rings, spokes } = turbulence.grid;
  const orders = Array.from({ length: spokes }, (_, order) => order);
  const amplitudes = new Amplitudes(turbulence, component, orders);
  const count = frequencyCount(turbulence);
  const spectra = Array.from({ length: pointCount(turbulence.grid) }, () => new Float32Array(2 * count));
  const phases = spokePhases(spokes);
  const { rings: drawn, hub } = amplitudes;
  for (let k = 1; k <= count; k++) {
    amplitudes.at(k);
    const at = 2 * (k - 1);
    spectra[0][at] = hub[0];
    spectra[0][at + 1] = hub[1];
    for (let ring = 0; ring < rings; ring++) {
      for (let spoke = 0; spoke < spokes; spoke++) {
        sumOrders(drawn, ring, orders, spoke, phases, spectra[1 + ring * spokes + spoke], at);
      }
    }
  }
  return spectra;
}

/** cos and sin of each spoke's azimuth, over the root of their number. */
function spokePhases(spokes: number): Float64Array {
  const phases = new Float64Array(2 * spokes);
  for (let s = 0; s < spokes; s++) {
    phases[2 * s] = Math.cos((2 * Math.PI * s) / spokes) / Math.sqrt(spokes);
    phases[2 * s + 1] = Math.sin((2 * Math.PI * s) / spokes) / Math.sqrt(spokes);
  }
  return phases;
}

/** What a ring's drawn orders make at a spoke: `Σ_m a_m e^(i m ψ)/√spokes`, written to out[at] and out[at + 1]. */
function sumOrders(
  drawn: Float64Array,
  ring: number,
  orders: readonly number[],
  spoke: number,
  phases: Float64Array,
  out: Float32Array | Float64Array,
  at: number,
): void {
  const spokes = phases.length / 2;
  const count = orders.length;
  let re = 0;
  let im = 0;
  for (let o = 0, entry = 2 * ring * count; o < count; o++, entry += 2) {
    const turn = 2 * ((orders[o] * spoke) % spokes);
    re += drawn[entry] * phases[turn] - drawn[entry + 1] * phases[turn + 1];
    im += drawn[entry] * phases[turn + 1] + drawn[entry + 1] * phases[turn];
  }
  out[at] = re;
  out[at + 1] = im;
}

/**
 * The hub's series and the mean along all blades as they turn through the field: those of `turbulenceField`, for a small
 * part of its cost.
 *
 * The mean over B evenly spaced blades keeps of each ring only the azimuthal orders that B divides: order 0 is the mean
 * over the ring and carries the low frequencies; order ±B, seen from the turning blades, comes B times a revolution; and
 * so on. Between spokes the mean is linear, as in the field. The rotor is taken to turn evenly, at the speed next to the
 * given one with which the blades' passage closes over the period.
 * @throws RangeError as `requireTurbulence`, and when the blades do not divide the spokes
 */
export function hubAndRotorSeries(turbulence: Turbulence, { bladeCount, rotorSpeed }: BladePassage): HubAndRotorSeries {
  requireTurbulence(turbulence);
  const { grid, duration } = turbulence;
  const { spokes } = grid;
  if (spokes % bladeCount !== 0) throw new RangeError(`${bladeCount} blades do not divide ${spokes} spokes`);
  const samples = sampleCount(turbulence);
  const hub = new Float32Array(3 * samples);
  const rotor = new Float32Array(samples);
  const pair = new SeriesPair(samples);

  const { hubSpectra, passageSpectra } = passingSpectra(turbulence, bladeCount);
  pair.synthesize(hubSpectra[0], hubSpectra[1], (sample, u, v) => {
    hub[3 * sample] = u;
    hub[3 * sample + 1] = v;
  });
  pair.synthesize(hubSpectra[2], hubSpectra[2], (sample, w) => {
    hub[3 * sample + 2] = w;
  });

  // Where the first blade stands among the spokes of one passage, sample by sample.
  const perPassage = passageSpectra.length;
  const passages = Math.round((bladeCount * rotorSpeed * duration) / (2 * Math.PI));
  const spokesPerSample = (passages * perPassage) / samples;
  for (let spoke = 0; spoke < perPassage; spoke++) {
    pair.synthesize(passageSpectra[spoke], passageSpectra[spoke], (sample, mean) => {
      const distance = Math.abs(sample * spokesPerSample - spoke) % perPassage;
      const nearest = Math.min(distance, perPassage - distance);
      if (nearest < 1) rotor[sample] += (1 - nearest) * mean;
    });
  }
  return { period: duration, samples, hub, rotor };
}

/** Amplitudes of the hub's three components, and of the mean along all blades with the first on each spoke of a passage. */
function passingSpectra(turbulence: Turbulence, bladeCount: number) {
  const { grid } = turbulence;
  const { spokes, rings } = grid;
  const count = frequencyCount(turbulence);
  const perPassage = spokes / bladeCount;
  const shares = discShares(grid);
  const phases = spokePhases(spokes);
  const hubSpectra = COMPONENTS.map(() => new Float64Array(2 * count));
  const passageSpectra = Array.from({ length: perPassage }, () => new Float64Array(2 * count));
  const passing = Array.from({ length: perPassage }, (_, i) => i * bladeCount);
  const atSpoke = new Float64Array(2);
  for (const component of COMPONENTS) {
    const amplitudes = new Amplitudes(turbulence, component, component === 0 ? passing : [0]);
    for (let k = 1, at = 0; k <= count; k++, at += 2) {
      amplitudes.at(k);
      hubSpectra[component].set(amplitudes.hub, at);
      if (component !== 0) continue;
      for (let spoke = 0; spoke < perPassage; spoke++) {
        let re = shares[0] * amplitudes.hub[0];
        let im = shares[0] * amplitudes.hub[1];
        for (let ring = 0; ring < rings; ring++) {
          sumOrders(amplitudes.rings, ring, passing, spoke, phases, atSpoke, 0);
          re += shares[ring + 1] * atSpoke[0];
          im += shares[ring + 1] * atSpoke[1];
        }
        passageSpectra[spoke][at] = re;
        passageSpectra[spoke][at + 1] = im;
      }
    }
  }
  return { hubSpectra, passageSpectra };
}
