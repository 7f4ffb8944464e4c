import { clamp } from '../controllers/contract.ts';
import type { Layout } from './layout.ts';
import type { GeneratorData } from './turbine.ts';

/** Below this fraction of rated speed the converter lets its torque go, in proportion to speed. */
const LOWEST_SPEED_FRACTION = 0.1;

/** Generator and converter: torque follows its demand with a lag and a rate limit, and vanishes with the grid. */
export class Generator {
  readonly data: GeneratorData;
  /** Air-gap torque, N m, on the high-speed shaft. */
  readonly at: number;
  /** Torque demand, N m; grid connected (1 or 0). */
  readonly memoryAt: number;
  private readonly lowestSpeed: number;

  constructor(data: GeneratorData, ratedSpeed: number, layout: Layout, memory: Layout) {
    this.data = data;
    this.lowestSpeed = LOWEST_SPEED_FRACTION * ratedSpeed;
    this.at = layout.place('generator', ['torque']);
    this.memoryAt = memory.place('generator', ['torque demand', 'grid connected']);
  }

  demand(torque: number, memory: Float64Array): void {
    memory[this.memoryAt] = clamp(torque, 0, this.data.maximumTorque);
  }

  setGrid(connected: boolean, memory: Float64Array): void {
    memory[this.memoryAt + 1] = connected ? 1 : 0;
  }

  gridConnected(memory: Float64Array): boolean {
    return memory[this.memoryAt + 1] === 1;
  }

  /** dQ/dt, N m/s, at generator speed `speed` (rad/s). */
  torqueRate(speed: number, x: ArrayLike<number>, memory: Float64Array): number {
    const torque = x[this.at];
    if (!this.gridConnected(memory)) return -torque / this.data.gridLossTimeConstant;
    const target = memory[this.memoryAt] * clamp(speed / this.lowestSpeed, 0, 1);
    const { timeConstant, torqueRateLimit } = this.data;
    return clamp((target - torque) / timeConstant, -torqueRateLimit, torqueRateLimit);
  }
}
