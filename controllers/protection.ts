import type { StopSequence } from './stop-sequence.ts';

/** What a guard watches; speeds in rad/s, angles in rad. */
export type GuardWatch =
  | { watch: 'rotor overspeed'; above: number }
  | { watch: 'generator overspeed'; above: number }
  /** Largest difference between a blade's demanded and true angle. */
  | { watch: 'pitch deviation'; above: number }
  | { watch: 'grid loss' }
  | { watch: 'manual button' };

export type GuardSettings = GuardWatch & {
  name: string;
  /** How long the condition must last, s. */
  hold: number;
  /** `manual`: latched to the end of the run. `automatic`: released when the machine is parked and the condition has gone. */
  reset: 'manual' | 'automatic';
  /** Name of the stop sequence it starts. */
  stop: string;
};

export interface ProtectionSettings {
  /** s */
  sampleTime: number;
  /** In order of precedence: a later guard may replace an earlier guard's stop only if it stands before it in this list. */
  guards: readonly GuardSettings[];
  stops: Readonly<Record<string, StopSequence>>;
}
