import { EigenvalueDecomposition, inverse, Matrix } from 'ml-matrix';
import { type Complex, logarithm, modulus, scaled } from './complex.ts';

/** One pole, or a pair of them, of a linear model. */
export interface Mode {
  /** 1/s; the one of a pair with the positive imaginary part. */
  pole: Complex;
  /** Natural frequency |s|, rad/s. */
  frequency: number;
  /** −Re s/|s|: one for a decay without swing, negative for growth; NaN for a pole at nought. */
  damping: number;
  /** Share of each state in the mode, adding up to one (Pérez-Arriaga, Verghese and Schweppe, IEEE Trans. PAS 101, 1982). */
  participation: number[];
}

/** Modes of ẋ = A x, slowest first. */
export function modesOf(a: Matrix): Mode[] {
  return decompose(a)
    .map(({ value, participation }) => mode(value, participation))
    .sort(bySpeed);
}

/** Below this |z| a pole dies within a sample: rounding spreads the chain of a delay about as far. */
const DELAY = 0.01;

/** Modes of x⁺ = A x sampled every `sample` s, as poles of continuous time: s = ln z / T. Delays, whose z is nought but for rounding, are left out. */
export function sampledModesOf(a: Matrix, sample: number): Mode[] {
  return decompose(a)
    .filter(({ value }) => modulus(value) > DELAY)
    .map(({ value, participation }) => mode(scaled(logarithm(value), 1 / sample), participation))
    .sort(bySpeed);
}

function bySpeed(a: Mode, b: Mode): number {
  return a.frequency - b.frequency;
}

function mode(pole: Complex, participation: number[]): Mode {
  const frequency = modulus(pole);
  return { pole, frequency, damping: -pole.re / frequency, participation };
}

/** Eigenvalues without the lower one of each pair, with the participation of the states. */
function decompose(a: Matrix): { value: Complex; participation: number[] }[] {
  const balance = balancing(a);
  const n = a.rows;
  const balanced = Matrix.zeros(n, n);
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) balanced.set(i, j, (a.get(i, j) * balance[j]) / balance[i]);
  const { realEigenvalues, imaginaryEigenvalues, eigenvectorMatrix: right } = new EigenvalueDecomposition(balanced);
  // Where eigenvectors coincide (a chain of delays) the nearest inverse there is.
  const left = inverse(right, true);
  const found: { value: Complex; participation: number[] }[] = [];
  for (let k = 0; k < n; k++) {
    const im = imaginaryEigenvalues[k];
    if (im < 0) continue;
    // A pair's vectors stand in two columns: real part, imaginary part; the inverse holds the left ones in two rows.
    const shares = Array.from({ length: n }, (_, i) =>
      im === 0
        ? Math.abs(right.get(i, k) * left.get(k, i))
        : Math.hypot(right.get(i, k), right.get(i, k + 1)) * Math.hypot(left.get(k, i), left.get(k + 1, i)),
    );
    const total = shares.reduce((sum, share) => sum + share, 0);
    found.push({ value: { re: realEigenvalues[k], im }, participation: shares.map((share) => share / total) });
  }
  return found;
}

/** Scales of the states that even out rows and columns (Parlett and Reinsch, Numerische Mathematik 13, 1969). */
function balancing(a: Matrix): Float64Array {
  const n = a.rows;
  const scale = new Float64Array(n).fill(1);
  for (let sweep = 0; sweep < 20; sweep++) {
    for (let i = 0; i < n; i++) {
      let row = 0;
      let column = 0;
      for (let j = 0; j < n; j++) {
        if (j === i) continue;
        row += Math.abs((a.get(i, j) * scale[j]) / scale[i]);
        column += Math.abs((a.get(j, i) * scale[i]) / scale[j]);
      }
      if (row > 0 && column > 0) scale[i] *= Math.sqrt(row / column);
    }
  }
  return scale;
}
