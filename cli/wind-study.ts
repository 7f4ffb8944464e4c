/** What a wind is like, in numbers: along time, over the rotor, and against what its turbulence should be. */
import type { WindData } from '../scenarios/load.ts';
import { coherenceBand, spectrumBand, type WelchSpectrum, welchCoherence, welchSpectrum } from '../scenarios/welch.ts';
import { powerOfTwoFrom } from '../sim/wind/fourier.ts';
import { type Component, coherenceDecay, kaimalSpectrum } from '../sim/wind/kaimal.ts';
import { pointCount } from '../sim/wind/polar-grid.ts';
import { sumWind } from '../sim/wind/sum.ts';
import { hubAndRotorSeries, type Turbulence, turbulenceField, varianceGain } from '../sim/wind/turbulence.ts';
import type { WindField, WindMark } from '../sim/wind/wind.ts';

export interface WindStudy {
  title: string;
  turbine: string;
  rotorDiameter: number;
  hubHeight: number;
  rotorSpeed: number;
  bladeCount: number;
  duration: number;
  series: WindSeries;
  statistics: readonly Statistics[];
  marks: readonly WindMark[];
  profile: Profile;
  disc: DiscFrames;
  turbulence: readonly TurbulenceStudy[];
}

/** Against time; m/s, and rad for the direction (undefined where the wind never turns). */
export interface WindSeries {
  time: Float64Array;
  along: Float64Array;
  across: Float64Array;
  up: Float64Array;
  rotorMean: Float64Array;
  /** Along the axis at the hub without turbulence; undefined where that is all there is. */
  withoutTurbulence?: Float64Array;
  direction?: Float64Array;
}

export interface Statistics {
  what: string;
  mean: number;
  deviation: number;
  /** What its turbulence is meant to have; undefined where there is none. */
  due?: number;
  lowest: number;
  highest: number;
}

/** Along the axis against height above ground, over the middle of the rotor. */
export interface Profile {
  height: Float64Array;
  mean: Float64Array;
  lowest: Float64Array;
  highest: Float64Array;
}

/** Along the axis in cells of the disc: ring by ring from the hub, each from above the hub in the sense of turning. */
export interface DiscFrames {
  rings: number;
  spokes: number;
  /** Frames per second. */
  rate: number;
  frames: number;
  values: Float32Array;
}

export interface TurbulenceStudy {
  turbulence: Turbulence;
  spectra: readonly SpectrumStudy[];
  /** Of the rotor's mean, pooled as the others are. */
  rotor: { frequency: Float64Array; density: Float64Array };
  coherence: readonly CoherenceStudy[];
}

/** An estimate pooled into bands of frequency, with its target and the 95 % band about the target. */
export interface SpectrumStudy {
  what: string;
  /** What scaling to an exact variance multiplied the spectrum by; the target has it too. */
  gain: number;
  frequency: Float64Array;
  density: Float64Array;
  target: Float64Array;
  low: Float64Array;
  high: Float64Array;
}

export interface CoherenceStudy {
  distance: number;
  frequency: Float64Array;
  coherence: Float64Array;
  target: Float64Array;
  low: Float64Array;
  high: Float64Array;
}

const RATE = 20;
/** The most instants that are looked at. */
const MOST_INSTANTS = 72000;
const PROFILE_POINTS = 41;
const PROFILE_INSTANTS = 1200;
const DISC = { rings: 8, spokes: 24, rate: 5, mostFrames: 3000 };
const BANDS_PER_DECADE = 10;
/** Below this coherence an estimate is mostly noise, and its band no longer holds; and the fewest points worth showing. */
const FAINTEST = 0.15;
const FEWEST_BINS = 3;

export function windStudy({ title, turbine, site, parts }: WindData): WindStudy {
  const wind = sumWind(parts.map(({ field }) => field));
  const turbulent = parts.flatMap(({ turbulence }) => (turbulence ? [turbulence] : []));
  const calm = turbulent.length > 0 ? sumWind(parts.flatMap((p) => (p.turbulence ? [] : [p.field]))) : undefined;
  const series = seriesOf(wind, calm, site.duration);
  return {
    title,
    turbine: turbine.name,
    rotorDiameter: site.rotorDiameter,
    hubHeight: site.hubHeight,
    rotorSpeed: site.rotorSpeed,
    bladeCount: site.bladeCount,
    duration: site.duration,
    series,
    statistics: statisticsOf(series, turbulent),
    marks: wind.marks(),
    profile: profileOf(wind, site),
    disc: discOf(wind, site),
    turbulence: turbulent.map((turbulence) => turbulenceStudy(turbulence, site)),
  };
}

function seriesOf(wind: WindField, calm: WindField | undefined, duration: number): WindSeries {
  const count = Math.min(MOST_INSTANTS, Math.floor(duration * RATE)) + 1;
  const time = Float64Array.from({ length: count }, (_, i) => (i * duration) / (count - 1));
  const [along, across, up] = [0, 1, 2].map(() => new Float64Array(count));
  const velocity = new Float64Array(3);
  time.forEach((t, i) => {
    wind.velocity(t, 0, 0, velocity);
    along[i] = velocity[0];
    across[i] = velocity[1];
    up[i] = velocity[2];
  });
  const withoutTurbulence =
    calm &&
    time.map((t) => {
      calm.velocity(t, 0, 0, velocity);
      return velocity[0];
    });
  const { direction } = wind;
  return {
    time,
    along,
    across,
    up,
    rotorMean: time.map((t) => wind.rotorMean(t)),
    withoutTurbulence,
    direction: direction && time.map((t) => direction(t)),
  };
}

function statisticsOf({ along, across, up, rotorMean }: WindSeries, turbulent: readonly Turbulence[]): Statistics[] {
  const due = (component: Component) =>
    turbulent.length === 0 ? undefined : Math.hypot(...turbulent.map(({ deviation }) => deviation[component]));
  // The last instant is the first of the next period: counted twice, it would shift the mean.
  const whole = (values: Float64Array) => values.subarray(0, values.length - 1);
  return [
    { what: 'hub, along the axis', due: due(0), ...momentsOf(whole(along)) },
    { what: 'hub, across', due: due(1), ...momentsOf(whole(across)) },
    { what: 'hub, up', due: due(2), ...momentsOf(whole(up)) },
    { what: 'mean over the rotor', ...momentsOf(whole(rotorMean)) },
  ];
}

function momentsOf(values: Float64Array) {
  let sum = 0;
  let lowest = Number.POSITIVE_INFINITY;
  let highest = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    sum += value;
    lowest = Math.min(lowest, value);
    highest = Math.max(highest, value);
  }
  const mean = sum / values.length;
  const squares = values.reduce((total, value) => total + (value - mean) ** 2, 0);
  return { mean, deviation: Math.sqrt(squares / values.length), lowest, highest };
}

function profileOf(wind: WindField, site: WindData['site']): Profile {
  const radius = site.rotorDiameter / 2;
  const offsets = Float64Array.from(
    { length: PROFILE_POINTS },
    (_, i) => radius * ((2 * i) / (PROFILE_POINTS - 1) - 1),
  );
  const velocity = new Float64Array(3);
  const moments = Array.from(offsets, (z) =>
    momentsOf(
      Float64Array.from({ length: PROFILE_INSTANTS }, (_, i) => {
        wind.velocity((i * site.duration) / PROFILE_INSTANTS, 0, z, velocity);
        return velocity[0];
      }),
    ),
  );
  return {
    height: offsets.map((z) => site.hubHeight + z),
    mean: Float64Array.from(moments, (m) => m.mean),
    lowest: Float64Array.from(moments, (m) => m.lowest),
    highest: Float64Array.from(moments, (m) => m.highest),
  };
}

function discOf(wind: WindField, { rotorDiameter, duration }: WindData['site']): DiscFrames {
  const { rings, spokes } = DISC;
  const rate = Math.min(DISC.rate, DISC.mostFrames / duration);
  const frames = Math.floor(duration * rate) + 1;
  const values = new Float32Array(frames * rings * spokes);
  const velocity = new Float64Array(3);
  let at = 0;
  for (let frame = 0; frame < frames; frame++) {
    for (let cell = 0; cell < rings * spokes; cell++) {
      const r = (0.5 * rotorDiameter * (Math.floor(cell / spokes) + 0.5)) / rings;
      const azimuth = (2 * Math.PI * ((cell % spokes) + 0.5)) / spokes;
      wind.velocity(frame / rate, -r * Math.sin(azimuth), r * Math.cos(azimuth), velocity);
      values[at++] = velocity[0];
    }
  }
  return { rings, spokes, rate, frames, values };
}

function turbulenceStudy(turbulence: Turbulence, site: WindData['site']): TurbulenceStudy {
  const { hub, rotor, samples, period } = hubAndRotorSeries(turbulence, site);
  const step = period / samples;
  const segment = Math.max(64, powerOfTwoFrom(samples / 8));
  const highest = 0.5 * turbulence.rate;
  const spectra = (['along the axis', 'across', 'up'] as const).map((what, i) => {
    const component = i as Component;
    const series = Float64Array.from({ length: samples }, (_, n) => hub[3 * n + component]);
    const pooled = pooledSpectrum(welchSpectrum(series, step, segment), highest);
    const gain = varianceGain(turbulence, component);
    const target = pooled.frequency.map((f) => gain * kaimalSpectrum(turbulence, component, f));
    const bands = Array.from(pooled.averages, (averages) => spectrumBand(averages));
    return {
      what,
      gain,
      ...pooled,
      target,
      low: target.map((value, k) => value * bands[k].low),
      high: target.map((value, k) => value * bands[k].high),
    };
  });
  return {
    turbulence,
    spectra,
    rotor: pooledSpectrum(welchSpectrum(Float64Array.from(rotor), step, segment), highest, 2 * BANDS_PER_DECADE),
    coherence: coherenceStudies(turbulence, site),
  };
}

/** A spectrum's means over bands of equal width on a logarithmic scale, with as many averages as their bins are worth. */
function pooledSpectrum(
  { frequency, density, averages }: WelchSpectrum,
  highest: number,
  perDecade = BANDS_PER_DECADE,
) {
  const bands = new Map<number, number[]>();
  frequency.forEach((f, k) => {
    // The window smears the mean into the first bins.
    if (k < 1 || f >= 0.98 * highest) return;
    const band = Math.floor(Math.log10(f) * perDecade);
    bands.set(band, [...(bands.get(band) ?? []), k]);
  });
  const bins = [...bands.values()];
  const mean = (values: Float64Array, of: readonly number[]) => of.reduce((sum, k) => sum + values[k], 0) / of.length;
  return {
    frequency: Float64Array.from(bins, (of) => mean(frequency, of)),
    density: Float64Array.from(bins, (of) => mean(density, of)),
    averages: Float64Array.from(bins, (of) => (averages * of.length) / binsAlike(of.length)),
  };
}

/** How many neighbouring bins under Hann's window count as one: what they share is (2/3)² with the next, (1/6)² with the one after. */
function binsAlike(count: number): number {
  return 1 + 2 * ((1 - 1 / count) * (4 / 9) + Math.max(0, 1 - 2 / count) * (1 / 36));
}

/** Coherence of the hub and points a quarter, a half and the whole way to the tip. */
function coherenceStudies(turbulence: Turbulence, site: WindData['site']): CoherenceStudy[] {
  const { grid, period, samples, values } = (site.turbulence ?? turbulenceField)(turbulence);
  const step = period / samples;
  const series = (point: number) =>
    Float64Array.from({ length: samples }, (_, n) => values[3 * (n * pointCount(grid) + point)]);
  const atHub = series(0);
  const segment = Math.max(64, powerOfTwoFrom(samples / 8));
  const rings = [...new Set([0.25, 0.5, 1].map((share) => Math.max(1, Math.round(share * grid.rings))))];
  const studies = rings.map((ring) => {
    const distance = (ring * grid.radius) / grid.rings;
    const estimate = welchCoherence(atHub, series(1 + (ring - 1) * grid.spokes), step, segment);
    const due = (f: number) => Math.exp(-coherenceDecay(turbulence, f) * distance);
    const bins = Array.from(estimate.frequency.keys()).filter((k) => k > 0 && due(estimate.frequency[k]) > FAINTEST);
    const frequency = Float64Array.from(bins, (k) => estimate.frequency[k]);
    const target = frequency.map(due);
    const bands = Array.from(target, (value) => coherenceBand(value, estimate.averages));
    return {
      distance,
      frequency,
      coherence: Float64Array.from(bins, (k) => estimate.coherence[k]),
      target,
      low: Float64Array.from(bands, ({ low }) => low),
      high: Float64Array.from(bands, ({ high }) => high),
    };
  });
  return studies.filter(({ frequency }) => frequency.length >= FEWEST_BINS);
}

/** How many of an estimate's points lie within their band, and of how many. */
export function withinBand(
  values: Float64Array,
  low: Float64Array,
  high: Float64Array,
): { inside: number; of: number } {
  const inside = values.filter((value, k) => value >= low[k] && value <= high[k]).length;
  return { inside, of: values.length };
}
