import { CHANNELS, type Channel, channelIndex, toUnit } from '../sim/channels.ts';
import type { Frame } from '../sim/frame.ts';
import type { ScenarioData } from './scenario.ts';

/** A recorded column, in the unit that files show. */
export interface RecordedColumn {
  readonly name: string;
  readonly label: string;
  readonly unit: string;
  readonly values: Float64Array;
}

export interface Recording {
  /** `time_s` first, then the channels in their stable order. */
  readonly columns: readonly RecordedColumn[];
  /** Recorded frames per second: the rate asked for, as near as whole frames allow. NaN for fewer than two frames. */
  readonly rate: number;
}

export interface ChannelRecorder {
  frame(frame: Frame): void;
  /** Ends the run; its last frame is always recorded. */
  finish(): Recording;
}

/**
 * Records the channels that `scenario` asks for, every n-th frame and the last. A scenario that names none gets all
 * that ever have a value.
 * @throws Error when the scenario asks for a channel that frames do not hold.
 */
export function createRecorder(scenario: ScenarioData): ChannelRecorder {
  return new EveryNthFrame(scenario);
}

class EveryNthFrame implements ChannelRecorder {
  private readonly askedRate: number;
  private readonly recorded: readonly number[];
  private readonly namesChannels: boolean;
  private readonly latest = { time: Number.NaN, values: new Float64Array(CHANNELS.length), kept: true };
  private time: Float64Array;
  /** SI, one array per recorded channel. */
  private columns: Float64Array[];
  private rows = 0;
  private frames = 0;
  private firstTime = Number.NaN;
  private frameInterval = Number.NaN;
  private every = 1;

  constructor({ record, duration }: ScenarioData) {
    this.askedRate = record.rate;
    this.recorded = recordedChannels(record.channels);
    this.namesChannels = record.channels !== undefined;
    const expectedRows = Math.ceil(duration * record.rate) + 3;
    this.time = new Float64Array(expectedRows);
    this.columns = this.recorded.map(() => new Float64Array(expectedRows));
  }

  frame({ time, values }: Frame): void {
    if (this.frames === 0) this.firstTime = time;
    if (this.frames === 1) {
      this.frameInterval = time - this.firstTime;
      this.every = Math.max(1, Math.round(1 / (this.askedRate * this.frameInterval)));
    }
    this.latest.time = time;
    this.latest.values.set(values);
    this.latest.kept = this.frames % this.every === 0;
    if (this.latest.kept) this.keepLatest();
    this.frames++;
  }

  finish(): Recording {
    if (!this.latest.kept) this.keepLatest();
    const channels = this.recorded
      .map((index, i) => column(CHANNELS[index], this.columns[i].subarray(0, this.rows)))
      .filter(({ values }) => this.namesChannels || values.some((value) => !Number.isNaN(value)));
    const time = { name: 'time_s', label: 'Time', unit: 's', values: this.time.slice(0, this.rows) };
    return { columns: [time, ...channels], rate: 1 / (this.every * this.frameInterval) };
  }

  private keepLatest(): void {
    if (this.rows === this.time.length) this.lengthen();
    const { time, values } = this.latest;
    this.time[this.rows] = time;
    for (let i = 0; i < this.recorded.length; i++) this.columns[i][this.rows] = values[this.recorded[i]];
    this.latest.kept = true;
    this.rows++;
  }

  /** Needed only where the frames come faster than the scenario said. */
  private lengthen(): void {
    this.time = twiceAsLong(this.time);
    this.columns = this.columns.map(twiceAsLong);
  }
}

/** Indices of the named channels in their stable order; all when no names are given. */
function recordedChannels(names: readonly string[] | undefined): number[] {
  if (names === undefined) return CHANNELS.map((_, index) => index);
  for (const name of names) {
    if (channelIndex(name) < 0) throw new Error(`the scenario records ${name}, but there is no such channel`);
  }
  return [...new Set(names.map(channelIndex))].sort((a, b) => a - b);
}

function column(channel: Channel, si: Float64Array): RecordedColumn {
  const { name, label, unit } = channel;
  const values = new Float64Array(si.length);
  for (let row = 0; row < si.length; row++) values[row] = toUnit(channel, si[row]);
  return { name, label, unit, values };
}

function twiceAsLong(values: Float64Array): Float64Array {
  const longer = new Float64Array(2 * values.length);
  longer.set(values);
  return longer;
}
