import type { Matrix } from 'ml-matrix';
import type { Complex } from './complex.ts';

/**
 * C (z − A)⁻¹ B + D at a complex frequency `z`, by Gaussian elimination with row exchanges: `[output][input]`.
 * For a continuous system z = jω, for a sampled one z = e^(jωT).
 */
export function responseAt({ a, b, c, d }: { a: Matrix; b: Matrix; c: Matrix; d: Matrix }, z: Complex): Complex[][] {
  const n = a.rows;
  const columns = n + b.columns;
  // Real and imaginary parts of [z − A | B], row by row.
  const re = new Float64Array(n * columns);
  const im = new Float64Array(n * columns);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) re[i * columns + j] = -a.get(i, j);
    for (let j = 0; j < b.columns; j++) re[i * columns + n + j] = b.get(i, j);
    re[i * columns + i] += z.re;
    im[i * columns + i] += z.im;
  }
  eliminate(re, im, n, columns);
  return Array.from({ length: c.rows }, (_, out) =>
    Array.from({ length: b.columns }, (_, input) => {
      const sum = { re: d.get(out, input), im: 0 };
      for (let i = 0; i < n; i++) {
        sum.re += c.get(out, i) * re[i * columns + n + input];
        sum.im += c.get(out, i) * im[i * columns + n + input];
      }
      return sum;
    }),
  );
}

/** Gauss–Jordan: leaves the solutions in the columns from `n` on. */
function eliminate(re: Float64Array, im: Float64Array, n: number, columns: number): void {
  for (let k = 0; k < n; k++) {
    let pivot = k;
    let largest = 0;
    for (let i = k; i < n; i++) {
      const size = Math.abs(re[i * columns + k]) + Math.abs(im[i * columns + k]);
      if (size > largest) {
        largest = size;
        pivot = i;
      }
    }
    if (pivot !== k) {
      for (let j = k; j < columns; j++) {
        const [p, q] = [pivot * columns + j, k * columns + j];
        [re[p], re[q]] = [re[q], re[p]];
        [im[p], im[q]] = [im[q], im[p]];
      }
    }
    const pr = re[k * columns + k];
    const pi = im[k * columns + k];
    const square = pr * pr + pi * pi;
    for (let j = k; j < columns; j++) {
      const at = k * columns + j;
      const x = re[at];
      const y = im[at];
      re[at] = (x * pr + y * pi) / square;
      im[at] = (y * pr - x * pi) / square;
    }
    for (let i = 0; i < n; i++) {
      if (i === k) continue;
      const fr = re[i * columns + k];
      const fi = im[i * columns + k];
      if (fr === 0 && fi === 0) continue;
      for (let j = k; j < columns; j++) {
        const x = re[k * columns + j];
        const y = im[k * columns + j];
        re[i * columns + j] -= fr * x - fi * y;
        im[i * columns + j] -= fr * y + fi * x;
      }
    }
  }
}
