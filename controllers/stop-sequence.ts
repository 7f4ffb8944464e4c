import { clamp, type Orders } from './contract.ts';

/** A stop sequence: orders in turn; only `wait` holds the next one up. */
export type StopStep =
  /** Turn the named blades (0-based; all when absent) to `to` (rad) at `rate` (rad/s). */
  | { kind: 'feather'; rate: number; to: number; blades?: readonly number[] }
  /** Take the generator torque from its present value to zero in `over` seconds. */
  | { kind: 'torque off'; over: number }
  /** Go on when every condition given holds, or after `atMost` seconds. `forTime` in s, speed in rad/s, pitch (of every blade) in rad. */
  | { kind: 'wait'; forTime?: number; rotorSpeedBelow?: number; pitchAbove?: number; atMost?: number }
  | { kind: 'brake'; apply: boolean }
  /** The stop is complete: the machine counts as parked. */
  | { kind: 'park' };

export type StopSequence = readonly StopStep[];

/** Memory of a sequence under way; per-blade runs follow the fixed slots. */
const FIXED = ['step', 'time of step', 'torque off since', 'torque off over', 'brake', 'parked'] as const;
const [STEP, SINCE, TORQUE_SINCE, TORQUE_OVER, BRAKE, PARKED] = FIXED.keys();
const PER_BLADE = ['demand', 'target', 'rate'] as const;

export function stopSequenceMemory(bladeCount: number): string[] {
  const blades = PER_BLADE.flatMap((name) => Array.from({ length: bladeCount }, (_, b) => `${name} ${b + 1}`));
  return [...FIXED, ...blades];
}

/** What a sequence looks at. */
export interface StopSignals {
  /** rad/s */
  readonly rotorSpeed: number;
  /** rad per blade */
  readonly pitch: ArrayLike<number>;
}

/**
 * Carries out stop sequences: turns the list of steps into orders sample by sample. Feathering is a ramp of the
 * demand, so that a blade that does not follow shows as pitch deviation.
 * @param sampleTime s
 */
export function stopSequenceRunner(bladeCount: number, sampleTime: number) {
  const demandAt = FIXED.length;
  const targetAt = demandAt + bladeCount;
  const rateAt = targetAt + bladeCount;

  function begin(t: number, pitch: ArrayLike<number>, memory: Float64Array, at: number): void {
    memory[at + STEP] = 0;
    memory[at + SINCE] = t;
    memory[at + TORQUE_SINCE] = Number.NaN;
    memory[at + PARKED] = 0;
    for (let b = 0; b < bladeCount; b++) {
      memory[at + demandAt + b] = pitch[b];
      memory[at + targetAt + b] = pitch[b];
      memory[at + rateAt + b] = 0;
    }
  }

  function mayGoOn(step: StopStep, t: number, signals: StopSignals, memory: Float64Array, at: number): boolean {
    if (step.kind !== 'wait') return true;
    const waited = t - memory[at + SINCE];
    if (step.atMost !== undefined && waited >= step.atMost) return true;
    if (step.forTime !== undefined && waited < step.forTime) return false;
    if (step.rotorSpeedBelow !== undefined && signals.rotorSpeed >= step.rotorSpeedBelow) return false;
    if (step.pitchAbove === undefined) return true;
    for (let b = 0; b < bladeCount; b++) if (signals.pitch[b] <= step.pitchAbove) return false;
    return true;
  }

  function order(step: StopStep, t: number, memory: Float64Array, at: number): void {
    switch (step.kind) {
      case 'feather':
        for (let b = 0; b < bladeCount; b++) {
          if (step.blades && !step.blades.includes(b)) continue;
          memory[at + targetAt + b] = step.to;
          memory[at + rateAt + b] = step.rate;
        }
        break;
      case 'torque off':
        memory[at + TORQUE_SINCE] = t;
        memory[at + TORQUE_OVER] = step.over;
        break;
      case 'brake':
        memory[at + BRAKE] = step.apply ? 1 : 0;
        break;
      case 'park':
        memory[at + PARKED] = 1;
        break;
      case 'wait':
        break;
    }
  }

  function rampDemands(orders: Orders, memory: Float64Array, at: number): void {
    for (let b = 0; b < bladeCount; b++) {
      const step = memory[at + rateAt + b] * sampleTime;
      const demand = memory[at + demandAt + b];
      memory[at + demandAt + b] = clamp(memory[at + targetAt + b], demand - step, demand + step);
      orders.pitch[b] = memory[at + demandAt + b];
    }
  }

  return {
    begin,
    parked: (memory: Float64Array, at: number): boolean => memory[at + PARKED] === 1,
    /** One sample: goes through every step that may be taken now and writes the standing orders. */
    step(
      sequence: StopSequence,
      t: number,
      signals: StopSignals,
      memory: Float64Array,
      at: number,
      orders: Orders,
    ): void {
      let step = sequence[memory[at + STEP]];
      while (step && mayGoOn(step, t, signals, memory, at)) {
        order(step, t, memory, at);
        memory[at + STEP]++;
        memory[at + SINCE] = t;
        step = sequence[memory[at + STEP]];
      }
      orders.active = true;
      rampDemands(orders, memory, at);
      const since = memory[at + TORQUE_SINCE];
      const over = memory[at + TORQUE_OVER];
      if (!Number.isNaN(since)) orders.torqueFraction = over > 0 ? clamp(1 - (t - since) / over, 0, 1) : 0;
      orders.brake = memory[at + BRAKE] === 1;
    },
  };
}
