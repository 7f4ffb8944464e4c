import { EigenvalueDecomposition, Matrix, SingularValueDecomposition, solve } from 'ml-matrix';
import { type Complex, logarithm, scaled } from './complex.ts';

/**
 * Poles (1/s) in a free response: its samples are taken for a sum of decaying swings, whose z are the eigenvalues of the
 * shift between two overlapping windows, noise cut off with the small singular values (matrix pencil; Hua and Sarkar, IEEE
 * Trans. Acoustics, Speech and Signal Processing 38, 1990).
 * @param samples evenly spaced, no more than a few hundred
 * @param spacing s
 * @param order number of poles to look for
 */
export function polesOfResponse(samples: ArrayLike<number>, spacing: number, order: number): Complex[] {
  const window = Math.floor(samples.length / 3);
  const rows = samples.length - window;
  const hankel = Matrix.zeros(rows, window + 1);
  for (let i = 0; i < rows; i++) for (let j = 0; j <= window; j++) hankel.set(i, j, samples[i + j]);
  const { rightSingularVectors } = new SingularValueDecomposition(hankel, { autoTranspose: true });
  const signal = rightSingularVectors.subMatrix(0, window, 0, order - 1);
  const early = signal.subMatrix(0, window - 1, 0, order - 1);
  const late = signal.subMatrix(1, window, 0, order - 1);
  const shift = solve(early, late, true);
  const { realEigenvalues, imaginaryEigenvalues } = new EigenvalueDecomposition(shift);
  return realEigenvalues.map((re, i) => scaled(logarithm({ re, im: imaginaryEigenvalues[i] }), 1 / spacing));
}
