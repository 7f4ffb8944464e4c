/**
 * The place in [from, to] where `f` changes its sign from ≥ 0 to < 0, to within `tolerance`: secant steps, with a
 * bisection whenever a step has not halved the bracket. Returns the far end of the last bracket, where `f` < 0.
 */
export function findRoot(f: (t: number) => number, from: number, to: number, tolerance: number): number {
  let near = from;
  let far = to;
  let nearValue = f(near);
  let farValue = f(far);
  let bisect = false;
  while (far - near > tolerance) {
    const width = far - near;
    const secant = near + (width * nearValue) / (nearValue - farValue);
    const usable = !bisect && secant > near && secant < far;
    // Half a tolerance past the secant, so that a good guess closes the bracket from its far side.
    const t = usable ? Math.min(secant + 0.5 * tolerance, far - 0.5 * tolerance) : near + 0.5 * width;
    const value = f(t);
    if (value < 0) {
      far = t;
      farValue = value;
    } else {
      near = t;
      nearValue = value;
    }
    bisect = far - near > 0.5 * width;
  }
  return far;
}
