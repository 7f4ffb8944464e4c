/** The shipped machine under formula gains, as the tuning tests take it: quiet sensors, other gains at will. */
import type { GainScheduleSettings } from '../../controllers/gain-schedule.ts';
import { controllerOf } from '../../scenarios/control.ts';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { machineOf } from '../../scenarios/machine.ts';
import { setUp } from '../../scenarios/run.ts';
import type { ControllerData, ScenarioData } from '../../scenarios/scenario.ts';
import { cachedSurface } from '../../scenarios/surface-cache.ts';
import { surfaceRotor } from '../../sim/aerodynamics/surface-rotor.ts';
import { channelIndex } from '../../sim/channels.ts';
import { Clock, type RunSetup } from '../../sim/clock.ts';
import { Trim, type TrimPoint } from '../../sim/trim.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import type { Gains } from '../../tuning/gains-by-formula.ts';
import { linearPlant } from '../../tuning/linear-plant.ts';
import { withQuietSensors } from '../../tuning/measured-loop.ts';
import { sampledLaw } from '../../tuning/sampled-law.ts';
import { SampledLoop } from '../../tuning/sampled-loop.ts';

export const SCENARIO_FILE = `${shippedFolder()}/04-operating-gust.yaml`;

/**
 * Gains by formula for 0.6 rad/s and critical damping at the trim point with 6 deg of pitch, the schedule a table that
 * keeps the loop's gain, constant power above rated: a fast loop that these tests look at, whatever is shipped.
 */
export const FORMULA_SETS: readonly string[] = [
  'controller.laws.0.proportional=0.0245 s',
  'controller.laws.0.integral=0.00735',
  'controller.laws.0.schedule={ kind: table, pitch: [3 deg, 4 deg, 6 deg, 8 deg, 10 deg, 13 deg, 16 deg, 20 deg, 25 deg], ' +
    'factor: [1.44, 1.18, 1.00, 0.767, 0.620, 0.477, 0.383, 0.298, 0.227] }',
  'controller.laws.1.above_rated=constant_power',
];

const shipped = await loadScenario(SCENARIO_FILE, { set: FORMULA_SETS });
export const TURBINE = withQuietSensors(shipped.turbine);
export const MACHINE = machineOf(TURBINE);
export const SURFACE = cachedSurface(TURBINE);
export const ROTOR = surfaceRotor(SURFACE);
export const TRIM = new Trim(TURBINE, ROTOR);
export const FILTER = 1.5;
export const FLAT: GainScheduleSettings = { kind: 'constant' };

/** The controller with other gains; constant torque above rated leaves the shaft its own damping. */
export function controllerData(
  gains?: Gains,
  schedule?: GainScheduleSettings,
  aboveRated: 'constant power' | 'constant torque' = 'constant power',
): ControllerData {
  const { controller } = shipped;
  if (controller.kind !== 'laws') throw new Error('the shipped controller has become a module');
  const laws = controller.laws.map((law) =>
    law.law === 'scheduled PI pitch'
      ? { ...law, ...gains, schedule: schedule ?? law.schedule }
      : law.law === 'torque curve'
        ? { ...law, aboveRated }
        : law,
  );
  return { ...controller, laws };
}

export function loopAt(point: TrimPoint, controller: ControllerData): SampledLoop {
  const law = sampledLaw(controllerOf(controller, MACHINE), MACHINE, point);
  return new SampledLoop(TURBINE, linearPlant(TURBINE, ROTOR, point, law.pitchAs), law);
}

/** A run's setup from trim at `windSpeed`, m/s, for `duration`, s. */
export function runSetup(
  windSpeed: number,
  controller: ControllerData,
  duration: number,
  wind: WindField = steadyWind({ speed: windSpeed }),
): RunSetup {
  const scenario: ScenarioData = {
    ...shipped,
    turbine: TURBINE,
    controller,
    wind,
    start: { kind: 'trim', wind: windSpeed },
    duration,
    events: [],
    integrator: { kind: 'runge-kutta', step: 0.01 },
  };
  return setUp(scenario, SURFACE);
}

/** One channel of a run, SI, every `every` ticks. */
export function channelOf(setup: RunSetup, channel: string, every = 1): number[] {
  const clock = new Clock(setup);
  const index = channelIndex(channel);
  const values: number[] = [];
  clock.frames.subscribe(({ tick, values: frame }) => {
    if (tick % every === 0) values.push(frame[index]);
  });
  clock.run();
  return values;
}
