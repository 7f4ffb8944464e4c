/**
 * The place in [from, to] where `f` changes its sign from ≥ 0 to < 0, by the Illinois variant of regula falsi
 * (Dowell and Jarratt 1971), to within `tolerance`. Returns the far end of the last bracket, where `f` < 0.
 */
export function findRoot(f: (t: number) => number, from: number, to: number, tolerance: number): number {
  let near = from;
  let far = to;
  let nearValue = f(near);
  let farValue = f(far);
  let lastSide = 0;
  while (far - near > tolerance) {
    const secant = (near * farValue - far * nearValue) / (farValue - nearValue);
    const inside = secant > near && secant < far ? secant : 0.5 * (near + far);
    const t = Math.min(Math.max(inside, near + 0.25 * tolerance), far - 0.25 * tolerance);
    const value = f(t);
    if (value < 0) {
      far = t;
      farValue = value;
      if (lastSide < 0) nearValue /= 2;
      lastSide = -1;
    } else {
      near = t;
      nearValue = value;
      if (lastSide > 0) farValue /= 2;
      lastSide = 1;
    }
  }
  return far;
}
