/**
 * A guard looks at the hard-wired signals and says when they are too much.
 *
 * To write a guard: one file here that returns a `Guard`, one line in `index.ts`, its settings in
 * `../protection.ts` and its keys in `scenarios/schema/protection.ts`.
 */
import type { ProtectionSignals } from '../contract.ts';

export interface Guard {
  /** Whether the signals are too much. Asked at every sample. */
  speaks(signals: Readonly<ProtectionSignals>): boolean;
  /** What it then goes by, and that in words for a person, such as "13.5 rpm above 13.4 rpm". */
  reading(signals: Readonly<ProtectionSignals>): number;
  describe(reading: number): string;
}

export function speedReading(reading: number, threshold: number): string {
  return `${rpm(reading)} above ${rpm(threshold)}`;
}

function rpm(speed: number): string {
  const value = (speed * 30) / Math.PI;
  return `${value.toFixed(value < 100 ? 2 : 0)} rpm`;
}
