/** What we use of the package `odex`, whose own sources do not pass this project's compiler settings. */
declare module 'odex' {
  export interface SolverOptions {
    rawFunction: true;
    denseOutput: false;
    relativeTolerance: number[];
    absoluteTolerance: number[];
    maxExtrapolationColumns: number;
    stabilityCheckCount: number;
    initialStepSize: number;
    maxStepSize: number;
  }

  export class Solver {
    constructor(derivative: (t: number, x: number[], dx: number[]) => void, size: number, options: SolverOptions);
    /** Integrates from `from` to `to`; `y` is a new array. */
    solve(from: number, start: number[], to: number): { y: number[] };
  }
}
