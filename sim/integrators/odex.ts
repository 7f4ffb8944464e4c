import { Solver } from 'odex';
import type { Derivative, Integrator } from './integrator.ts';

/** odex never starts with more than 9 columns of its table; 4 are enough for the short intervals between samples. */
const COLUMNS = 4;

/**
 * The extrapolation method of Gragg, Bulirsch and Stoer in Hairer's code ODEX, through the package `odex`.
 *
 * The solver is started afresh for every interval, in the interval's own time from −length to 0: with its end at zero
 * it tries the whole interval as its first step instead of a half, and times lose no digits late in a run.
 * @param scale typical size of each state: absolute tolerance is `relativeTolerance` times it
 */
export function odex(derivative: Derivative, scale: readonly number[], relativeTolerance: number): Integrator {
  const size = scale.length;
  const start = new Array<number>(size).fill(0);
  let end = 0;
  let evaluations = 0;

  const solver = new Solver(
    (t: number, x: number[], dx: number[]) => {
      evaluations++;
      derivative(end + t, x, dx);
    },
    size,
    {
      rawFunction: true,
      denseOutput: false,
      relativeTolerance: new Array<number>(size).fill(relativeTolerance),
      absoluteTolerance: scale.map((s) => s * relativeTolerance),
      maxExtrapolationColumns: COLUMNS,
      initialStepSize: 1,
      maxStepSize: 1,
    },
  );

  return {
    name: 'odex',
    relativeTolerance,
    get evaluations() {
      return evaluations;
    },
    advance(from, to, x) {
      end = to;
      for (let i = 0; i < size; i++) start[i] = x[i];
      const { y } = solver.solve(from - to, start, 0);
      for (let i = 0; i < size; i++) x[i] = y[i];
    },
  };
}
