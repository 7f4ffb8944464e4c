import type { Frame } from '../sim/frame.ts';

/** Finds the even spacing of a run's frames in time. */
export class FrameSpacing {
  private first = Number.NaN;
  private last = Number.NaN;
  private intervals = -1;

  add(frame: Frame): void {
    if (this.intervals < 0) this.first = frame.time;
    this.last = frame.time;
    this.intervals++;
  }

  /** s; NaN before the second frame. */
  tick(): number {
    return (this.last - this.first) / this.intervals;
  }
}
