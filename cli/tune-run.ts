/** One simulation of the search, in a worker thread or in the main one. */
import { loadScenario } from '../scenarios/disk.ts';
import { runScenario } from '../scenarios/run.ts';
import type { ScenarioData } from '../scenarios/scenario.ts';
import { cachedSurface } from '../scenarios/surface-cache.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { withPitchScale } from '../tuning/schedule-fit.ts';
import { pitchLawOf, withGains } from './loop-view.ts';

/** Which run of which scenario with which gains. */
export interface TuneRun {
  file: string;
  set: readonly string[];
  seed: number;
  gains: { proportional: number; integral: number };
  /** Factor on the schedule's pitch angles. */
  pitchScale: number;
  /** Hz; as the controller has it when absent. */
  filterFrequency?: number;
}

export interface TuneRunResult {
  /** In the order of OBJECTIVES; null where the simulation could not go on. */
  objectives: number[] | null;
  /** It could not go on, tripped, or broke a limit. */
  broken: boolean;
}

/** The metrics that trade against each other, all to be small. */
export const OBJECTIVES = [
  { metric: 'rotor_speed_spread_rpm', label: 'spread of rotor speed' },
  { metric: 'pitch_travel_deg', label: 'pitch travel' },
  { metric: 'tower_base_moment_equivalent_mn_m', label: 'tower load (equivalent range)' },
] as const;

/** A campaign's step, s: the laws' own sample time or a whole part of it. */
const STEP = 0.01;

const loaded = new Map<string, Promise<{ scenario: ScenarioData; surface: CoefficientSurface }>>();

/** The scenario with its seed, read once: its wind may have taken longer to make than a run takes. */
function scenarioOf({ file, set, seed }: TuneRun) {
  const key = JSON.stringify([file, set, seed]);
  const known = loaded.get(key);
  if (known) return known;
  const fresh = loadScenario(file, { set: [...set, `seed=${seed}`] }).then((scenario) => ({
    scenario: {
      ...scenario,
      record: { rate: 1, channels: ['rotor_speed_rpm'] },
      integrator: { kind: 'runge-kutta' as const, step: STEP },
    },
    surface: cachedSurface(scenario.turbine),
  }));
  loaded.set(key, fresh);
  return fresh;
}

/** Runs it. @throws InputError where the files cannot be used */
export default async function tuneRun(run: TuneRun): Promise<TuneRunResult> {
  const { scenario, surface } = await scenarioOf(run);
  const law = pitchLawOf(scenario.controller);
  if (!law) throw new Error('the controller has no pitch law with gains');
  const controller = withGains(
    scenario.controller,
    run.gains,
    withPitchScale(law.schedule, run.pitchScale),
    run.filterFrequency,
  );
  try {
    const { summary } = runScenario({ ...scenario, controller }, surface);
    const objectives = OBJECTIVES.map(({ metric }) => {
      const value = summary.metrics.find(({ name }) => name === metric)?.value;
      if (value === undefined || value === null) throw new Error(`a run gave no ${metric}`);
      return value;
    });
    const tripped = summary.events.some(({ kind }) => kind === 'guard');
    return { objectives, broken: tripped || summary.verdict === 'broken' };
  } catch (error) {
    if (error instanceof Error && error.name === 'SimulationError') return { objectives: null, broken: true };
    throw error;
  }
}
