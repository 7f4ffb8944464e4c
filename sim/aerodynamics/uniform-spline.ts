/**
 * Interpolating cubic splines on evenly spaced knots, as weights of B-splines: continuous second derivative, and a
 * look-up that touches four weights an axis wherever it falls.
 */

/**
 * B-spline weights of the cubic spline through `values`. End slopes are those of the cubic through the four end values.
 * @returns two more weights than values: one beyond each end
 */
export function splineWeights(values: ArrayLike<number>): Float64Array {
  const n = values.length;
  if (n < 4) throw new Error(`a spline needs four or more values, not ${n}`);
  const startSlope = (-11 * values[0] + 18 * values[1] - 9 * values[2] + 2 * values[3]) / 6;
  const endSlope = (11 * values[n - 1] - 18 * values[n - 2] + 9 * values[n - 3] - 2 * values[n - 4]) / 6;

  // (c₋ + 4c + c₊)/6 = value at every knot; (c₊ − c₋)/2 = slope at both ends. Solved by Thomas's elimination.
  const upper = new Float64Array(n);
  const right = new Float64Array(n);
  upper[0] = 0.5;
  right[0] = (6 * values[0] + 2 * startSlope) / 4;
  for (let i = 1; i < n; i++) {
    const last = i === n - 1;
    const lower = last ? 2 : 1;
    const wanted = last ? 6 * values[i] - 2 * endSlope : 6 * values[i];
    const pivot = 4 - lower * upper[i - 1];
    upper[i] = 1 / pivot;
    right[i] = (wanted - lower * right[i - 1]) / pivot;
  }
  const weights = new Float64Array(n + 2);
  weights[n] = right[n - 1];
  for (let i = n - 2; i >= 0; i--) weights[i + 1] = right[i] - upper[i] * weights[i + 2];
  weights[0] = weights[2] - 2 * startSlope;
  weights[n + 1] = weights[n - 1] + 2 * endSlope;
  return weights;
}

/** More knots than any spline feels across: a knot's reach fades by 0.27 a knot. */
const WRAP = 24;

/** The same for a closed circle whose first and last values are one and the same knot. */
export function closedSplineWeights(values: ArrayLike<number>): Float64Array {
  const period = values.length - 1;
  const wrapped = Float64Array.from({ length: values.length + 2 * WRAP }, (_, i) => {
    const turn = (i - WRAP) % period;
    return values[turn < 0 ? turn + period : turn];
  });
  return splineWeights(wrapped).slice(WRAP, WRAP + values.length + 2);
}

/** Shares of the four weights around a point that lies at `t` (0 to 1) between two knots. */
export function splineShares(t: number, out: Float64Array): void {
  const u = 1 - t;
  out[0] = (u * u * u) / 6;
  out[1] = (4 - 3 * t * t * (2 - t)) / 6;
  out[2] = (4 - 3 * u * u * (2 - u)) / 6;
  out[3] = (t * t * t) / 6;
}

/** Their slopes per knot spacing. */
export function splineShareSlopes(t: number, out: Float64Array): void {
  const u = 1 - t;
  out[0] = (-u * u) / 2;
  out[1] = (t * (3 * t - 4)) / 2;
  out[2] = (u * (4 - 3 * u)) / 2;
  out[3] = (t * t) / 2;
}
