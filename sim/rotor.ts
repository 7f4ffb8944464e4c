/**
 * What the plant asks of a rotor.
 *
 * To write a new rotor: name the continuous states it keeps, and fill `loads` (and the states' derivatives) from the
 * wind, the shaft and the blades. Keep parameters only, never memory; allocate nothing in `loads` and `follow`. A rotor
 * without states of its own takes `follow` and `storedEnergy` from `RIGID_BLADES`.
 */
import type { WindField } from './wind/wind.ts';

/** How the machine carries its rotor at an instant. */
export interface RotorMotion {
  /** Azimuth of blade 1, rad, and rotor speed, rad/s. */
  azimuth: number;
  speed: number;
  /** Tower-top velocity downwind and to the left (looking downwind), m/s. */
  foreAft: number;
  sideSide: number;
  /** Where the nacelle heads, rad from the wind field's x axis, positive towards +y. */
  heading: number;
}

export function stillMotion(): RotorMotion {
  return { azimuth: 0, speed: 0, foreAft: 0, sideSide: 0, heading: 0 };
}

/** Accelerations of what carries the rotor. */
export interface RotorCarrier {
  /** Of the tower top, m/s². */
  foreAft: number;
  sideSide: number;
  /** Of the shaft, rad/s². */
  speed: number;
}

export interface RotorLoads {
  /** Of the air about the rotor axis, positive in the direction of turning, N m. */
  torque: number;
  /** Of the air on the tower top, downwind and to the left, N. */
  thrust: number;
  sideForce: number;
  /** Of the air about the tower top's axes to the left and upwards, N m. */
  tiltMoment: number;
  yawMoment: number;
  /** Bending moment at each blade's root, downwind and in the direction of turning, N m; NaN where blades are not resolved. */
  readonly flapMoment: Float64Array;
  readonly edgeMoment: Float64Array;
  /** Power of the air on the bending of the blades, and what their damping turns into heat, W. */
  bendingPower: number;
  lostPower: number;
  /** What bending blades do to the shaft: a torque, N m, and a change of the rotor's inertia, kg m². */
  inertialTorque: number;
  inertiaChange: number;
  /** What they do to the tower top: a force downwind, N, while it does not accelerate, and a change of its mass, kg. */
  inertialThrust: number;
  massChange: number;
}

export function emptyLoads(bladeCount: number): RotorLoads {
  return {
    torque: 0,
    thrust: 0,
    sideForce: 0,
    tiltMoment: 0,
    yawMoment: 0,
    flapMoment: new Float64Array(bladeCount).fill(Number.NaN),
    edgeMoment: new Float64Array(bladeCount).fill(Number.NaN),
    bendingPower: 0,
    lostPower: 0,
    inertialTorque: 0,
    inertiaChange: 0,
    inertialThrust: 0,
    massChange: 0,
  };
}

export interface Rotor {
  /** A name for each state, and its typical size for absolute tolerances. */
  readonly stateNames: readonly string[];
  readonly stateScales: readonly number[];
  /** Whether it gives the root moments of single blades. */
  readonly resolvesBlades: boolean;
  /**
   * Loads at time `t` (s), and the derivatives of the rotor's own states as far as they go without the accelerations
   * of tower and shaft.
   * @param x the whole state: the rotor's own from `stateAt`, blade pitch angles (rad) at `pitchAt[0..B-1]`
   * @param dx the whole derivative: only the rotor's own part is written
   */
  loads(
    t: number,
    wind: WindField,
    motion: RotorMotion,
    x: ArrayLike<number>,
    stateAt: number,
    pitchAt: ArrayLike<number>,
    dx: { [i: number]: number },
    out: RotorLoads,
  ): void;
  /** Right after `loads` and with the same arguments: adds what the accelerations of tower and shaft do to blades. */
  follow(
    carrier: RotorCarrier,
    motion: RotorMotion,
    x: ArrayLike<number>,
    stateAt: number,
    dx: { [i: number]: number },
    out: RotorLoads,
  ): void;
  /** Energy of the blades' own motion, J: what the rotor's inertia and the tower's mass do not already hold. */
  storedEnergy(motion: RotorMotion, x: ArrayLike<number>, stateAt: number): number;
  /**
   * Torque and thrust on which the rotor settles in uniform wind along its axis: what trim and initial states are found
   * from.
   * @param windSpeed m/s, `rotorSpeed` rad/s, collective `pitch` rad
   */
  steadyLoads(windSpeed: number, rotorSpeed: number, pitch: number, out: Pick<RotorLoads, 'torque' | 'thrust'>): void;
}

/** The motion of blades that do not bend. */
export const RIGID_BLADES: Pick<Rotor, 'stateNames' | 'stateScales' | 'follow' | 'storedEnergy'> = {
  stateNames: [],
  stateScales: [],
  follow: () => {},
  storedEnergy: () => 0,
};
