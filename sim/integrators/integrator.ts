/**
 * What the clock asks of an integrator.
 *
 * To write a new one: a function that takes the derivative and returns an `Integrator`. It must carry nothing from
 * one `advance` to the next, or forked runs would not repeat the unbroken run bit for bit.
 */

/** Writes dx/dt at time `t` (s) to `dx`. */
export type Derivative = (t: number, x: ArrayLike<number>, dx: { [i: number]: number }) => void;

export interface Integrator {
  readonly name: string;
  /** Relative tolerance, or null for a fixed step. */
  readonly relativeTolerance: number | null;
  /** Derivative evaluations so far. */
  readonly evaluations: number;
  /** Moves `x` in place from `from` to `to` (s). Throws where it cannot. */
  advance(from: number, to: number, x: Float64Array): void;
}
