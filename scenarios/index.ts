/**
 * The programmatic entry: read a scenario, run it, look at it.
 *
 *     import { loadScenario, runScenario } from 'galehold';
 *     const { summary } = runScenario(await loadScenario('gust.yaml'));
 *
 * For branches, build a `Clock` from `setUp(scenario, surface)`, `run` it to a tick, `snapshot` it, and `restore` the
 * snapshot in other clocks.
 */
export { surfaceOf, surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
export { CHANNELS, type Channel } from '../sim/channels.ts';
export { Clock, type RunSetup, type Snapshot } from '../sim/clock.ts';
export type { Frame, RunEvent } from '../sim/frame.ts';
export { SimulationError } from '../sim/simulation-error.ts';
export { Trim, type TrimPoint } from '../sim/trim.ts';
export type { Turbine } from '../sim/turbine.ts';
export type { WindField } from '../sim/wind/wind.ts';
export { loadScenario, loadTurbine, shippedFolder, shippedScenarios } from './disk.ts';
export { widenInlining } from './inlining.ts';
export { InputError, type Problem } from './input-error.ts';
export { OutputError, writeResult } from './results.ts';
export { type RunResult, runScenario, setUp } from './run.ts';
export type { ScenarioData } from './scenario.ts';
export { readStoredResult } from './stored-result.ts';
export type { LimitResult, Metric, Summary } from './summary.ts';
