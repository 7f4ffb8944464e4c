import { Solver } from 'odex';
import type { Derivative, Integrator } from './integrator.ts';

const ENDLESS_STEPS =
  'the integrator takes endless small steps: an input is not finite, or the model is stiff there (a very short time constant, a very stiff shaft)';

/**
 * Columns of the extrapolation table: three, which is plenty for the short intervals between samples, and the most
 * with which the package never reads a step size that it has not yet computed (after a rejected step it takes that of
 * its highest column, computed or not).
 */
const COLUMNS = 3;

/**
 * Evaluations in one interval after which the solver counts as lost. It has a bound of its own on steps, but it does
 * not see it while it shortens the last step again and again, as it does on a derivative that is not finite.
 */
const MOST_EVALUATIONS = 20_000;

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
  let lastAllowed = 0;

  const solver = new Solver(
    (t: number, x: number[], dx: number[]) => {
      evaluations++;
      if (evaluations > lastAllowed) throw new Error(ENDLESS_STEPS);
      derivative(end + t, x, dx);
    },
    size,
    {
      rawFunction: true,
      denseOutput: false,
      relativeTolerance: new Array<number>(size).fill(relativeTolerance),
      absoluteTolerance: scale.map((s) => s * relativeTolerance),
      maxExtrapolationColumns: COLUMNS,
      // The stability check compares derivatives that are both near zero in steady operation; the error control suffices.
      stabilityCheckCount: 0,
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
      lastAllowed = evaluations + MOST_EVALUATIONS;
      for (let i = 0; i < size; i++) start[i] = x[i];
      const { y } = solver.solve(from - to, start, 0);
      for (let i = 0; i < size; i++) x[i] = y[i];
    },
  };
}
