import { Drivetrain } from './drivetrain.ts';
import { Layout } from './layout.ts';
import type { SteadyState } from './plant.ts';
import { findRoot } from './root.ts';
import type { Rotor } from './rotor.ts';
import type { Turbine } from './turbine.ts';

/** The steady operating point at a wind speed. */
export interface TrimPoint extends SteadyState {
  /** m/s */
  windSpeed: number;
  /** `partial`: below rated power with the blades at fine pitch. `rated`: rated speed and power, blades turned. */
  region: 'partial' | 'rated';
  generatorSpeed: number;
  tipSpeedRatio: number;
  powerCoefficient: number;
  thrustCoefficient: number;
  /** Electrical, W. */
  power: number;
  aerodynamicTorque: number;
}

/** The rotor at its best: fine pitch, the tip-speed ratio of highest power coefficient. */
export interface BestPoint {
  tipSpeedRatio: number;
  powerCoefficient: number;
  /** k of the torque law Q = k ω² on the high-speed shaft that holds the rotor there, N m s²; losses are paid first. */
  optimalGain: number;
}

const SCAN = 200;
const SPEED_TOLERANCE = 1e-10;
const PITCH_TOLERANCE = 1e-10;

/** Steady operation of `turbine` with `rotor`: aerodynamic torque against losses and generator. */
export class Trim {
  private readonly turbine: Turbine;
  private readonly rotor: Rotor;
  private readonly drivetrain: Drivetrain;
  private readonly ratedTorque: number;
  private readonly loads = { torque: 0, thrust: 0 };

  constructor(turbine: Turbine, rotor: Rotor) {
    this.turbine = turbine;
    this.rotor = rotor;
    this.drivetrain = new Drivetrain(turbine.drivetrain, new Layout());
    const { power, rotorSpeed } = turbine.ratings;
    this.ratedTorque = power / (turbine.generator.efficiency * rotorSpeed * turbine.drivetrain.gearRatio);
  }

  /**
   * The trim point at `windSpeed` (m/s).
   * @param torqueCurve generator torque (N m) that the control law settles on at a generator speed (rad/s); without it
   *   the rotor is taken to follow its best tip-speed ratio between its lowest and its rated speed
   * @throws Error where no pitch angle holds rated power, or no speed balances the torque curve
   */
  at(windSpeed: number, torqueCurve?: (generatorSpeed: number) => number): TrimPoint {
    const { rotorSpeed, finePitch } = this.turbine.ratings;
    if (this.generatorTorque(windSpeed, rotorSpeed, finePitch) >= this.ratedTorque) {
      return this.point(windSpeed, rotorSpeed, this.ratedPitch(windSpeed), 'rated');
    }
    const speed = torqueCurve ? this.speedOnCurve(windSpeed, torqueCurve) : this.bestSpeed(windSpeed);
    return this.point(windSpeed, speed, finePitch, 'partial');
  }

  /** Standing still with the blades at feather. */
  parked(windSpeed: number): SteadyState {
    const pitch = this.turbine.pitchDrive.feather;
    this.rotor.steadyLoads(windSpeed, 0, pitch, this.loads);
    return { rotorSpeed: 0, pitch, generatorTorque: 0, shaftTorque: 0, thrust: this.loads.thrust };
  }

  /** The rotor's best point, found on its steady loads at rated speed. */
  best(): BestPoint {
    const { rotorSpeed, finePitch } = this.turbine.ratings;
    const { radius } = this.turbine.rotor;
    const tipSpeed = rotorSpeed * radius;
    const power = (tipSpeedRatio: number) =>
      this.coefficients(tipSpeed / tipSpeedRatio, rotorSpeed, finePitch).powerCoefficient;
    const tipSpeedRatio = highest(power, 3, 15);
    const windSpeed = tipSpeed / tipSpeedRatio;
    const generatorSpeed = rotorSpeed * this.turbine.drivetrain.gearRatio;
    return {
      tipSpeedRatio,
      powerCoefficient: power(tipSpeedRatio),
      optimalGain: this.generatorTorque(windSpeed, rotorSpeed, finePitch) / generatorSpeed ** 2,
    };
  }

  private coefficients(windSpeed: number, rotorSpeed: number, pitch: number) {
    const { radius } = this.turbine.rotor;
    this.rotor.steadyLoads(windSpeed, rotorSpeed, pitch, this.loads);
    const pressure = 0.5 * this.turbine.airDensity * Math.PI * radius * radius * windSpeed * windSpeed;
    return {
      powerCoefficient: (this.loads.torque * rotorSpeed) / (pressure * windSpeed),
      thrustCoefficient: this.loads.thrust / pressure,
    };
  }

  /** Torque left for the generator after bearings and gearbox, N m on the high-speed shaft. */
  private generatorTorque(windSpeed: number, rotorSpeed: number, pitch: number): number {
    this.rotor.steadyLoads(windSpeed, rotorSpeed, pitch, this.loads);
    return this.drivetrain.throughGearbox(this.loads.torque - this.drivetrain.lossTorque(rotorSpeed));
  }

  /** The largest pitch that still gives rated torque at rated speed: on that side torque falls with pitch. */
  private ratedPitch(windSpeed: number): number {
    const { ratings, pitchDrive } = this.turbine;
    const spare = (pitch: number) => this.generatorTorque(windSpeed, ratings.rotorSpeed, pitch) - this.ratedTorque;
    const step = (pitchDrive.feather - ratings.finePitch) / SCAN;
    let pitch = pitchDrive.feather;
    while (pitch > ratings.finePitch && spare(pitch) < 0) pitch -= step;
    const from = Math.max(pitch, ratings.finePitch);
    if (spare(from + step) >= 0) throw new Error(`no pitch angle lowers the power to rated at ${windSpeed} m/s`);
    return findRoot(spare, from, from + step, PITCH_TOLERANCE);
  }

  private bestSpeed(windSpeed: number): number {
    const { minimumSpeed, rotorSpeed } = this.turbine.ratings;
    const speed = (this.best().tipSpeedRatio * windSpeed) / this.turbine.rotor.radius;
    return Math.min(Math.max(speed, minimumSpeed), rotorSpeed);
  }

  /** The highest speed at which the curve takes what the rotor gives. */
  private speedOnCurve(windSpeed: number, torqueCurve: (generatorSpeed: number) => number): number {
    const { rotorSpeed, finePitch } = this.turbine.ratings;
    const { gearRatio } = this.turbine.drivetrain;
    const spare = (speed: number) => this.generatorTorque(windSpeed, speed, finePitch) - torqueCurve(speed * gearRatio);
    let speed = rotorSpeed;
    const step = rotorSpeed / SCAN;
    while (speed > 0 && spare(speed) < 0) speed -= step;
    if (speed <= 0) throw new Error(`at ${windSpeed} m/s the rotor cannot turn its generator at any speed`);
    if (speed === rotorSpeed) return rotorSpeed;
    return findRoot(spare, speed, speed + step, SPEED_TOLERANCE);
  }

  private point(windSpeed: number, rotorSpeed: number, pitch: number, region: TrimPoint['region']): TrimPoint {
    const { turbine } = this;
    const generatorSpeed = rotorSpeed * turbine.drivetrain.gearRatio;
    const generatorTorque = this.generatorTorque(windSpeed, rotorSpeed, pitch);
    const coefficients = this.coefficients(windSpeed, rotorSpeed, pitch);
    const { torque, thrust } = this.loads;
    if (generatorTorque < 0) throw new Error(`at ${windSpeed} m/s the wind does not carry the drivetrain's losses`);
    return {
      windSpeed,
      region,
      rotorSpeed,
      generatorSpeed,
      pitch,
      generatorTorque,
      shaftTorque: torque - this.drivetrain.lossTorque(rotorSpeed),
      aerodynamicTorque: torque,
      thrust,
      tipSpeedRatio: (rotorSpeed * turbine.rotor.radius) / windSpeed,
      ...coefficients,
      power: generatorTorque * generatorSpeed * turbine.generator.efficiency,
    };
  }
}

/** The place of the highest value of `f` in [from, to]: a scan, then golden sections around its best. */
function highest(f: (at: number) => number, from: number, to: number): number {
  const step = (to - from) / SCAN;
  let best = from;
  for (let i = 1; i <= SCAN; i++) if (f(from + i * step) > f(best)) best = from + i * step;
  let low = best - step;
  let high = best + step;
  const golden = (Math.sqrt(5) - 1) / 2;
  while (high - low > 1e-8) {
    const left = high - golden * (high - low);
    const right = low + golden * (high - low);
    if (f(left) >= f(right)) high = right;
    else low = left;
  }
  return 0.5 * (low + high);
}
