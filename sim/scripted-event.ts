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

/** The action in words. */
export function describeAction(action: Action): string {
  switch (action.kind) {
    case 'grid loss':
      return 'grid is lost';
    case 'grid return':
      return 'grid returns';
    case 'manual stop':
      return 'stop button is pressed';
    case 'normal stop':
      return 'normal stop is requested';
    case 'start':
      return 'start is requested';
    case 'pitch stuck':
      return `pitch drive sticks: blade ${action.blades.map((b) => b + 1).join(', ')}`;
    case 'speed sensor frozen':
      return `${action.sensor} speed sensor freezes`;
    case 'brake absent':
      return 'brake is out of action';
  }
}
