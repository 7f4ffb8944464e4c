/** Points on the rotor: the hub, and rings of points on spokes. */

export interface PolarGrid {
  /** Of the outermost ring, which is the blades' tip, m. */
  radius: number;
  /** Rings, evenly apart; the outermost is at `radius`. */
  rings: number;
  /** Points on a ring, evenly apart; the first stands above the hub, the others follow in the rotor's sense of turning. */
  spokes: number;
}

/** The widest gaps that still resolve the gusts a blade cuts through, in rotor diameters; our own rule. */
const WIDEST_RING_GAP = 0.15;
const WIDEST_SPOKE_GAP = 0.3;

/** Spacing of rings that a grid takes unless told otherwise: a quarter of the standard's Λ₁ above 60 m. */
const USUAL_RING_GAP = 10.5;
const USUAL_SPOKES = 24;
const FEWEST_RINGS = 5;

/** The grid that fits a rotor of `radius` (m). */
export function usualGrid(radius: number): PolarGrid {
  return { radius, rings: Math.max(FEWEST_RINGS, Math.ceil(radius / USUAL_RING_GAP)), spokes: USUAL_SPOKES };
}

export function pointCount({ rings, spokes }: PolarGrid): number {
  return 1 + rings * spokes;
}

/**
 * Makes sure that a grid is fine enough for its rotor and that every blade meets the same of it.
 * @throws RangeError that says how many rings or spokes it takes
 */
export function requireFineGrid({ radius, rings, spokes }: PolarGrid, bladeCount: number): void {
  const diameter = 2 * radius;
  const fewestRings = Math.ceil(radius / (WIDEST_RING_GAP * diameter));
  const fewestSpokes = Math.ceil(Math.PI / WIDEST_SPOKE_GAP);
  if (rings < fewestRings) {
    throw new RangeError(
      `a grid of ${rings} ring(s) is too coarse for a rotor of ${diameter} m: its rings lie ${(radius / rings).toFixed(1)} m ` +
        `apart, and ${WIDEST_RING_GAP * 100} % of the diameter is the most; ${fewestRings} rings or more are due`,
    );
  }
  if (spokes < fewestSpokes) {
    throw new RangeError(
      `a grid of ${spokes} spoke(s) is too coarse for a rotor of ${diameter} m: its points lie ` +
        `${((Math.PI * diameter) / spokes).toFixed(1)} m apart at the tip, and ${WIDEST_SPOKE_GAP * 100} % of the diameter is ` +
        `the most; ${fewestSpokes} spokes or more are due`,
    );
  }
  if (spokes % bladeCount !== 0 || spokes % 2 !== 0) {
    throw new RangeError(
      `${spokes} spokes do not suit ${bladeCount} blades: an even multiple of the number of blades is due, such as ` +
        `${USUAL_SPOKES % bladeCount === 0 ? USUAL_SPOKES : 8 * bladeCount}`,
    );
  }
}

/**
 * Share of the hub (index 0) and of each ring in the mean over the disc of what is linear in radius between them: the
 * weights `∫ φ(r) 2r dr / R²` of the hat functions φ. They sum to 1.
 */
export function discShares({ rings }: PolarGrid): Float64Array {
  const shares = new Float64Array(rings + 1);
  for (let ring = 0; ring < rings; ring++) {
    // Between x and x + h (h = 1/rings), the inner hat takes h(x + h/3), the outer h(x + 2h/3).
    const h = 1 / rings;
    const x = ring * h;
    shares[ring] += h * (x + h / 3);
    shares[ring + 1] += h * (x + (2 * h) / 3);
  }
  return shares;
}

/** Three components on a grid at evenly spaced instants of one period. */
export interface PolarSeries {
  grid: PolarGrid;
  /** s; the instants are 0, period/samples, … */
  period: number;
  samples: number;
  /** (u, v, w) of the hub, then of each ring's points spoke by spoke, instant by instant, m/s. */
  values: Float32Array;
}

/**
 * How to read a series between its points: linear in radius, azimuth and time, and periodic in time. Beyond the
 * outermost ring it takes the ring's value. Allocates nothing.
 */
export function polarReader({ grid, period, samples, values }: PolarSeries) {
  const { radius, rings, spokes } = grid;
  const perMetre = rings / radius;
  const perRadian = spokes / (2 * Math.PI);
  const perSecond = samples / period;
  const stride = 3 * pointCount(grid);

  return function read(t: number, y: number, z: number, out: Float64Array): void {
    const rho = Math.min(Math.sqrt(y * y + z * z) * perMetre, rings);
    const inner = Math.min(Math.floor(rho), rings - 1);
    const outerShare = rho - inner;
    // (y, z) = (−r sin ψ, r cos ψ)
    let azimuth = Math.atan2(-y, z) * perRadian;
    if (azimuth < 0) azimuth += spokes;
    let spoke = Math.floor(azimuth);
    const nextShare = azimuth - spoke;
    if (spoke >= spokes) spoke = 0;
    const next = spoke + 1 === spokes ? 0 : spoke + 1;

    // The hub stands for all points of the ring of radius 0.
    const outerRing = 3 * (1 + inner * spokes);
    const a = inner === 0 ? 0 : outerRing + 3 * (spoke - spokes);
    const b = inner === 0 ? 0 : outerRing + 3 * (next - spokes);
    const c = outerRing + 3 * spoke;
    const d = outerRing + 3 * next;

    const instant = t * perSecond;
    const floor = Math.floor(instant);
    const laterShare = instant - floor;
    const sample = ((floor % samples) + samples) % samples;
    const early = sample * stride;
    const late = sample + 1 === samples ? 0 : early + stride;

    const innerShare = 1 - outerShare;
    const wa = innerShare * (1 - nextShare);
    const wb = innerShare * nextShare;
    const wc = outerShare * (1 - nextShare);
    const wd = outerShare * nextShare;
    for (let i = 0; i < 3; i++) {
      const at = early + i;
      const then = late + i;
      const before = wa * values[at + a] + wb * values[at + b] + wc * values[at + c] + wd * values[at + d];
      const after = wa * values[then + a] + wb * values[then + b] + wc * values[then + c] + wd * values[then + d];
      out[i] = before + laterShare * (after - before);
    }
  };
}
