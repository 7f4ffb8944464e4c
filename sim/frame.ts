/** What the clock tells its listeners. */

/** One sample instant. `values` (SI, indexed as CHANNELS) belongs to the clock and is overwritten: copy what you keep. */
export interface Frame {
  tick: number;
  time: number;
  readonly values: Float64Array;
}

export type RunEventKind = 'wind' | 'fault' | 'order' | 'guard' | 'stop' | 'state' | 'brake' | 'standstill';

export interface RunEvent {
  time: number;
  kind: RunEventKind;
  text: string;
}
