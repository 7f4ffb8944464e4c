import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import type { Complex } from './complex.ts';

/** Below this share of its row an entry is rounding. */
const NEGLIGIBLE = 1e-10;

/**
 * Zeros of the path from one input to one output of ẋ = A x + b u, y = c x + d u: what the rest of the system does while
 * the output is kept at nought. Where the input does not act on the output at once, the output's own direction is taken
 * out by a reflection and its derivative becomes the new output, until the input acts (after Emami-Naeini and Van Dooren,
 * Automatica 18, 1982).
 * @param b one column, @param c one row
 */
export function transmissionZeros(a: Matrix, b: Matrix, c: Matrix, d: number): Complex[] {
  const n = a.rows;
  if (Math.abs(d) > NEGLIGIBLE * (c.norm() * b.norm() + Math.abs(d))) {
    return n === 0 ? [] : eigenvalues(Matrix.sub(a, b.mmul(c).mul(1 / d)));
  }
  if (n === 0 || c.norm() === 0 || b.norm() === 0) return [];
  const reflection = reflectionOntoFirst(c);
  const turned = reflection.mmul(a).mmul(reflection);
  const turnedInput = reflection.mmul(b);
  if (n === 1) return [];
  return transmissionZeros(
    turned.subMatrix(1, n - 1, 1, n - 1),
    turnedInput.subMatrix(1, n - 1, 0, 0),
    turned.subMatrix(0, 0, 1, n - 1),
    turnedInput.get(0, 0),
  );
}

/** The Householder reflection H with c H = ±|c| (1, 0, …). */
function reflectionOntoFirst(c: Matrix): Matrix {
  const n = c.columns;
  const size = c.norm();
  const v = c.to1DArray();
  v[0] += v[0] >= 0 ? size : -size;
  const square = v.reduce((total, entry) => total + entry * entry, 0);
  const h = Matrix.eye(n);
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) h.set(i, j, h.get(i, j) - (2 * v[i] * v[j]) / square);
  return h;
}

export function eigenvalues(a: Matrix): Complex[] {
  const { realEigenvalues, imaginaryEigenvalues } = new EigenvalueDecomposition(a);
  return realEigenvalues.map((re, i) => ({ re, im: imaginaryEigenvalues[i] }));
}
