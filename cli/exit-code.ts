/** What the process says to its caller. */
export const EXIT = {
  /** Every verdict is as its scenario expects. */
  asExpected: 0,
  /** A limit is broken (or holds where it was expected to break). */
  notAsExpected: 1,
  /** Unusable input or arguments, or a place that cannot be written. */
  badInput: 2,
  /** A simulation could not go on. */
  simulationFailed: 3,
  /** A defect of galehold itself. */
  defect: 70,
} as const;

/** By name, so that the start of the command does not load what defines the errors. */
const CODES: Readonly<Record<string, number>> = {
  InputError: EXIT.badInput,
  OutputError: EXIT.badInput,
  SimulationError: EXIT.simulationFailed,
};

/** Tells the user about `error` on standard error and returns the exit code that goes with it. */
export function report(error: unknown): number {
  if (!(error instanceof Error)) {
    console.error(String(error));
    return EXIT.defect;
  }
  const code = CODES[error.name];
  if (code !== undefined) {
    console.error(error.message);
    if ('state' in error && Array.isArray(error.state)) printState(error.state);
    return code;
  }
  console.error(`galehold has a defect here; please report it with these lines:\n${error.stack ?? error.message}`);
  return EXIT.defect;
}

/** The plant's state where a simulation ended, in SI units. */
function printState(state: readonly { name: string; value: number }[]): void {
  if (state.length === 0) return;
  console.error('  state there, in SI units:');
  for (const { name, value } of state) console.error(`    ${name.padEnd(32)} ${Number(value.toPrecision(6))}`);
}
