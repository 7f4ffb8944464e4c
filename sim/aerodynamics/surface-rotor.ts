import { RIGID_BLADES, type Rotor, type RotorLoads } from '../rotor.ts';
import type { Turbine } from '../turbine.ts';
import type { WindField } from '../wind/wind.ts';
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

/** Rotor-effective wind along the axis of a nacelle that heads elsewhere: only the direction's cosine counts. */
function alongAxis(mean: number, heading: number, wind: WindField, t: number): number {
  const direction = wind.direction?.(t) ?? 0;
  const straight = Math.cos(direction);
  return Math.abs(straight) < LEAST_COSINE ? 0 : (mean * Math.cos(direction - heading)) / straight;
}

/** The field gives what blows along its x axis; hardly anything is left of it where the wind blows across. */
const LEAST_COSINE = 0.05;

/**
 * The fast rotor: rotor-effective wind less the tower top's motion. Each blade carries its share of what a rotor with
 * all blades at its angle would: with one angle for all this is the surface itself, and a stuck blade keeps on driving
 * while the others brake, which a mean of the angles would hide. It keeps no state.
 * Both `loads` and `steadyLoads` throw SurfaceRangeError outside the surface.
 */
export function surfaceRotor(surface: CoefficientSurface): Rotor {
  const share = { torque: 0, thrust: 0 };
  /** The last question with one angle for all blades: a fixed-step integrator begins with what the clock has just asked. */
  const last = { wind: Number.NaN, rotorSpeed: Number.NaN, pitch: Number.NaN, torque: 0, thrust: 0 };

  function ofAllBlades(wind: number, rotorSpeed: number, pitch: number, out: RotorLoads): void {
    if (wind !== last.wind || rotorSpeed !== last.rotorSpeed || pitch !== last.pitch) {
      surface.torqueAndThrust(wind, rotorSpeed, pitch, last);
      last.wind = wind;
      last.rotorSpeed = rotorSpeed;
      last.pitch = pitch;
    }
    out.torque = last.torque;
    out.thrust = last.thrust;
  }

  function addBlade(wind: number, rotorSpeed: number, pitch: number, bladeCount: number, out: RotorLoads): void {
    surface.torqueAndThrust(wind, rotorSpeed, pitch, share);
    out.torque += share.torque / bladeCount;
    out.thrust += share.thrust / bladeCount;
  }

  return {
    ...RIGID_BLADES,
    resolvesBlades: false,
    loads(t, wind, motion, x, _stateAt, pitchAt, _dx, out) {
      const { heading, speed: rotorSpeed } = motion;
      const along = wind.rotorMean(t);
      const relativeWind = (heading === 0 ? along : alongAxis(along, heading, wind, t)) - motion.foreAft;
      const first = x[pitchAt[0]];
      let alike = true;
      for (let b = 1; b < pitchAt.length; b++) alike = alike && x[pitchAt[b]] === first;
      if (alike) {
        ofAllBlades(relativeWind, rotorSpeed, first, out);
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
