import type { Layout } from './layout.ts';
import type { DrivetrainData } from './turbine.ts';

/** Speed scale over which the bearings' constant friction changes its sign, rad/s. */
const FRICTION_SPEED = 0.02;

/** What turns and holds the shafts at an instant: inputs, and the results of `Drivetrain.balance`. */
export interface ShaftTorques {
  /** Inputs, N m: aerodynamic (low-speed), generator (high-speed), brake on either shaft. */
  aerodynamic: number;
  generator: number;
  brakeLow: number;
  brakeHigh: number;
  /** What bending blades add to the rotor's inertia, kg m². */
  inertiaChange: number;
  /** Results: torque in the low-speed shaft and what the gearbox passes on to the high-speed shaft, N m. */
  shaft: number;
  geared: number;
  /** Bearing and windage torque on the low-speed shaft, N m. */
  loss: number;
  /** rad/s² */
  rotorAcceleration: number;
  generatorAcceleration: number;
}

/** Nothing turns, nothing holds. */
export function idleTorques(): ShaftTorques {
  return {
    aerodynamic: 0,
    generator: 0,
    brakeLow: 0,
    brakeHigh: 0,
    inertiaChange: 0,
    shaft: 0,
    geared: 0,
    loss: 0,
    rotorAcceleration: 0,
    generatorAcceleration: 0,
  };
}

/**
 * Two inertias on a torsional spring, with gearbox and bearing losses:
 * J_r ω̇_r = Q_a − Q_s − Q_loss − Q_b,low;  J_g ω̇_g = η Q_s/N − Q_g − Q_b,high;  γ̇ = ω_r − ω_g/N;
 * Q_s = K γ + D γ̇. The rigid kind keeps ω_g = N ω_r and has no spring.
 */
export class Drivetrain {
  readonly data: DrivetrainData;
  /** Azimuth (rad), rotor speed, generator speed (rad/s), shaft twist (rad, low-speed side). */
  readonly at: number;

  constructor(data: DrivetrainData, layout: Layout) {
    this.data = data;
    this.at = layout.place('drivetrain', ['azimuth', 'rotor speed', 'generator speed', 'shaft twist']);
  }

  /** Friction of bearings and windage at `rotorSpeed` (rad/s), N m on the low-speed shaft. */
  lossTorque(rotorSpeed: number): number {
    return this.data.constantLoss * Math.tanh(rotorSpeed / FRICTION_SPEED) + this.data.viscousLoss * rotorSpeed;
  }

  /** Low-speed torque to high-speed torque; the gearbox takes its share whichever way power flows. */
  throughGearbox(shaft: number): number {
    const { gearRatio, gearEfficiency } = this.data;
    return shaft > 0 ? (shaft * gearEfficiency) / gearRatio : shaft / (gearRatio * gearEfficiency);
  }

  /** High-speed torque to the low-speed torque that carries it. */
  private backThroughGearbox(geared: number): number {
    const { gearRatio, gearEfficiency } = this.data;
    return geared > 0 ? (geared * gearRatio) / gearEfficiency : geared * gearRatio * gearEfficiency;
  }

  /** Fills the results of `q` from its inputs and the state. */
  balance(x: ArrayLike<number>, q: ShaftTorques): void {
    q.loss = this.lossTorque(x[this.at + 1]);
    if (this.data.kind === 'rigid') this.balanceRigid(q);
    else this.balanceTwoMasses(x, q);
  }

  private balanceTwoMasses(x: ArrayLike<number>, q: ShaftTorques): void {
    const { rotorInertia, generatorInertia, gearRatio, stiffness, damping } = this.data;
    const twistRate = x[this.at + 1] - x[this.at + 2] / gearRatio;
    q.shaft = stiffness * x[this.at + 3] + damping * twistRate;
    q.geared = this.throughGearbox(q.shaft);
    q.rotorAcceleration = (q.aerodynamic - q.shaft - q.loss - q.brakeLow) / (rotorInertia + q.inertiaChange);
    q.generatorAcceleration = (q.geared - q.generator - q.brakeHigh) / generatorInertia;
  }

  private balanceRigid(q: ShaftTorques): void {
    const { generatorInertia, gearRatio, gearEfficiency } = this.data;
    const rotorInertia = this.data.rotorInertia + q.inertiaChange;
    const drive = q.aerodynamic - q.loss - q.brakeLow;
    const load = q.generator + q.brakeHigh;
    // The gearbox's efficiency depends on the sign of the torque through it: take "driving", and turn it if wrong.
    let ratio = gearRatio / gearEfficiency;
    let acceleration = (drive - ratio * load) / (rotorInertia + ratio * gearRatio * generatorInertia);
    if (generatorInertia * gearRatio * acceleration + load < 0) {
      ratio = gearRatio * gearEfficiency;
      acceleration = (drive - ratio * load) / (rotorInertia + ratio * gearRatio * generatorInertia);
    }
    q.rotorAcceleration = acceleration;
    q.generatorAcceleration = gearRatio * acceleration;
    q.geared = generatorInertia * q.generatorAcceleration + load;
    q.shaft = ratio * q.geared;
  }

  /** Torque that would turn a shaft held by its brake, N m on that shaft; brake inputs are zero in `q`. */
  heldTorque(side: 'low-speed shaft' | 'high-speed shaft', q: ShaftTorques): number {
    if (this.data.kind === 'two masses') {
      return side === 'low-speed shaft' ? q.aerodynamic - q.loss - q.shaft : q.geared - q.generator;
    }
    return side === 'low-speed shaft'
      ? q.aerodynamic - q.loss - this.backThroughGearbox(q.generator)
      : this.throughGearbox(q.aerodynamic - q.loss) - q.generator;
  }

  /** Stops the acceleration of the shaft that its brake holds; a rigid train stands still as a whole. */
  hold(side: 'low-speed shaft' | 'high-speed shaft', q: ShaftTorques): void {
    const rigid = this.data.kind === 'rigid';
    if (rigid || side === 'low-speed shaft') q.rotorAcceleration = 0;
    if (rigid || side === 'high-speed shaft') q.generatorAcceleration = 0;
    if (!rigid) return;
    q.geared = q.generator + q.brakeHigh;
    q.shaft = q.aerodynamic - q.loss - q.brakeLow;
  }

  /** Power lost in bearings, gearbox and the shaft's own damping, W. */
  lostPower(x: ArrayLike<number>, q: ShaftTorques): number {
    const { kind, gearRatio, damping } = this.data;
    const atGearbox = x[this.at + 2] / gearRatio;
    const bearings = q.loss * x[this.at + 1];
    const gearbox = q.shaft * atGearbox - q.geared * x[this.at + 2];
    const twistRate = x[this.at + 1] - atGearbox;
    return bearings + gearbox + (kind === 'rigid' ? 0 : damping * twistRate * twistRate);
  }

  /** Kinetic energy of both shafts and elastic energy of the spring, J. */
  energy(x: ArrayLike<number>): number {
    const { kind, rotorInertia, generatorInertia, stiffness } = this.data;
    const kinetic = 0.5 * rotorInertia * x[this.at + 1] ** 2 + 0.5 * generatorInertia * x[this.at + 2] ** 2;
    return kinetic + (kind === 'rigid' ? 0 : 0.5 * stiffness * x[this.at + 3] ** 2);
  }

  /** Torsional frequency of the two masses free at both ends, Hz: √(K (1/J_r + 1/(N² J_g)))/2π. */
  freeFreeFrequency(): number {
    const { rotorInertia, generatorInertia, gearRatio, stiffness } = this.data;
    return Math.sqrt(stiffness * (1 / rotorInertia + 1 / (gearRatio ** 2 * generatorInertia))) / (2 * Math.PI);
  }
}
