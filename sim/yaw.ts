import type { Layout } from './layout.ts';
import type { YawDriveData } from './turbine.ts';

/**
 * The nacelle's heading. With a drive: the vane's angle passes a low-pass filter; beyond the dead band the drive turns
 * at its one rate until the filtered angle comes past zero, then the yaw brake holds. Without one the brake always holds.
 */
export class Yaw {
  /** Heading (rad, from the wind field's x axis towards +y), and the filtered vane (rad). */
  readonly at: number;
  private readonly data: YawDriveData | undefined;
  /** Which way the drive turns: −1, 0, 1. */
  private readonly turningAt: number;

  constructor(data: YawDriveData | undefined, layout: Layout, memory: Layout) {
    this.data = data;
    this.at = layout.place('yaw', ['heading', 'filtered vane']);
    this.turningAt = memory.place('yaw', ['turning']);
  }

  start(heading: number, vane: number, x: { [i: number]: number }): void {
    x[this.at] = heading;
    x[this.at + 1] = vane;
  }

  /** Switches the drive; call once a tick. */
  decide(x: ArrayLike<number>, memory: Float64Array): void {
    if (!this.data) return;
    const vane = x[this.at + 1];
    const turning = memory[this.turningAt];
    if (turning === 0 && Math.abs(vane) > this.data.deadBand) memory[this.turningAt] = Math.sign(vane);
    else if (turning * vane < 0) memory[this.turningAt] = 0;
  }

  /** rad/s */
  rate(memory: Float64Array): number {
    return this.data ? memory[this.turningAt] * this.data.rate : 0;
  }

  /** Rate of the filtered vane, rad/s, where the wind comes `vane` (rad) off the nacelle's axis. */
  vaneRate(vane: number, x: ArrayLike<number>): number {
    return this.data ? (vane - x[this.at + 1]) / this.data.vaneTimeConstant : 0;
  }
}
