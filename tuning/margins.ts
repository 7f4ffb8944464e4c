import { findRoot } from '../sim/root.ts';
import { type Complex, modulus } from './complex.ts';
import type { Mode } from './modes.ts';

/** Where the loop's curve comes near the edge, −1, or crosses what it is measured at. Frequencies in rad/s. */
export interface Crossings {
  /** The curve crosses the negative real axis: the factor on the gain that would put it on the edge. */
  gain: { factor: number; frequency: number }[];
  /** The curve crosses the unit circle: the lag (rad, in (−π, π]) that would put it on the edge. */
  phase: { angle: number; frequency: number }[];
  /** The curve is nearest to the edge: its distance there, the inverse of a peak of the sensitivity. */
  modulus: { distance: number; frequency: number }[];
}

/** How far a stable closed loop is from the edge. A margin that is met nowhere is infinite, at NaN frequency. */
export interface Margins {
  /** Smallest factor above one, and largest below one (0 if none), that would make the loop swing for ever. */
  gain: { factor: number; frequency: number };
  gainDown: { factor: number; frequency: number };
  /** Smallest lag or lead, rad. */
  phase: { angle: number; frequency: number };
  /** Smallest extra delay, s. */
  delay: { time: number; frequency: number };
  /** Smallest distance of the curve from −1; 1/distance is the sensitivity's peak. */
  modulus: { distance: number; frequency: number };
  /** Frequency up to which a disturbance is held to less than 1/√2 of what it would be, rad/s; 0 if nowhere. */
  bandwidth: number;
}

const ROOT_TOLERANCE = 1e-10;
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/**
 * Frequencies (rad/s) from `low` to `high`, evenly spaced in their logarithm, denser about the lightly damped modes
 * that would slip between them.
 */
export function frequencyGrid(low: number, high: number, count: number, modes: readonly Mode[] = []): Float64Array {
  const even = Array.from({ length: count }, (_, i) => low * (high / low) ** (i / (count - 1)));
  const around = modes.flatMap(({ frequency, damping }) =>
    damping < 0.2
      ? Array.from({ length: 33 }, (_, i) => frequency * (1 + 0.5 * Math.max(Math.abs(damping), 1e-3) * (i - 16)))
      : [],
  );
  const all = [...even, ...around.filter((frequency) => frequency > low && frequency < high)];
  return Float64Array.from(all).sort();
}

/**
 * All crossings of a loop's gain.
 * @param gain the loop's gain L at a frequency (rad/s), feedback negative
 * @param grid rising frequencies between which the curve is smooth, rad/s
 */
export function crossingsOf(gain: (frequency: number) => Complex, grid: Float64Array): Crossings {
  const values = Array.from(grid, gain);
  const distance = (frequency: number) => fromEdge(gain(frequency));
  const found: Crossings = { gain: [], phase: [], modulus: [] };
  for (let i = 1; i < grid.length; i++) {
    const [before, now] = [values[i - 1], values[i]];
    if (before.im * now.im <= 0 && before.im !== 0 && Math.min(before.re, now.re) < 0) {
      const frequency = crossing((at) => gain(at).im, grid[i - 1], grid[i]);
      const { re } = gain(frequency);
      if (re < 0) found.gain.push({ factor: -1 / re, frequency });
    }
    if ((modulus(before) - 1) * (modulus(now) - 1) < 0) {
      const frequency = crossing((at) => modulus(gain(at)) - 1, grid[i - 1], grid[i]);
      const { re, im } = gain(frequency);
      found.phase.push({ angle: Math.atan2(-im, -re), frequency });
    }
    const next = values[i + 1];
    if (next && fromEdge(now) <= fromEdge(before) && fromEdge(now) < fromEdge(next)) {
      const frequency = lowest(distance, grid[i - 1], grid[i + 1]);
      found.modulus.push({ distance: distance(frequency), frequency });
    }
  }
  return found;
}

/** The tightest of the crossings, and the bandwidth. Arguments as of `crossingsOf`. */
export function marginsOf(gain: (frequency: number) => Complex, grid: Float64Array): Margins {
  const { gain: gains, phase, modulus: near } = crossingsOf(gain, grid);
  const up = gains.filter(({ factor }) => factor > 1);
  const down = gains.filter(({ factor }) => factor <= 1);
  const delays = phase.map(({ angle, frequency }) => ({
    time: (angle > 0 ? angle : angle + 2 * Math.PI) / frequency,
    frequency,
  }));
  const ends = [grid[0], grid[grid.length - 1]].map((frequency) => ({
    distance: fromEdge(gain(frequency)),
    frequency,
  }));
  return {
    gain: smallest(up, ({ factor }) => factor) ?? { factor: Number.POSITIVE_INFINITY, frequency: Number.NaN },
    gainDown: smallest(down, ({ factor }) => -factor) ?? { factor: 0, frequency: Number.NaN },
    phase: smallest(phase, ({ angle }) => Math.abs(angle)) ?? {
      angle: Number.POSITIVE_INFINITY,
      frequency: Number.NaN,
    },
    delay: smallest(delays, ({ time }) => time) ?? { time: Number.POSITIVE_INFINITY, frequency: Number.NaN },
    modulus: smallest([...near, ...ends], ({ distance }) => distance) ?? ends[0],
    bandwidth: bandwidthOf(gain, grid),
  };
}

function bandwidthOf(gain: (frequency: number) => Complex, grid: Float64Array): number {
  const excess = (frequency: number) => fromEdge(gain(frequency)) - Math.SQRT2;
  if (excess(grid[0]) < 0) return 0;
  const first = grid.findIndex((frequency) => excess(frequency) < 0);
  return first < 0 ? grid[grid.length - 1] : crossing(excess, grid[first - 1], grid[first]);
}

/** The place between `from` and `to` where `f` changes its sign, whichever way. */
function crossing(f: (at: number) => number, from: number, to: number): number {
  const sign = f(from) >= 0 ? 1 : -1;
  return findRoot((at) => sign * f(at), from, to, ROOT_TOLERANCE);
}

function fromEdge({ re, im }: Complex): number {
  return Math.hypot(1 + re, im);
}

function smallest<T>(items: readonly T[], size: (item: T) => number): T | undefined {
  return items.reduce<T | undefined>((best, item) => (best && size(best) <= size(item) ? best : item), undefined);
}

/** The place of the lowest value of `f` between `low` and `high`, by golden sections. */
function lowest(f: (at: number) => number, low: number, high: number): number {
  while (high - low > 1e-9 * high) {
    const left = high - GOLDEN * (high - low);
    const right = low + GOLDEN * (high - low);
    if (f(left) <= f(right)) high = right;
    else low = left;
  }
  return 0.5 * (low + high);
}
