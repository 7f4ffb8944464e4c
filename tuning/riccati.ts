import { inverse, Matrix, solve } from 'ml-matrix';

const MOST_STEPS = 100;
const TOLERANCE = 1e-14;

/**
 * The stabilising X of X = Aᵀ X A − Aᵀ X B (R + Bᵀ X B)⁻¹ Bᵀ X A + Q, by structure-preserving doubling (Chu, Fan, Lin and
 * Wang, International J. Control 77, 2004).
 * @throws RangeError where no input can steady a growing or lasting mode
 */
export function discreteRiccati(a: Matrix, b: Matrix, q: Matrix, r: Matrix): Matrix {
  const eye = Matrix.eye(a.rows);
  let transition = a.clone();
  let reach = b.mmul(solve(r, b.transpose()));
  let x = q.clone();
  for (let step = 0; step < MOST_STEPS; step++) {
    const w = inverse(Matrix.add(eye, reach.mmul(x)));
    const next = Matrix.add(x, transition.transpose().mmul(x).mmul(w).mmul(transition));
    reach = Matrix.add(reach, transition.mmul(w).mmul(reach).mmul(transition.transpose()));
    transition = transition.mmul(w).mmul(transition);
    const change = Matrix.sub(next, x).norm();
    x = next;
    if (!Number.isFinite(change)) break;
    if (change <= TOLERANCE * x.norm()) return x;
  }
  throw new RangeError('the equation has no stabilising solution');
}

/**
 * The stabilising X of Aᵀ X + X A − X B R⁻¹ Bᵀ X + Q = 0, by the sign of its Hamiltonian matrix (Roberts, International
 * J. Control 32, 1980), the iteration scaled by the determinant (Byers, Linear Algebra and its Applications 85, 1987).
 * @throws RangeError where there is none
 */
export function continuousRiccati(a: Matrix, b: Matrix, q: Matrix, r: Matrix): Matrix {
  const n = a.rows;
  const hamiltonian = Matrix.zeros(2 * n, 2 * n);
  hamiltonian.setSubMatrix(a, 0, 0);
  hamiltonian.setSubMatrix(b.mmul(solve(r, b.transpose())).mul(-1), 0, n);
  hamiltonian.setSubMatrix(Matrix.mul(q, -1), n, 0);
  hamiltonian.setSubMatrix(Matrix.mul(a.transpose(), -1), n, n);

  const sign = matrixSign(hamiltonian);
  // (sign + 1) [1; X] = 0: the stable subspace is the range of [1; X].
  const eye = Matrix.eye(n);
  const left = Matrix.zeros(2 * n, n);
  left.setSubMatrix(sign.subMatrix(0, n - 1, n, 2 * n - 1), 0, 0);
  left.setSubMatrix(Matrix.add(sign.subMatrix(n, 2 * n - 1, n, 2 * n - 1), eye), n, 0);
  const right = Matrix.zeros(2 * n, n);
  right.setSubMatrix(Matrix.add(sign.subMatrix(0, n - 1, 0, n - 1), eye), 0, 0);
  right.setSubMatrix(sign.subMatrix(n, 2 * n - 1, 0, n - 1), n, 0);
  const x = solve(left, right.mul(-1), true);
  return Matrix.add(x, x.transpose()).mul(0.5);
}

function matrixSign(matrix: Matrix): Matrix {
  let z = matrix;
  for (let step = 0; step < MOST_STEPS; step++) {
    const inverted = inverse(z);
    const scale = Math.sqrt(inverted.norm() / z.norm());
    const next = Matrix.add(Matrix.mul(z, scale), Matrix.mul(inverted, 1 / scale)).mul(0.5);
    const change = Matrix.sub(next, z).norm();
    z = next;
    if (!Number.isFinite(change)) break;
    if (change <= TOLERANCE * z.norm()) return z;
  }
  throw new RangeError('the equation has no stabilising solution');
}
