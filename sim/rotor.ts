/**
 * What the plant asks of a rotor.
 *
 * To write a new rotor: declare how many continuous states it keeps, and fill `loads` (and the states' derivatives)
 * from the wind, the shaft and the blades. Keep parameters only, never memory; allocate nothing in `loads`.
 */
import type { WindField } from './wind/wind.ts';

export interface RotorLoads {
  /** About the rotor axis, positive in the direction of turning, N m. */
  torque: number;
  /** Downwind, N. */
  thrust: number;
}

export interface Rotor {
  readonly stateCount: number;
  /** Whether it gives the root moments of single blades. */
  readonly resolvesBlades: boolean;
  /**
   * Loads at time `t` (s).
   * @param rotorSpeed rad/s
   * @param pitch the state vector `x` holds blade pitch angles (rad) at `pitchAt[0..B-1]`
   * @param towerVelocity tower-top velocity downwind, m/s
   */
  loads(
    t: number,
    wind: WindField,
    rotorSpeed: number,
    towerVelocity: number,
    x: ArrayLike<number>,
    pitchAt: ArrayLike<number>,
    out: RotorLoads,
  ): void;
  /**
   * Loads on which the rotor settles in uniform wind: what trim and initial states are found from.
   * @param windSpeed m/s, `rotorSpeed` rad/s, collective `pitch` rad
   */
  steadyLoads(windSpeed: number, rotorSpeed: number, pitch: number, out: RotorLoads): void;
}
