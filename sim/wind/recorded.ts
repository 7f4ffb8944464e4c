import type { WindField } from './wind.ts';

/** What a met mast or a lidar wrote down, at even steps of time. */
export interface Record {
  /** First instant and step, s. */
  start: number;
  step: number;
  /** Wind speed at one or several heights, rising, above ground, m and m/s. All series are equally long. */
  speeds: readonly { height: number; values: ArrayLike<number> }[];
  /** Turning of the flow out of the rotor's axis, rad, positive towards +y, without wraps. */
  direction?: ArrayLike<number>;
}

/**
 * Recorded wind. Between samples it is the series' band-limited interpolation, so that it holds no energy above the
 * record's own Nyquist frequency; before the first and after the last sample it holds. Between heights it is linear, below the
 * lowest and above the highest it holds; a record of one height blows alike all over the rotor.
 * @throws RangeError when there are fewer than two samples, or series differ in length, or the step is not positive
 */
export function recordedWind(
  record: Record,
  { hubHeight, rotorRadius }: { hubHeight: number; rotorRadius: number },
): WindField {
  const { start, step, speeds } = record;
  const samples = speeds[0]?.values.length ?? 0;
  if (!(step > 0)) throw new RangeError(`the time step of a record must be above 0 s, but it is ${step} s`);
  if (samples < 2) throw new RangeError(`a record needs two samples or more, but has ${samples}`);
  if (
    [...speeds.map(({ values }) => values), ...(record.direction ? [record.direction] : [])].some(
      (v) => v.length !== samples,
    )
  ) {
    throw new RangeError('the series of a record must be equally long');
  }
  const heights = Float64Array.from(speeds, ({ height }) => height - hubHeight);
  const levels = speeds.map(({ values }) => refined(values));
  const turning = record.direction && refined(record.direction);
  const shares = discSharesOfHeights(heights, rotorRadius);
  const last = heights.length - 1;
  const finest = step / REFINEMENT;

  function velocity(t: number, _y: number, z: number, out: Float64Array): void {
    let above = 0;
    while (above < last && heights[above] < z) above++;
    const high = valueAt(levels[above], (t - start) / finest);
    const below = z < heights[above] && above > 0 ? above - 1 : above;
    out[0] = high;
    out[1] = 0;
    out[2] = 0;
    if (below === above) return;
    const low = valueAt(levels[below], (t - start) / finest);
    out[0] = low + ((high - low) * (z - heights[below])) / (heights[above] - heights[below]);
  }

  const ends = [start, start + (samples - 1) * step];
  return {
    uniform: last === 0,
    velocity,
    ...(turning && { direction: (t: number) => valueAt(turning, (t - start) / finest) }),
    rotorMean(t) {
      let mean = 0;
      for (let i = 0; i <= last; i++) mean += shares[i] * valueAt(levels[i], (t - start) / finest);
      return mean;
    },
    breakpoints: (end, from = 0) => ends.filter((instant) => instant > from && instant < end),
    marks: () => [],
  };
}

/** How much finer than the record its interpolation is tabled; a cubic carries it between. */
const REFINEMENT = 8;

/** Half-width of the interpolation's kernel, in samples of the record, and the shape of its window. */
const HALF_WIDTH = 16;
const KAISER_SHAPE = 8;

/** A series at `REFINEMENT` times its rate: sinc interpolation with a Kaiser window, mirrored at the ends. */
function refined(values: ArrayLike<number>): Float64Array {
  const count = values.length;
  const fine = new Float64Array((count - 1) * REFINEMENT + 1);
  for (let phase = 0; phase < REFINEMENT; phase++) {
    const taps = tapsAt(phase / REFINEMENT);
    for (let i = 0; i * REFINEMENT + phase < fine.length; i++) {
      let sum = 0;
      for (let tap = 0; tap < taps.length; tap++) sum += taps[tap] * values[mirrored(i + tap - HALF_WIDTH + 1, count)];
      fine[i * REFINEMENT + phase] = sum;
    }
  }
  return fine;
}

/** Weights of the samples from HALF_WIDTH − 1 before to HALF_WIDTH after, `shift` samples past one; they sum to 1. */
function tapsAt(shift: number): number[] {
  const taps = Array.from({ length: 2 * HALF_WIDTH }, (_, tap) => {
    const x = tap - HALF_WIDTH + 1 - shift;
    const sinc = x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
    return Math.abs(x) < HALF_WIDTH ? sinc * besselI0(KAISER_SHAPE * Math.sqrt(1 - (x / HALF_WIDTH) ** 2)) : 0;
  });
  const sum = taps.reduce((a, b) => a + b, 0);
  return taps.map((tap) => tap / sum);
}

/** Modified Bessel function of the first kind, order 0, by its power series. */
function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-12 * sum; k++) {
    term *= (x / (2 * k)) ** 2;
    sum += term;
  }
  return sum;
}

function mirrored(index: number, count: number): number {
  const period = 2 * (count - 1);
  const within = ((index % period) + period) % period;
  return within < count ? within : period - within;
}

/** Catmull and Rom's cubic at a place counted in samples; held beyond both ends. */
function valueAt(series: Float64Array, place: number): number {
  const last = series.length - 1;
  if (place <= 0) return series[0];
  if (place >= last) return series[last];
  const floor = Math.floor(place);
  const s = place - floor;
  const b = series[floor];
  const c = series[floor + 1];
  const a = floor > 0 ? series[floor - 1] : c;
  const d = floor + 2 <= last ? series[floor + 2] : b;
  return b + 0.5 * s * (c - a + s * (2 * a - 5 * b + 4 * c - d + s * (3 * (b - c) + d - a)));
}

/** Share of each height in the mean over the disc of what is linear between heights (m from the hub) and held beyond. */
function discSharesOfHeights(heights: Float64Array, radius: number): Float64Array {
  const strips = 2000;
  const shares = new Float64Array(heights.length);
  let total = 0;
  for (let strip = 0; strip < strips; strip++) {
    const z = radius * ((2 * (strip + 0.5)) / strips - 1);
    const chord = Math.sqrt(radius * radius - z * z);
    total += chord;
    let above = 0;
    while (above < heights.length - 1 && heights[above] < z) above++;
    const below = above > 0 && z < heights[above] ? above - 1 : above;
    const share = below === above ? 1 : (z - heights[below]) / (heights[above] - heights[below]);
    shares[above] += share * chord;
    if (below !== above) shares[below] += (1 - share) * chord;
  }
  return shares.map((share) => share / total);
}
