import { type Blade, sectionAt } from './blade.ts';
import { emptyFlow, FULL_MOMENTUM, type MomentumOptions, type SectionFlow, solveSection } from './momentum.ts';

/** Where a rotor runs: m/s, rad/s, rad, kg/m³. */
export interface RotorPoint {
  windSpeed: number;
  rotorSpeed: number;
  pitch: number;
  airDensity: number;
}

/** The velocity triangle at one station, with what the blade is there and how far it is from stall. SI and radians. */
export interface VelocityTriangle extends SectionFlow {
  radius: number;
  chord: number;
  twist: number;
  airfoil: string;
  /** Angles of attack of largest and most negative lift, and the distance to each; absent where nothing lifts. */
  stall?: { positive: number; negative: number };
  /** Distance to the nearer of the two, negative when stalled. */
  stallMargin?: number;
}

/**
 * Velocity triangles at the given radii.
 * @param radii m, between hub and tip
 */
export function velocityTriangles(
  blade: Blade,
  radii: readonly number[],
  point: RotorPoint,
  options: MomentumOptions = FULL_MOMENTUM,
): VelocityTriangle[] {
  return radii.map((radius) => {
    const section = sectionAt(blade, radius);
    const flow = emptyFlow();
    solveSection(section, blade, point.windSpeed, point.rotorSpeed, point.pitch, point.airDensity, options, flow);
    const place = { radius, chord: section.chord, twist: section.twist, airfoil: section.airfoil.name };
    const { stall } = section.airfoil;
    if (!stall) return { ...flow, ...place };
    const stallMargin = Math.min(stall.positive - flow.angleOfAttack, flow.angleOfAttack - stall.negative);
    return { ...flow, ...place, stall, stallMargin };
  });
}

/** `count` radii in the middles of equal strips from hub to tip, m. */
export function evenRadii(blade: Blade, count: number): number[] {
  const span = blade.radius - blade.hubRadius;
  return Array.from({ length: count }, (_, i) => blade.hubRadius + (span * (i + 0.5)) / count);
}
