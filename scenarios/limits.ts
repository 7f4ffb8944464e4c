import { CHANNELS, type Channel, channelIndex, toUnit } from '../sim/channels.ts';
import type { Frame } from '../sim/frame.ts';
import { FrameSpacing } from './frame-spacing.ts';
import type { LimitData, ScenarioData, Statistic } from './scenario.ts';
import {
  EquivalentRange,
  Final,
  Maximum,
  Mean,
  Minimum,
  type RunningStatistic,
  Spread,
  TimeBeyond,
  Travel,
  UpwardCrossings,
} from './statistics.ts';
import type { LimitResult, Metric } from './summary.ts';

export interface LimitsJudge {
  frame(frame: Frame): void;
  /** Ends the run. Limits on metrics look their value up in `metrics`. */
  finish(metrics: readonly Metric[]): LimitResult[];
}

/** Frame times are sums of sample times: a window takes frames that miss its ends by rounding only. */
const ROUNDING = 1e-9;

/**
 * Judges the limits of a scenario while it runs. A limit holds when its value lies strictly on the asked side of the
 * bound; it is broken when it has no value.
 * @throws Error when a limit names no channel that frames hold, or lacks the level or exponent that its statistic needs;
 * `finish` throws Error when a limit without statistic names no metric.
 */
export function createLimits(scenario: ScenarioData): LimitsJudge {
  const judges = scenario.limits.map((limit) =>
    limit.statistic === undefined
      ? new MetricLimit(limit)
      : new ChannelLimit(limit, limit.statistic, scenario.duration),
  );
  const channelLimits = judges.filter((judge) => judge instanceof ChannelLimit);
  const spacing = new FrameSpacing();
  return {
    frame(frame) {
      spacing.add(frame);
      for (let i = 0; i < channelLimits.length; i++) channelLimits[i].frame(frame);
    },
    finish: (metrics) => judges.map((judge) => judge.verdict(metrics, spacing.tick())),
  };
}

/** A limit on a statistic of a channel over a window. */
class ChannelLimit {
  private readonly limit: LimitData;
  private readonly statistic: Statistic;
  private readonly duration: number;
  private readonly index: number;
  private readonly running: RunningStatistic;
  private readonly from: number;
  private readonly to: number;

  constructor(limit: LimitData, statistic: Statistic, duration: number) {
    this.limit = limit;
    this.statistic = statistic;
    this.duration = duration;
    this.index = channelIndex(limit.channel);
    if (this.index < 0) throw new Error(`a limit names channel ${limit.channel}, but there is no such channel`);
    this.running = runningStatistic(limit, statistic);
    this.from = limit.from - ROUNDING;
    this.to = limit.to + ROUNDING;
  }

  frame({ time, values }: Frame): void {
    if (time >= this.from && time <= this.to) this.running.add(values, this.index);
  }

  verdict(_metrics: readonly Metric[], tick: number): LimitResult {
    const channel = CHANNELS[this.index];
    const { unit, value } = shown(channel, this.statistic, this.running.result(tick));
    return judged(this.limit, this.statistic, this.words(channel), Number.isNaN(value) ? null : value, unit);
  }

  /** The limit's subject, such as "max of rotor speed between 10 s and 60 s". */
  private words(channel: Channel): string {
    const { from, to, level } = this.limit;
    const window = from > 0 || to < this.duration ? ` between ${quantity(from, 's')} and ${quantity(to, 's')}` : '';
    const at = level === undefined ? '' : quantity(toUnit(channel, level), channel.unit);
    return STATISTIC_WORDS[this.statistic](inSentence(channel.label), at) + window;
  }
}

/** A limit on a metric of the whole run. */
class MetricLimit {
  private readonly limit: LimitData;

  constructor(limit: LimitData) {
    this.limit = limit;
  }

  verdict(metrics: readonly Metric[]): LimitResult {
    const metric = metrics.find(({ name }) => name === this.limit.channel);
    if (metric === undefined) throw new Error(`a limit names ${this.limit.channel}, but there is no such metric`);
    return judged(this.limit, 'metric', inSentence(metric.label), metric.value, metric.unit);
  }
}

const STATISTIC_WORDS: Record<Statistic, (signal: string, level: string) => string> = {
  max: (signal) => `max of ${signal}`,
  min: (signal) => `min of ${signal}`,
  mean: (signal) => `mean of ${signal}`,
  spread: (signal) => `spread of ${signal}`,
  final: (signal) => `final ${signal}`,
  'time above': (signal, level) => `time with ${signal} above ${level}`,
  'time below': (signal, level) => `time with ${signal} below ${level}`,
  travel: (signal) => `travel of ${signal}`,
  count: (signal, level) => `times that ${signal} rises past ${level}`,
  rainflow: (signal) => `damage-equivalent range of ${signal}`,
};

function runningStatistic(limit: LimitData, statistic: Statistic): RunningStatistic {
  switch (statistic) {
    case 'max':
      return new Maximum();
    case 'min':
      return new Minimum();
    case 'mean':
      return new Mean();
    case 'spread':
      return new Spread();
    case 'final':
      return new Final();
    case 'time above':
      return new TimeBeyond('above', needed(limit, 'level'));
    case 'time below':
      return new TimeBeyond('below', needed(limit, 'level'));
    case 'travel':
      return new Travel();
    case 'count':
      return new UpwardCrossings(needed(limit, 'level'));
    case 'rainflow':
      return new EquivalentRange(needed(limit, 'exponent'));
  }
}

function needed(limit: LimitData, setting: 'level' | 'exponent'): number {
  const value = limit[setting];
  if (value === undefined) throw new Error(`the ${limit.statistic} limit on ${limit.channel} needs its ${setting}`);
  return value;
}

/** A statistic in the unit that files show: times in s, counts bare, ranges without the unit's offset. */
function shown(channel: Channel, statistic: Statistic, si: number): { value: number; unit: string } {
  switch (statistic) {
    case 'time above':
    case 'time below':
      return { value: si, unit: 's' };
    case 'count':
      return { value: si, unit: '1' };
    case 'spread':
    case 'travel':
    case 'rainflow':
      return { value: si / channel.factor, unit: channel.unit };
    default:
      return { value: toUnit(channel, si), unit: channel.unit };
  }
}

function judged(limit: LimitData, statistic: string, subject: string, value: number | null, unit: string): LimitResult {
  const { channel, relation, bound } = limit;
  const margin = value === null ? null : relation === 'below' ? bound - value : value - bound;
  return {
    text: `${subject} ${relation} ${quantity(bound, unit)}`,
    channel,
    statistic,
    relation,
    bound,
    value,
    unit,
    holds: margin !== null && margin > 0,
    margin,
  };
}

function quantity(value: number, unit: string): string {
  const number = String(Number(value.toPrecision(6)));
  return unit === '1' ? number : `${number} ${unit}`;
}

function inSentence(label: string): string {
  return label.charAt(0).toLowerCase() + label.slice(1);
}
