import { Matrix } from 'ml-matrix';
import { matrixExponential } from './matrix-exponential.ts';

/** x⁺ = Φ x + Γ u over one interval with u held. */
export interface HeldStep {
  transition: Matrix;
  input: Matrix;
}

/**
 * ẋ = A x + B u over `interval` (s) with u held: the blocks of e^([A B; 0 0] T) (Van Loan, IEEE Trans. Automatic
 * Control 23, 1978).
 */
export function heldStep(a: Matrix, b: Matrix, interval: number): HeldStep {
  const n = a.rows;
  const block = Matrix.zeros(n + b.columns, n + b.columns);
  block.setSubMatrix(Matrix.mul(a, interval), 0, 0);
  block.setSubMatrix(Matrix.mul(b, interval), 0, n);
  const exponential = matrixExponential(block);
  return {
    transition: exponential.subMatrix(0, n - 1, 0, n - 1),
    input: exponential.subMatrix(0, n - 1, n, n + b.columns - 1),
  };
}

/** One sample of a plant whose input arrives late. */
export interface DelayedStep {
  transition: Matrix;
  /** Whole samples that an input is under way. */
  samples: number;
  /** Effect of the input that was sent `samples` ago, and of the one before it. */
  fresh: Matrix;
  stale: Matrix;
}

/**
 * ẋ = A x + B u(t − delay), u held over `sample`: x⁺ = Φ x + Γ_fresh u[k−m] + Γ_stale u[k−m−1], exactly (Åström and
 * Wittenmark, *Computer-Controlled Systems*, 3rd ed., section 2.3).
 * @param delay s, not negative
 */
export function delayedStep(a: Matrix, b: Matrix, sample: number, delay: number): DelayedStep {
  const samples = Math.floor(delay / sample + 1e-9);
  const rest = Math.max(0, delay - samples * sample);
  const whole = heldStep(a, b, sample);
  if (rest < 1e-9 * sample) {
    return { transition: whole.transition, samples, fresh: whole.input, stale: Matrix.zeros(b.rows, b.columns) };
  }
  const before = heldStep(a, b, rest);
  const after = heldStep(a, b, sample - rest);
  return {
    transition: whole.transition,
    samples,
    fresh: after.input,
    stale: after.transition.mmul(before.input),
  };
}
