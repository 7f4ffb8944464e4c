/** The fastest gains that keep the asked margins, at one wind speed, over a spread of machines. */
import type { Complex } from './complex.ts';

export interface MarginAsk {
  /** Largest peak of the sensitivity. */
  sensitivityPeak: number;
  /** Factor on the gain, lag (rad) and extra delay (s) that the loop must bear. */
  gain: number;
  phase: number;
  delay: number;
}

export const COMMON_ASK: MarginAsk = { sensitivityPeak: 2, gain: 2, phase: (35 * Math.PI) / 180, delay: 0.2 };

/** A loop's gain per unit of proportional and of integral gain at each frequency of a grid, for one machine of the spread. */
export interface UnitLoop {
  /** Which machine, in words, e.g. "density -10 %", and its trim pitch, rad. */
  machine: string;
  pitch: number;
  proportional: readonly Complex[];
  integral: readonly Complex[];
}

export interface WindTask {
  /** m/s, and the nominal machine's trim pitch, rad. */
  windSpeed: number;
  pitch: number;
  /** rad/s, rising, fine enough to go by linear interpolation. */
  frequencies: Float64Array;
  loops: readonly UnitLoop[];
  /** Factors on the loop's whole gain that the asked margins must survive, e.g. 0.8, 1, 1.2 for an uncertain slope. */
  slopes: readonly number[];
}

/** What the loop keeps at a gain, the worst over machines and slopes; `binding` is the margin that is used up most. */
export interface Kept extends MarginAsk {
  machine: string;
  binding: keyof MarginAsk;
  /** Largest of asked/kept (for the peak: kept/asked): one where a margin is just met, above one where it is missed. */
  use: number;
}

export interface FastestGain {
  /** Time constant of the integral, K_P/K_I, s. */
  integralTime: number;
  /** s, at this wind speed: the schedule's factor is in it. */
  proportional: number;
  kept: Kept;
}

/** Steps between trial gains. */
const GAIN_STEP = 1.12;
/** The scan spans this factor below the largest gain that any machine bears at all. */
const SCAN_SPAN = 12;
const REFINEMENTS = 12;

/** The margins that remain at a gain; the phase that a curve has at the unit circle is interpolated between grid points. */
export function keptAt(
  task: WindTask,
  proportional: number,
  integralTime: number,
  ask: MarginAsk,
  factorAt: (pitch: number) => number = () => 1,
): Kept {
  const curves = task.loops.map((loop) => curveOf(loop, integralTime, factorAt(loop.pitch)));
  return keptByAll(task, curves, proportional, ask);
}

function keptByAll(task: WindTask, curves: readonly Curve[], proportional: number, ask: MarginAsk): Kept {
  let worst: Kept | undefined;
  curves.forEach((curve, i) => {
    for (const slope of task.slopes) {
      const judged = judge(keptBy(curve, task.frequencies, proportional * slope), ask, task.loops[i].machine);
      if (!worst || judged.use > worst.use) worst = judged;
    }
  });
  if (!worst) throw new RangeError(`no machine of the spread runs at rated power at ${task.windSpeed} m/s`);
  return worst;
}

/**
 * The largest proportional gain at a given integral time that keeps the asked margins. The scan ends where the first
 * machine's curve passes over the edge, so that a loop which is stable at little gain is stable at every gain tried.
 * @returns the gain; or, where none does, the one that misses least, with `kept.use` above one
 */
export function largestGain(task: WindTask, integralTime: number, ask: MarginAsk): FastestGain {
  const curves = task.loops.map((loop) => curveOf(loop, integralTime, 1));
  const ceiling = Math.min(...curves.map((curve) => curve.critical)) / Math.max(...task.slopes);
  let best: FastestGain | undefined;
  for (let gain = ceiling / SCAN_SPAN; gain < ceiling; gain *= GAIN_STEP) {
    const kept = keptByAll(task, curves, gain, ask);
    if (kept.use <= 1 || !best || kept.use < best.kept.use) best = { integralTime, proportional: gain, kept };
  }
  if (!best) throw new RangeError(`the loop at ${task.windSpeed} m/s bears no gain`);
  return best.kept.use <= 1 ? refine(task, curves, best, ask) : best;
}

function refine(task: WindTask, curves: readonly Curve[], found: FastestGain, ask: MarginAsk): FastestGain {
  let best = found;
  let above = found.proportional * GAIN_STEP;
  for (let i = 0; i < REFINEMENTS; i++) {
    const middle = Math.sqrt(best.proportional * above);
    const kept = keptByAll(task, curves, middle, ask);
    if (kept.use <= 1) best = { ...best, proportional: middle, kept };
    else above = middle;
  }
  return best;
}

/**
 * The fastest of several loops: the largest integral gain, which leaves the smallest integrated speed error after a gust
 * (Åström and Hägglund, *Advanced PID Control*, 2006, section 4.9); where none keeps the margins, the one that misses least.
 */
export function fastestOf(found: readonly FastestGain[]): FastestGain {
  const good = found.filter(({ kept }) => kept.use <= 1);
  if (good.length === 0) return found.reduce((best, next) => (next.kept.use < best.kept.use ? next : best));
  return good.reduce((best, next) => (integralGain(next) > integralGain(best) ? next : best));
}

export function integralGain({ proportional, integralTime }: FastestGain): number {
  return proportional / integralTime;
}

interface Curve {
  re: Float64Array;
  im: Float64Array;
  /** The smallest gain that puts the curve on the edge. */
  critical: number;
}

/** The loop at a proportional gain of `factor`. */
function curveOf({ proportional, integral }: UnitLoop, integralTime: number, factor: number): Curve {
  const re = Float64Array.from(proportional, (p, i) => factor * (p.re + integral[i].re / integralTime));
  const im = Float64Array.from(proportional, (p, i) => factor * (p.im + integral[i].im / integralTime));
  return { re, im, critical: criticalGain(re, im) };
}

/** The smallest gain that puts the curve on the edge: where it crosses the negative real axis. */
function criticalGain(re: Float64Array, im: Float64Array): number {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 1; i < re.length; i++) {
    if (im[i - 1] * im[i] > 0) continue;
    const share = im[i - 1] / (im[i - 1] - im[i]);
    const at = re[i - 1] + share * (re[i] - re[i - 1]);
    if (at < 0) least = Math.min(least, -1 / at);
  }
  return least;
}

/** The inner loop of every design: squares instead of roots, nothing allocated a point. */
function keptBy({ re, im, critical }: Curve, frequencies: Float64Array, gain: number): MarginAsk {
  let nearest = Number.POSITIVE_INFINITY;
  let phase = Number.POSITIVE_INFINITY;
  let delay = Number.POSITIVE_INFINITY;
  let before = 0;
  for (let i = 0; i < re.length; i++) {
    const x = gain * re[i];
    const y = gain * im[i];
    const size = x * x + y * y;
    const distance = size + 2 * x + 1;
    if (distance < nearest) nearest = distance;
    if (i > 0 && (size - 1) * (before - 1) < 0) {
      const share = (1 - Math.sqrt(before)) / (Math.sqrt(size) - Math.sqrt(before));
      const cx = gain * (re[i - 1] + share * (re[i] - re[i - 1]));
      const cy = gain * (im[i - 1] + share * (im[i] - im[i - 1]));
      const angle = Math.atan2(-cy, -cx);
      const frequency = frequencies[i - 1] + share * (frequencies[i] - frequencies[i - 1]);
      phase = Math.min(phase, Math.abs(angle));
      delay = Math.min(delay, (angle > 0 ? angle : angle + 2 * Math.PI) / frequency);
    }
    before = size;
  }
  return { sensitivityPeak: 1 / Math.sqrt(nearest), gain: critical / gain, phase, delay };
}

function judge(kept: MarginAsk, ask: MarginAsk, machine: string): Kept {
  const uses = {
    sensitivityPeak: kept.sensitivityPeak / ask.sensitivityPeak,
    gain: ask.gain / kept.gain,
    phase: ask.phase / kept.phase,
    delay: ask.delay / kept.delay,
  };
  const names = Object.keys(uses) as (keyof MarginAsk)[];
  const binding = names.reduce((most, name) => (uses[name] > uses[most] ? name : most));
  return { ...kept, machine, binding, use: uses[binding] };
}
