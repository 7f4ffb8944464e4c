import type { Blade } from '../sim/aerodynamics/blade.ts';
import type { CoefficientSurface, LoadSlopes } from '../sim/aerodynamics/coefficient-surface.ts';
import { evenRadii, velocityTriangles } from '../sim/aerodynamics/velocity-triangles.ts';
import type { TrimPoint } from '../sim/trim.ts';

/** Slopes of torque and thrust at a trim point, by the coefficient surface's own derivatives. */
export function rotorSlopes(surface: CoefficientSurface, point: TrimPoint): LoadSlopes {
  const slopes: LoadSlopes = {
    torque: 0,
    thrust: 0,
    torquePerWind: 0,
    torquePerRotorSpeed: 0,
    torquePerPitch: 0,
    thrustPerWind: 0,
    thrustPerRotorSpeed: 0,
    thrustPerPitch: 0,
  };
  surface.slopes(point.windSpeed, point.rotorSpeed, point.pitch, slopes);
  return slopes;
}

/** How far the blade is from stall where it is nearest to it. */
export interface StallMargin {
  /** rad; negative where a section has stalled. */
  margin: number;
  /** m */
  radius: number;
}

/** Inboard of this share of the radius thick sections stall as a matter of course, and outboard of the other the tip's own flow rules. */
const [INNER, OUTER] = [0.3, 0.95];
const STATIONS = 40;

/**
 * The smallest angle to stall, towards either side, of any section between 30 % and 95 % of the radius.
 * @param airDensity kg/m³
 * @returns undefined where nothing there has a stall
 */
export function stallMargin(blade: Blade, point: TrimPoint, airDensity: number): StallMargin | undefined {
  const radii = evenRadii(blade, STATIONS).filter((r) => r >= INNER * blade.radius && r <= OUTER * blade.radius);
  let nearest: StallMargin | undefined;
  for (const { radius, stallMargin: margin } of velocityTriangles(blade, radii, { ...point, airDensity })) {
    if (margin !== undefined && !(nearest && nearest.margin <= margin)) nearest = { margin, radius };
  }
  return nearest;
}
