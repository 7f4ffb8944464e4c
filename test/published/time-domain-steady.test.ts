/**
 * Check 13: the blade-element rotor in uniform wind settles on the steady solution, from air at rest, within 0.1 % of
 * torque and thrust (internal consistency).
 */
import { describe, expect, it } from 'vitest';
import { bladeOf } from '../../sim/aerodynamics/blade.ts';
import { BLADE_ELEMENT_DEFAULTS, BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import { channelIndex } from '../../sim/channels.ts';
import { Trim } from '../../sim/trim.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { bladeElementRun, STRAIGHT } from '../rotor/blade-element-run.ts';
import { driveAlone } from '../rotor/rotor-alone.ts';
import { testTorqueCurve } from '../sim/test-turbine.ts';

const DEGREE = Math.PI / 180;
const { ratings, airDensity } = STRAIGHT;
const rotor = new BladeElementRotor(STRAIGHT);
const lagging = new BladeElementRotor(STRAIGHT, { ...BLADE_ELEMENT_DEFAULTS, sectionLift: 'lagging' });
const balanced = new BladeElementRotor(STRAIGHT, { ...BLADE_ELEMENT_DEFAULTS, wake: 'equilibrium' });
const trim = new Trim(STRAIGHT, rotor);

/** Torque and thrust after `duration` s over those of the steady solution; what is small is seen on the scale of thrust. */
function settledShare(which: BladeElementRotor, wind: number, speed: number, pitch: number, duration = 400) {
  const { loads } = driveAlone(which, {
    wind: steadyWind({ speed: wind }),
    speed,
    pitch: () => pitch,
    duration,
    step: 0.1,
  });
  const steady = steadyRotor(rotor.blade, wind, speed, pitch, airDensity);
  return { torque: loads.torque / steady.torque, thrust: loads.thrust / steady.thrust };
}

function expectSteady(share: { torque: number; thrust: number }): void {
  expect(Math.abs(share.torque - 1)).toBeLessThan(1e-3);
  expect(Math.abs(share.thrust - 1)).toBeLessThan(1e-3);
}

describe('A blade-element rotor in uniform wind', () => {
  it.each([ratings.cutInWind + 0.5, 6, 8, 10, 11, 12, 14, 17, 20, 23, ratings.cutOutWind])(
    'settles on the steady solution in operation at %s m/s',
    (wind) => {
      const { rotorSpeed, pitch } = trim.at(wind, testTorqueCurve);
      expectSteady(settledShare(rotor, wind, rotorSpeed, pitch));
      expectSteady(settledShare(lagging, wind, rotorSpeed, pitch));
    },
  );

  it.each([
    ['parked at feather', 25, 0, 88],
    ['parked at feather in a storm', 60, 0, 88],
    ['parked at 90 degrees', 40, 0, 90],
    ['parked with blades at work', 12, 0, 0],
    ['idling at feather', 20, 0.05, 86],
    ['idling at start-up pitch', 6, 0.3, 20],
  ])('settles on it when %s', (_, wind, speed, degrees) => {
    expectSteady(settledShare(rotor, wind, speed, degrees * DEGREE));
  });

  it('is on it at once where the wake is in equilibrium', () => {
    for (const wind of [5, 9, 14, 25]) {
      const { rotorSpeed, pitch } = trim.at(wind, testTorqueCurve);
      expectSteady(settledShare(balanced, wind, rotorSpeed, pitch, 20));
    }
  });

  it('has enough strips: forty change torque and thrust in operation by less than 0.4 %', () => {
    const fine = bladeOf(STRAIGHT.rotor, 40);
    for (let wind = 5; wind <= 25; wind += 2) {
      const { rotorSpeed, pitch } = trim.at(wind, testTorqueCurve);
      const coarse = steadyRotor(rotor.blade, wind, rotorSpeed, pitch, airDensity);
      const steady = steadyRotor(fine, wind, rotorSpeed, pitch, airDensity);
      expect(Math.abs(coarse.torque / steady.torque - 1)).toBeLessThan(4e-3);
      expect(Math.abs(coarse.thrust / steady.thrust - 1)).toBeLessThan(4e-3);
    }
  });
});

it('A run starts settled and stays on the steady solution', () => {
  const clock = bladeElementRun({ windSpeed: 16, duration: 30, integrator: { kind: 'runge-kutta', step: 0.01 } });
  const { rotorSpeed, pitch } = trim.at(16, testTorqueCurve);
  const steady = steadyRotor(rotor.blade, 16, rotorSpeed, pitch, airDensity);
  const torque = channelIndex('aerodynamic_torque_kn_m');
  const thrust = channelIndex('thrust_kn');
  const deflection = channelIndex('tower_deflection_m');
  let frames = 0;
  let meanTorque = 0;
  let meanThrust = 0;
  const swing = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  clock.frames.subscribe(({ values, tick }) => {
    if (tick === 0) expect(Math.abs(values[torque] / steady.torque - 1)).toBeLessThan(1e-3);
    meanTorque += values[torque];
    meanThrust += values[thrust];
    swing[0] = Math.min(swing[0], values[deflection]);
    swing[1] = Math.max(swing[1], values[deflection]);
    frames++;
  });
  clock.run();
  expect(Math.abs(meanTorque / frames / steady.torque - 1)).toBeLessThan(1e-3);
  expect(Math.abs(meanThrust / frames / steady.thrust - 1)).toBeLessThan(1e-3);
  // Sensor noise moves the blades a little; a start that is off would swing the tower by centimetres.
  expect(swing[1] - swing[0]).toBeLessThan(0.005);
});
