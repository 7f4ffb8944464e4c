/** Signals of a healthy machine at rated operation, for tests of control laws, supervisor and safety chain. */
import type { Demands, Machine, Measured, Orders, ProtectionSignals } from '../../controllers/contract.ts';

export const RPM = Math.PI / 30;
export const DEGREE = Math.PI / 180;

export const MACHINE: Machine = {
  bladeCount: 3,
  gearRatio: 100,
  ratedRotorSpeed: 12 * RPM,
  ratedGeneratorSpeed: 1200 * RPM,
  ratedPower: 3.6e6,
  generatorEfficiency: 0.95,
  ratedTorque: 3.6e6 / (0.95 * 1200 * RPM),
  finePitch: 0,
  featherPitch: 88 * DEGREE,
  pitchRateLimit: 8 * DEGREE,
  cutInWind: 3.5,
  cutOutWind: 25,
};

export function measured(changes: Partial<Measured> = {}): Measured {
  return {
    generatorSpeed: 1200 * RPM,
    rotorSpeed: 12 * RPM,
    rotorAzimuth: 0,
    pitch: new Float64Array(3).fill(10 * DEGREE),
    windSpeed: 14,
    windDirection: 0,
    towerAccelerationForeAft: 0,
    towerAccelerationSideSide: 0,
    flapMoment: new Float64Array(3),
    electricalPower: 3.6e6,
    gridConnected: true,
    safetyChainActive: false,
    state: 2,
    speedSetpoint: 1200 * RPM,
    powerSetpoint: 3.6e6,
    ...changes,
  };
}

export function signals(changes: Partial<ProtectionSignals> = {}): ProtectionSignals {
  return {
    rotorSpeed: 12 * RPM,
    generatorSpeed: 1200 * RPM,
    electricalPower: 3.6e6,
    pitch: new Float64Array(3).fill(10 * DEGREE),
    pitchDemand: new Float64Array(3).fill(10 * DEGREE),
    gridConnected: true,
    buttonPressed: false,
    towerAccelerationForeAft: 0,
    ...changes,
  };
}

export function demands(): Demands {
  return { pitch: new Float64Array(3), pitchAs: 'angle', generator: 0, generatorAs: 'torque', brake: false };
}

export function orders(): Orders {
  return { active: false, state: 0, pitch: new Float64Array(3).fill(Number.NaN), torqueFraction: 1, brake: false };
}
