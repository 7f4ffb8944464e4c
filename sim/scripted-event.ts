/** Something the scenario does to the machine at an instant or on a condition. */
export type Trigger =
  | { kind: 'time'; at: number }
  /** The first time that the channel (SI value) passes the level in that direction. */
  | { kind: 'crossing'; channel: number; direction: 'above' | 'below'; level: number };

export type Action =
  | { kind: 'grid loss' }
  | { kind: 'grid return' }
  | { kind: 'manual stop' }
  | { kind: 'normal stop' }
  | { kind: 'start' }
  /** Blades are 0-based. */
  | { kind: 'pitch stuck'; blades: readonly number[] }
  | { kind: 'speed sensor frozen'; sensor: 'control' | 'protection' }
  | { kind: 'brake absent' };

export interface ScriptedEvent {
  trigger: Trigger;
  action: Action;
}
