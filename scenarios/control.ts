/** Builds the sampled parts of a run from a scenario's data. */
import type { Controller, Machine } from '../controllers/contract.ts';
import { type Law, stackLaws } from '../controllers/law.ts';
import { scheduledPiPitch } from '../controllers/scheduled-pi-pitch.ts';
import { steadyTorque, torqueCurve } from '../controllers/torque-curve.ts';
import type { ControllerData, LawSettings } from './scenario.ts';

function law(settings: LawSettings, machine: Machine, sampleTime: number): Law {
  switch (settings.law) {
    case 'scheduled PI pitch':
      return scheduledPiPitch(settings, sampleTime);
    case 'torque curve':
      return torqueCurve(settings, machine, sampleTime);
  }
}

/** The control law of a controller file: its laws stacked, or what its module makes. */
export function controllerOf(data: ControllerData, machine: Machine): Controller {
  if (data.kind === 'module') return data.factory(data.settings, machine);
  const laws = data.laws.map((settings) => law(settings, machine, data.sampleTime));
  return stackLaws(data.name, data.sampleTime, laws);
}

/** Generator torque (N m) over generator speed (rad/s) on which the law settles; undefined where nobody can tell. */
export function torqueCurveOf(
  data: ControllerData,
  machine: Machine,
): ((generatorSpeed: number) => number) | undefined {
  if (data.kind === 'module') return undefined;
  const settings = data.laws.find((l) => l.law === 'torque curve');
  return settings?.law === 'torque curve' ? steadyTorque(settings, machine) : undefined;
}
