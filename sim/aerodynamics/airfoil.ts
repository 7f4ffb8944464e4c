import type { AirfoilData } from '../turbine.ts';
import { formulaPolar, type Polar, tablePolar } from './polar.ts';

/** Nodes over the full circle: one every half degree, so that a look-up needs no search. */
const NODES = 720;
const STEP = (2 * Math.PI) / NODES;
/** Numbers a node keeps: lift, its change per step, drag, its change per step. */
const STRIDE = 4;

/** Lift and drag against angle of attack over the full circle, with continuous slope. */
export interface Airfoil {
  readonly name: string;
  readonly nodes: Float64Array;
  /** Angles of largest and of most negative lift, rad; absent for a section that does not lift. */
  readonly stall?: { readonly positive: number; readonly negative: number };
}

export interface SectionCoefficients {
  lift: number;
  drag: number;
}

/**
 * The airfoil that a turbine's data describe.
 * @throws when a table or the formula's parameters make no polar
 */
export function airfoilOf(data: AirfoilData): Airfoil {
  return sampled(data.name, data.kind === 'table' ? tablePolar(data) : formulaPolar(data));
}

function sampled(name: string, polar: Polar): Airfoil {
  const nodes = new Float64Array(NODES * STRIDE);
  for (let i = 0; i < NODES; i++) {
    const angle = -Math.PI + i * STEP;
    nodes[i * STRIDE] = polar.lift(angle);
    nodes[i * STRIDE + 2] = polar.drag(angle);
  }
  for (let i = 0; i < NODES; i++) {
    const before = ((i + NODES - 1) % NODES) * STRIDE;
    const after = ((i + 1) % NODES) * STRIDE;
    nodes[i * STRIDE + 1] = (nodes[after] - nodes[before]) / 2;
    nodes[i * STRIDE + 3] = (nodes[after + 2] - nodes[before + 2]) / 2;
  }
  return withStall(name, nodes);
}

/** The section between two airfoils: `share` of `outer` (0 to 1), the rest of `inner`. */
export function blend(inner: Airfoil, outer: Airfoil, share: number): Airfoil {
  if (share <= 0 || inner === outer) return inner;
  if (share >= 1) return outer;
  const nodes = inner.nodes.map((value, i) => (1 - share) * value + share * outer.nodes[i]);
  return withStall(`${inner.name} to ${outer.name}, ${Math.round(100 * share)} %`, nodes);
}

/** Lift and drag coefficient at any angle of attack (rad), written to `out`. */
export function coefficientsAt(airfoil: Airfoil, angle: number, out: SectionCoefficients): void {
  coefficientsFrom(airfoil.nodes, angle, out);
}

/** The same from an airfoil's nodes. */
export function coefficientsFrom(n: Float64Array, angle: number, out: SectionCoefficients): void {
  const position = (angle + Math.PI) / STEP;
  const floor = Math.floor(position);
  const t = position - floor;
  const node = floor - NODES * Math.floor(floor / NODES);
  const at = node * STRIDE;
  const next = node === NODES - 1 ? 0 : at + STRIDE;
  // Cubic Hermite between nodes.
  const u = 1 - t;
  const startValue = u * u * (1 + 2 * t);
  const startSlope = u * u * t;
  const endValue = t * t * (1 + 2 * u);
  const endSlope = -t * t * u;
  out.lift = startValue * n[at] + startSlope * n[at + 1] + endValue * n[next] + endSlope * n[next + 1];
  out.drag = startValue * n[at + 2] + startSlope * n[at + 3] + endValue * n[next + 2] + endSlope * n[next + 3];
}

/** Stall is looked for up to this angle: beyond it the flat plate's lift peak at 45° would be mistaken for it. */
const STALL_SEARCH = Math.PI / 6;
const LIFTLESS = 1e-9;

function withStall(name: string, nodes: Float64Array): Airfoil {
  const airfoil: Airfoil = { name, nodes };
  const positive = peakAngle(airfoil, 1);
  const negative = peakAngle(airfoil, -1);
  return positive === undefined || negative === undefined ? airfoil : { ...airfoil, stall: { positive, negative } };
}

/** Angle between 0 and 30° on the side of `sign` where the lift to that side is largest. */
function peakAngle(airfoil: Airfoil, sign: 1 | -1): number | undefined {
  const out = { lift: 0, drag: 0 };
  let best: number | undefined;
  let largest = LIFTLESS;
  const fine = STEP / 10;
  for (let angle = 0; angle <= STALL_SEARCH; angle += fine) {
    coefficientsAt(airfoil, sign * angle, out);
    if (sign * out.lift > largest) {
      largest = sign * out.lift;
      best = sign * angle;
    }
  }
  return best;
}
