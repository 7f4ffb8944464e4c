import type { AirfoilData, BladeData, RotorData } from '../turbine.ts';
import { type Airfoil, airfoilOf, blend, coefficientsAt } from './airfoil.ts';
import { type CubicCurve, monotoneCurve, valueAt } from './cubic-curve.ts';

/** A strip of one blade. */
export interface BladeSection {
  /** Middle of the strip, from the rotor axis, and its width along the span, m. */
  readonly radius: number;
  readonly width: number;
  /** m */
  readonly chord: number;
  /** rad, positive towards feather; the blade's pitch adds to it. */
  readonly twist: number;
  readonly airfoil: Airfoil;
}

export interface Blade {
  readonly bladeCount: number;
  /** Tip and hub radius, m. */
  readonly radius: number;
  readonly hubRadius: number;
  /** Chord (m) and twist (rad) against radius (m). */
  readonly chord: CubicCurve;
  readonly twist: CubicCurve;
  /** Airfoils by radius, rising; sections between two blend linearly. */
  readonly airfoils: readonly { radius: number; airfoil: Airfoil }[];
  /** Strips from hub to tip that tile the span. */
  readonly sections: readonly BladeSection[];
}

export const DEFAULT_SECTIONS = 40;

/**
 * The blade that a rotor's data describe, cut into strips that are fine at hub and tip, where the load ends steeply.
 * @throws when the rotor is given by coefficient tables, a station names no known airfoil, or the stations do not cover
 * the span
 */
export function bladeOf(rotor: RotorData, sectionCount = DEFAULT_SECTIONS): Blade {
  if (rotor.aerodynamics.kind !== 'blade') {
    throw new Error('this rotor is given by coefficient tables: there is no blade to look at');
  }
  const { blade, airfoils } = rotor.aerodynamics;
  const shape = blade.kind === 'stations' ? givenShape(blade, airfoils) : optimumShape(rotor, blade, airfoils);
  const outline = { bladeCount: rotor.bladeCount, radius: rotor.radius, hubRadius: rotor.hubRadius, ...shape };
  checkSpan(outline);
  return { ...outline, sections: strips(outline, sectionCount) };
}

type Shape = Pick<Blade, 'chord' | 'twist' | 'airfoils'>;
type Outline = Omit<Blade, 'sections'>;

function checkSpan({ chord, radius, hubRadius }: Outline): void {
  const first = chord.x[0];
  const last = chord.x[chord.x.length - 1];
  const slack = 1e-6 * radius;
  if (first > hubRadius + slack || last < radius - slack) {
    throw new Error(
      `the blade's stations run from ${first} m to ${last} m but must cover the span from the hub radius ` +
        `${hubRadius} m to the tip radius ${radius} m`,
    );
  }
  const unfit = chord.y.findIndex((c) => !(c > 0));
  if (unfit >= 0) throw new Error(`the chord at radius ${chord.x[unfit]} m is ${chord.y[unfit]} m; it must be above 0`);
}

function givenShape(blade: Extract<BladeData, { kind: 'stations' }>, airfoils: readonly AirfoilData[]): Shape {
  const known = airfoilsByName(airfoils);
  const radius = blade.stations.map((s) => s.radius);
  return {
    chord: monotoneCurve(
      radius,
      blade.stations.map((s) => s.chord),
    ),
    twist: monotoneCurve(
      radius,
      blade.stations.map((s) => s.twist),
    ),
    airfoils: blade.stations.map((s) => ({ radius: s.radius, airfoil: known(s.airfoil) })),
  };
}

/**
 * Chord and twist that an ideal rotor with wake rotation would have at its design tip-speed ratio, within the limits
 * of what can be built: a largest chord, a largest twist, and a round root that widens into the working sections up to
 * where the second of `sections` stands.
 */
function optimumShape(
  rotor: RotorData,
  blade: Extract<BladeData, { kind: 'optimum layout' }>,
  airfoilData: readonly AirfoilData[],
): Shape {
  const known = airfoilsByName(airfoilData);
  const airfoils = blade.sections.map((s) => ({
    radius: s.relativeRadius * rotor.radius,
    airfoil: known(s.airfoil),
  }));
  const shoulder = Math.max(blade.rootEnd, airfoils.length > 1 ? airfoils[1].radius : blade.rootEnd);
  const coefficients = { lift: 0, drag: 0 };

  const workingChord = (radius: number): number => {
    coefficientsAt(airfoilAt(airfoils, Math.max(radius, shoulder)), blade.designAngleOfAttack, coefficients);
    const localSpeedRatio = (blade.designTipSpeedRatio * radius) / rotor.radius;
    return Math.min(optimumChord(radius, localSpeedRatio, rotor.bladeCount, coefficients.lift), blade.chordLimit);
  };
  const chordAt = (radius: number): number => {
    if (radius <= blade.rootEnd) return blade.rootDiameter;
    if (radius >= shoulder) return workingChord(radius);
    const share = smoothStep((radius - blade.rootEnd) / (shoulder - blade.rootEnd));
    return (1 - share) * blade.rootDiameter + share * workingChord(radius);
  };
  const twistAt = (radius: number): number => {
    const localSpeedRatio = (blade.designTipSpeedRatio * radius) / rotor.radius;
    return Math.min(optimumInflow(localSpeedRatio) - blade.designAngleOfAttack, blade.twistLimit);
  };

  const span = rotor.radius - rotor.hubRadius;
  const radius = Array.from({ length: blade.stations }, (_, i) => rotor.hubRadius + (span * i) / (blade.stations - 1));
  return {
    chord: monotoneCurve(radius, radius.map(chordAt)),
    twist: monotoneCurve(radius, radius.map(twistAt)),
    airfoils,
  };
}

const smoothStep = (x: number): number => x * x * (3 - 2 * x);

/**
 * Inflow angle (rad) of the ideal rotor with wake rotation: φ = ⅔ atan(1/λ_r).
 * Source: Glauert, in Durand, *Aerodynamic Theory* IV, 1935; in this form in Manwell, McGowan, Rogers.
 */
export function optimumInflow(localSpeedRatio: number): number {
  return (2 / 3) * Math.atan(1 / localSpeedRatio);
}

/** Chord (m) of that rotor at `radius` (m): c = 8πr/(B C_l) · (1 − cos φ). Same source. */
export function optimumChord(radius: number, localSpeedRatio: number, bladeCount: number, lift: number): number {
  return ((8 * Math.PI * radius) / (bladeCount * lift)) * (1 - Math.cos(optimumInflow(localSpeedRatio)));
}

function airfoilsByName(airfoils: readonly AirfoilData[]): (name: string) => Airfoil {
  const known = new Map(airfoils.map((data) => [data.name, airfoilOf(data)]));
  return (name) => {
    const found = known.get(name);
    if (!found)
      throw new Error(`the blade names the airfoil '${name}', but the turbine has: ${[...known.keys()].join(', ')}`);
    return found;
  };
}

function airfoilAt(airfoils: Blade['airfoils'], radius: number): Airfoil {
  let inner = airfoils[0];
  for (const outer of airfoils) {
    if (outer.radius >= radius) {
      const gap = outer.radius - inner.radius;
      return gap > 0 ? blend(inner.airfoil, outer.airfoil, (radius - inner.radius) / gap) : outer.airfoil;
    }
    inner = outer;
  }
  return inner.airfoil;
}

/** The blade's section at a radius (m), of no width. */
export function sectionAt(blade: Omit<Blade, 'sections'>, radius: number): BladeSection {
  return {
    radius,
    width: 0,
    chord: valueAt(blade.chord, radius),
    twist: valueAt(blade.twist, radius),
    airfoil: airfoilAt(blade.airfoils, radius),
  };
}

/** Strips whose bounds are spaced as the cosine of equal angles. */
function strips(outline: Outline, count: number): BladeSection[] {
  const middle = (outline.radius + outline.hubRadius) / 2;
  const half = (outline.radius - outline.hubRadius) / 2;
  const bound = (i: number): number => middle - half * Math.cos((Math.PI * i) / count);
  return Array.from({ length: count }, (_, i) => ({
    ...sectionAt(outline, (bound(i) + bound(i + 1)) / 2),
    width: bound(i + 1) - bound(i),
  }));
}
