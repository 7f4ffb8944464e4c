import type { Layout } from './layout.ts';
import type { TowerData } from './turbine.ts';

/** One bending mode of the tower: m q̈ + c q̇ + k q = force. */
export class TowerMode {
  readonly mass: number;
  /** N/m and N s/m */
  readonly stiffness: number;
  readonly damping: number;
  /** Deflection (m) in slot `at`, velocity (m/s) in the next. */
  readonly at: number;

  constructor(name: string, data: Pick<TowerData, 'modalMass' | 'frequency' | 'dampingRatio'>, layout: Layout) {
    const omega = 2 * Math.PI * data.frequency;
    this.mass = data.modalMass;
    this.stiffness = data.modalMass * omega * omega;
    this.damping = 2 * data.dampingRatio * data.modalMass * omega;
    this.at = layout.place(name, ['deflection', 'velocity']);
  }

  /** Acceleration, m/s², under `force` (N), with `extraMass` (kg) that moves along. */
  acceleration(force: number, extraMass: number, x: ArrayLike<number>): number {
    return (force - this.restoringForce(x)) / (this.mass + extraMass);
  }

  /** Force that the tower's root feels, N. */
  restoringForce(x: ArrayLike<number>): number {
    return this.damping * x[this.at + 1] + this.stiffness * x[this.at];
  }

  /** Power that the damping turns into heat, W. */
  lostPower(x: ArrayLike<number>): number {
    return this.damping * x[this.at + 1] * x[this.at + 1];
  }

  /** Kinetic and elastic energy, J. */
  energy(x: ArrayLike<number>): number {
    return 0.5 * this.mass * x[this.at + 1] ** 2 + 0.5 * this.stiffness * x[this.at] ** 2;
  }
}

/** How much a cantilever's top tilts per metre that a force there deflects it, rad/m: 3/(2H). */
export function topSlope(hubHeight: number): number {
  return 3 / (2 * hubHeight);
}
