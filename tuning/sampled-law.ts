import { Matrix } from 'ml-matrix';
import type { Controller, Demands, Machine, Measured, Measurement, OperatingPoint } from '../controllers/contract.ts';
import { OPERATING_STATES } from '../controllers/contract.ts';
import type { TrimPoint } from '../sim/trim.ts';

/** What moves a linear law: how it is read and set, and the measurement that a law must declare to be moved by it. */
interface InputAccess {
  needs: Measurement;
  get: (measured: Measured) => number;
  set: (measured: Measured, value: number) => void;
}

/** A number of `Measured` under its own name. */
function plain(
  field: { [K in keyof Measured]: Measured[K] extends number ? K : never }[keyof Measured],
  needs: Measurement = field,
): InputAccess {
  return {
    needs,
    get: (measured) => measured[field],
    set: (measured, value) => {
      measured[field] = value;
    },
  };
}

const ACCESS = {
  'generator speed': plain('generatorSpeed'),
  'rotor speed': plain('rotorSpeed'),
  'pitch angle': {
    needs: 'pitch',
    get: (measured: Measured) => measured.pitch[0],
    set: (measured: Measured, value: number) => {
      measured.pitch.fill(value);
    },
  },
  'tower-top acceleration fore-aft': plain('towerAccelerationForeAft'),
  'electrical power': plain('electricalPower'),
  'wind speed': plain('windSpeed'),
  'speed set-point': plain('speedSetpoint', 'generatorSpeed'),
} as const satisfies Record<string, InputAccess>;

export type LawInput = keyof typeof ACCESS;
/** Measurements that a collective loop can move, and the set-point. */
export const LAW_INPUTS = Object.keys(ACCESS) as LawInput[];
export const LAW_OUTPUTS = ['pitch demand', 'generator torque demand'] as const;

/** m⁺ = A m + B y, demands = C m + D y: a control law's small deviations from a trim point. */
export interface SampledLaw {
  name: string;
  /** s */
  sampleTime: number;
  memory: readonly string[];
  inputs: readonly LawInput[];
  pitchAs: 'angle' | 'rate';
  a: Matrix;
  b: Matrix;
  c: Matrix;
  d: Matrix;
  /**
   * Memory and inputs at which the law's slopes differ on the two sides, as on the edge between two branches; the slope
   * of the positive side is taken.
   */
  bends: readonly string[];
}

/** Samples in which a law may settle on the steady measurements. */
const SETTLING = 400;
const RELATIVE_STEP = 1e-6;
const BEND = 0.02;
const PRODUCTION = OPERATING_STATES.indexOf('power production');

/**
 * The law's slopes at a trim point by central differences on its declared memory and on what it measures.
 * @throws Error where the law's demands are no finite numbers there
 */
export function sampledLaw(controller: Controller, machine: Machine, point: TrimPoint): SampledLaw {
  const measured = steadyMeasurements(machine, point);
  const memory = new Float64Array(controller.memory.length);
  const operatingPoint: OperatingPoint = {
    generatorSpeed: point.generatorSpeed,
    pitch: point.pitch,
    generatorTorque: point.generatorTorque,
    windSpeed: point.windSpeed,
  };
  controller.start(operatingPoint, memory);
  const demands: Demands = {
    pitch: new Float64Array(machine.bladeCount),
    pitchAs: 'angle',
    generator: 0,
    generatorAs: 'torque',
    brake: false,
  };
  for (let k = 0; k < SETTLING; k++) controller.step(k * controller.sampleTime, measured, memory, demands);

  const n = memory.length;
  const trial = new Float64Array(n);
  const time = SETTLING * controller.sampleTime;
  /** The memory after one sample, then the demands. */
  const evaluate = (): number[] => {
    trial.set(memory);
    controller.step(time, measured, trial, demands);
    const result = [...trial, mean(demands.pitch), torqueOf(demands, measured, machine)];
    if (result.every(Number.isFinite)) return result;
    throw new Error(`the law "${controller.name}" gives no finite numbers at ${point.windSpeed} m/s`);
  };
  const steady = evaluate();

  const bends: string[] = [];
  const slopes = (name: string, value: number, set: (value: number) => void): number[] => {
    const step = RELATIVE_STEP * Math.max(1, Math.abs(value));
    set(value + step);
    const above = evaluate();
    set(value - step);
    const below = evaluate();
    set(value);
    const bent = above.some((after, i) => {
      const bend = Math.abs(after + below[i] - 2 * steady[i]);
      return bend > BEND * Math.abs(after - below[i]) && bend > 1e-3 * step && bend > 1e-12 * Math.abs(steady[i]);
    });
    if (bent) bends.push(name);
    return above.map((after, i) => (bent ? (after - steady[i]) / step : (after - below[i]) / (2 * step)));
  };

  const byMemory = controller.memory.map((name, i) =>
    slopes(name, memory[i], (value) => {
      memory[i] = value;
    }),
  );
  const inputs = LAW_INPUTS.filter((input) => controller.needs.includes(ACCESS[input].needs));
  const byInput = inputs.map((input) =>
    slopes(input, ACCESS[input].get(measured), (value) => ACCESS[input].set(measured, value)),
  );
  return {
    name: controller.name,
    sampleTime: controller.sampleTime,
    memory: controller.memory,
    inputs,
    pitchAs: demands.pitchAs,
    a: block(byMemory, 0, n),
    b: block(byInput, 0, n),
    c: block(byMemory, n, n + LAW_OUTPUTS.length),
    d: block(byInput, n, n + LAW_OUTPUTS.length),
    bends,
  };
}

function block(columns: readonly number[][], from: number, to: number): Matrix {
  const matrix = Matrix.zeros(to - from, columns.length);
  columns.forEach((column, j) => {
    for (let i = from; i < to; i++) matrix.set(i - from, j, column[i]);
  });
  return matrix;
}

function mean(values: Float64Array): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** As the clock makes it: a power demand becomes a torque by the measured speed. */
function torqueOf(demands: Demands, measured: Measured, machine: Machine): number {
  if (demands.generatorAs === 'torque') return demands.generator;
  return demands.generator / (machine.generatorEfficiency * measured.generatorSpeed);
}

function steadyMeasurements(machine: Machine, point: TrimPoint): Measured {
  return {
    generatorSpeed: point.generatorSpeed,
    rotorSpeed: point.rotorSpeed,
    rotorAzimuth: 0,
    pitch: new Float64Array(machine.bladeCount).fill(point.pitch),
    windSpeed: point.windSpeed,
    windDirection: 0,
    towerAccelerationForeAft: 0,
    towerAccelerationSideSide: 0,
    flapMoment: new Float64Array(machine.bladeCount),
    electricalPower: point.power,
    gridConnected: true,
    safetyChainActive: false,
    state: PRODUCTION,
    speedSetpoint: machine.ratedGeneratorSpeed,
    powerSetpoint: machine.ratedPower,
  };
}
