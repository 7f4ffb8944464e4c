import { Matrix } from 'ml-matrix';
import { Plant } from '../sim/plant.ts';
import type { Rotor } from '../sim/rotor.ts';
import { electricalPower } from '../sim/sensors.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { uniformWind } from '../sim/wind/uniform.ts';

/** Inputs of the linear plant, in this order: at the drive, at the converter, over the rotor. */
export const PLANT_INPUTS = ['pitch demand', 'generator torque demand', 'wind speed'] as const;
/** Units of the inputs where pitch is demanded as an angle. */
export const PLANT_INPUT_UNITS = ['rad', 'N m', 'm/s'] as const;

export const PLANT_OUTPUTS = [
  'generator speed',
  'rotor speed',
  'pitch angle',
  'tower-top acceleration fore-aft',
  'electrical power',
  'thrust',
  'aerodynamic torque',
  'tower-top deflection',
] as const;
export const PLANT_OUTPUT_UNITS = ['rad/s', 'rad/s', 'rad', 'm/s^2', 'W', 'N', 'N m', 'm'] as const;
export type PlantOutput = (typeof PLANT_OUTPUTS)[number];

/** ẋ = A x + B u, y = C x + D u: small deviations from a trim point. SI and radians. */
export interface LinearPlant {
  point: TrimPoint;
  states: readonly string[];
  a: Matrix;
  b: Matrix;
  c: Matrix;
  d: Matrix;
  /** States and inputs at which the plant's slopes differ on the two sides; the slope of the positive side is taken. */
  bends: readonly string[];
}

/** Of each state's scale. Small enough that no rate limit of the drives binds; `bends` tells if one does. */
const RELATIVE_STEP = 1e-4;
/** Slopes of the two sides that differ by more than this share are a bend. */
const BEND = 0.02;

/** Running totals and what turns without end decide nothing that comes after; the yaw drive stands still. */
const LEFT_OUT = /^(drivetrain: azimuth|account: .*|brake: .*|yaw: .*)$/;

/** One coordinate of the linear model: the slots of the plant's state that move together. */
interface Coordinate {
  name: string;
  slots: readonly number[];
  /** What one unit of the coordinate puts into each slot. */
  weights: readonly number[];
  scale: number;
}

/**
 * The plant's slopes at a trim point by central differences on its declared state.
 *
 * All blades move together: what each blade has of its own (pitch, wake, bending) becomes a collective coordinate, the
 * mean over the blades. That is the first row of the Coleman transform, and all that couples to shaft and tower while the
 * wind is uniform and the rotor the same at every azimuth; a rotor with states must be so (see `axisymmetric`), and
 * `point` must carry them.
 * @param pitchAs whether the drive is asked for an angle (rad) or a rate (rad/s)
 * @throws RangeError where `point` is no steady state of the plant
 */
export function linearPlant(
  turbine: Turbine,
  rotor: Rotor,
  point: TrimPoint,
  pitchAs: 'angle' | 'rate' = 'angle',
): LinearPlant {
  const wind = { speed: point.windSpeed };
  const field = uniformWind({ speed: () => wind.speed });
  // The transport delay is no state of the plant but of the loop, where it is exact.
  const plant = new Plant({ ...turbine, pitchDrive: { ...turbine.pitchDrive, delay: 0 } }, rotor, field, 1);
  const x = new Float64Array(plant.layout.size);
  const memory = new Float64Array(plant.memoryLayout.size);
  plant.start(point, false, x, memory);
  const dx = new Float64Array(x.length);
  const coordinates = coordinatesOf(plant);

  const demandPitch = (deviation: number) => {
    const demand = pitchAs === 'rate' ? deviation : point.pitch + deviation;
    for (let blade = 0; blade < turbine.rotor.bladeCount; blade++) {
      plant.pitch.post(0, blade, demand, pitchAs === 'rate', memory);
    }
    plant.pitch.arrive(0, false, memory);
  };
  const inputs: { name: string; scale: number; set: (deviation: number) => void }[] = [
    { name: PLANT_INPUTS[0], scale: 0.1, set: demandPitch },
    {
      name: PLANT_INPUTS[1],
      scale: turbine.generator.maximumTorque,
      set: (deviation) => plant.generator.demand(point.generatorTorque + deviation, memory),
    },
    {
      name: PLANT_INPUTS[2],
      scale: point.windSpeed,
      set: (deviation) => {
        wind.speed = point.windSpeed + deviation;
      },
    },
  ];
  for (const input of inputs) input.set(0);

  const n = coordinates.length;
  // A rotor may keep its last answer for the same instant: every evaluation has an instant of its own.
  let instant = 0;
  /** Derivatives of the coordinates, then the outputs. */
  const evaluate = (): number[] => {
    plant.derivative(instant++, x, memory, dx);
    return [...coordinates.map((coordinate) => coordinateRate(coordinate, dx)), ...outputsOf(plant, x)];
  };
  const steady = evaluate();
  checkSteady(steady.slice(0, n), coordinates, point);

  const bends: string[] = [];
  const slopes = (name: string, scale: number, set: (deviation: number) => void): number[] => {
    const step = RELATIVE_STEP * scale;
    set(step);
    const above = evaluate();
    set(-step);
    const below = evaluate();
    set(0);
    const bent = above.slice(0, n).some((value, i) => {
      const twice = Math.abs(value - below[i]);
      const bend = Math.abs(value + below[i] - 2 * steady[i]);
      return bend > BEND * twice && bend > 1e-9 * coordinates[i].scale;
    });
    if (bent) bends.push(name);
    return above.map((value, i) => (bent ? (value - steady[i]) / step : (value - below[i]) / (2 * step)));
  };

  const byState = coordinates.map(({ name, slots, weights, scale }) => {
    const start = slots.map((slot) => x[slot]);
    return slopes(name, scale, (deviation) => {
      slots.forEach((slot, i) => {
        x[slot] = start[i] + weights[i] * deviation;
      });
    });
  });
  const byInput = inputs.map(({ name, scale, set }) => slopes(name, scale, set));
  const rows = (columns: number[][], from: number, to: number) =>
    new Matrix(columns.map((column) => column.slice(from, to))).transpose();
  const last = n + PLANT_OUTPUTS.length;
  return {
    point,
    states: coordinates.map(({ name }) => name),
    a: rows(byState, 0, n),
    b: rows(byInput, 0, n),
    c: rows(byState, n, last),
    d: rows(byInput, n, last),
    bends,
  };
}

function outputsOf(plant: Plant, x: Float64Array): number[] {
  const d = plant.drivetrain.at;
  return [
    x[d + 2],
    x[d + 1],
    x[plant.pitch.angleAt],
    plant.towerAcceleration,
    electricalPower(plant, x),
    plant.loads.thrust,
    plant.loads.torque,
    x[plant.tower.at],
  ];
}

/** What belongs to a blade: its number, and what it is. */
const OF_BLADE = /^rotor: blade (\d+)(.*)$/;

function coordinatesOf(plant: Plant): Coordinate[] {
  const scales = plant.scales();
  const { names } = plant.layout;
  const { bladeCount } = plant.pitch;
  const d = plant.drivetrain.at;
  const { kind, gearRatio } = plant.turbine.drivetrain;
  return names.flatMap((name, slot): Coordinate[] => {
    if (LEFT_OUT.test(name)) return [];
    const scale = scales[slot];
    if (kind === 'rigid' && (slot === d + 2 || slot === d + 3)) return [];
    if (kind === 'rigid' && slot === d + 1) {
      return [{ name, slots: [slot, d + 2], weights: [1, gearRatio], scale }];
    }
    const pitchFrom = [plant.pitch.angleAt, plant.pitch.rateAt].find((at) => slot >= at && slot < at + bladeCount);
    const [, blade, rest = ''] = OF_BLADE.exec(name) ?? [];
    if (pitchFrom === undefined && blade === undefined) return [{ name, slots: [slot], weights: [1], scale }];
    if (pitchFrom === undefined ? blade !== '1' : slot !== pitchFrom) return [];
    const slots = Array.from({ length: bladeCount }, (_, b) =>
      pitchFrom === undefined ? names.indexOf(`rotor: blade ${b + 1}${rest}`) : pitchFrom + b,
    );
    const collective = pitchFrom === undefined ? `rotor: blades${rest}` : name.replace(/ 1$/, ' (collective)');
    return [{ name: collective, slots, weights: slots.map(() => 1), scale }];
  });
}

function coordinateRate({ slots, weights }: Coordinate, dx: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < slots.length; i++) sum += dx[slots[i]] / weights[i];
  return sum / slots.length;
}

/** The machine with a rotor that is the same at every azimuth: no tilt, no cone, no tower in its way. */
export function axisymmetric(turbine: Turbine): Turbine {
  const tower = { ...turbine.tower, topDiameter: undefined, baseDiameter: undefined };
  return { ...turbine, rotor: { ...turbine.rotor, tilt: 0, cone: 0 }, tower };
}

/** A millionth of a state's scale a second is rounding of the trim. */
const STILL = 1e-5;

function checkSteady(rates: readonly number[], coordinates: readonly Coordinate[], { windSpeed }: TrimPoint): void {
  const moving = coordinates.findIndex(({ scale }, i) => !(Math.abs(rates[i]) < STILL * scale));
  if (moving < 0) return;
  throw new RangeError(
    `at ${windSpeed} m/s the plant is not steady: "${coordinates[moving].name}" changes at ${rates[moving]} per second`,
  );
}

/** The states of the pitch drive: they answer demands, not aerodynamics. */
const DRIVE = /^pitch: /;
const PITCH_ANGLE = /^pitch: angle/;

/** The plant with every aerodynamic slope on pitch multiplied by `factor`: what an uncertain rotor may do. */
export function withPitchSlope(plant: LinearPlant, factor: number): LinearPlant {
  const column = plant.states.findIndex((name) => PITCH_ANGLE.test(name));
  const a = plant.a.clone();
  const c = plant.c.clone();
  plant.states.forEach((name, row) => {
    if (!DRIVE.test(name)) a.set(row, column, factor * a.get(row, column));
  });
  PLANT_OUTPUTS.forEach((name, row) => {
    if (name !== 'pitch angle') c.set(row, column, factor * c.get(row, column));
  });
  return { ...plant, a, c };
}
