import { CHANNELS, channelIndex, toUnit } from '../../sim/channels.ts';
import type { Frame } from '../../sim/frame.ts';
import type { Metric } from '../summary.ts';

/** Metrics by name: label in plain words, and unit. */
export type MetricTable = Readonly<Record<string, readonly [label: string, unit: string]>>;

/** One group of metrics, filled from the frames of a run. */
export interface MetricGroup {
  frame(frame: Frame): void;
  /** @param tick time from frame to frame, s. */
  metrics(tick: number): Metric[];
}

/** The metrics of a group in the order of their table; NaN, which says that a value never came about, becomes null. */
export function fillMetrics<T extends MetricTable>(
  group: Metric['group'],
  table: T,
  values: Readonly<Record<keyof T & string, number>>,
): Metric[] {
  return Object.entries(table).map(([name, [label, unit]]) => {
    const value = values[name];
    return { name, label, group, value: Number.isNaN(value) ? null : value, unit };
  });
}

/** Index in a frame of a channel that metrics rely on. */
export function frameIndex(channel: string): number {
  const index = channelIndex(channel);
  if (index < 0) throw new Error(`metrics read channel ${channel}, which no frame holds`);
  return index;
}

/** SI value in the unit that files show the channel in. */
export function inChannelUnit(channel: string, si: number): number {
  return toUnit(CHANNELS[frameIndex(channel)], si);
}

/** Indices of the channels of each blade that frames hold, such as `pitch_#_deg`. */
export function bladeIndices(pattern: string, bladeCount: number): Int32Array {
  return Int32Array.from({ length: bladeCount }, (_, blade) => frameIndex(pattern.replace('#', String(blade + 1))));
}
