import { refusal } from '../scenarios/input-error.ts';
import { parseQuantity, type QuantityKind } from '../scenarios/quantity.ts';
import { cachedSurface } from '../scenarios/surface-cache.ts';
import { type Blade, bladeOf } from '../sim/aerodynamics/blade.ts';
import { type SteadyRotor, steadyRotor } from '../sim/aerodynamics/steady-rotor.ts';
import { surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
import {
  evenRadii,
  type RotorPoint,
  type VelocityTriangle,
  velocityTriangles,
} from '../sim/aerodynamics/velocity-triangles.ts';
import { Trim } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';

/** What `galehold blade` shows, in SI and radians. */
export interface BladeView {
  turbine: Turbine;
  blade: Blade;
  point: RotorPoint;
  /** How rotor speed and pitch came about. */
  origin: string;
  /** As many stations as were asked for. */
  stations: VelocityTriangle[];
  totals: SteadyRotor;
}

export interface BladeQuestion {
  wind: string;
  rotorSpeed?: string;
  pitch?: string;
  stations: string;
}

const MOST_STATIONS = 200;

/**
 * Solves the blade for a question whose values are texts with units.
 * @throws InputError for a value that makes no sense, or a turbine without a blade
 */
export function bladeView(turbine: Turbine, file: string, question: BladeQuestion): BladeView {
  const blade = orRefuse(file, () => bladeOf(turbine.rotor));
  const count = Number(question.stations);
  if (!(Number.isInteger(count) && count >= 1 && count <= MOST_STATIONS)) {
    throw refusal('--stations', `must be a whole number from 1 to ${MOST_STATIONS}, not "${question.stations}"`);
  }
  const { origin, ...point } = operatingPoint(turbine, file, question);
  return {
    turbine,
    blade,
    point,
    origin,
    stations: velocityTriangles(blade, evenRadii(blade, count), point),
    totals: steadyRotor(blade, point.windSpeed, point.rotorSpeed, point.pitch, point.airDensity),
  };
}

function operatingPoint(turbine: Turbine, file: string, question: BladeQuestion): RotorPoint & { origin: string } {
  const { airDensity } = turbine;
  const windSpeed = value('--wind', question.wind, 'speed');
  if (windSpeed < 0) throw refusal('--wind', `must not be negative, but is "${question.wind}"`);
  const rotorSpeed = given('--rotor-speed', question.rotorSpeed, 'rotational speed');
  const pitch = given('--pitch', question.pitch, 'angle');
  if (rotorSpeed !== undefined && pitch !== undefined) {
    return { windSpeed, rotorSpeed, pitch, airDensity, origin: 'rotor speed and pitch as given' };
  }
  const steady = orRefuse(
    file,
    () => new Trim(turbine, surfaceRotor(cachedSurface(turbine))).at(windSpeed),
    'give --rotor-speed and --pitch',
  );
  const parts = [rotorSpeed === undefined ? 'rotor speed' : '', pitch === undefined ? 'pitch' : ''].filter(Boolean);
  return {
    windSpeed,
    rotorSpeed: rotorSpeed ?? steady.rotorSpeed,
    pitch: pitch ?? steady.pitch,
    airDensity,
    origin: `${parts.join(' and ')} of steady operation in this wind`,
  };
}

function given(option: string, text: string | undefined, kind: QuantityKind): number | undefined {
  return text === undefined ? undefined : value(option, text, kind);
}

function value(option: string, text: string, kind: QuantityKind): number {
  return orRefuse(option, () => parseQuantity(text, kind));
}

function orRefuse<T>(where: string, make: () => T, advice?: string): T {
  try {
    return make();
  } catch (cause) {
    const message = (cause as Error).message;
    throw refusal(where, advice === undefined ? message : `${message}; ${advice}`);
  }
}
