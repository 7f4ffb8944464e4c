import { Matrix, solve } from 'ml-matrix';

const MOST_DOUBLINGS = 60;

/**
 * X of A X Aᵀ − X + Q = 0: the covariance on which x⁺ = A x + w settles, by doubling (Smith, SIAM J. Applied
 * Mathematics 16, 1968).
 * @throws RangeError where A has an eigenvalue on or outside the unit circle
 */
export function discreteLyapunov(a: Matrix, q: Matrix): Matrix {
  let power = a.clone();
  let x = q.clone();
  for (let i = 0; i < MOST_DOUBLINGS; i++) {
    const gain = power.mmul(x).mmul(power.transpose());
    x = Matrix.add(x, gain);
    const size = x.norm();
    if (!Number.isFinite(size)) break;
    if (gain.norm() <= 1e-16 * size) return x;
    power = power.mmul(power);
  }
  throw new RangeError('the system does not settle, so it has no covariance');
}

/**
 * X of A X + X Aᵀ + Q = 0, by writing it out as n² linear equations.
 * @throws RangeError where two eigenvalues of A add up to zero
 */
export function continuousLyapunov(a: Matrix, q: Matrix): Matrix {
  const n = a.rows;
  const eye = Matrix.eye(n);
  const equations = Matrix.add(a.kroneckerProduct(eye), eye.kroneckerProduct(a));
  const right = Matrix.columnVector(q.to1DArray().map((entry) => -entry));
  try {
    return Matrix.from1DArray(n, n, solve(equations, right).to1DArray());
  } catch {
    throw new RangeError('two eigenvalues add up to zero: the equation has no single solution');
  }
}
