import { type Airfoil, coefficientsAt } from './airfoil.ts';

/**
 * What Øye's trailing-edge separation model needs of a section: lift f C_l,inviscid + (1 − f) C_l,separated, where the
 * attached fraction f follows its static value with the time constant 4c/W (Øye 1991; as in Hansen, *Aerodynamics of
 * Wind Turbines*). Inviscid lift is taken as slope · sin(α − α₀), which has no meaning far from stall but stays bounded.
 */
export interface AttachedFlow {
  /** 1/rad: the least slope that no static lift exceeds, and α₀, rad. */
  slope: number;
  zeroLiftAngle: number;
}

/** Chords that the air travels while f closes most of the gap: common practice. */
export const LAG_CHORDS = 4;

const DEGREE = Math.PI / 180;
/** Static lift is compared with the inviscid line on this range around α₀; nearer than the first it is all rounding. */
const NEAR = 0.5 * DEGREE;
const FAR = 30 * DEGREE;
const STEP = 0.25 * DEGREE;

/** The attached flow that an airfoil's static polar implies; no slope for a section that does not lift. */
export function attachedFlow(airfoil: Airfoil): AttachedFlow {
  if (!airfoil.stall) return { slope: 0, zeroLiftAngle: 0 };
  const out = { lift: 0, drag: 0 };
  const lift = (angle: number): number => {
    coefficientsAt(airfoil, angle, out);
    return out.lift;
  };
  let low = airfoil.stall.negative;
  let high = airfoil.stall.positive;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (lift(middle) < 0) low = middle;
    else high = middle;
  }
  const zeroLiftAngle = 0.5 * (low + high);
  let slope = 0;
  for (let away = NEAR; away <= FAR; away += STEP) {
    slope = Math.max(slope, lift(zeroLiftAngle + away) / Math.sin(away), -lift(zeroLiftAngle - away) / Math.sin(away));
  }
  return { slope, zeroLiftAngle };
}

/**
 * Static attached fraction by Kirchhoff's law, C_l = C_l,inviscid (½ + ½√f)², from static and inviscid lift.
 * Fully separated where less than a quarter of the inviscid lift is left.
 */
export function staticAttachment(lift: number, inviscid: number): number {
  if (inviscid === 0) return 1;
  const ratio = lift / inviscid;
  if (ratio >= 1) return 1;
  if (ratio <= 0.25) return 0;
  const root = 2 * Math.sqrt(ratio) - 1;
  return root * root;
}

/** Lift at attached fraction `f` where the static one is `settled`; equals the static lift where the two agree. */
export function laggedLift(lift: number, inviscid: number, settled: number, f: number): number {
  // Kirchhoff's separated lift, (C_l − f C_l,inviscid)/(1 − f) at the static f, tends to half the inviscid as f → 1.
  const separated = settled < 1 - 1e-6 ? (lift - settled * inviscid) / (1 - settled) : 0.5 * inviscid;
  return lift + (f - settled) * (inviscid - separated);
}
