/**
 * Running statistics of a signal, for metrics and limits alike: each takes one value a tick and remembers a handful of
 * numbers. Results are NaN where no value ever came, and in the signal's own unit.
 *
 * These are called dozens of times a tick, so nothing is allocated. That is why a value is named by its place: a number
 * handed over by itself may land on the heap.
 */
import { Rainflow } from './rainflow.ts';

export interface RunningStatistic {
  /** Takes the signal's next value, `values[at]`; values are evenly spaced in time. */
  add(values: Float64Array, at: number): void;
  /** @param tick time from value to value, s. */
  result(tick: number): number;
}

export class Maximum implements RunningStatistic {
  private highest = Number.NEGATIVE_INFINITY;

  add(values: Float64Array, at: number): void {
    if (values[at] > this.highest) this.highest = values[at];
  }

  result(): number {
    return Number.isFinite(this.highest) ? this.highest : Number.NaN;
  }
}

export class Minimum implements RunningStatistic {
  private lowest = Number.POSITIVE_INFINITY;

  add(values: Float64Array, at: number): void {
    if (values[at] < this.lowest) this.lowest = values[at];
  }

  result(): number {
    return Number.isFinite(this.lowest) ? this.lowest : Number.NaN;
  }
}

export class Mean implements RunningStatistic {
  private count = 0;
  private sum = 0;

  add(values: Float64Array, at: number): void {
    this.count++;
    this.sum += values[at];
  }

  result(): number {
    return this.sum / this.count;
  }
}

/** Standard deviation. Sums are taken about the first value, so that little cancels. */
export class Spread implements RunningStatistic {
  private count = 0;
  private first = Number.NaN;
  private sum = 0;
  private sumOfSquares = 0;

  add(values: Float64Array, at: number): void {
    if (this.count === 0) this.first = values[at];
    const off = values[at] - this.first;
    this.count++;
    this.sum += off;
    this.sumOfSquares += off * off;
  }

  result(): number {
    const variance = (this.sumOfSquares - (this.sum * this.sum) / this.count) / this.count;
    return Math.sqrt(Math.max(0, variance));
  }
}

export class Final implements RunningStatistic {
  private last = Number.NaN;

  add(values: Float64Array, at: number): void {
    this.last = values[at];
  }

  result(): number {
    return this.last;
  }
}

/** Seconds on one side of a level, the signal taken as straight lines between its values. */
export class TimeBeyond implements RunningStatistic {
  private readonly level: number;
  private readonly sign: 1 | -1;
  private beyond = Number.NaN;
  private ticks = 0;

  constructor(side: 'above' | 'below', level: number) {
    this.level = level;
    this.sign = side === 'above' ? 1 : -1;
  }

  add(values: Float64Array, at: number): void {
    const before = this.beyond;
    const beyond = this.sign * (values[at] - this.level);
    this.beyond = beyond;
    // Every comparison with the NaN before the first value is false: that value ends no interval.
    if (before > 0 && beyond > 0) this.ticks += 1;
    else if (before > 0 && beyond <= 0) this.ticks += before / (before - beyond);
    else if (before <= 0 && beyond > 0) this.ticks += beyond / (beyond - before);
  }

  result(tick: number): number {
    return Number.isNaN(this.beyond) ? Number.NaN : this.ticks * tick;
  }
}

/** Sum of absolute changes. */
export class Travel implements RunningStatistic {
  private last = Number.NaN;
  private total = 0;

  add(values: Float64Array, at: number): void {
    const change = Math.abs(values[at] - this.last);
    // False for the first value, which changes nothing.
    if (change > 0) this.total += change;
    this.last = values[at];
  }

  result(): number {
    return Number.isNaN(this.last) ? Number.NaN : this.total;
  }
}

/** How often the signal rises past a level. A signal that starts above has not risen past it. */
export class UpwardCrossings implements RunningStatistic {
  private readonly level: number;
  private last = Number.NaN;
  private count = 0;

  constructor(level: number) {
    this.level = level;
  }

  add(values: Float64Array, at: number): void {
    if (this.last <= this.level && values[at] > this.level) this.count++;
    this.last = values[at];
  }

  result(): number {
    return Number.isNaN(this.last) ? Number.NaN : this.count;
  }
}

/**
 * The range that, repeated once a second for as long as the signal lasted, does the damage of all its rainflow cycles:
 * `(Σ n R^m / (T · 1 Hz))^(1/m)` with Wöhler exponent m (linear damage sum of Palmgren and Miner).
 */
export class EquivalentRange implements RunningStatistic {
  private readonly exponent: number;
  private readonly cycles: Rainflow;
  private damage = 0;
  private count = 0;

  constructor(exponent: number) {
    this.exponent = exponent;
    this.cycles = new Rainflow((range, cycles) => {
      this.damage += cycles * range ** exponent;
    });
  }

  add(values: Float64Array, at: number): void {
    this.count++;
    this.cycles.add(values[at]);
  }

  /** Ends the history: no value may be added afterwards. */
  result(tick: number): number {
    if (this.count < 2) return Number.NaN;
    this.cycles.finish();
    return (this.damage / ((this.count - 1) * tick)) ** (1 / this.exponent);
  }
}

/** Integral over time by the trapezoidal rule, in the signal's unit times seconds. */
export class Integral implements RunningStatistic {
  private last = Number.NaN;
  private ticks = 0;

  add(values: Float64Array, at: number): void {
    const sum = values[at] + this.last;
    // NaN at the first value, which ends no interval.
    if (!Number.isNaN(sum)) this.ticks += 0.5 * sum;
    this.last = values[at];
  }

  result(tick: number): number {
    return Number.isNaN(this.last) ? Number.NaN : this.ticks * tick;
  }
}

/** How often the signal turns back by more than `play` from where it had got to. */
export class Reversals implements RunningStatistic {
  private readonly play: number;
  private furthest = Number.NaN;
  private direction = 0;
  private count = 0;

  constructor(play: number) {
    this.play = play;
  }

  add(values: Float64Array, at: number): void {
    if (Number.isNaN(this.furthest)) this.furthest = values[at];
    const off = values[at] - this.furthest;
    if (off * this.direction > 0) {
      this.furthest = values[at];
    } else if (Math.abs(off) > this.play) {
      if (this.direction !== 0) this.count++;
      this.direction = off > 0 ? 1 : -1;
      this.furthest = values[at];
    }
  }

  result(): number {
    return Number.isNaN(this.furthest) ? Number.NaN : this.count;
  }
}

/** The value below which a share of all values lies, to a thousandth of `top`; values run from 0 to `top`. */
export class Percentile {
  private static readonly bins = 1000;
  private readonly counts = new Float64Array(Percentile.bins);
  private readonly binsPerUnit: number;
  private readonly share: number;
  private total = 0;

  /** @param share 0 to 1. */
  constructor(share: number, top: number) {
    this.share = share;
    this.binsPerUnit = Percentile.bins / top;
  }

  add(values: Float64Array, at: number): void {
    const bin = Math.min(Percentile.bins - 1, Math.floor(values[at] * this.binsPerUnit));
    this.counts[bin]++;
    this.total++;
  }

  result(): number {
    let missing = this.share * this.total;
    for (let bin = 0; bin < Percentile.bins; bin++) {
      const count = this.counts[bin];
      if (count > 0 && count >= missing) return (bin + missing / count) / this.binsPerUnit;
      missing -= count;
    }
    return Number.NaN;
  }
}
