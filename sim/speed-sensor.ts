import { clamp } from '../controllers/contract.ts';
import type { Layout } from './layout.ts';
import { gaussian } from './noise.ts';
import type { SpeedSensorData } from './turbine.ts';

/**
 * A speed sensor read at a fixed sample time: low-pass, seeded noise, quantisation, range.
 *
 * The low-pass is exact for a speed that changes linearly between samples (first-order hold), so sampling adds no lag
 * of its own.
 */
export class SpeedSensor {
  private readonly data: SpeedSensorData;
  private readonly seed: number;
  /** Last input, filtered value, reported value (all rad/s), frozen (1 or 0). */
  private readonly at: number;
  private readonly pole: number;
  private readonly fromLast: number;
  private readonly fromNow: number;

  /** @param seed distinguishes this sensor's noise from any other's */
  constructor(name: string, data: SpeedSensorData, sampleTime: number, seed: number, memory: Layout) {
    this.data = data;
    this.seed = seed;
    this.at = memory.place(name, ['last input', 'filtered', 'reported', 'frozen']);
    const { pole, fromLast, fromNow } = firstOrderHold(data.timeConstant, sampleTime);
    this.pole = pole;
    this.fromLast = fromLast;
    this.fromNow = fromNow;
  }

  start(speed: number, memory: Float64Array): void {
    memory[this.at] = memory[this.at + 1] = memory[this.at + 2] = speed;
  }

  /** Takes the true `speed` (rad/s) at sample number `tick`. */
  sample(tick: number, speed: number, memory: Float64Array): void {
    const m = this.at;
    const filtered = this.pole * memory[m + 1] + this.fromLast * memory[m] + this.fromNow * speed;
    memory[m] = speed;
    memory[m + 1] = filtered;
    if (memory[m + 3] === 1) return;
    const { noise, resolution, range } = this.data;
    let reported = noise > 0 ? filtered + noise * gaussian(this.seed, tick) : filtered;
    if (resolution > 0) reported = Math.round(reported / resolution) * resolution;
    memory[m + 2] = clamp(reported, -range, range);
  }

  reading(memory: Float64Array): number {
    return memory[this.at + 2];
  }

  freeze(memory: Float64Array): void {
    memory[this.at + 3] = 1;
  }
}

/** First-order lag sampled with a first-order hold: y⁺ = pole·y + fromLast·u + fromNow·u⁺. */
export function firstOrderHold(timeConstant: number, sampleTime: number) {
  if (timeConstant <= 0) return { pole: 0, fromLast: 0, fromNow: 1 };
  const pole = Math.exp(-sampleTime / timeConstant);
  const slope = ((1 - pole) * timeConstant) / sampleTime;
  return { pole, fromLast: slope - pole, fromNow: 1 - slope };
}
