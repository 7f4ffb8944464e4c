import type { LoadSlopes } from '../sim/aerodynamics/coefficient-surface.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import type { SpeedLoop } from './gains-by-formula.ts';

/** What a formula may take into account beyond inertia and the slope of power with pitch. */
export interface FormulaTerms {
  /** The rotor's torque falls with speed. */
  aerodynamicDamping: boolean;
  /** The generator's torque falls with speed where it keeps its power. */
  constantPower: boolean;
  /** Lag of drive, filters, sensors and sampling, s; 0 leaves it out. */
  lag: number;
}

/** The speed loop at a trim point, for `gainsByFormula`. The gearbox's loss makes the generator heavier on the rotor's side. */
export function speedLoop(turbine: Turbine, point: TrimPoint, slopes: LoadSlopes, terms: FormulaTerms): SpeedLoop {
  const { rotorInertia, generatorInertia, gearRatio, gearEfficiency, viscousLoss } = turbine.drivetrain;
  const referred = gearRatio ** 2 / gearEfficiency;
  // Q_g = P/ω_g: ∂Q_g/∂ω_g = −Q_g/ω_g.
  const constantPower = terms.constantPower ? (-referred * point.generatorTorque) / point.generatorSpeed : 0;
  return {
    inertia: rotorInertia + referred * generatorInertia,
    rotorSpeed: point.rotorSpeed,
    gearRatio,
    powerPerPitch: slopes.torquePerPitch * point.rotorSpeed,
    torquePerRotorSpeed: terms.aerodynamicDamping ? slopes.torquePerRotorSpeed : 0,
    loadPerRotorSpeed: constantPower + (terms.aerodynamicDamping ? viscousLoss : 0),
    lag: terms.lag,
  };
}

/**
 * Lags between speed and pitch added up, s: sensor, the law's low-pass, half a sample of holding, transport delay, and
 * 2ζ/ω of the drive.
 * @param filterFrequency corner of the law's low-pass, Hz; absent for none
 */
export function lagOf(turbine: Turbine, sampleTime: number, filterFrequency?: number): number {
  const { naturalFrequency, dampingRatio, delay } = turbine.pitchDrive;
  const filter = filterFrequency === undefined ? 0 : 1 / (2 * Math.PI * filterFrequency);
  const drive = dampingRatio / (Math.PI * naturalFrequency);
  return turbine.sensors.controlSpeed.timeConstant + filter + 0.5 * sampleTime + delay + drive;
}
