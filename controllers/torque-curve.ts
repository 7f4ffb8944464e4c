import { clamp, type Machine } from './contract.ts';
import type { Law } from './law.ts';

export interface TorqueLawSettings {
  /** k of Q = k ω² on the high-speed shaft, N m s²/rad². */
  optimalGain: number;
  aboveRated: 'constant power' | 'constant torque';
  /** Generator speed below which the torque is zero, and where kω² is reached, rad/s: a straight line between. */
  cutInSpeed: number;
  optimalFrom: number;
  /** Generator speed at which kω² is left for the straight line to rated torque at rated speed, rad/s. */
  optimalTo: number;
  /** Pitch above fine pitch at which the law keeps to rated torque or power down to `optimalTo`, rad. */
  handoverPitch: number;
  /** N m and N m/s. */
  maximumTorque: number;
  rateLimit: number;
}

/** Generator torque (N m) that the law settles on at a steady generator speed (rad/s), the blades at fine pitch. */
export function steadyTorque(settings: TorqueLawSettings, machine: Machine): (generatorSpeed: number) => number {
  const { optimalGain, cutInSpeed, optimalFrom, optimalTo } = settings;
  const { ratedGeneratorSpeed, ratedTorque } = machine;
  const torqueFrom = optimalGain * optimalFrom ** 2;
  const torqueTo = optimalGain * optimalTo ** 2;
  return (speed) => {
    if (speed <= cutInSpeed) return 0;
    if (speed < optimalFrom) return (torqueFrom * (speed - cutInSpeed)) / (optimalFrom - cutInSpeed);
    if (speed <= optimalTo) return optimalGain * speed * speed;
    if (speed < ratedGeneratorSpeed) {
      return torqueTo + ((ratedTorque - torqueTo) * (speed - optimalTo)) / (ratedGeneratorSpeed - optimalTo);
    }
    return ratedTorque;
  };
}

/**
 * Torque by generator speed: nothing below the cut-in speed, kω² in the middle, a straight line up to rated torque at
 * rated speed, then constant power or constant torque. While the blades stand above fine pitch the law keeps to the
 * rated branch down to where the straight line begins, so that it and the pitch law do not pull against each other
 * around rated.
 * @param sampleTime s
 */
export function torqueCurve(settings: TorqueLawSettings, machine: Machine, sampleTime: number): Law {
  const { aboveRated, handoverPitch, maximumTorque, rateLimit, cutInSpeed, optimalTo } = settings;
  const curve = steadyTorque(settings, machine);
  const largestStep = rateLimit * sampleTime;
  const handover = machine.finePitch + handoverPitch;

  return {
    name: 'torque curve',
    memory: ['last demand'],
    needs: ['generatorSpeed', 'pitch'],
    start(point, memory, at) {
      memory[at] = clamp(point.generatorTorque, 0, maximumTorque);
    },
    step(measured, memory, at, demands) {
      const speed = measured.generatorSpeed;
      const onRatedBranch = speed >= machine.ratedGeneratorSpeed || (measured.pitch[0] > handover && speed > optimalTo);
      // A lowered power set-point lowers the rated branch and caps the rest.
      const ceiling = measured.powerSetpoint / machine.generatorEfficiency;
      const ratedBranch =
        aboveRated === 'constant power'
          ? ceiling / Math.max(speed, cutInSpeed)
          : (machine.ratedTorque * measured.powerSetpoint) / machine.ratedPower;
      const wanted = onRatedBranch ? ratedBranch : Math.min(curve(speed), ceiling / Math.max(speed, cutInSpeed));
      const limited = clamp(clamp(wanted, 0, maximumTorque), memory[at] - largestStep, memory[at] + largestStep);
      memory[at] = limited;
      demands.generator = limited;
      demands.generatorAs = 'torque';
    },
  };
}
