import { clamp } from '../controllers/contract.ts';
import type { Layout } from './layout.ts';
import type { BrakeData } from './turbine.ts';

/** `slipping` holds the direction of turning, +1 or −1. */
const FREE = 0;
const HOLDING = 2;

/**
 * Shaft brake: Coulomb friction of a capacity that comes after a delay and a ramp, holds at standstill while the
 * torque against it stays below the capacity, heats by friction and fades with heat.
 *
 * The mode (free, slipping forward or back, holding) is memory, because a Coulomb brake at rest is not a function of
 * speed; the clock finds the instants at which it changes through `margin`.
 */
export class Brake {
  readonly data: BrakeData;
  /** Disc temperature, K. */
  readonly at: number;
  private readonly memoryAt: number;

  constructor(data: BrakeData, layout: Layout, memory: Layout) {
    this.data = data;
    this.at = layout.place('brake', ['temperature']);
    this.memoryAt = memory.place('brake', [
      'mode',
      'engagement at last order',
      'ordered engagement',
      'time of last order',
      'absent',
    ]);
  }

  start(applied: boolean, memory: Float64Array): void {
    const m = this.memoryAt;
    memory[m] = applied ? HOLDING : FREE;
    memory[m + 1] = memory[m + 2] = applied ? 1 : 0;
    memory[m + 3] = Number.NEGATIVE_INFINITY;
  }

  /** Applies or releases from time `t` (s) on; a repeated order changes nothing. */
  order(apply: boolean, t: number, memory: Float64Array): void {
    const m = this.memoryAt;
    const wanted = apply ? 1 : 0;
    if (memory[m + 2] === wanted) return;
    memory[m + 1] = this.engagement(t, memory);
    memory[m + 2] = wanted;
    memory[m + 3] = t;
  }

  ordered(memory: Float64Array): boolean {
    return memory[this.memoryAt + 2] === 1;
  }

  remove(memory: Float64Array): void {
    memory[this.memoryAt + 4] = 1;
    memory[this.memoryAt] = FREE;
  }

  /** Fraction of the full torque that the callipers press for at time `t`. */
  engagement(t: number, memory: Float64Array): number {
    const m = this.memoryAt;
    const from = memory[m + 1];
    const to = memory[m + 2];
    const pressing = t - memory[m + 3] - this.data.delay;
    if (pressing <= 0) return from;
    const change = this.data.ramp > 0 ? pressing / this.data.ramp : 1;
    return to > from ? Math.min(to, from + change) : Math.max(to, from - change);
  }

  /** Whether it was ordered on or off since the start. */
  everOrdered(memory: Float64Array): boolean {
    return memory[this.memoryAt + 3] !== Number.NEGATIVE_INFINITY;
  }

  /** Instants at which the engagement has a kink: the end of the delay and the end of the ramp. */
  firstTorqueAt(memory: Float64Array): number {
    return memory[this.memoryAt + 3] + this.data.delay;
  }

  fullTorqueAt(memory: Float64Array): number {
    const m = this.memoryAt;
    return this.firstTorqueAt(memory) + this.data.ramp * Math.abs(memory[m + 2] - memory[m + 1]);
  }

  /** Friction torque that the brake can give at time `t`, N m on its shaft. */
  capacity(t: number, x: ArrayLike<number>, memory: Float64Array): number {
    if (memory[this.memoryAt + 4] === 1) return 0;
    const { torque, fadeStart, fadeEnd, fadeFloor } = this.data;
    const faded = clamp((x[this.at] - fadeStart) / (fadeEnd - fadeStart), 0, 1);
    return torque * this.engagement(t, memory) * (1 - (1 - fadeFloor) * faded);
  }

  isFree(memory: Float64Array): boolean {
    return memory[this.memoryAt] === FREE;
  }

  isHolding(memory: Float64Array): boolean {
    return memory[this.memoryAt] === HOLDING;
  }

  /** Friction torque against the turning while it slips, N m, signed as the direction. */
  slippingTorque(t: number, x: ArrayLike<number>, memory: Float64Array): number {
    const mode = memory[this.memoryAt];
    return mode === FREE || mode === HOLDING ? 0 : mode * this.capacity(t, x, memory);
  }

  /**
   * Positive while the present mode lasts: speed in the direction of slip, or capacity left over what is held.
   * @param speed of the braked shaft, rad/s
   * @param held torque that would turn the shaft if the brake let go, N m
   */
  margin(t: number, speed: number, held: number, x: ArrayLike<number>, memory: Float64Array): number {
    const mode = memory[this.memoryAt];
    if (mode === FREE) return 1;
    if (mode === HOLDING) return this.capacity(t, x, memory) - Math.abs(held);
    return mode * speed;
  }

  /** Chooses the mode that fits `speed` and `held` at time `t`. Returns whether the shaft has just been caught. */
  settle(t: number, speed: number, held: number, x: ArrayLike<number>, memory: Float64Array): boolean {
    const m = this.memoryAt;
    const before = memory[m];
    // At the very instant an order is given there is no torque yet; look at what the order will bring.
    if (memory[m + 4] === 1 || (memory[m + 2] === 0 && this.engagement(t, memory) <= 0)) memory[m] = FREE;
    else if (speed !== 0) memory[m] = Math.sign(speed);
    else if (Math.abs(held) <= this.capacity(t, x, memory)) memory[m] = HOLDING;
    else memory[m] = Math.sign(held);
    return memory[m] === HOLDING && before !== HOLDING;
  }

  /** dT/dt, K/s, while friction turns `power` (W) into heat. */
  heatingRate(power: number, x: ArrayLike<number>): number {
    return (power - this.data.cooling * (x[this.at] - this.data.ambient)) / this.data.heatCapacity;
  }
}
