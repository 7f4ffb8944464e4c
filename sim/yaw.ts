import type { Layout } from './layout.ts';
import type { YawDriveData } from './turbine.ts';

/**
 * The nacelle's heading. With a drive: vane and heading together give the wind's direction, which passes a low-pass
 * filter (of the direction, not of the vane, so that the nacelle's own turning does not lag in it); where the nacelle is
 * off it by more than the dead band, the drive turns at its one rate until it comes past it, then the yaw brake holds.
 * Without a drive the brake always holds.
 */
export class Yaw {
  /** Heading and filtered wind direction, rad, from the wind field's x axis towards +y. */
  readonly at: number;
  private readonly data: YawDriveData | undefined;
  /** Which way the drive turns: −1, 0, 1. */
  private readonly turningAt: number;

  constructor(data: YawDriveData | undefined, layout: Layout, memory: Layout) {
    this.data = data;
    this.at = layout.place('yaw', ['heading', 'filtered wind direction']);
    this.turningAt = memory.place('yaw', ['turning']);
  }

  start(heading: number, direction: number, x: { [i: number]: number }): void {
    x[this.at] = heading;
    x[this.at + 1] = direction;
  }

  /** Switches the drive; call once a tick. */
  decide(x: ArrayLike<number>, memory: Float64Array): void {
    if (!this.data) return;
    const off = fromOpposite(x[this.at + 1] - x[this.at]);
    const turning = memory[this.turningAt];
    if (turning === 0 && Math.abs(off) > this.data.deadBand) memory[this.turningAt] = Math.sign(off);
    else if (turning * off < 0) memory[this.turningAt] = 0;
  }

  /** rad/s */
  rate(memory: Float64Array): number {
    return this.data ? memory[this.turningAt] * this.data.rate : 0;
  }

  /** Rate of the filtered wind direction, rad/s, where the vane reads `vane`, rad. */
  directionRate(vane: number, x: ArrayLike<number>): number {
    return this.data ? fromOpposite(vane + x[this.at] - x[this.at + 1]) / this.data.vaneTimeConstant : 0;
  }
}

/** The same angle between −π and π, rad. */
export function fromOpposite(angle: number): number {
  return angle - 2 * Math.PI * Math.round(angle / (2 * Math.PI));
}
