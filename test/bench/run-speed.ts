/**
 * Speed of a ten-minute run in a process of its own, as a user's run has: `run-speed.js ROTOR WIND INTEGRATOR`, all from
 * the choices below. Prints one JSON object.
 *
 * Where the time goes, by the profiler, fixed steps: with the surface rotor a fifth each in the plant's derivative and in
 * the integrator's own sums, a tenth in the surface, the rest in sensors, control, metrics and recording; with the
 * blade-element rotor a fifth in the wake's rates, an eighth each in loads and velocity triangles, a tenth in the
 * integrator.
 */
import { join } from 'node:path';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { widenInlining } from '../../scenarios/inlining.ts';
import { runScenario, setUp } from '../../scenarios/run.ts';
import type { ScenarioData } from '../../scenarios/scenario.ts';
import { surfaceOf } from '../../sim/aerodynamics/surface-rotor.ts';
import { Clock } from '../../sim/clock.ts';
import { gaussian } from '../../sim/noise.ts';
import { standardTurbulence } from '../../sim/wind/kaimal.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { tableWind } from '../../sim/wind/table.ts';
import { type Turbulence, turbulenceField } from '../../sim/wind/turbulence.ts';
import { turbulentWind } from '../../sim/wind/turbulent.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { seconds } from './stopwatch.ts';

const MEAN = 18;

export const LONG = 600;

/** Turbulence in 61 points at 20 Hz. */
export const GUSTS: Turbulence = {
  ...standardTurbulence(MEAN, 0.14 * (0.75 * MEAN + 5.6), 42),
  grid: { radius: 65, rings: 5, spokes: 12 },
  duration: LONG,
  rate: 20,
  seed: 1,
  variance: 'exact',
};

/** Gusty wind, a row every half second: the loop and the drives work all the time. */
function gustyWind(): WindField {
  const time = Array.from({ length: 2 * LONG + 1 }, (_, i) => i / 2);
  const gusts = time.map((_, i) => gaussian(1, i));
  return tableWind({ time, speed: gusts.map((gust, i) => (i === 0 ? MEAN : MEAN + 0.8 * (gust + gusts[i - 1]))) });
}

/** The same field, made before the clock starts to count. */
function turbulentField(): WindField {
  const field = turbulenceField(GUSTS);
  const passage = { bladeCount: 3, rotorSpeed: (12 * Math.PI) / 30 };
  return sumWind([steadyWind({ speed: MEAN }), turbulentWind(GUSTS, passage, () => field)]);
}

const ROTORS = { surface: 'surface', 'blade-element': 'blade element' } as const;
const WINDS = { gusty: gustyWind, steady: () => steadyWind({ speed: MEAN }), turbulent: turbulentField } as const;
const INTEGRATORS: Record<string, ScenarioData['integrator']> = {
  odex: { kind: 'odex', relativeTolerance: 1e-6 },
  'fixed-step': { kind: 'runge-kutta', step: 0.01 },
};

export interface Choice {
  rotor: keyof typeof ROTORS;
  wind: keyof typeof WINDS;
  integrator: 'odex' | 'fixed-step';
}

export interface RunSpeed {
  /** Simulated time over wall time, recording, metrics and limits included. */
  timesRealTime: number;
  /** Heap that the clock by itself holds on to over the run, MB. */
  heapGrowth: number;
}

async function measure({ rotor, wind, integrator }: Choice): Promise<RunSpeed> {
  widenInlining();
  const shipped = await loadScenario(join(shippedFolder(), '04-operating-gust.yaml'));
  const scenario: ScenarioData = {
    ...shipped,
    rotor: { ...shipped.rotor, model: ROTORS[rotor] },
    wind: WINDS[wind](),
    integrator: INTEGRATORS[integrator],
    start: { kind: 'trim', wind: MEAN },
    duration: LONG,
    events: [],
    limits: [],
  };
  const surface = surfaceOf(scenario.turbine);
  const wall = seconds(() => runScenario(scenario, surface), rotor === 'surface' ? 7 : 3);

  const clock = new Clock(setUp(scenario, surface));
  clock.run(1000);
  globalThis.gc?.();
  const before = process.memoryUsage().heapUsed;
  clock.run();
  globalThis.gc?.();
  return { timesRealTime: LONG / wall, heapGrowth: (process.memoryUsage().heapUsed - before) / 2 ** 20 };
}

const [, , rotor, wind, integrator] = process.argv as [string, string, ...(string | undefined)[]];
if (rotor && wind && integrator) {
  console.log(JSON.stringify(await measure({ rotor, wind, integrator } as Choice)));
}
