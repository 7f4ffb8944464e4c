import type { AirfoilData } from '../turbine.ts';
import { formulaPolar, type Polar, tablePolar } from './polar.ts';

/** Nodes over the full circle: one every half degree, so that a look-up needs no search. */
const NODES = 720;
const STEP = (2 * Math.PI) / NODES;
const STEPS_PER_RADIAN = 1 / STEP;
/** Numbers a node keeps: the cubics of lift and of drag from it to the next, rising powers of the share of a step. */
const STRIDE = 8;

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
  const angles = Array.from({ length: NODES }, (_, i) => -Math.PI + i * STEP);
  const nodes = new Float64Array(NODES * STRIDE);
  writeCubics(angles.map(polar.lift), nodes, 0);
  writeCubics(angles.map(polar.drag), nodes, STRIDE / 2);
  return withStall(name, nodes);
}

/** The closed cubic curve through `values`, its slope at each that of the parabola through it and its neighbours. */
function writeCubics(values: readonly number[], nodes: Float64Array, offset: number): void {
  const value = (i: number): number => values[(i + NODES) % NODES] ?? Number.NaN;
  const slope = (i: number): number => (value(i + 1) - value(i - 1)) / 2;
  for (let i = 0; i < NODES; i++) {
    const at = i * STRIDE + offset;
    const rise = value(i + 1) - value(i);
    nodes[at] = value(i);
    nodes[at + 1] = slope(i);
    nodes[at + 2] = 3 * rise - 2 * slope(i) - slope(i + 1);
    nodes[at + 3] = slope(i) + slope(i + 1) - 2 * rise;
  }
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
  let position = (angle + Math.PI) * STEPS_PER_RADIAN;
  if (position < 0 || position >= NODES) position -= NODES * Math.floor(position / NODES);
  // Rounding may lift a position just below zero to the very end, which is the start.
  if (position === NODES) position = 0;
  const node = Math.floor(position);
  const t = position - node;
  const at = node * STRIDE;
  out.lift = n[at] + t * (n[at + 1] + t * (n[at + 2] + t * n[at + 3]));
  out.drag = n[at + 4] + t * (n[at + 5] + t * (n[at + 6] + t * n[at + 7]));
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
