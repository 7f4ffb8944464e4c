/** The test turbine with its invented blade in full: mass, flap, tower both ways, and the blade-element rotor on it. */
import {
  BLADE_ELEMENT_DEFAULTS,
  type BladeElementOptions,
  BladeElementRotor,
} from '../../sim/aerodynamics/blade-element-rotor.ts';
import type { Clock, RunSetup } from '../../sim/clock.ts';
import { settledStart } from '../../sim/settled-start.ts';
import { Trim } from '../../sim/trim.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { ROTOR } from '../aerodynamics/demo-rotor.ts';
import { TURBINE, testRun, testTorqueCurve } from '../sim/test-turbine.ts';

/** Straight blades on a straight shaft before no tower: what momentum theory describes. */
export const STRAIGHT: Turbine = {
  ...TURBINE,
  rotor: {
    ...ROTOR,
    structure: {
      radius: [1.6, 10, 25, 45, 65],
      massPerLength: [900, 420, 290, 140, 20],
      flap: { frequency: 0.72, dampingRatio: 0.005, shape: [1, 0.4, -0.2] },
    },
  },
  tower: { ...TURBINE.tower, sideSide: { modalMass: 2.9e5, frequency: 0.26, dampingRatio: 0.005 } },
};

/** The same with tilt, cone, overhang and a tower that throws its shadow. */
export const WHOLE: Turbine = {
  ...STRAIGHT,
  rotor: { ...STRAIGHT.rotor, tilt: 0.087, cone: 0.035, overhang: 4.5 },
  tower: { ...STRAIGHT.tower, topDiameter: 3.2, baseDiameter: 5 },
};

export interface BladeElementRun extends Partial<Omit<RunSetup, 'rotor' | 'initial'>> {
  options?: Partial<BladeElementOptions>;
  /** m/s at the hub */
  windSpeed: number;
  yawError?: number;
}

/** A run from where the rotor settles. */
export function bladeElementRun({ options, windSpeed, yawError = 0, ...changes }: BladeElementRun): Clock {
  const turbine = changes.turbine ?? STRAIGHT;
  const wind: WindField = changes.wind ?? steadyWind({ speed: windSpeed });
  const rotor = new BladeElementRotor(turbine, { ...BLADE_ELEMENT_DEFAULTS, ...options });
  const trim = new Trim(turbine, rotor).at(windSpeed, testTorqueCurve);
  const rotorStates = rotor.settledStates(windSpeed, trim.rotorSpeed, trim.pitch);
  const steady = settledStart({
    turbine,
    rotor,
    wind,
    windSpeed,
    yawError,
    guess: { ...trim, rotorStates },
    torqueCurve: testTorqueCurve,
  });
  return testRun(windSpeed, {
    ...changes,
    turbine,
    rotor,
    wind,
    initial: { steady, state: 'power production', brakeApplied: false },
  });
}
