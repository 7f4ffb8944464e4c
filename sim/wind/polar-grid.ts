/** Points on the rotor: the hub, and rings of points on spokes. */
import type { WindField } from './wind.ts';

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
 * outermost ring it takes the ring's value. Allocates nothing. All points of one instant are blended once and kept for
 * the next questions at that instant, since a rotor asks for all its sections at a time.
 */
export function polarReader({ grid, period, samples, values }: PolarSeries): WindField['velocity'] {
  const { radius, rings, spokes } = grid;
  const perMetre = rings / radius;
  const perRadian = spokes / (2 * Math.PI);
  const perSecond = samples / period;
  const stride = 3 * pointCount(grid);
  const outermost = rings * (1 - Number.EPSILON);
  const lastSpoke = spokes - 1;
  const ringStride = 3 * spokes;
  const now = new Float64Array(stride);
  const blendedAt = new Float64Array(1).fill(Number.NaN);

  function blend(t: number): void {
    blendedAt[0] = t;
    const instant = t * perSecond;
    const floor = Math.floor(instant);
    const laterShare = instant - floor;
    const sample = (((floor % samples) + samples) % samples) | 0;
    const early = (sample * stride) | 0;
    const late = sample + 1 === samples ? 0 : early + stride;
    for (let i = 0; i < stride; i++) {
      const before = values[early + i];
      now[i] = before + laterShare * (values[late + i] - before);
    }
  }

  return function read(t: number, y: number, z: number, out: Float64Array): void {
    if (t !== blendedAt[0]) blend(t);
    const rho = Math.min(Math.sqrt(y * y + z * z) * perMetre, outermost);
    // `| 0` is a floor here, and leaves whole numbers that index fast.
    const inner = rho | 0;
    const outerShare = rho - inner;
    // (y, z) = (−r sin ψ, r cos ψ)
    const azimuth = angleOf(-y, z) * perRadian;
    const spoke = Math.min(azimuth | 0, lastSpoke);
    const nextShare = azimuth - spoke;

    const c = 3 + inner * ringStride + 3 * spoke;
    const d = spoke === lastSpoke ? c + 3 - ringStride : c + 3;
    // The hub stands for all points of the ring of radius 0.
    const a = inner === 0 ? 0 : c - ringStride;
    const b = inner === 0 ? 0 : d - ringStride;
    const ua = now[a] + nextShare * (now[b] - now[a]);
    const va = now[a + 1] + nextShare * (now[b + 1] - now[a + 1]);
    const wa = now[a + 2] + nextShare * (now[b + 2] - now[a + 2]);
    out[0] = ua + outerShare * (now[c] + nextShare * (now[d] - now[c]) - ua);
    out[1] = va + outerShare * (now[c + 1] + nextShare * (now[d + 1] - now[c + 1]) - va);
    out[2] = wa + outerShare * (now[c + 2] + nextShare * (now[d + 2] - now[c + 2]) - wa);
  };
}

/** Keeps 0/0 away without changing any other quotient. */
const NOTHING = 1e-300;

/**
 * Math.atan2 from 0 to 2π, to within 3e-7 rad: it takes most of the time of reading, and this is several times faster.
 * The arctangent from 0 to 1 is our own fit of least maximum error, in pairs so that they can be computed side by side.
 */
function angleOf(sine: number, cosine: number): number {
  const s = Math.abs(sine);
  const c = Math.abs(cosine);
  const isSteep = s > c;
  const x = Math.min(s, c) / (Math.max(s, c) + NOTHING);
  const q = x * x;
  const qq = q * q;
  const low = 0.999996112 - 0.33317368 * q + qq * (0.198078153 - 0.132333412 * q);
  const octant = x * (low + qq * qq * (0.0796236577 - 0.0336042086 * q + 0.00681178956 * qq));
  const quarter = isSteep ? Math.PI / 2 - octant : octant;
  const half = cosine < 0 ? Math.PI - quarter : quarter;
  return sine < 0 ? 2 * Math.PI - half : half;
}
