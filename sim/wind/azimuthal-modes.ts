/**
 * The factor of the coherence matrix of a polar grid, by azimuthal order.
 *
 * Veers' method (SAND88-0152, 1988) draws correlated amplitudes at each frequency as `H g`, where `H Hᵀ` is the
 * coherence matrix of all points and `g` holds independent draws. On rings of evenly spaced spokes that matrix does not
 * change when the grid is turned by a spoke, so a discrete Fourier transform over the spokes splits it into one small
 * block for each azimuthal order: rings by rings, and the hub with order 0, which is what it has in common with a ring.
 * Factoring the blocks gives an `H` of the same product at a small part of the cost (61 points: twelve 5 × 5 blocks
 * instead of one 61 × 61 matrix), and the orders that a rotor's blades let pass can be drawn without the others.
 */
import type { PolarGrid } from './polar-grid.ts';

/** Below this a pivot is rounding: the point is then wholly given by those before it. */
const SMALLEST_PIVOT = 1e-12;

export class AzimuthalModes {
  /** Entries of one block's lower triangle: hub and rings for order 0, rings only for the others (hub entries unused). */
  readonly size: number;
  private readonly order: number;
  private readonly halfSpokes: number;
  /** Distances ring i – ring j (j ≤ i) at 0 … spokes/2 spokes between, m. */
  private readonly distances: Float64Array;
  private readonly hubDistances: Float64Array;
  private readonly cosines: Float64Array;
  private readonly coherence: Float64Array;
  /** Lower triangles, row by row, one for each order from 0 to spokes/2. */
  readonly factors: Float64Array;

  constructor(private readonly grid: PolarGrid) {
    const { radius, rings, spokes } = grid;
    const half = spokes / 2;
    this.halfSpokes = half;
    this.order = rings + 1;
    this.size = (this.order * (this.order + 1)) / 2;
    this.factors = new Float64Array(this.size * (half + 1));
    this.coherence = new Float64Array(half + 1);
    this.cosines = Float64Array.from({ length: spokes }, (_, s) => Math.cos((2 * Math.PI * s) / spokes));
    this.hubDistances = Float64Array.from({ length: rings }, (_, i) => ((i + 1) * radius) / rings);
    const distances: number[] = [];
    for (let i = 0; i < rings; i++) {
      for (let j = 0; j <= i; j++) {
        const a = this.hubDistances[i];
        const b = this.hubDistances[j];
        for (let s = 0; s <= half; s++)
          distances.push(Math.sqrt(Math.max(0, a * a + b * b - 2 * a * b * this.cosines[s])));
      }
    }
    this.distances = Float64Array.from(distances);
  }

  /** Where the lower triangle of an azimuthal order (0 … spokes − 1) starts in `factors`; m and spokes − m share one. */
  start(mode: number): number {
    return this.size * Math.min(mode, this.grid.spokes - mode);
  }

  /** Fills `factors` for points whose coherence dies with distance as exp(−decay · r); 1/m. */
  factor(decay: number): void {
    this.fillBlocks(decay);
    for (let mode = 0; mode <= this.halfSpokes; mode++) this.factorBlock(mode * this.size, mode === 0 ? 0 : 1);
  }

  private fillBlocks(decay: number): void {
    const { factors, coherence, cosines, distances, halfSpokes, size } = this;
    const { rings, spokes } = this.grid;
    factors[0] = 1;
    let pair = 0;
    for (let i = 0; i < rings; i++) {
      const row = ((i + 1) * (i + 2)) / 2;
      // The hub with the ring's amplitude of order 0, which is √spokes times the ring's mean.
      factors[row] = Math.sqrt(spokes) * Math.exp(-decay * this.hubDistances[i]);
      for (let j = 0; j <= i; j++) {
        for (let s = 0; s <= halfSpokes; s++) coherence[s] = Math.exp(-decay * distances[pair++]);
        for (let mode = 0; mode <= halfSpokes; mode++) {
          // Σ over all spokes of c(s) cos(2π m s/spokes); s and spokes − s are alike.
          let sum = coherence[0] + coherence[halfSpokes] * (mode % 2 === 0 ? 1 : -1);
          for (let s = 1; s < halfSpokes; s++) sum += 2 * coherence[s] * cosines[(mode * s) % spokes];
          factors[mode * size + row + j + 1] = sum;
        }
      }
    }
  }

  /** Cholesky's factor in place; `first` is the block's first row and column. */
  private factorBlock(start: number, first: number): void {
    const { factors, order } = this;
    for (let i = first; i < order; i++) {
      const row = start + (i * (i + 1)) / 2;
      for (let j = first; j <= i; j++) {
        const other = start + (j * (j + 1)) / 2;
        let sum = factors[row + j];
        for (let k = first; k < j; k++) sum -= factors[row + k] * factors[other + k];
        if (i === j) factors[row + j] = sum > SMALLEST_PIVOT ? Math.sqrt(sum) : 0;
        else factors[row + j] = factors[other + j] > 0 ? sum / factors[other + j] : 0;
      }
    }
  }
}
