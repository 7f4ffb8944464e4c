/** A run as the page works with it. */

import { unpackColumns } from '../scenarios/packed-column.ts';
import type { PageData } from '../scenarios/page.ts';
import type { Summary } from '../scenarios/summary.ts';
import { type LineStyle, lineStyle } from './palette.ts';

/** The air at stations of each blade; names of columns as in `scenarios/section-recorder.ts`. */
export interface BladeRecord {
  bladeCount: number;
  /** s */
  time: Float32Array;
  stations: ReadonlyMap<string, Float32Array>;
  columns: ReadonlyMap<string, Float32Array>;
}

export interface Run {
  /** Tells runs apart; short. */
  name: string;
  summary: Summary;
  /** s; empty where the result has no channels. */
  time: Float32Array;
  columns: ReadonlyMap<string, Float32Array>;
  blades: BladeRecord | undefined;
  /** What the result lacks, a sentence each. */
  missing: readonly string[];
  style: LineStyle;
  shown: boolean;
}

/** More runs than these do not start on top of each other, but with the first that tripped. */
const MOST_OVERLAID = 4;

export function openRuns(data: Extract<PageData, { kind: 'runs' }>): Run[] {
  const runs = data.runs.map(({ name, summary, columns: packed, sections, missing }, index) => {
    const columns = unpackColumns(packed);
    const time = columns.get('time_s') ?? new Float32Array();
    const blades = sections ? openBlades(sections) : undefined;
    return { name, summary, time, columns, blades, missing, style: lineStyle(index), shown: true };
  });
  if (runs.length > MOST_OVERLAID) {
    const first = runs.find(({ summary }) => summary.events.some(({ kind }) => kind === 'guard')) ?? runs[0];
    for (const run of runs) run.shown = run === first;
  }
  return runs;
}

type PackedSections = NonNullable<Extract<PageData, { kind: 'runs' }>['runs'][number]['sections']>;

function openBlades(sections: PackedSections): BladeRecord {
  const columns = unpackColumns(sections.columns);
  return {
    bladeCount: [...columns.keys()].filter((name) => /^pitch_\d_deg$/.test(name)).length,
    time: columns.get('time_s') ?? new Float32Array(),
    stations: unpackColumns(sections.stations),
    columns,
  };
}

/** The value at `at` on the line drawn through the samples; NaN outside them and beside gaps. */
export function valueAt(x: ArrayLike<number>, y: ArrayLike<number>, at: number): number {
  const last = x[x.length - 1];
  if (last === undefined || at > last) return Number.NaN;
  let low = 0;
  let high = x.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((x[middle] ?? 0) <= at) low = middle + 1;
    else high = middle;
  }
  const before = low - 1;
  const start = x[before] ?? Number.NaN;
  const value = y[before] ?? Number.NaN;
  if (start === at || low === x.length) return value;
  const share = (at - start) / ((x[low] ?? Number.NaN) - start);
  return value + share * ((y[low] ?? Number.NaN) - value);
}

/** The instant of a channel's largest value; undefined where the channel is not recorded. */
export function peakTime(run: Run, channel: string): number | undefined {
  let peak = Number.NEGATIVE_INFINITY;
  let time: number | undefined;
  run.columns.get(channel)?.forEach((value, index) => {
    if (!(value > peak)) return;
    peak = value;
    time = run.time[index];
  });
  return time;
}
