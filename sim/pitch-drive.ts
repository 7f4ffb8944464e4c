import { clamp } from '../controllers/contract.ts';
import { type Layout, perBlade } from './layout.ts';
import type { PitchDriveData } from './turbine.ts';

/** Memory per blade, in this order, each a run of one slot per blade. */
const MEMORY = ['demand', 'demand is a rate', 'rate limit', 'stuck', 'travel on backup', 'angle a tick ago'] as const;

/**
 * One drive per blade, second order from demand to angle.
 *
 * The demand sets a wanted rate (ω/2ζ)(θ_d − θ), limited to what the supply can give; the drive reaches it with
 * θ̈ = 2ζω (wanted − θ̇), limited in acceleration. Inside the limits this is exactly θ̈ = ω²(θ_d − θ) − 2ζω θ̇, and
 * the rate never leaves its limit.
 */
export class PitchDrives {
  readonly data: PitchDriveData;
  readonly bladeCount: number;
  /** Angles (rad) from `angleAt`, rates (rad/s) from `rateAt`. */
  readonly angleAt: number;
  readonly rateAt: number;
  private readonly memoryAt: number;
  private readonly queueAt: number;
  /** Whole ticks of transport delay, and the rest of it in s. */
  private readonly delayTicks: number;
  readonly delayRest: number;
  private readonly positionGain: number;
  private readonly rateGain: number;

  /** @param tick s between the instants at which demands change */
  constructor(data: PitchDriveData, bladeCount: number, tick: number, layout: Layout, memory: Layout) {
    this.data = data;
    this.bladeCount = bladeCount;
    this.angleAt = layout.place('pitch', perBlade('angle', bladeCount));
    this.rateAt = layout.place('pitch', perBlade('rate', bladeCount));
    this.memoryAt = memory.place(
      'pitch',
      MEMORY.flatMap((name) => perBlade(name, bladeCount)),
    );
    const ticks = data.delay / tick;
    this.delayTicks = Math.floor(ticks + 1e-9);
    const rest = data.delay - this.delayTicks * tick;
    this.delayRest = rest > 1e-9 * tick ? rest : 0;
    this.queueAt = memory.place(
      'pitch',
      Array.from({ length: (this.delayTicks + 2) * bladeCount * 2 }, (_, i) => `demand under way ${i}`),
    );
    const omega = 2 * Math.PI * data.naturalFrequency;
    this.positionGain = omega / (2 * data.dampingRatio);
    this.rateGain = 2 * data.dampingRatio * omega;
  }

  /** Fills the transport queue as if `angle` (rad) had always been demanded. */
  start(angle: number, memory: Float64Array): void {
    for (let b = 0; b < this.bladeCount; b++) {
      for (let k = 0; k < this.delayTicks + 2; k++) this.post(k, b, angle, false, memory);
      this.setActive(b, angle, 0, memory);
      memory[this.slot(2, b)] = this.data.rateLimit;
      memory[this.slot(5, b)] = angle;
    }
  }

  /** Puts blade `b`'s demand of this tick under way: rad, or rad/s where `isRate`. */
  post(tick: number, b: number, demand: number, isRate: boolean, memory: Float64Array): void {
    const at = this.queueSlot(tick, b);
    memory[at] = isRate ? demand : clamp(demand, this.data.minimum, this.data.maximum);
    memory[at + 1] = isRate ? 1 : 0;
  }

  /** Lets the demands that were posted `delay` before arrive; `late` for the part of the tick before `delayRest`. */
  arrive(tick: number, late: boolean, memory: Float64Array): void {
    const from = tick - this.delayTicks - (late ? 1 : 0);
    for (let b = 0; b < this.bladeCount; b++) {
      const at = this.queueSlot(from, b);
      this.setActive(b, memory[at], memory[at + 1], memory);
    }
  }

  /** Sets the rate limits of the coming tick by the supply, and adds up the travel spent on backup. Call once a tick. */
  supply(gridConnected: boolean, x: ArrayLike<number>, memory: Float64Array): void {
    const { rateLimit } = this.data;
    for (let b = 0; b < this.bladeCount; b++) {
      const angle = x[this.angleAt + b];
      if (!gridConnected) memory[this.slot(4, b)] += Math.abs(angle - memory[this.slot(5, b)]);
      memory[this.slot(5, b)] = angle;
      memory[this.slot(2, b)] = gridConnected
        ? rateLimit
        : Math.min(rateLimit, this.backupRate(memory[this.slot(4, b)]));
    }
  }

  /** Rate that the backup supply still gives after `travel` (rad), rad/s. */
  backupRate(travel: number): number {
    const { travel: knots, rate } = this.data.backup;
    const last = knots.length - 1;
    if (travel <= knots[0]) return rate[0];
    if (travel >= knots[last]) return rate[last];
    let i = 1;
    while (knots[i] < travel) i++;
    return rate[i - 1] + ((rate[i] - rate[i - 1]) * (travel - knots[i - 1])) / (knots[i] - knots[i - 1]);
  }

  /** The blade stays where it is from now on. */
  stick(b: number, x: { [i: number]: number }, memory: Float64Array): void {
    memory[this.slot(3, b)] = 1;
    x[this.rateAt + b] = 0;
  }

  /** The demand that has arrived at the drive, rad; the present angle where a rate is demanded. */
  demanded(b: number, x: ArrayLike<number>, memory: Float64Array): number {
    return memory[this.slot(1, b)] === 1 ? x[this.angleAt + b] : memory[this.slot(0, b)];
  }

  /** θ̈ of blade `b`, rad/s². */
  acceleration(b: number, x: ArrayLike<number>, memory: Float64Array): number {
    if (memory[this.slot(3, b)] === 1) return 0;
    const { accelerationLimit, minimum, maximum } = this.data;
    const angle = x[this.angleAt + b];
    const demand = memory[this.slot(0, b)];
    const limit = memory[this.slot(2, b)];
    let wanted = this.positionGain * (demand - angle);
    if (memory[this.slot(1, b)] === 1) {
      // A demanded rate stops at the ends of the travel: no faster towards one than would come to rest on it.
      wanted = clamp(demand, this.positionGain * (minimum - angle), this.positionGain * (maximum - angle));
    }
    wanted = clamp(wanted, -limit, limit);
    return clamp(this.rateGain * (wanted - x[this.rateAt + b]), -accelerationLimit, accelerationLimit);
  }

  private setActive(b: number, demand: number, isRate: number, memory: Float64Array): void {
    memory[this.slot(0, b)] = demand;
    memory[this.slot(1, b)] = isRate;
  }

  private slot(kind: number, b: number): number {
    return this.memoryAt + kind * this.bladeCount + b;
  }

  private queueSlot(tick: number, b: number): number {
    const length = this.delayTicks + 2;
    const turn = ((tick % length) + length) % length;
    return this.queueAt + (turn * this.bladeCount + b) * 2;
  }
}
