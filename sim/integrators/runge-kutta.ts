import type { Derivative, Integrator } from './integrator.ts';

/**
 * The classical Runge–Kutta method of order 4 (Kutta 1901) with a fixed step, for campaigns.
 * @param size number of states
 * @param longestStep s; an interval is divided into the fewest equal steps that are no longer
 */
export function rungeKutta(derivative: Derivative, size: number, longestStep: number): Integrator {
  const k1 = new Float64Array(size);
  const k2 = new Float64Array(size);
  const k3 = new Float64Array(size);
  const k4 = new Float64Array(size);
  const trial = new Float64Array(size);
  let evaluations = 0;

  function step(t: number, h: number, x: Float64Array): void {
    derivative(t, x, k1);
    for (let i = 0; i < size; i++) trial[i] = x[i] + 0.5 * h * k1[i];
    derivative(t + 0.5 * h, trial, k2);
    for (let i = 0; i < size; i++) trial[i] = x[i] + 0.5 * h * k2[i];
    derivative(t + 0.5 * h, trial, k3);
    for (let i = 0; i < size; i++) trial[i] = x[i] + h * k3[i];
    derivative(t + h, trial, k4);
    for (let i = 0; i < size; i++) x[i] += (h / 6) * (k1[i] + 2 * k2[i] + 2 * k3[i] + k4[i]);
    evaluations += 4;
  }

  return {
    name: `Runge–Kutta 4, steps of at most ${longestStep} s`,
    relativeTolerance: null,
    get evaluations() {
      return evaluations;
    },
    advance(from, to, x) {
      const steps = Math.max(1, Math.ceil((to - from) / longestStep - 1e-9));
      const h = (to - from) / steps;
      for (let i = 0; i < steps; i++) step(from + i * h, h, x);
    },
  };
}
