/** The rotor that a scenario asks for, the machine as it stands to the wind, and the state in which it starts. */
import type { Machine } from '../controllers/contract.ts';
import { BladeElementRotor } from '../sim/aerodynamics/blade-element-rotor.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
import type { RunSetup } from '../sim/clock.ts';
import type { SteadyState } from '../sim/plant.ts';
import type { Rotor } from '../sim/rotor.ts';
import { settledStart } from '../sim/settled-start.ts';
import { Trim } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { inclinedWind } from '../sim/wind/inclined.ts';
import type { WindField } from '../sim/wind/wind.ts';
import { torqueCurveOf } from './control.ts';
import { refusal } from './input-error.ts';
import type { ScenarioData } from './scenario.ts';

/**
 * Turbine, rotor and wind of a scenario.
 * @throws InputError for a yaw drive or a blade that the turbine does not have
 */
export function rotorSetup(
  scenario: ScenarioData,
  surface: CoefficientSurface,
): { turbine: Turbine; rotor: Rotor; wind: WindField } {
  const { rotor: choice, file } = scenario;
  const wind = inclinedWind(scenario.wind, choice.upflow);
  const { yawDrive } = scenario.turbine;
  if (choice.nacelle.followsWind && !yawDrive) {
    throw refusal(file, 'the nacelle is to follow the wind, but the turbine has no yaw_drive');
  }
  const turbine = choice.nacelle.followsWind ? scenario.turbine : { ...scenario.turbine, yawDrive: undefined };
  if ((choice.model ?? turbine.rotorModel) !== 'blade element') return { turbine, rotor: surfaceRotor(surface), wind };
  if (turbine.rotor.aerodynamics.kind !== 'blade') {
    throw refusal(file, 'the blade-element rotor needs a blade, but the turbine gives coefficient tables');
  }
  return { turbine, rotor: new BladeElementRotor(turbine, choice.bladeElement), wind };
}

/** @throws InputError where there is no steady operation at the asked wind */
export function initialState(
  scenario: ScenarioData,
  { turbine, rotor, wind }: { turbine: Turbine; rotor: Rotor; wind: WindField },
  machine: Machine,
): RunSetup['initial'] {
  const { start, controller, file } = scenario;
  const { yawError } = scenario.rotor.nacelle;
  const trim = new Trim(turbine, rotor);
  const torqueCurve = torqueCurveOf(controller, machine);
  const isParked = start.kind === 'parked';
  const windSpeed = isParked ? wind.rotorMean(0) : start.wind;
  try {
    const alongAxis = windSpeed * Math.cos(yawError);
    const guess: SteadyState = isParked ? trim.parked(alongAxis) : trim.at(alongAxis, torqueCurve);
    const steady =
      rotor instanceof BladeElementRotor
        ? settledStart({
            turbine,
            rotor,
            wind,
            windSpeed,
            yawError,
            guess: { ...guess, rotorStates: rotor.settledStates(alongAxis, guess.rotorSpeed, guess.pitch) },
            torqueCurve,
          })
        : { ...guess, yawError };
    return isParked
      ? { steady, state: 'parked', brakeApplied: start.brake }
      : { steady, state: 'power production', brakeApplied: false };
  } catch (cause) {
    throw refusal(file, `there is no steady state to start from: ${(cause as Error).message}`);
  }
}
