import type { RunningStatistic } from '../statistics.ts';

/**
 * When a speed last left the band of 2 % about its final value. The final value is not known until the end, so each of
 * many narrow bins of speed remembers when the rotor last turned that fast.
 */
export class Settling implements RunningStatistic {
  private static readonly bins = 4096;
  private static readonly band = 0.02;
  private readonly binWidth: number;
  private readonly lastTick = new Float64Array(Settling.bins);
  private readonly rated: number;
  private ticks = -1;
  private final = Number.NaN;

  /** @param rated rated speed, rad/s; bins reach to twice that. */
  constructor(rated: number) {
    this.rated = rated;
    this.binWidth = (2 * rated) / Settling.bins;
  }

  add(values: Float64Array, at: number): void {
    const bin = Math.max(0, Math.min(Settling.bins - 1, Math.floor(values[at] / this.binWidth)));
    this.ticks++;
    this.lastTick[bin] = this.ticks;
    this.final = values[at];
  }

  /**
   * Time (s) from the first value, after which the speed stays in the band. NaN where that says nothing: the rotor ended
   * below a tenth of rated speed, or was still leaving the band in the last tenth of the run.
   */
  result(tick: number): number {
    if (!(this.final > 0.1 * this.rated)) return Number.NaN;
    let lastOutside = 0;
    for (let bin = 0; bin < Settling.bins; bin++) {
      const speed = (bin + 0.5) * this.binWidth;
      const outside = Math.abs(speed - this.final) > Settling.band * this.final;
      if (outside) lastOutside = Math.max(lastOutside, this.lastTick[bin]);
    }
    return lastOutside <= 0.9 * this.ticks ? lastOutside * tick : Number.NaN;
  }
}
