/** A curve through points: cubic between them, with continuous slope. */
export interface CubicCurve {
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly slope: readonly number[];
}

/** Slope at a point from the secants and widths before and after it. */
type SlopeRule = (before: number, after: number, widthBefore: number, widthAfter: number) => number;

/**
 * Curve through (x, y) that overshoots nowhere: for outlines and polars, which have corners.
 * Source: Fritsch and Butland, SIAM J. Sci. Stat. Comput. 5, 1984 (weighted harmonic mean of neighbouring slopes).
 * @param x rising
 * @throws when there are fewer than two points, the lengths differ or `x` does not rise
 */
export function monotoneCurve(x: readonly number[], y: readonly number[]): CubicCurve {
  return curve(x, y, harmonicSlope);
}

/**
 * Curve through (x, y) whose slope at each point is that of the parabola through it and its neighbours: for smooth
 * functions, whose peaks the monotone curve would flatten. Arguments and errors as there.
 */
export function smoothCurve(x: readonly number[], y: readonly number[]): CubicCurve {
  return curve(x, y, parabolaSlope);
}

function curve(x: readonly number[], y: readonly number[], interiorSlope: SlopeRule): CubicCurve {
  if (x.length < 2 || x.length !== y.length) {
    throw new Error(`a curve needs two or more points and as many values: got ${x.length} and ${y.length}`);
  }
  const secant: number[] = [];
  for (let i = 0; i + 1 < x.length; i++) {
    const width = x[i + 1] - x[i];
    if (!(width > 0)) throw new Error(`a curve's points must rise: ${x[i + 1]} follows ${x[i]}`);
    secant.push((y[i + 1] - y[i]) / width);
  }
  const slope = [secant[0]];
  for (let i = 1; i + 1 < x.length; i++) {
    slope.push(interiorSlope(secant[i - 1], secant[i], x[i] - x[i - 1], x[i + 1] - x[i]));
  }
  slope.push(secant[secant.length - 1]);
  return { x, y, slope };
}

function parabolaSlope(before: number, after: number, widthBefore: number, widthAfter: number): number {
  return (widthAfter * before + widthBefore * after) / (widthBefore + widthAfter);
}

function harmonicSlope(before: number, after: number, widthBefore: number, widthAfter: number): number {
  if (before * after <= 0) return 0;
  const weightBefore = 2 * widthAfter + widthBefore;
  const weightAfter = widthAfter + 2 * widthBefore;
  return (weightBefore + weightAfter) / (weightBefore / before + weightAfter / after);
}

/** Value of the curve at `at`; beyond its ends, the end's value. */
export function valueAt(curve: CubicCurve, at: number): number {
  const { x, y, slope } = curve;
  const last = x.length - 1;
  if (at <= x[0]) return y[0];
  if (at >= x[last]) return y[last];
  let i = 0;
  for (let above = last; above - i > 1; ) {
    const middle = (i + above) >> 1;
    if (x[middle] <= at) i = middle;
    else above = middle;
  }
  const width = x[i + 1] - x[i];
  const t = (at - x[i]) / width;
  const u = 1 - t;
  return (
    u * u * ((1 + 2 * t) * y[i] + t * width * slope[i]) + t * t * ((1 + 2 * u) * y[i + 1] - u * width * slope[i + 1])
  );
}
