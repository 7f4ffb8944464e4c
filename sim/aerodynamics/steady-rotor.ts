import type { Blade } from './blade.ts';
import { emptyFlow, FULL_MOMENTUM, type MomentumOptions, solveSection } from './momentum.ts';

/** A rotor's steady totals. Coefficients are referred to the wind and are NaN in still air. */
export interface SteadyRotor {
  /** Downwind, N. */
  thrust: number;
  /** In the direction of turning, N m. */
  torque: number;
  /** W */
  power: number;
  powerCoefficient: number;
  thrustCoefficient: number;
  torqueCoefficient: number;
}

/**
 * Steady thrust, torque and power of a rotor, summed over its strips.
 * @param windSpeed m/s
 * @param rotorSpeed rad/s
 * @param pitch rad, all blades
 * @param airDensity kg/m³
 */
export function steadyRotor(
  blade: Blade,
  windSpeed: number,
  rotorSpeed: number,
  pitch: number,
  airDensity: number,
  options: MomentumOptions = FULL_MOMENTUM,
): SteadyRotor {
  let thrust = 0;
  let torque = 0;
  for (const section of blade.sections) {
    solveSection(section, blade, windSpeed, rotorSpeed, pitch, airDensity, options, flow);
    thrust += blade.bladeCount * flow.normalForce * section.width;
    torque += blade.bladeCount * flow.tangentialForce * section.radius * section.width;
  }
  const power = torque * rotorSpeed;
  const area = Math.PI * blade.radius ** 2;
  const push = windSpeed === 0 ? Number.NaN : 0.5 * airDensity * area * windSpeed ** 2;
  return {
    thrust,
    torque,
    power,
    powerCoefficient: power / (push * windSpeed),
    thrustCoefficient: thrust / push,
    torqueCoefficient: torque / (push * blade.radius),
  };
}

const flow = emptyFlow();
