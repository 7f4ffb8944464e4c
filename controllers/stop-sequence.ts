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
