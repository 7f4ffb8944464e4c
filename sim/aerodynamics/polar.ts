import type { AirfoilData } from '../turbine.ts';
import { monotoneCurve, valueAt } from './cubic-curve.ts';

/** Lift and drag coefficient against angle of attack (rad, −π to π): a smooth description to be sampled. */
export interface Polar {
  lift(angle: number): number;
  drag(angle: number): number;
}

type FormulaData = Extract<AirfoilData, { kind: 'formula' }>;
type TableData = Extract<AirfoilData, { kind: 'table' }>;

/** Largest drag of a plate of aspect ratio AR, broadside on. Viterna and Corrigan, NASA CP-2230, 1982. */
function broadsideDrag(aspectRatio: number): number {
  return 1.11 + 0.018 * aspectRatio;
}

const logistic = (x: number): number => 1 / (1 + Math.exp(-x));

/**
 * galehold's own invented polar. With `f` the attached share of the flow, `α₊`, `α₋` the angles where half of it is
 * lost and `w = 1° + 8° · thickness` the softness of the stall:
 *
 *     f   = logistic((α₊ − α)/w) · logistic((α − α₋)/w)
 *     C_l = f · slope · (α − α₀) + (1 − f) · D sin α cos α
 *     C_d = C_d,min · (1 + ½ f x⁴/(1 + x²)) + (1 − f) · D sin² α,   x = (slope · (α − α₀) − ½ C_l,max) / (½ C_l,max)
 *
 * `D` is the broadside drag of the flat plate; the term in `x` gives the drag bucket its flat floor and its walls. `α₊` is set so
 * that the largest lift is C_l,max, `α₋` so that the most negative is −(C_l,max − slope · |α₀|): camber takes from one
 * side what it gives to the other. Thickness 1 is a cylinder: no lift, drag C_d,min at every angle.
 *
 * @throws when the largest lift cannot be reached or is not above the lift that camber alone gives
 */
export function formulaPolar(data: FormulaData): Polar {
  const { thickness, liftSlope, zeroLiftAngle, maximumLift, minimumDrag } = data;
  if (thickness >= 1) return { lift: () => 0, drag: () => minimumDrag };

  const negativeMaximum = maximumLift - liftSlope * Math.abs(zeroLiftAngle);
  if (!(negativeMaximum > 0)) {
    throw new Error(
      `airfoil '${data.name}': a maximum lift of ${maximumLift} is no more than what camber gives at no incidence ` +
        `(${(liftSlope * Math.abs(zeroLiftAngle)).toFixed(2)}); raise it or bring the zero-lift angle nearer to zero`,
    );
  }
  const plate = broadsideDrag(data.aspectRatio);
  const softness = (Math.PI / 180) * (1 + 8 * thickness);
  const attachedLift = (angle: number): number => liftSlope * (angle - zeroLiftAngle);
  const plateLift = (angle: number): number => plate * Math.sin(angle) * Math.cos(angle);
  const mix = (share: number, angle: number): number => share * attachedLift(angle) + (1 - share) * plateLift(angle);

  const upper = stallAngle(maximumLift, data.name, (stall, angle) => mix(logistic((stall - angle) / softness), angle));
  const lower = -stallAngle(
    negativeMaximum,
    data.name,
    (stall, angle) => -mix(logistic((stall - angle) / softness), -angle),
  );
  const attachedShare = (angle: number): number =>
    logistic((upper - angle) / softness) * logistic((angle - lower) / softness);

  return {
    lift: (angle) => mix(attachedShare(angle), angle),
    drag: (angle) => {
      const share = attachedShare(angle);
      const offBucket = (attachedLift(angle) / (maximumLift / 2) - 1) ** 2;
      const walls = (0.5 * share * offBucket ** 2) / (1 + offBucket);
      return minimumDrag * (1 + walls) + (1 - share) * plate * Math.sin(angle) ** 2;
    },
  };
}

const STALL_SEARCH = Math.PI / 6;

/** The half-separation angle for which the largest lift up to 30° is `wanted`. */
function stallAngle(wanted: number, name: string, lift: (stall: number, angle: number) => number): number {
  const peak = (stall: number): number => {
    let largest = 0;
    for (let i = 0; i <= 240; i++) largest = Math.max(largest, lift(stall, (STALL_SEARCH * i) / 240));
    return largest;
  };
  let low = 0;
  let high = STALL_SEARCH;
  if (peak(low) > wanted || peak(high) < wanted) {
    throw new Error(
      `airfoil '${name}': no stall below 30° gives a maximum lift of ${wanted.toFixed(2)} ` +
        `(${peak(low).toFixed(2)} to ${peak(high).toFixed(2)} are possible); change maximum lift, lift slope or zero-lift angle`,
    );
  }
  for (let i = 0; i < 40; i++) {
    const middle = (low + high) / 2;
    if (peak(middle) < wanted) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

const FULL_CIRCLE_SLACK = 1e-6;

/**
 * A measured or computed polar, carried to ±180° where it is short.
 * @throws when angles do not rise, do not straddle zero, end between 90° and 180°, or a full circle does not close
 */
export function tablePolar(data: TableData): Polar {
  const { name, angle, lift, drag } = data;
  const last = angle.length - 1;
  if (angle.length < 3 || lift.length !== angle.length || drag.length !== angle.length) {
    throw new Error(`airfoil '${name}': a polar needs three or more angles, and a lift and a drag for each`);
  }
  if (!(angle[0] < 0 && angle[last] > 0)) {
    throw new Error(`airfoil '${name}': the polar's angles must run from below zero to above zero`);
  }
  const unfit = drag.findIndex((d) => !(d >= 0));
  if (unfit >= 0) throw new Error(`airfoil '${name}': drag must not be negative, but is ${drag[unfit]}`);

  const x = [...angle];
  const l = [...lift];
  const d = [...drag];
  const full = x[0] <= -Math.PI + FULL_CIRCLE_SLACK && x[last] >= Math.PI - FULL_CIRCLE_SLACK;
  if (full) {
    if (Math.abs(l[0] - l[last]) > 1e-3 || Math.abs(d[0] - d[last]) > 1e-3) {
      throw new Error(`airfoil '${name}': the polar's values at -180° and 180° differ; they are the same flow`);
    }
  } else {
    const plate = broadsideDrag(data.aspectRatio);
    const reversedDrag = Math.min(...drag);
    extend(name, { angle: x[last], lift: l[last], drag: d[last] }, plate, reversedDrag, (point) => {
      x.push(point.angle);
      l.push(point.lift);
      d.push(point.drag);
    });
    extend(name, { angle: -x[0], lift: -l[0], drag: d[0] }, plate, reversedDrag, (point) => {
      x.unshift(-point.angle);
      l.unshift(-point.lift);
      d.unshift(point.drag);
    });
  }
  const liftCurve = monotoneCurve(x, l);
  const dragCurve = monotoneCurve(x, d);
  return { lift: (a) => valueAt(liftCurve, a), drag: (a) => valueAt(dragCurve, a) };
}

interface PolarPoint {
  angle: number;
  lift: number;
  drag: number;
}

const EXTENSION_STEP = Math.PI / 90;

/**
 * Carries a polar from its last point to 180°.
 * To 90°: Viterna and Corrigan, NASA CP-2230, 1982. Beyond: the same flow from behind, lift reversed, faded to no lift
 * and `reversedDrag` at 180° over the angle that the table covers in front.
 */
function extend(
  name: string,
  from: PolarPoint,
  plate: number,
  reversedDrag: number,
  add: (point: PolarPoint) => void,
): void {
  if (from.angle >= Math.PI / 2) {
    throw new Error(
      `airfoil '${name}': a polar must stop short of 90° (then it is carried on) or cover -180° to 180°, ` +
        `not stop at ${((from.angle * 180) / Math.PI).toFixed(1)}°`,
    );
  }
  const sinFrom = Math.sin(from.angle);
  const cosFrom = Math.cos(from.angle);
  const liftConstant = ((from.lift - plate * sinFrom * cosFrom) * sinFrom) / cosFrom ** 2;
  const dragConstant = (from.drag - plate * sinFrom ** 2) / cosFrom;
  const ahead = (a: number): PolarPoint => ({
    angle: a,
    // C_l = ½ C_d,max sin 2α + A₂ cos²α / sin α,  C_d = C_d,max sin²α + B₂ cos α
    lift: (plate / 2) * Math.sin(2 * a) + (liftConstant * Math.cos(a) ** 2) / Math.sin(a),
    drag: plate * Math.sin(a) ** 2 + dragConstant * Math.cos(a),
  });
  const steps = Math.ceil((Math.PI / 2 - from.angle) / EXTENSION_STEP);
  const front: PolarPoint[] = [];
  for (let i = 1; i <= steps; i++) front.push(ahead(from.angle + ((Math.PI / 2 - from.angle) * i) / steps));
  for (const point of front) add(point);
  for (const point of [from, ...front.slice(0, -1)].reverse()) {
    add({ angle: Math.PI - point.angle, lift: -point.lift, drag: point.drag });
  }
  add({ angle: Math.PI, lift: 0, drag: reversedDrag });
}
