import type { Layout } from './layout.ts';
import type { TowerData } from './turbine.ts';

/** The tower's first fore-aft mode: m q̈ + c q̇ + k q = thrust. */
export class Tower {
  readonly mass: number;
  /** N/m and N s/m */
  readonly stiffness: number;
  readonly damping: number;
  /** Deflection (m) in slot `at`, velocity (m/s) in the next. */
  readonly at: number;

  constructor(data: TowerData, layout: Layout) {
    const omega = 2 * Math.PI * data.frequency;
    this.mass = data.modalMass;
    this.stiffness = data.modalMass * omega * omega;
    this.damping = 2 * data.dampingRatio * data.modalMass * omega;
    this.at = layout.place('tower', ['deflection', 'velocity']);
  }

  /** Acceleration, m/s², under `thrust` (N). */
  acceleration(thrust: number, x: ArrayLike<number>): number {
    return (thrust - this.restoringForce(x)) / this.mass;
  }

  /** Force that the tower's root feels, N. */
  restoringForce(x: ArrayLike<number>): number {
    return this.damping * x[this.at + 1] + this.stiffness * x[this.at];
  }

  /** Kinetic and elastic energy, J. */
  energy(x: ArrayLike<number>): number {
    return 0.5 * this.mass * x[this.at + 1] ** 2 + 0.5 * this.stiffness * x[this.at] ** 2;
  }
}
