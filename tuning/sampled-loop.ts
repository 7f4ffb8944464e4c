import { Matrix } from 'ml-matrix';
import { firstOrderHold } from '../sim/speed-sensor.ts';
import type { Turbine } from '../sim/turbine.ts';
import { type Complex, exponential, ONE, power, product, quotient, scaled, sum } from './complex.ts';
import { type DelayedStep, delayedStep, heldStep } from './discretisation.ts';
import { type LinearPlant, PLANT_OUTPUTS, type PlantOutput } from './linear-plant.ts';
import { discreteLyapunov } from './lyapunov.ts';
import type { LawInput, SampledLaw } from './sampled-law.ts';
import { responseAt } from './state-space.ts';

/** A sensor between a plant output (or the wind) and the law: y⁺ = pole·y + fromLast·u + fromNow·u⁺, then whole samples of delay. */
interface Sensor {
  /** A plant output; the wind itself, and the set-point, are no outputs. */
  reads: PlantOutput | 'wind speed' | 'speed set-point';
  pole: number;
  fromLast: number;
  fromNow: number;
  delay: 0 | 1;
}

const DIRECT = { pole: 0, fromLast: 0, fromNow: 1, delay: 0 } as const;

/** Inputs and outputs of the closed loop's `step`. */
export interface LoopInputs {
  /** Added to the law's pitch demand, rad. */
  pitch: number;
  /** Deviation of the wind, m/s, and of the generator's speed set-point, rad/s. */
  wind: number;
  setpoint: number;
  /** Added to what the speed sensor shows, rad/s; none when absent. */
  noise?: number;
}

/** The plant's answers at one frequency, sampled and seen through the sensors: one entry a law input. */
export interface SensedPlant {
  toPitch: Complex[];
  toTorque: Complex[];
}

/**
 * Plant, drive delay, sensors and law as one sampled linear system, exact at the law's sample instants: demands are
 * held in between, the delay is taken whole and in part, noise and resolution of the sensors are left out.
 */
export class SampledLoop {
  readonly plant: LinearPlant;
  readonly law: SampledLaw;
  readonly sampleTime: number;
  /** Names of the numbers that `step` carries on. */
  readonly states: readonly string[];
  private readonly toPitch: DelayedStep;
  private readonly byTorque: Matrix;
  private readonly byWind: Matrix;
  private readonly sensors: readonly Sensor[];

  constructor(turbine: Turbine, plant: LinearPlant, law: SampledLaw) {
    this.plant = plant;
    this.law = law;
    this.sampleTime = law.sampleTime;
    const column = (i: number) => plant.b.subMatrix(0, plant.a.rows - 1, i, i);
    this.toPitch = delayedStep(plant.a, column(0), law.sampleTime, turbine.pitchDrive.delay);
    const held = heldStep(plant.a, plant.b.subMatrix(0, plant.a.rows - 1, 1, 2), law.sampleTime).input;
    this.byTorque = held.subMatrix(0, plant.a.rows - 1, 0, 0);
    this.byWind = held.subMatrix(0, plant.a.rows - 1, 1, 1);
    this.sensors = law.inputs.map((input) => sensorOf(input, turbine, law.sampleTime));
    this.states = [
      ...plant.states,
      ...Array.from({ length: this.toPitch.samples + 1 }, (_, k) => `pitch demand ${k + 1} samples ago`),
      ...law.inputs.flatMap((input) => [`sensor of ${input}: last input`, `sensor of ${input}: value`]),
      ...law.memory,
    ];
  }

  /** z = e^(jωT) for a frequency ω (rad/s). */
  private point(frequency: number): Complex {
    return exponential({ re: 0, im: frequency * this.sampleTime });
  }

  /** What the law's sensors show of a unit of pitch and of torque demand, at a complex frequency z. */
  sensedPlant(z: Complex): SensedPlant {
    const { toPitch, byTorque, plant, sensors } = this;
    const n = plant.a.rows;
    const b = Matrix.zeros(n, 3);
    b.setSubMatrix(toPitch.fresh, 0, 0);
    b.setSubMatrix(toPitch.stale, 0, 1);
    b.setSubMatrix(byTorque, 0, 2);
    const answers = responseAt({ a: toPitch.transition, b, c: plant.c, d: Matrix.zeros(plant.c.rows, 3) }, z);
    const onTime = power(z, -toPitch.samples);
    const late = quotient(onTime, z);
    const sensed: SensedPlant = { toPitch: [], toTorque: [] };
    for (const sensor of sensors) {
      const row = (PLANT_OUTPUTS as readonly string[]).indexOf(sensor.reads);
      const filter = row < 0 ? { re: 0, im: 0 } : sensorResponse(sensor, z);
      const [fresh, stale, torque] = answers[Math.max(row, 0)];
      const direct = row < 0 ? 0 : plant.d.get(row, 1);
      sensed.toPitch.push(product(filter, sum(product(fresh, onTime), product(stale, late))));
      sensed.toTorque.push(product(filter, sum(torque, { re: direct, im: 0 })));
    }
    return sensed;
  }

  /** The loop's gain with the loop cut at the law's pitch demand and the torque loop closed: 1 + L = 0 is the edge. */
  gainAt(z: Complex): Complex {
    return loopGain(lawResponse(this.law, z), this.sensedPlant(z));
  }

  /** The loop's gain at a frequency, rad/s. */
  gain(frequency: number): Complex {
    return this.gainAt(this.point(frequency));
  }

  /**
   * One sample of the closed loop. @returns the outputs at its start, in the order of PLANT_OUTPUTS, then the law's
   * pitch and torque demand; `state` is carried on in place.
   */
  step(state: Float64Array, inputs: LoopInputs): number[] {
    const { plant, law, toPitch, sensors } = this;
    const n = plant.a.rows;
    const queueAt = n;
    const sensorAt = queueAt + toPitch.samples + 1;
    const memoryAt = sensorAt + 2 * sensors.length;
    const x = state.slice(0, n);
    const outputs = PLANT_OUTPUTS.map((_, row) => rowTimes(plant.c, row, x) + plant.d.get(row, 2) * inputs.wind);

    const measured = sensors.map((sensor, i) => {
      const at = sensorAt + 2 * i;
      const [last, before] = [state[at], state[at + 1]];
      const now = sensorInput(sensor, outputs, inputs);
      state[at] = now;
      state[at + 1] = sensor.pole * before + sensor.fromLast * last + sensor.fromNow * now;
      const shown = sensor.delay === 1 ? before : state[at + 1];
      return sensor.reads === 'generator speed' ? shown + (inputs.noise ?? 0) : shown;
    });
    const memory = state.slice(memoryAt);
    const [pitch, torque] = [0, 1].map((row) => rowTimes(law.c, row, memory) + rowTimes(law.d, row, measured));
    for (let i = 0; i < memory.length; i++) {
      state[memoryAt + i] = rowTimes(law.a, i, memory) + rowTimes(law.b, i, measured);
    }

    const sent = pitch + inputs.pitch;
    const fresh = toPitch.samples === 0 ? sent : state[queueAt + toPitch.samples - 1];
    const stale = state[queueAt + toPitch.samples];
    for (let i = 0; i < n; i++) {
      state[i] =
        rowTimes(toPitch.transition, i, x) +
        toPitch.fresh.get(i, 0) * fresh +
        toPitch.stale.get(i, 0) * stale +
        this.byTorque.get(i, 0) * torque +
        this.byWind.get(i, 0) * inputs.wind;
    }
    state.copyWithin(queueAt + 1, queueAt, queueAt + toPitch.samples);
    state[queueAt] = sent;
    return [...outputs, pitch, torque];
  }

  /** The closed loop's x⁺ = A x, one column a state. */
  closedLoop(): Matrix {
    const size = this.states.length;
    const a = Matrix.zeros(size, size);
    const state = new Float64Array(size);
    for (let j = 0; j < size; j++) {
      state.fill(0);
      state[j] = 1;
      this.step(state, { pitch: 0, wind: 0, setpoint: 0 });
      a.setColumn(j, [...state]);
    }
    return a;
  }
}

/**
 * Standard deviation of a state of the closed loop under white noise of a standard deviation `noise` (rad/s) on what the
 * speed sensor shows; in the unit of the state.
 * @throws RangeError where the loop does not settle
 */
export function spreadByNoise(loop: SampledLoop, state: string, noise: number): number {
  const pushed = new Float64Array(loop.states.length);
  loop.step(pushed, { pitch: 0, wind: 0, setpoint: 0, noise });
  const push = Matrix.columnVector([...pushed]);
  const covariance = discreteLyapunov(loop.closedLoop(), push.mmul(push.transpose()));
  const at = loop.states.indexOf(state);
  return Math.sqrt(covariance.get(at, at));
}

/** The law's answer [demand][input] at a complex frequency z. */
export function lawResponse(law: SampledLaw, z: Complex): Complex[][] {
  return responseAt(law, z);
}

/** −(pitch demand that comes back) for a unit sent to the drives, the torque loop closed. */
export function loopGain([pitchLaw, torqueLaw]: Complex[][], plant: SensedPlant): Complex {
  const throughPitch = dot(torqueLaw, plant.toPitch);
  const aroundTorque = dot(torqueLaw, plant.toTorque);
  const torque = quotient(throughPitch, sum(ONE, scaled(aroundTorque, -1)));
  const back = sum(dot(pitchLaw, plant.toPitch), product(dot(pitchLaw, plant.toTorque), torque));
  return scaled(back, -1);
}

function dot(a: readonly Complex[], b: readonly Complex[]): Complex {
  let re = 0;
  let im = 0;
  for (let i = 0; i < a.length; i++) {
    re += a[i].re * b[i].re - a[i].im * b[i].im;
    im += a[i].re * b[i].im + a[i].im * b[i].re;
  }
  return { re, im };
}

function rowTimes(matrix: Matrix, row: number, x: ArrayLike<number>): number {
  let total = 0;
  for (let j = 0; j < x.length; j++) total += matrix.get(row, j) * x[j];
  return total;
}

/** As sim/sensors.ts reads them. */
function sensorOf(input: LawInput, { sensors }: Turbine, sample: number): Sensor {
  switch (input) {
    case 'generator speed':
      return { reads: input, ...firstOrderHold(sensors.controlSpeed.timeConstant, sample), delay: 0 };
    case 'rotor speed':
      // The protection samples its own sensor after the law has looked.
      return { reads: input, ...firstOrderHold(sensors.protectionSpeed.timeConstant, sample), delay: 1 };
    case 'wind speed':
      return { reads: input, ...firstOrderHold(sensors.windTimeConstant, sample), delay: 0 };
    default:
      return { reads: input, ...DIRECT };
  }
}

function sensorResponse({ pole, fromLast, fromNow, delay }: Sensor, z: Complex): Complex {
  const back = quotient(ONE, z);
  const above = sum({ re: fromNow, im: 0 }, scaled(back, fromLast));
  const filtered = quotient(above, sum(ONE, scaled(back, -pole)));
  return delay === 1 ? product(filtered, back) : filtered;
}

function sensorInput(sensor: Sensor, outputs: readonly number[], inputs: LoopInputs): number {
  if (sensor.reads === 'wind speed') return inputs.wind;
  if (sensor.reads === 'speed set-point') return inputs.setpoint;
  return outputs[PLANT_OUTPUTS.indexOf(sensor.reads)];
}
