/** An invented machine and scenario, and frames made by hand: just enough for what listens to a run. */

import type { ScenarioData } from '../../scenarios/scenario.ts';
import { CHANNELS, channelIndex, fromUnit } from '../../sim/channels.ts';
import type { Frame } from '../../sim/frame.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';

const RPM = Math.PI / 30;
const DEGREE = Math.PI / 180;

const SENSOR = { timeConstant: 0, resolution: 0, noise: 0, range: 1000 };

/** Rated 10 rpm and 2 MW, never above 15 rpm, gear ratio 100, feather at 90 deg. */
export const TURBINE: Turbine = {
  name: 'Invented',
  ratings: {
    power: 2e6,
    rotorSpeed: 10 * RPM,
    neverExceedSpeed: 15 * RPM,
    minimumSpeed: 5 * RPM,
    cutInWind: 4,
    cutOutWind: 25,
    finePitch: 0,
  },
  airDensity: 1.225,
  rotor: {
    bladeCount: 3,
    radius: 50,
    hubRadius: 1.5,
    hubHeight: 80,
    aerodynamics: {
      kind: 'tables',
      tables: { tipSpeedRatio: [], pitch: [], torqueCoefficient: [], thrustCoefficient: [] },
    },
  },
  drivetrain: {
    kind: 'rigid',
    rotorInertia: 1e7,
    generatorInertia: 500,
    gearRatio: 100,
    stiffness: 0,
    damping: 0,
    gearEfficiency: 1,
    constantLoss: 0,
    viscousLoss: 0,
  },
  tower: { modalMass: 1e5, frequency: 0.3, dampingRatio: 0.01 },
  pitchDrive: {
    naturalFrequency: 2,
    dampingRatio: 0.8,
    delay: 0,
    rateLimit: 8 * DEGREE,
    accelerationLimit: 1,
    minimum: 0,
    maximum: 90 * DEGREE,
    feather: 90 * DEGREE,
    backup: { travel: [0], rate: [8 * DEGREE] },
  },
  generator: {
    efficiency: 0.95,
    timeConstant: 0.1,
    maximumTorque: 3e4,
    torqueRateLimit: 1e5,
    gridLossTimeConstant: 0.02,
  },
  brake: {
    side: 'high-speed shaft',
    torque: 1e4,
    delay: 0,
    ramp: 0,
    heatCapacity: 1e5,
    cooling: 0,
    ambient: 293.15,
    fadeStart: 600,
    fadeEnd: 900,
    fadeFloor: 0.5,
  },
  sensors: { controlSpeed: SENSOR, protectionSpeed: SENSOR, windTimeConstant: 0 },
};

/** Trips at 12 rpm of the rotor or 1250 rpm of the generator (12.5 rpm of the rotor). */
export function inventedScenario(changes: Partial<ScenarioData> = {}): ScenarioData {
  return {
    name: 'invented',
    title: 'Invented',
    story: 'Made by hand.',
    file: 'invented.yaml',
    turbine: TURBINE,
    controller: {
      kind: 'module',
      name: 'none',
      factory: () => {
        throw new Error('no control law is run here');
      },
      settings: undefined,
      supervisor: {
        sampleTime: 0.01,
        startUp: { pitch: 0, pitchRate: 0, connectSpeed: 0, setpointRate: 0 },
        highWind: { above: 25, averaging: 10 },
        normalStop: [],
      },
    },
    protection: {
      sampleTime: 0.01,
      guards: [
        { name: 'generator', watch: 'generator overspeed', above: 1250 * RPM, hold: 0, reset: 'manual', stop: 'stop' },
        { name: 'rotor', watch: 'rotor overspeed', above: 12 * RPM, hold: 0, reset: 'manual', stop: 'stop' },
        { name: 'grid', watch: 'grid loss', hold: 0, reset: 'manual', stop: 'stop' },
      ],
      stops: { stop: [] },
    },
    protectionName: 'invented',
    wind: steadyWind({ speed: 12 }),
    rotor: {
      bladeElement: { sections: 20, wake: 'dynamic', sectionLift: 'steady' },
      nacelle: { yawError: 0, followsWind: false },
      upflow: 0,
    },
    start: { kind: 'trim', wind: 12 },
    duration: 100,
    events: [],
    record: { rate: 10 },
    limits: [],
    expected: { verdict: 'holds' },
    seed: 1,
    integrator: { kind: 'runge-kutta', step: 0.01 },
    inputs: [],
    overrides: [],
    ...changes,
  };
}

/** Values of some channels, in the units of their names. */
export type ChannelValues = Readonly<Record<string, number>>;

/** Frames every `interval` seconds from 0 to `end`, all channels 0 in SI but for what `channels` gives at that time. */
export function* frames(end: number, interval: number, channels: (time: number) => ChannelValues): Generator<Frame> {
  const values = new Float64Array(CHANNELS.length);
  const ticks = Math.round(end / interval);
  for (let tick = 0; tick <= ticks; tick++) {
    const time = tick * interval;
    values.fill(0);
    for (const [name, value] of Object.entries(channels(time))) {
      const index = channelIndex(name);
      if (index < 0) throw new Error(`no channel ${name}`);
      values[index] = fromUnit(CHANNELS[index], value);
    }
    yield { tick, time, values };
  }
}
