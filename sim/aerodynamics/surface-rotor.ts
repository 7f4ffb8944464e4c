import type { Rotor, RotorLoads } from '../rotor.ts';
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
 * The fast rotor: rotor-effective wind less the tower top's motion. Each blade carries its share of what a rotor with
 * all blades at its angle would: with one angle for all this is the surface itself, and a stuck blade keeps on driving
 * while the others brake, which a mean of the angles would hide. It keeps no state.
 * Both `loads` and `steadyLoads` throw SurfaceRangeError outside the surface.
 */
export function surfaceRotor(surface: CoefficientSurface): Rotor {
  const share = { torque: 0, thrust: 0 };

  function addBlade(wind: number, rotorSpeed: number, pitch: number, bladeCount: number, out: RotorLoads): void {
    surface.torqueAndThrust(wind, rotorSpeed, pitch, share);
    out.torque += share.torque / bladeCount;
    out.thrust += share.thrust / bladeCount;
  }

  return {
    stateCount: 0,
    resolvesBlades: false,
    loads(t, wind, rotorSpeed, towerVelocity, x, pitchAt, out) {
      const relativeWind = wind.rotorMean(t) - towerVelocity;
      const first = x[pitchAt[0]];
      let alike = true;
      for (let b = 1; b < pitchAt.length; b++) alike = alike && x[pitchAt[b]] === first;
      if (alike) {
        surface.torqueAndThrust(relativeWind, rotorSpeed, first, out);
        return;
      }
      out.torque = 0;
      out.thrust = 0;
      for (let b = 0; b < pitchAt.length; b++) addBlade(relativeWind, rotorSpeed, x[pitchAt[b]], pitchAt.length, out);
    },
    steadyLoads(windSpeed, rotorSpeed, pitch, out) {
      surface.torqueAndThrust(windSpeed, rotorSpeed, pitch, out);
    },
  };
}
