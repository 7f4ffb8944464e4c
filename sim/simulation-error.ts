/** A run that cannot go on. The message says what happened and why it likely did; `time` in s. */
export class SimulationError extends Error {
  readonly time: number;
  /** Named values of the plant at that time. */
  readonly state: readonly { name: string; value: number }[];

  constructor(time: number, message: string, state: readonly { name: string; value: number }[] = []) {
    super(`at ${time.toFixed(3)} s: ${message}`);
    this.name = 'SimulationError';
    this.time = time;
    this.state = state;
  }
}
