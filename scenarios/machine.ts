import type { Machine } from '../controllers/contract.ts';
import type { Turbine } from '../sim/turbine.ts';

/** What control laws, supervisors and the files that set them up may know of a turbine. */
export function machineOf({ ratings, rotor, drivetrain, pitchDrive, generator }: Turbine): Machine {
  const ratedGeneratorSpeed = ratings.rotorSpeed * drivetrain.gearRatio;
  return {
    bladeCount: rotor.bladeCount,
    gearRatio: drivetrain.gearRatio,
    ratedRotorSpeed: ratings.rotorSpeed,
    ratedGeneratorSpeed,
    ratedPower: ratings.power,
    generatorEfficiency: generator.efficiency,
    // P = η Q ω
    ratedTorque: ratings.power / (generator.efficiency * ratedGeneratorSpeed),
    finePitch: ratings.finePitch,
    featherPitch: pitchDrive.feather,
    pitchRateLimit: pitchDrive.rateLimit,
    cutInWind: ratings.cutInWind,
    cutOutWind: ratings.cutOutWind,
  };
}

/** Stands in where the turbine's file cannot be read: comparisons with NaN never accuse another file. */
export const UNKNOWN_MACHINE: Machine = {
  bladeCount: Number.NaN,
  gearRatio: Number.NaN,
  ratedRotorSpeed: Number.NaN,
  ratedGeneratorSpeed: Number.NaN,
  ratedPower: Number.NaN,
  generatorEfficiency: Number.NaN,
  ratedTorque: Number.NaN,
  finePitch: Number.NaN,
  featherPitch: Number.NaN,
  pitchRateLimit: Number.NaN,
  cutInWind: Number.NaN,
  cutOutWind: Number.NaN,
};
