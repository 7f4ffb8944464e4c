import { Matrix, solve } from 'ml-matrix';

/** Order of the Padé approximant; at a norm of one half its error is below rounding. */
const ORDER = 6;
const LARGEST_NORM = 0.5;

/**
 * e^A by scaling and squaring with a Padé approximant (Moler and Van Loan, SIAM Review 45, 2003, method 3).
 * @throws RangeError where an entry is not finite
 */
export function matrixExponential(a: Matrix): Matrix {
  const norm = largestRowSum(a);
  if (!Number.isFinite(norm)) throw new RangeError('the matrix has an entry that is not a finite number');
  const halvings = Math.max(0, Math.ceil(Math.log2(norm / LARGEST_NORM)));
  const scaled = Matrix.mul(a, 2 ** -halvings);

  let term = Matrix.eye(a.rows);
  const numerator = Matrix.eye(a.rows);
  const denominator = Matrix.eye(a.rows);
  let coefficient = 1;
  for (let k = 1; k <= ORDER; k++) {
    coefficient *= (ORDER - k + 1) / (k * (2 * ORDER - k + 1));
    term = term.mmul(scaled);
    numerator.add(Matrix.mul(term, coefficient));
    denominator.add(Matrix.mul(term, k % 2 === 0 ? coefficient : -coefficient));
  }
  let result = solve(denominator, numerator);
  for (let i = 0; i < halvings; i++) result = result.mmul(result);
  return result;
}

function largestRowSum(a: Matrix): number {
  return Math.max(0, ...a.to2DArray().map((row) => row.reduce((total, entry) => total + Math.abs(entry), 0)));
}
