import type { Rotor } from '../rotor.ts';
import type { Turbine } from '../turbine.ts';
import { bladeOf } from './blade.ts';
import { CoefficientSurface, type SurfaceData, surfaceOfBlade, surfaceOfTables } from './coefficient-surface.ts';

/** Computes a turbine's surface data, from its blade or its tables. They depend on nothing but `turbine.rotor`. */
export function surfaceDataOf(turbine: Turbine): SurfaceData {
  const { rotor } = turbine;
  return rotor.aerodynamics.kind === 'tables'
    ? surfaceOfTables(rotor.aerodynamics.tables)
    : surfaceOfBlade(bladeOf(rotor));
}

/** A turbine's coefficient surface in its own air. `data` spares the computing where they are at hand. */
export function surfaceOf(turbine: Turbine, data: SurfaceData = surfaceDataOf(turbine)): CoefficientSurface {
  return new CoefficientSurface(data, turbine.rotor, turbine.airDensity);
}

/**
 * The fast rotor: rotor-effective wind less the tower top's motion, and the mean of the blades' pitch. It keeps no state.
 * Both `loads` and `steadyLoads` throw SurfaceRangeError outside the surface.
 */
export function surfaceRotor(surface: CoefficientSurface): Rotor {
  return {
    stateCount: 0,
    loads(t, wind, rotorSpeed, towerVelocity, x, pitchAt, out) {
      let pitch = 0;
      for (let blade = 0; blade < pitchAt.length; blade++) pitch += x[pitchAt[blade]];
      surface.torqueAndThrust(wind.rotorMean(t) - towerVelocity, rotorSpeed, pitch / pitchAt.length, out);
    },
    steadyLoads(windSpeed, rotorSpeed, pitch, out) {
      surface.torqueAndThrust(windSpeed, rotorSpeed, pitch, out);
    },
  };
}
