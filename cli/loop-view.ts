/** A controller's loop at the rated trim points, as the reports draw it. */

import type { Controller } from '../controllers/contract.ts';
import type { GainScheduleSettings } from '../controllers/gain-schedule.ts';
import { controllerOf } from '../scenarios/control.ts';
import type { ControllerData } from '../scenarios/scenario.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Complex } from '../tuning/complex.ts';
import type { Gains } from '../tuning/gains-by-formula.ts';
import { linearPlant } from '../tuning/linear-plant.ts';
import { frequencyGrid } from '../tuning/margins.ts';
import { type Mode, modesOf, sampledModesOf } from '../tuning/modes.ts';
import { sampledLaw } from '../tuning/sampled-law.ts';
import { SampledLoop } from '../tuning/sampled-loop.ts';
import { exactRow, type MarginRow } from './margins-table.ts';
import type { ScenarioSubject } from './tuning-subject.ts';

export interface LoopView extends MarginRow {
  frequencies: Float64Array;
  gain: readonly Complex[];
  modes: readonly Mode[];
  /** Generator speed deviation (rad/s) after the wind has risen by 1 m/s, and its instants (s). */
  step: { time: readonly number[]; speed: readonly number[] };
}

const POINTS = 200;
const STEP_TIME = 30;

/** The controller's pitch law with gains; undefined where it has none. */
export function pitchLawOf(data: ControllerData) {
  if (data.kind !== 'laws') return undefined;
  return data.laws.find((law) => law.law === 'scheduled PI pitch');
}

/** The controller's data with other gains, schedule and, if given, filter corner (Hz). */
export function withGains(
  data: ControllerData,
  gains: Gains,
  schedule: GainScheduleSettings,
  filterFrequency?: number,
): ControllerData {
  if (data.kind !== 'laws') return data;
  const laws = data.laws.map((law) =>
    law.law === 'scheduled PI pitch'
      ? {
          ...law,
          proportional: gains.proportional,
          integral: gains.integral,
          schedule,
          ...(filterFrequency === undefined ? {} : { speedFilter: { frequency: filterFrequency } }),
        }
      : law,
  );
  return { ...data, laws };
}

export function controllerWith(subject: ScenarioSubject) {
  return (gains: Gains, schedule: GainScheduleSettings): Controller =>
    controllerOf(withGains(subject.scenario.controller, gains, schedule), subject.machine);
}

/** @throws Error where the law closes no loop */
export function loopView(subject: ScenarioSubject, controller: ControllerData, point: TrimPoint): LoopView {
  const { turbine, rotor, machine, scenario } = subject;
  const law = sampledLaw(controllerOf(controller, machine), machine, point);
  const loop = new SampledLoop(turbine, linearPlant(turbine, rotor, point, law.pitchAs), law);
  const modes = sampledModesOf(loop.closedLoop(), law.sampleTime);
  const frequencies = frequencyGrid(0.05, 20, POINTS, [...modes, ...modesOf(loop.plant.a)]);
  const state = new Float64Array(loop.states.length);
  const time: number[] = [];
  const speed: number[] = [];
  const every = Math.max(1, Math.round(0.1 / law.sampleTime));
  for (let k = 0; k * law.sampleTime <= STEP_TIME; k++) {
    const [generatorSpeed] = loop.step(state, { pitch: 0, wind: 1, setpoint: 0 });
    if (k % every !== 0) continue;
    time.push(k * law.sampleTime);
    speed.push(generatorSpeed);
  }
  return {
    ...exactRow({ ...subject, scenario: { ...scenario, controller } }, point),
    frequencies,
    gain: Array.from(frequencies, (frequency) => loop.gain(frequency)),
    modes,
    step: { time, speed },
  };
}
