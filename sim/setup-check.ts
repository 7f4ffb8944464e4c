import type { Controller } from '../controllers/contract.ts';
import type { IntegratorChoice } from './clock.ts';
import type { Plant } from './plant.ts';
import type { Rotor } from './rotor.ts';
import { SimulationError } from './simulation-error.ts';

/** The classical Runge–Kutta method is stable for a rate times step up to about 2.78 (real) and 2.83 (imaginary). */
const STABLE = 2.7;

/**
 * Refuses what could only end in a wrong or senseless run.
 * @throws SimulationError that says what to change
 */
export function checkSetup(
  plant: Plant,
  rotor: Rotor,
  controller: Controller,
  integrator: IntegratorChoice,
  sampleTimes: readonly number[],
): void {
  for (const time of sampleTimes) {
    if (!(time >= 1e-6) || !Number.isFinite(time)) {
      throw new SimulationError(0, `a sample time of ${time} s is no multiple of a microsecond that a clock can keep`);
    }
  }
  if (controller.needs.includes('flapMoment') && !rotor.resolvesBlades) {
    throw new SimulationError(
      0,
      `control law "${controller.name}" needs the blades' flap moments, which this rotor model does not give`,
    );
  }
  if (integrator.kind === 'runge-kutta') checkStep(plant, integrator.step);
}

function checkStep(plant: Plant, step: number): void {
  const { generator, pitchDrive } = plant.turbine;
  const shaft = 2 * Math.PI * plant.drivetrain.freeFreeFrequency();
  const rates: [string, number][] = [
    ["the generator's torque lag", 1 / generator.timeConstant],
    ["the generator's torque decay on grid loss", 1 / generator.gridLossTimeConstant],
    ['the pitch drives', 4 * Math.PI * pitchDrive.dampingRatio * pitchDrive.naturalFrequency],
    ["the shaft's torsion", plant.turbine.drivetrain.kind === 'rigid' ? 0 : shaft],
  ];
  const [part, rate] = rates.reduce((a, b) => (b[1] > a[1] ? b : a));
  if (rate * step < STABLE) return;
  throw new SimulationError(
    0,
    `the model is stiff for steps of ${step} s: ${part} needs steps below ${(STABLE / rate).toPrecision(2)} s; ` +
      'shorten the step or use odex',
  );
}
