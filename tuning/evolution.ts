import { EigenvalueDecomposition, Matrix } from 'ml-matrix';

/** What a generation leaves behind: plain numbers, so that a search can be replayed. */
export interface EvolutionState {
  generation: number;
  mean: Float64Array;
  step: number;
  covariance: Matrix;
  stepPath: Float64Array;
  shapePath: Float64Array;
}

/**
 * Evolution with covariance matrix adaptation (Hansen, *The CMA Evolution Strategy: A Tutorial*, arXiv 1604.00772, 2016;
 * equation numbers of that text): draws candidates from a normal distribution and moves it to the better half of them.
 *
 * Deterministic: the same seed and the same costs give the same candidates.
 */
export class Evolution {
  readonly size: number;
  readonly population: number;
  private readonly state: EvolutionState;
  private readonly random: () => number;
  private readonly weights: Float64Array;
  private readonly mass: number;
  private readonly stepMemory: number;
  private readonly stepDamping: number;
  private readonly shapeMemory: number;
  private readonly rankOne: number;
  private readonly rankMany: number;
  private readonly expectedLength: number;
  private axes: Matrix;
  private lengths: Float64Array;
  private candidates: Float64Array[] = [];

  /**
   * @param mean where to start, one number a variable, scaled so that `step` suits them all
   * @param population candidates a generation; (48) of the tutorial when absent
   */
  constructor(mean: ArrayLike<number>, step: number, seed: number, population?: number) {
    const n = mean.length;
    this.size = n;
    this.population = population ?? 4 + Math.floor(3 * Math.log(n));
    this.random = normalDeviates(seed);
    const parents = Math.floor(this.population / 2);
    const raw = Array.from({ length: parents }, (_, i) => Math.log((this.population + 1) / 2) - Math.log(i + 1));
    const total = raw.reduce((sum, weight) => sum + weight, 0);
    this.weights = Float64Array.from(raw, (weight) => weight / total);
    this.mass = 1 / this.weights.reduce((sum, weight) => sum + weight * weight, 0);
    const { mass } = this;
    this.stepMemory = (mass + 2) / (n + mass + 5); // (55)
    this.stepDamping = 1 + 2 * Math.max(0, Math.sqrt((mass - 1) / (n + 1)) - 1) + this.stepMemory; // (55)
    this.shapeMemory = (4 + mass / n) / (n + 4 + (2 * mass) / n); // (56)
    this.rankOne = 2 / ((n + 1.3) ** 2 + mass); // (57)
    this.rankMany = Math.min(1 - this.rankOne, (2 * (mass - 2 + 1 / mass)) / ((n + 2) ** 2 + mass)); // (58)
    this.expectedLength = Math.sqrt(n) * (1 - 1 / (4 * n) + 1 / (21 * n * n));
    this.state = {
      generation: 0,
      mean: Float64Array.from(mean),
      step,
      covariance: Matrix.eye(n),
      stepPath: new Float64Array(n),
      shapePath: new Float64Array(n),
    };
    this.axes = Matrix.eye(n);
    this.lengths = new Float64Array(n).fill(1);
  }

  get generation(): number {
    return this.state.generation;
  }

  get mean(): Float64Array {
    return this.state.mean.slice();
  }

  /** The next generation's candidates. */
  ask(): Float64Array[] {
    const { mean, step } = this.state;
    this.candidates = Array.from({ length: this.population }, () => {
      const drawn = Float64Array.from({ length: this.size }, () => this.random());
      const shaped = this.shaped(drawn);
      return mean.map((value, i) => value + step * shaped[i]); // (38)–(40)
    });
    return this.candidates.map((candidate) => candidate.slice());
  }

  /** Learns from the costs of the candidates that `ask` gave, in their order; equal costs keep their order. */
  tell(costs: readonly number[]): void {
    const { state, weights, mass, size: n } = this;
    const order = costs.map((_, i) => i).sort((a, b) => costs[a] - costs[b] || a - b);
    const steps = order.map((i) => this.candidates[i].map((value, k) => (value - state.mean[k]) / state.step));
    const move = Float64Array.from({ length: n }, (_, k) =>
      weights.reduce((sum, weight, i) => sum + weight * steps[i][k], 0),
    ); // (41)
    for (let k = 0; k < n; k++) state.mean[k] += state.step * move[k]; // (42)

    const whitened = this.whitened(move);
    const { stepMemory: cs, shapeMemory: cc, rankOne: c1, rankMany: cm } = this;
    for (let k = 0; k < n; k++) {
      state.stepPath[k] = (1 - cs) * state.stepPath[k] + Math.sqrt(cs * (2 - cs) * mass) * whitened[k]; // (43)
    }
    const length = Math.hypot(...state.stepPath);
    state.step *= Math.exp((cs / this.stepDamping) * (length / this.expectedLength - 1)); // (44)
    const settled = Math.sqrt(1 - (1 - cs) ** (2 * (state.generation + 1)));
    const moving = length / settled < (1.4 + 2 / (n + 1)) * this.expectedLength ? 1 : 0;
    for (let k = 0; k < n; k++) {
      state.shapePath[k] = (1 - cc) * state.shapePath[k] + moving * Math.sqrt(cc * (2 - cc) * mass) * move[k]; // (45)
    }
    const lost = (1 - moving) * cc * (2 - cc);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        const many = weights.reduce((sum, weight, k) => sum + weight * steps[k][i] * steps[k][j], 0);
        const kept = (1 - c1 - cm + c1 * lost) * state.covariance.get(i, j);
        state.covariance.set(i, j, kept + c1 * state.shapePath[i] * state.shapePath[j] + cm * many); // (47)
      }
    }
    state.generation++;
    const { eigenvectorMatrix, realEigenvalues } = new EigenvalueDecomposition(state.covariance, {
      assumeSymmetric: true,
    });
    this.axes = eigenvectorMatrix;
    this.lengths = Float64Array.from(realEigenvalues, (value) => Math.sqrt(Math.max(value, 1e-20)));
  }

  /** B D z */
  private shaped(z: Float64Array): Float64Array {
    return z.map((_, i) => z.reduce((sum, value, k) => sum + this.axes.get(i, k) * this.lengths[k] * value, 0));
  }

  /** C^(−1/2) y = B D⁻¹ Bᵀ y */
  private whitened(y: Float64Array): Float64Array {
    const along = y.map((_, k) => y.reduce((sum, value, i) => sum + this.axes.get(i, k) * value, 0) / this.lengths[k]);
    return y.map((_, i) => along.reduce((sum, value, k) => sum + this.axes.get(i, k) * value, 0));
  }
}

/** Normal deviates by Box and Muller from a 32-bit generator (mulberry32, public domain). */
function normalDeviates(seed: number): () => number {
  let word = seed >>> 0;
  const uniform = () => {
    word = (word + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(word ^ (word >>> 15), word | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  };
  return () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
}
