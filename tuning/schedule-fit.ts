import { type GainScheduleSettings, gainSchedule } from '../controllers/gain-schedule.ts';

/** The gain that a trim point allows, or that it should have. */
export interface GainPoint {
  /** rad */
  pitch: number;
  gain: number;
}

export interface ScheduleFit {
  schedule: GainScheduleSettings;
  /** Gain by which the schedule's factor is multiplied. */
  gain: number;
  /** Largest and mean relative distance from the points' gains. */
  largestError: number;
  meanError: number;
}

const RADIANS_PER_DEGREE = Math.PI / 180;
/** Pitch at which terms of the formulas count as much as the constant: trial values, rad. */
const TRIAL_PITCHES = Array.from({ length: 40 }, (_, i) => RADIANS_PER_DEGREE * 0.6 * 1.13 ** i);
const MOST_KNOTS = 10;

/** Distances of a schedule from the gains that the points ask for. */
function fitOf(schedule: GainScheduleSettings, gain: number, points: readonly GainPoint[]): ScheduleFit {
  const factor = gainSchedule(schedule);
  const errors = points.map((point) => Math.abs((gain * factor(point.pitch)) / point.gain - 1));
  return {
    schedule,
    gain,
    largestError: Math.max(...errors),
    meanError: errors.reduce((sum, error) => sum + error, 0) / errors.length,
  };
}

/** The gain that centres a schedule's relative errors (`nearest`), or that leaves no point above its own gain (`below`). */
function gainFor(schedule: GainScheduleSettings, points: readonly GainPoint[], side: 'nearest' | 'below'): number {
  const factor = gainSchedule(schedule);
  const ratios = points.map((point) => point.gain / factor(point.pitch));
  const least = Math.min(...ratios);
  return side === 'below' ? least : Math.sqrt(least * Math.max(...ratios));
}

function formulas(): GainScheduleSettings[] {
  const reciprocal = TRIAL_PITCHES.map((halvingPitch): GainScheduleSettings => ({ kind: 'reciprocal', halvingPitch }));
  const quadratic = TRIAL_PITCHES.flatMap((linearPitch) =>
    TRIAL_PITCHES.map((quadraticPitch): GainScheduleSettings => ({ kind: 'quadratic', linearPitch, quadraticPitch })),
  );
  return [{ kind: 'constant' }, ...reciprocal, ...quadratic];
}

/** A table through the points at `knots` even steps of pitch, lowered where it would pass above a point if `below`. */
function table(points: readonly GainPoint[], knots: number, side: 'nearest' | 'below'): GainScheduleSettings {
  const first = points[0].pitch;
  const last = points[points.length - 1].pitch;
  const pitch = Array.from({ length: knots }, (_, i) => first + ((last - first) * i) / (knots - 1));
  const through = interpolation(points);
  const factor = pitch.map(through);
  const spacing = (last - first) / (knots - 1);
  for (let pass = 0; side === 'below' && pass < 60; pass++) {
    const line = gainSchedule({ kind: 'table', pitch, factor });
    for (const point of points) {
      const excess = line(point.pitch) / point.gain;
      if (excess <= 1) continue;
      pitch.forEach((knot, i) => {
        const nearness = 1 - Math.abs(knot - point.pitch) / spacing;
        if (nearness > 0) factor[i] /= 1 + (excess - 1) * nearness;
      });
    }
  }
  const largest = Math.max(...factor);
  return { kind: 'table', pitch, factor: factor.map((value) => value / largest) };
}

function interpolation(points: readonly GainPoint[]): (pitch: number) => number {
  return gainSchedule({
    kind: 'table',
    pitch: points.map(({ pitch }) => pitch),
    factor: points.map(({ gain }) => gain),
  });
}

const KINDS = ['constant', 'reciprocal', 'quadratic'] as const;

/**
 * The best schedule of each kind through the points, smallest kind first: constant, 1/(1 + θ/θ_k), its quadratic form,
 * tables of three knots and more.
 * @param points pitch rising
 * @param side `nearest`: largest relative error as small as may be. `below`: never above a point's gain
 * @throws RangeError for fewer than two points
 */
export function scheduleFits(points: readonly GainPoint[], side: 'nearest' | 'below'): ScheduleFit[] {
  if (points.length < 2) throw new RangeError('a schedule needs at least two trim points in the rated region');
  const rising = points.toSorted((a, b) => a.pitch - b.pitch);
  const trials = formulas();
  const fitted = (schedule: GainScheduleSettings) => fitOf(schedule, gainFor(schedule, rising, side), rising);
  const tables = Array.from({ length: MOST_KNOTS - 2 }, (_, i) => fitted(table(rising, i + 3, side)));
  const score = ({ largestError, meanError }: ScheduleFit) => (side === 'nearest' ? largestError : meanError);
  const best = KINDS.map((kind) =>
    trials
      .filter((schedule) => schedule.kind === kind)
      .map(fitted)
      .reduce((a, b) => (score(b) < score(a) ? b : a)),
  );
  return [...best, ...tables];
}

/** The first of the fits, smallest kind first, whose error is within `tolerance`; else the one with the smallest error. */
export function smallestFit(
  fits: readonly ScheduleFit[],
  tolerance: number,
  by: 'largestError' | 'meanError',
): ScheduleFit {
  return fits.find((fit) => fit[by] <= tolerance) ?? fits.reduce((best, fit) => (fit[by] < best[by] ? fit : best));
}

/** The schedule with its pitch angles multiplied by `factor`: below one it lowers the gain sooner. */
export function withPitchScale(schedule: GainScheduleSettings, factor: number): GainScheduleSettings {
  switch (schedule.kind) {
    case 'constant':
      return schedule;
    case 'reciprocal':
      return { ...schedule, halvingPitch: factor * schedule.halvingPitch };
    case 'quadratic':
      return {
        ...schedule,
        linearPitch: factor * schedule.linearPitch,
        quadraticPitch: factor * schedule.quadraticPitch,
      };
    case 'table':
      return { ...schedule, pitch: schedule.pitch.map((pitch) => factor * pitch) };
  }
}
