/**
 * A rotor's torque and thrust as smooth functions of wind, rotor speed and pitch.
 *
 *     Q = ½ρAR (V² + (ωR)²) · c_Q(s, θ)      T = ½ρA (V² + (ωR)²) · c_T(s, θ)
 *
 * Scaled so, nothing divides by the wind or by the tip speed: a parked rotor, a rotor in still air and one that turns
 * backwards are points like any other. `s` goes once round the circle of directions (ωR, V), four units a turn:
 *
 *     s = ωR / (|ωR| + κ|V|)  for V ≥ 0,     s = 2 − ωR / (|ωR| + κ|V|)  for V < 0,     κ = 4
 *
 * so that s = 0 is parked, 0.5 a tip-speed ratio of 4, 1 still air and 2 wind from behind. κ shares the knots out between
 * stall at start-up, where a small tip-speed ratio turns the flow much, and operation; 4 served both best of 2, 3, 4, 5, 8.
 */
import type { CoefficientTables } from '../turbine.ts';
import type { Blade } from './blade.ts';
import { smoothCurve, valueAt } from './cubic-curve.ts';
import { FULL_MOMENTUM, type MomentumOptions } from './momentum.ts';
import { steadyRotor } from './steady-rotor.ts';
import { closedSplineWeights, splineShareSlopes, splineShares, splineWeights } from './uniform-spline.ts';

const KAPPA = 4;
const DEGREE = Math.PI / 180;
/** s where the circle begins and ends: still air, rotor turning backwards. */
const CIRCLE_START = -1;
const CIRCLE_END = 3;

/** A surface as plain data: values at evenly spaced knots, one row of pitch angles per knot of `s`. */
export interface SurfaceData {
  speed: { first: number; last: number; count: number; closed: boolean };
  /** rad */
  pitch: { first: number; last: number; count: number };
  /** c_Q and c_T. */
  torque: readonly number[];
  thrust: readonly number[];
}

export interface SurfaceGrid {
  /** Knots on the whole circle of `s`, and knots of pitch. */
  speedKnots: number;
  pitchKnots: number;
  /** rad */
  lowestPitch: number;
  highestPitch: number;
}

/** Within 0.001 of the solved C_p at tip-speed ratios 4 to 12 and pitch −2° to 25°. */
export const DEFAULT_GRID: SurfaceGrid = {
  speedKnots: 201,
  pitchKnots: 106,
  lowestPitch: -10 * DEGREE,
  highestPitch: 95 * DEGREE,
};

/** Solves the blade at every knot of the grid. Covers every wind and rotor speed; only pitch is bounded. */
export function surfaceOfBlade(
  blade: Blade,
  grid: SurfaceGrid = DEFAULT_GRID,
  options: MomentumOptions = FULL_MOMENTUM,
): SurfaceData {
  const speed = { first: CIRCLE_START, last: CIRCLE_END, count: grid.speedKnots, closed: true };
  const pitch = { first: grid.lowestPitch, last: grid.highestPitch, count: grid.pitchKnots };
  const area = Math.PI * blade.radius ** 2;
  const torque: number[] = [];
  const thrust: number[] = [];
  for (const s of knots(speed)) {
    const { wind, tipSpeed } = directionAt(s);
    for (const angle of knots(pitch)) {
      // Unit speed and an air density of 2 make the scaling ½ρ(V² + (ωR)²) one.
      const loads = steadyRotor(blade, wind, tipSpeed / blade.radius, angle, 2, options);
      torque.push(loads.torque / (area * blade.radius));
      thrust.push(loads.thrust / area);
    }
  }
  return { speed, pitch, torque, thrust };
}

const TABLE_KNOTS_PER_UNIT = 200;
const TABLE_PITCH_STEP = 0.5 * DEGREE;

/** Brings given tables onto even knots. Covers the tables' range and no more. */
export function surfaceOfTables(tables: CoefficientTables): SurfaceData {
  const { tipSpeedRatio, pitch } = tables;
  const firstSpeed = coordinate(1, tipSpeedRatio[0]);
  const lastSpeed = coordinate(1, tipSpeedRatio[tipSpeedRatio.length - 1]);
  const lastPitch = pitch[pitch.length - 1];
  const speedAxis = {
    first: firstSpeed,
    last: lastSpeed,
    count: Math.max(4, 1 + Math.ceil((lastSpeed - firstSpeed) * TABLE_KNOTS_PER_UNIT)),
    closed: false,
  };
  const pitchAxis = {
    first: pitch[0],
    last: lastPitch,
    count: Math.max(4, 1 + Math.ceil((lastPitch - pitch[0]) / TABLE_PITCH_STEP)),
  };
  const resampled = (rows: readonly (readonly number[])[]): number[] => {
    const alongPitch = rows.map((row) => {
      const curve = smoothCurve(pitch, row);
      return knots(pitchAxis).map((angle) => valueAt(curve, angle));
    });
    const alongBoth = knots(pitchAxis).map((_, j) => {
      const curve = smoothCurve(
        tipSpeedRatio,
        alongPitch.map((row) => row[j]),
      );
      return knots(speedAxis).map((s) => {
        const ratio = (KAPPA * s) / (1 - Math.abs(s));
        return valueAt(curve, ratio) / (1 + ratio ** 2);
      });
    });
    return knots(speedAxis).flatMap((_, i) => alongBoth.map((column) => column[i]));
  };
  return {
    speed: speedAxis,
    pitch: pitchAxis,
    torque: resampled(tables.torqueCoefficient),
    thrust: resampled(tables.thrustCoefficient),
  };
}

function knots(axis: { first: number; last: number; count: number }): number[] {
  const step = (axis.last - axis.first) / (axis.count - 1);
  return Array.from({ length: axis.count }, (_, i) => axis.first + i * step);
}

/** `s` of a wind and a tip speed (any common unit). */
function coordinate(wind: number, tipSpeed: number): number {
  const share = tipSpeed / (Math.abs(tipSpeed) + KAPPA * Math.abs(wind));
  return wind >= 0 ? share : 2 - share;
}

/** Unit vector (tip speed, wind) that has the coordinate `s`. */
function directionAt(s: number): { wind: number; tipSpeed: number } {
  const share = s <= 1 ? s : 2 - s;
  const wind = ((s <= 1 ? 1 : -1) * (1 - Math.abs(share))) / KAPPA;
  const length = Math.hypot(share, wind);
  return { wind: wind / length, tipSpeed: share / length };
}

export interface TorqueAndThrust {
  /** N m, in the direction of turning. */
  torque: number;
  /** N, downwind. */
  thrust: number;
}

/** Loads and their slopes: per m/s of wind, per rad/s of rotor speed, per rad of pitch. */
export interface LoadSlopes extends TorqueAndThrust {
  torquePerWind: number;
  torquePerRotorSpeed: number;
  torquePerPitch: number;
  thrustPerWind: number;
  thrustPerRotorSpeed: number;
  thrustPerPitch: number;
}

/** The surface was asked for a point where it was never computed. */
export class SurfaceRangeError extends Error {
  override name = 'SurfaceRangeError';
}

export class CoefficientSurface {
  readonly data: SurfaceData;
  readonly radius: number;
  private readonly thrustScale: number;
  /** Spline weights, torque and thrust in turn. */
  private readonly weights: Float64Array;
  private readonly rowLength: number;
  private readonly speedKnotsPerUnit: number;
  private readonly pitchKnotsPerRadian: number;
  private readonly alongSpeed = new Float64Array(4);
  private readonly alongPitch = new Float64Array(4);
  private readonly slopeAlongSpeed = new Float64Array(4);
  private readonly slopeAlongPitch = new Float64Array(4);
  private readonly sums = { torque: 0, thrust: 0 };
  private firstWeight = 0;

  /**
   * @param rotor tip radius, m
   * @param airDensity kg/m³
   * @throws when the data's lengths do not fit their axes
   */
  constructor(data: SurfaceData, rotor: { readonly radius: number }, airDensity: number) {
    const expected = data.speed.count * data.pitch.count;
    if (data.torque.length !== expected || data.thrust.length !== expected) {
      throw new Error(
        `a surface of ${data.speed.count} by ${data.pitch.count} knots needs ${expected} values of torque and of thrust, ` +
          `not ${data.torque.length} and ${data.thrust.length}`,
      );
    }
    this.data = data;
    this.radius = rotor.radius;
    this.thrustScale = 0.5 * airDensity * Math.PI * rotor.radius ** 2;
    this.rowLength = 2 * (data.pitch.count + 2);
    this.weights = interleaved(planeWeights(data, data.torque), planeWeights(data, data.thrust));
    this.speedKnotsPerUnit = (data.speed.count - 1) / (data.speed.last - data.speed.first);
    this.pitchKnotsPerRadian = (data.pitch.count - 1) / (data.pitch.last - data.pitch.first);
  }

  /**
   * Torque and thrust, written to `out`.
   * @param wind m/s, relative to the moving rotor
   * @param rotorSpeed rad/s
   * @param pitch rad
   * @throws SurfaceRangeError outside the surface
   */
  torqueAndThrust(wind: number, rotorSpeed: number, pitch: number, out: TorqueAndThrust): void {
    const tipSpeed = rotorSpeed * this.radius;
    this.locate(wind, tipSpeed, pitch);
    this.sum(this.alongSpeed, this.alongPitch);
    const scale = this.thrustScale * (wind * wind + tipSpeed * tipSpeed);
    out.thrust = scale * this.sums.thrust;
    out.torque = scale * this.radius * this.sums.torque;
  }

  /** Torque, thrust and their slopes by the interpolant's own derivatives. Arguments and errors as `torqueAndThrust`. */
  slopes(wind: number, rotorSpeed: number, pitch: number, out: LoadSlopes): void {
    const tipSpeed = rotorSpeed * this.radius;
    const at = this.locate(wind, tipSpeed, pitch);
    splineShareSlopes(at.betweenSpeeds, this.slopeAlongSpeed);
    splineShareSlopes(at.betweenPitches, this.slopeAlongPitch);
    const squared = wind * wind + tipSpeed * tipSpeed;
    const span = Math.abs(tipSpeed) + KAPPA * Math.abs(wind);
    const perWind = span > 0 ? (-KAPPA * tipSpeed) / span ** 2 : 0;
    const perTipSpeed = span > 0 ? (KAPPA * wind) / span ** 2 : 0;
    const thrustScale = this.thrustScale;
    const torqueScale = thrustScale * this.radius;

    this.sum(this.alongSpeed, this.alongPitch);
    const { torque, thrust } = this.sums;
    this.sum(this.slopeAlongSpeed, this.alongPitch);
    const torqueAlong = this.sums.torque * this.speedKnotsPerUnit * squared;
    const thrustAlong = this.sums.thrust * this.speedKnotsPerUnit * squared;
    this.sum(this.alongSpeed, this.slopeAlongPitch);
    out.torque = torqueScale * squared * torque;
    out.thrust = thrustScale * squared * thrust;
    out.torquePerWind = torqueScale * (2 * wind * torque + torqueAlong * perWind);
    out.thrustPerWind = thrustScale * (2 * wind * thrust + thrustAlong * perWind);
    out.torquePerRotorSpeed = torqueScale * this.radius * (2 * tipSpeed * torque + torqueAlong * perTipSpeed);
    out.thrustPerRotorSpeed = thrustScale * this.radius * (2 * tipSpeed * thrust + thrustAlong * perTipSpeed);
    out.torquePerPitch = torqueScale * squared * this.sums.torque * this.pitchKnotsPerRadian;
    out.thrustPerPitch = thrustScale * squared * this.sums.thrust * this.pitchKnotsPerRadian;
  }

  /** C_p, C_q and C_t, referred to the wind. Errors as `torqueAndThrust`. */
  coefficients(tipSpeedRatio: number, pitch: number): { power: number; torque: number; thrust: number } {
    this.locate(1, tipSpeedRatio, pitch);
    this.sum(this.alongSpeed, this.alongPitch);
    const squared = 1 + tipSpeedRatio ** 2;
    const torque = squared * this.sums.torque;
    return { power: torque * tipSpeedRatio, torque, thrust: squared * this.sums.thrust };
  }

  /** The pitch angles (rad) and tip-speed ratios that the surface covers; a whole circle covers every ratio. */
  range(): { pitch: readonly [number, number]; tipSpeedRatio: readonly [number, number] } {
    const { speed, pitch } = this.data;
    const ratio = (s: number): number => (KAPPA * s) / (1 - Math.abs(s));
    return {
      pitch: [pitch.first, pitch.last],
      tipSpeedRatio: speed.closed
        ? [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY]
        : [ratio(speed.first), ratio(speed.last)],
    };
  }

  /** Finds the point's cell and its shares of the weights around it. */
  private locate(wind: number, tipSpeed: number, pitch: number): typeof position {
    const { speed, pitch: pitchAxis } = this.data;
    const still = wind === 0 && tipSpeed === 0;
    const alongSpeed = ((still ? 0 : coordinate(wind, tipSpeed)) - speed.first) * this.speedKnotsPerUnit;
    const alongPitch = (pitch - pitchAxis.first) * this.pitchKnotsPerRadian;
    const lastSpeed = speed.count - 1;
    const lastPitch = pitchAxis.count - 1;
    if (
      !(
        alongSpeed >= -SLACK &&
        alongSpeed <= lastSpeed + SLACK &&
        alongPitch >= -SLACK &&
        alongPitch <= lastPitch + SLACK
      )
    ) {
      throw this.outside(wind, tipSpeed, pitch);
    }
    const row = Math.max(0, Math.min(Math.floor(alongSpeed), lastSpeed - 1));
    const column = Math.max(0, Math.min(Math.floor(alongPitch), lastPitch - 1));
    position.betweenSpeeds = alongSpeed - row;
    position.betweenPitches = alongPitch - column;
    splineShares(position.betweenSpeeds, this.alongSpeed);
    splineShares(position.betweenPitches, this.alongPitch);
    this.firstWeight = row * this.rowLength + 2 * column;
    return position;
  }

  /** Sums the sixteen weights around the located point with the given shares. */
  private sum(alongSpeed: Float64Array, alongPitch: Float64Array): void {
    const weights = this.weights;
    const p0 = alongPitch[0];
    const p1 = alongPitch[1];
    const p2 = alongPitch[2];
    const p3 = alongPitch[3];
    let torque = 0;
    let thrust = 0;
    let w = this.firstWeight;
    for (let i = 0; i < 4; i++) {
      const share = alongSpeed[i];
      torque += share * (p0 * weights[w] + p1 * weights[w + 2] + p2 * weights[w + 4] + p3 * weights[w + 6]);
      thrust += share * (p0 * weights[w + 1] + p1 * weights[w + 3] + p2 * weights[w + 5] + p3 * weights[w + 7]);
      w += this.rowLength;
    }
    this.sums.torque = torque;
    this.sums.thrust = thrust;
  }

  private outside(wind: number, tipSpeed: number, pitch: number): SurfaceRangeError {
    const range = this.range();
    const degrees = (angle: number): string => `${(angle / DEGREE).toFixed(1)}°`;
    const covered = this.data.speed.closed
      ? 'every tip-speed ratio'
      : `tip-speed ratios ${range.tipSpeedRatio[0].toFixed(2)} to ${range.tipSpeedRatio[1].toFixed(2)}`;
    return new SurfaceRangeError(
      `the rotor's coefficients cover ${covered} and pitch ${degrees(range.pitch[0])} to ${degrees(range.pitch[1])}, ` +
        `but were asked for tip-speed ratio ${(tipSpeed / wind).toFixed(2)} (wind ${wind.toFixed(2)} m/s, ` +
        `tip speed ${tipSpeed.toFixed(2)} m/s) at pitch ${degrees(pitch)}`,
    );
  }
}

/** Rounding that a knot at the very end of an axis may carry, in knots. */
const SLACK = 1e-9;
const position = { betweenSpeeds: 0, betweenPitches: 0 };

/** Spline weights over both axes, row by row. */
function planeWeights(data: SurfaceData, values: readonly number[]): Float64Array {
  const { speed, pitch } = data;
  const columns = pitch.count + 2;
  const weights = new Float64Array((speed.count + 2) * columns);
  const alongPitch = Array.from({ length: speed.count }, (_, i) =>
    splineWeights(values.slice(i * pitch.count, (i + 1) * pitch.count)),
  );
  for (let j = 0; j < columns; j++) {
    const column = alongPitch.map((row) => row[j]);
    const alongBoth = speed.closed ? closedSplineWeights(column) : splineWeights(column);
    for (let i = 0; i < speed.count + 2; i++) weights[i * columns + j] = alongBoth[i];
  }
  return weights;
}

function interleaved(first: Float64Array, second: Float64Array): Float64Array {
  const both = new Float64Array(2 * first.length);
  for (let i = 0; i < first.length; i++) {
    both[2 * i] = first[i];
    both[2 * i + 1] = second[i];
  }
  return both;
}
