import type { Measured, ProtectionSignals } from '../controllers/contract.ts';
import type { Layout } from './layout.ts';
import type { Plant } from './plant.ts';
import { firstOrderHold, SpeedSensor } from './speed-sensor.ts';

const TURN = 2 * Math.PI;

/** Streams of noise: each sensor draws from its own. */
const CONTROL_STREAM = 1;
const PROTECTION_STREAM = 2;

/** All sensors of the machine: what the control law and the safety chain get to see of the plant. */
export class Sensors {
  readonly controlSpeed: SpeedSensor;
  readonly protectionSpeed: SpeedSensor;
  private readonly plant: Plant;
  private readonly anemometer: { pole: number; fromLast: number; fromNow: number };
  /** Anemometer: last input and filtered value, m/s; button pressed (1 or 0). */
  private readonly at: number;

  constructor(plant: Plant, controlSample: number, protectionSample: number, seed: number, memory: Layout) {
    const { sensors } = plant.turbine;
    this.plant = plant;
    this.controlSpeed = new SpeedSensor(
      'control speed sensor',
      sensors.controlSpeed,
      controlSample,
      seed * 16 + CONTROL_STREAM,
      memory,
    );
    this.protectionSpeed = new SpeedSensor(
      'protection speed sensor',
      sensors.protectionSpeed,
      protectionSample,
      seed * 16 + PROTECTION_STREAM,
      memory,
    );
    this.anemometer = firstOrderHold(sensors.windTimeConstant, controlSample);
    this.at = memory.place('sensors', ['anemometer input', 'anemometer', 'button']);
  }

  start(rotorSpeed: number, generatorSpeed: number, memory: Float64Array): void {
    this.controlSpeed.start(generatorSpeed, memory);
    this.protectionSpeed.start(rotorSpeed, memory);
    memory[this.at] = memory[this.at + 1] = this.plant.wind.rotorMean(0);
  }

  pressButton(memory: Float64Array): void {
    memory[this.at + 2] = 1;
  }

  windReading(memory: Float64Array): number {
    return memory[this.at + 1];
  }

  /** Samples the control side. `plant.derivative` has been evaluated at (t, x). */
  senseForControl(t: number, tick: number, x: ArrayLike<number>, memory: Float64Array, out: Measured): void {
    const { plant } = this;
    const d = plant.drivetrain.at;
    this.controlSpeed.sample(tick, x[d + 2], memory);
    this.sampleWind(t, memory);
    out.generatorSpeed = this.controlSpeed.reading(memory);
    out.rotorSpeed = this.protectionSpeed.reading(memory);
    out.rotorAzimuth = ((x[d] % TURN) + TURN) % TURN;
    for (let b = 0; b < out.pitch.length; b++) out.pitch[b] = x[plant.pitch.angleAt + b];
    out.windSpeed = memory[this.at + 1];
    out.windDirection = plant.yawError;
    out.towerAccelerationForeAft = plant.towerAcceleration;
    out.towerAccelerationSideSide = plant.accelerations.sideSide;
    out.flapMoment.set(plant.loads.flapMoment);
    out.electricalPower = electricalPower(plant, x);
    out.gridConnected = plant.generator.gridConnected(memory);
  }

  /** Samples the protection side. `plant.derivative` has been evaluated at (t, x). */
  senseForProtection(tick: number, x: ArrayLike<number>, memory: Float64Array, out: ProtectionSignals): void {
    const { plant } = this;
    this.protectionSpeed.sample(tick, x[plant.drivetrain.at + 1], memory);
    out.rotorSpeed = this.protectionSpeed.reading(memory);
    out.generatorSpeed = this.controlSpeed.reading(memory);
    out.electricalPower = electricalPower(plant, x);
    for (let b = 0; b < out.pitch.length; b++) {
      out.pitch[b] = x[plant.pitch.angleAt + b];
      out.pitchDemand[b] = plant.pitch.demanded(b, x, memory);
    }
    out.gridConnected = plant.generator.gridConnected(memory);
    out.buttonPressed = memory[this.at + 2] === 1;
    out.towerAccelerationForeAft = plant.towerAcceleration;
  }

  private sampleWind(t: number, memory: Float64Array): void {
    const wind = this.plant.wind.rotorMean(t);
    const { pole, fromLast, fromNow } = this.anemometer;
    memory[this.at + 1] = pole * memory[this.at + 1] + fromLast * memory[this.at] + fromNow * wind;
    memory[this.at] = wind;
  }
}

/** W */
export function electricalPower(plant: Plant, x: ArrayLike<number>): number {
  return plant.turbine.generator.efficiency * x[plant.generator.at] * x[plant.drivetrain.at + 2];
}
