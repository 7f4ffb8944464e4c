/**
 * A guard turns the hard-wired signals into one reading and says when it is too much.
 *
 * To write a guard: one file here that returns a `Guard`, one line in `index.ts`, its settings in
 * `../protection.ts` and its keys in `scenarios/schema/protection.ts`.
 */
import type { ProtectionSignals } from '../contract.ts';

export interface Guard {
  reading(signals: Readonly<ProtectionSignals>): number;
  /** The guard speaks while its reading is above this. */
  readonly threshold: number;
  /** Reading and threshold for a person, such as "13.5 rpm above 13.4 rpm". */
  describe(reading: number): string;
}

export function speedReading(reading: number, threshold: number): string {
  return `${rpm(reading)} above ${rpm(threshold)}`;
}

function rpm(speed: number): string {
  const value = (speed * 30) / Math.PI;
  return `${value.toFixed(value < 100 ? 2 : 0)} rpm`;
}
