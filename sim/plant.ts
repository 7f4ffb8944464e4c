import { Brake } from './brake.ts';
import { Drivetrain, idleTorques, type ShaftTorques } from './drivetrain.ts';
import { Generator } from './generator.ts';
import { Layout } from './layout.ts';
import { PitchDrives } from './pitch-drive.ts';
import { emptyLoads, type Rotor, type RotorCarrier, type RotorLoads, type RotorMotion, stillMotion } from './rotor.ts';
import { TowerMode, topSlope } from './tower.ts';
import type { Turbine } from './turbine.ts';
import type { WindField } from './wind/wind.ts';
import { fromOpposite, Yaw } from './yaw.ts';

/** A steady state from which the plant can start. */
export interface SteadyState {
  /** rad/s */
  rotorSpeed: number;
  /** rad */
  pitch: number;
  /** Generator torque, high-speed shaft, and torque in the low-speed shaft, N m. */
  generatorTorque: number;
  shaftTorque: number;
  /** N */
  thrust: number;
  /** Mean force to the left, N; 0 when absent. */
  sideForce?: number;
  /** The rotor's own states; at rest without motion of the air when absent. */
  rotorStates?: Float64Array;
  /** How far the wind comes off the nacelle's axis, rad, positive towards +y; 0 when absent. */
  yawError?: number;
}

/** Running totals of the energy account, J, in this order from `Plant.accountAt`. */
const ACCOUNT = ['work of the wind', 'work into the generator', 'heat in the brake', 'other losses'] as const;

/**
 * The machine without its control: parts in one continuous state vector, held inputs and modes in one memory.
 * Parts keep parameters only; the fields below that change are scratch, recomputed by each `derivative`.
 */
export class Plant {
  readonly turbine: Turbine;
  readonly layout = new Layout();
  readonly memoryLayout = new Layout();
  readonly drivetrain: Drivetrain;
  readonly tower: TowerMode;
  /** Absent for a tower that does not move sideways. */
  readonly towerSideways: TowerMode | undefined;
  readonly yaw: Yaw;
  readonly pitch: PitchDrives;
  readonly generator: Generator;
  readonly brake: Brake;
  readonly wind: WindField;
  readonly rotorAt: number;
  readonly accountAt: number;
  /** Results of the last `derivative`. */
  readonly loads: RotorLoads;
  readonly motion: RotorMotion = stillMotion();
  readonly accelerations: RotorCarrier = { foreAft: 0, sideSide: 0, speed: 0 };
  readonly torques: ShaftTorques = idleTorques();
  brakeTorque = 0;
  /** Of the wind from the nacelle's axis, rad. */
  yawError = 0;
  readonly rotor: Rotor;
  private readonly hubWind = new Float64Array(3);
  private readonly topSlope: number;
  private readonly pitchAt: Int32Array;
  private readonly brakeOnLowSpeedShaft: boolean;
  private readonly windKeepsItsAxis: boolean;

  /** @param tick s between the instants at which demands change */
  constructor(turbine: Turbine, rotor: Rotor, wind: WindField, tick: number) {
    this.turbine = turbine;
    this.rotor = rotor;
    this.wind = wind;
    const { layout, memoryLayout } = this;
    const { bladeCount } = turbine.rotor;
    const ratedGeneratorSpeed = turbine.ratings.rotorSpeed * turbine.drivetrain.gearRatio;
    this.drivetrain = new Drivetrain(turbine.drivetrain, layout);
    this.tower = new TowerMode('tower', turbine.tower, layout);
    const { sideSide } = turbine.tower;
    this.towerSideways = sideSide ? new TowerMode('tower sideways', sideSide, layout) : undefined;
    this.pitch = new PitchDrives(turbine.pitchDrive, bladeCount, tick, layout, memoryLayout);
    this.generator = new Generator(turbine.generator, ratedGeneratorSpeed, layout, memoryLayout);
    this.brake = new Brake(turbine.brake, layout, memoryLayout);
    this.yaw = new Yaw(turbine.yawDrive, layout, memoryLayout);
    this.rotorAt = layout.place('rotor', rotor.stateNames);
    this.accountAt = layout.place('account', ACCOUNT);
    this.pitchAt = Int32Array.from({ length: bladeCount }, (_, b) => this.pitch.angleAt + b);
    this.windKeepsItsAxis = wind.uniform === true && wind.direction === undefined;
    this.brakeOnLowSpeedShaft = turbine.brake.side === 'low-speed shaft';
    this.loads = emptyLoads(bladeCount);
    this.topSlope = topSlope(turbine.rotor.hubHeight);
  }

  /** Fore-aft, m/s². */
  get towerAcceleration(): number {
    return this.accelerations.foreAft;
  }

  /** Fills state and memory for a steady start. */
  start(state: SteadyState, brakeApplied: boolean, x: Float64Array, memory: Float64Array): void {
    const { gearRatio, stiffness, kind } = this.turbine.drivetrain;
    const d = this.drivetrain.at;
    x[d + 1] = state.rotorSpeed;
    x[d + 2] = state.rotorSpeed * gearRatio;
    x[d + 3] = kind === 'rigid' ? 0 : state.shaftTorque / stiffness;
    x[this.tower.at] = state.thrust / this.tower.stiffness;
    const sideways = this.towerSideways;
    const { yawError = 0, sideForce = 0, rotorStates } = state;
    const rollMoment = state.shaftTorque + this.drivetrain.lossTorque(state.rotorSpeed);
    if (sideways) x[sideways.at] = (sideForce - this.topSlope * rollMoment) / sideways.stiffness;
    const direction = this.wind.direction?.(0) ?? 0;
    this.yaw.start(direction - yawError, direction, x);
    if (rotorStates) x.set(rotorStates, this.rotorAt);
    x.fill(state.pitch, this.pitch.angleAt, this.pitch.angleAt + this.turbine.rotor.bladeCount);
    x[this.generator.at] = state.generatorTorque;
    x[this.brake.at] = this.turbine.brake.ambient;
    this.pitch.start(state.pitch, memory);
    this.generator.setGrid(true, memory);
    this.generator.demand(state.generatorTorque, memory);
    this.brake.start(brakeApplied, memory);
  }

  /** Typical size of each state, for absolute tolerances. */
  scales(): number[] {
    const { ratings, drivetrain, generator } = this.turbine;
    const scale = new Array<number>(this.layout.size).fill(1);
    const d = this.drivetrain.at;
    scale[d + 1] = ratings.rotorSpeed;
    scale[d + 2] = ratings.rotorSpeed * drivetrain.gearRatio;
    scale[d + 3] = 0.01;
    scale[this.tower.at] = 0.1;
    scale[this.tower.at + 1] = 0.1;
    if (this.towerSideways) scale.fill(0.1, this.towerSideways.at, this.towerSideways.at + 2);
    scale.fill(0.1, this.yaw.at, this.yaw.at + 2);
    for (let i = 0; i < this.rotor.stateScales.length; i++) scale[this.rotorAt + i] = this.rotor.stateScales[i];
    scale.fill(0.1, this.pitch.angleAt, this.pitch.rateAt + this.turbine.rotor.bladeCount);
    scale[this.generator.at] = generator.maximumTorque;
    scale[this.brake.at] = 300;
    scale.fill(ratings.power, this.accountAt, this.accountAt + ACCOUNT.length);
    return scale;
  }

  /** Writes dx/dt at time `t` (s) with the held inputs of `memory`. */
  derivative(t: number, x: ArrayLike<number>, memory: Float64Array, dx: { [i: number]: number }): void {
    const q = this.torques;
    const d = this.drivetrain.at;
    const rotorSpeed = x[d + 1];
    const generatorSpeed = x[d + 2];
    const { motion, accelerations, loads, tower, towerSideways } = this;
    motion.azimuth = x[d];
    motion.speed = rotorSpeed;
    motion.foreAft = x[tower.at + 1];
    motion.sideSide = towerSideways ? x[towerSideways.at + 1] : 0;
    motion.heading = x[this.yaw.at];

    this.rotor.loads(t, this.wind, motion, x, this.rotorAt, this.pitchAt, dx, loads);
    q.aerodynamic = loads.torque + loads.inertialTorque;
    q.inertiaChange = loads.inertiaChange;
    q.generator = x[this.generator.at];
    this.balanceShafts(t, x, memory);
    accelerations.speed = q.rotorAcceleration;
    accelerations.foreAft = tower.acceleration(loads.thrust + loads.inertialThrust, loads.massChange, x);
    const rollMoment = this.rollMoment();
    const sideForce = loads.sideForce - this.topSlope * rollMoment;
    accelerations.sideSide = towerSideways ? towerSideways.acceleration(sideForce, 0, x) : 0;
    this.rotor.follow(accelerations, motion, x, this.rotorAt, dx, loads);

    dx[d] = rotorSpeed;
    dx[d + 1] = q.rotorAcceleration;
    dx[d + 2] = q.generatorAcceleration;
    dx[d + 3] =
      this.turbine.drivetrain.kind === 'rigid' ? 0 : rotorSpeed - generatorSpeed / this.turbine.drivetrain.gearRatio;
    dx[tower.at] = motion.foreAft;
    dx[tower.at + 1] = accelerations.foreAft;
    if (towerSideways) {
      dx[towerSideways.at] = motion.sideSide;
      dx[towerSideways.at + 1] = accelerations.sideSide;
    }
    this.yawError = fromOpposite(this.windDirection(t) - motion.heading);
    dx[this.yaw.at] = this.yaw.rate(memory);
    dx[this.yaw.at + 1] = this.yaw.directionRate(this.yawError, x);
    for (let b = 0; b < this.pitchAt.length; b++) {
      dx[this.pitch.angleAt + b] = x[this.pitch.rateAt + b];
      dx[this.pitch.rateAt + b] = this.pitch.acceleration(b, x, memory);
    }
    dx[this.generator.at] = this.generator.torqueRate(generatorSpeed, x, memory);

    const brakePower = this.brakeTorque * (this.brakeOnLowSpeedShaft ? rotorSpeed : generatorSpeed);
    dx[this.brake.at] = this.brake.heatingRate(brakePower, x);
    const a = this.accountAt;
    // The shafts' speeds are counted from the nacelle, whose slow roll with the sway they do not feel: the work of the
    // drivetrain's reaction on the sway is booked with the wind's.
    dx[a] =
      loads.torque * rotorSpeed + loads.thrust * motion.foreAft + sideForce * motion.sideSide + loads.bendingPower;
    dx[a + 1] = q.generator * generatorSpeed;
    dx[a + 2] = brakePower;
    dx[a + 3] =
      this.drivetrain.lostPower(x, q) +
      tower.lostPower(x) +
      (towerSideways ? towerSideways.lostPower(x) : 0) +
      loads.lostPower;
  }

  /** Torque that shafts and generator leave to the nacelle about the rotor's axis, N m: the air's less what spins up. */
  private rollMoment(): number {
    const q = this.torques;
    const { rotorInertia, generatorInertia } = this.turbine.drivetrain;
    const spinningUp =
      (rotorInertia + q.inertiaChange) * q.rotorAcceleration + generatorInertia * q.generatorAcceleration;
    return q.aerodynamic - spinningUp;
  }

  /** Of the wind at the hub from the field's x axis, rad. */
  private windDirection(t: number): number {
    if (this.wind.uniform && !this.wind.direction) return 0;
    if (this.windKeepsItsAxis) return 0;
    this.wind.velocity(t, 0, 0, this.hubWind);
    return Math.atan2(this.hubWind[1], this.hubWind[0]);
  }

  private balanceShafts(t: number, x: ArrayLike<number>, memory: Float64Array): void {
    const q = this.torques;
    const holding = this.brake.isHolding(memory);
    this.applyBrake(holding ? 0 : this.brake.slippingTorque(t, x, memory));
    this.drivetrain.balance(x, q);
    if (!holding) return;
    this.applyBrake(this.drivetrain.heldTorque(this.turbine.brake.side, q));
    this.drivetrain.hold(this.turbine.brake.side, q);
  }

  private applyBrake(torque: number): void {
    this.brakeTorque = torque;
    this.torques.brakeLow = this.brakeOnLowSpeedShaft ? torque : 0;
    this.torques.brakeHigh = this.brakeOnLowSpeedShaft ? 0 : torque;
  }

  /** Speed of the shaft that carries the brake, rad/s. */
  private brakedSpeed(x: ArrayLike<number>): number {
    return x[this.drivetrain.at + (this.brakeOnLowSpeedShaft ? 1 : 2)];
  }

  /** Torque that would turn the braked shaft if the brake let go, N m; after `derivative` at the same state. */
  private heldTorque(x: ArrayLike<number>, memory: Float64Array): number {
    if (this.brake.isHolding(memory)) return this.brakeTorque;
    this.applyBrake(0);
    this.drivetrain.balance(x, this.torques);
    return this.drivetrain.heldTorque(this.turbine.brake.side, this.torques);
  }

  /** Positive while the brake's present mode lasts; `derivative` has been evaluated at (t, x). */
  brakeMargin(t: number, x: ArrayLike<number>, memory: Float64Array): number {
    if (this.brake.isFree(memory)) return 1;
    return this.brake.margin(t, this.brakedSpeed(x), this.brakeTorque, x, memory);
  }

  /**
   * Puts the brake into the mode that fits the state at time `t`; with `caught`, a zero crossing of the braked speed
   * has just been found there. Returns whether the brake has come to hold.
   */
  settleBrake(t: number, caught: boolean, x: Float64Array, memory: Float64Array): boolean {
    if (caught && !this.brake.isHolding(memory)) {
      const d = this.drivetrain.at;
      const rigid = this.turbine.drivetrain.kind === 'rigid';
      if (rigid || this.brakeOnLowSpeedShaft) x[d + 1] = 0;
      if (rigid || !this.brakeOnLowSpeedShaft) x[d + 2] = 0;
    }
    return this.brake.settle(t, this.brakedSpeed(x), this.heldTorque(x, memory), x, memory);
  }

  /** Kinetic and elastic energy in shafts, tower and blades, J. */
  storedEnergy(x: ArrayLike<number>): number {
    const { motion, tower, towerSideways } = this;
    const d = this.drivetrain.at;
    motion.azimuth = x[d];
    motion.speed = x[d + 1];
    motion.foreAft = x[tower.at + 1];
    const blades = this.rotor.storedEnergy(motion, x, this.rotorAt);
    return this.drivetrain.energy(x) + tower.energy(x) + (towerSideways ? towerSideways.energy(x) : 0) + blades;
  }

  /** Work in, less work out and heat, less `stored` energy gained since the start: zero if the account closes, J. */
  energyError(x: ArrayLike<number>, storedAtStart: number): number {
    const a = this.accountAt;
    return x[a] - x[a + 1] - x[a + 2] - x[a + 3] - (this.storedEnergy(x) - storedAtStart);
  }
}
