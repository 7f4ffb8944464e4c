/** A small invented turbine and a rotor in closed form, for tests of the plant and the clock. */
import type { Controller, Machine, Protection, Supervisor } from '../../controllers/contract.ts';
import { stackLaws } from '../../controllers/law.ts';
import { type ProtectionSettings, safetyChain } from '../../controllers/protection.ts';
import { scheduledPiPitch } from '../../controllers/scheduled-pi-pitch.ts';
import { supervisor } from '../../controllers/supervisor.ts';
import { steadyTorque, type TorqueLawSettings, torqueCurve } from '../../controllers/torque-curve.ts';
import { machineOf } from '../../scenarios/machine.ts';
import { Clock, type RunSetup } from '../../sim/clock.ts';
import type { RunEvent } from '../../sim/frame.ts';
import { RIGID_BLADES, type Rotor } from '../../sim/rotor.ts';
import { Trim } from '../../sim/trim.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';

const DEGREE = Math.PI / 180;
export const RPM = Math.PI / 30;

export const TURBINE: Turbine = {
  name: 'test turbine',
  ratings: {
    power: 3.6e6,
    rotorSpeed: 12 * RPM,
    neverExceedSpeed: 15.6 * RPM,
    minimumSpeed: 6.5 * RPM,
    cutInWind: 3.5,
    cutOutWind: 25,
    finePitch: 0,
  },
  airDensity: 1.225,
  rotor: {
    bladeCount: 3,
    radius: 65,
    hubRadius: 1.6,
    hubHeight: 110,
    aerodynamics: {
      kind: 'tables',
      tables: { tipSpeedRatio: [], pitch: [], torqueCoefficient: [], thrustCoefficient: [] },
    },
  },
  drivetrain: {
    kind: 'two masses',
    rotorInertia: 3.2e7,
    generatorInertia: 300,
    gearRatio: 100,
    stiffness: 3.9e8,
    damping: 1.3e6,
    gearEfficiency: 0.97,
    constantLoss: 6e3,
    viscousLoss: 4e3,
  },
  tower: { modalMass: 2.9e5, frequency: 0.26, dampingRatio: 0.005 },
  pitchDrive: {
    naturalFrequency: 1.2,
    dampingRatio: 0.8,
    delay: 0.04,
    rateLimit: 8 * DEGREE,
    accelerationLimit: 40 * DEGREE,
    minimum: -2 * DEGREE,
    maximum: 90 * DEGREE,
    feather: 88 * DEGREE,
    backup: { travel: [0, 90 * DEGREE, 300 * DEGREE], rate: [7 * DEGREE, 4.5 * DEGREE, 0] },
  },
  generator: {
    efficiency: 0.95,
    timeConstant: 0.03,
    maximumTorque: 34e3,
    torqueRateLimit: 1e5,
    gridLossTimeConstant: 0.02,
  },
  brake: {
    side: 'high-speed shaft',
    torque: 32e3,
    delay: 0.3,
    ramp: 0.8,
    heatCapacity: 115e3,
    cooling: 300,
    ambient: 288.15,
    fadeStart: 623.15,
    fadeEnd: 923.15,
    fadeFloor: 0.5,
  },
  sensors: {
    controlSpeed: { timeConstant: 0.01, resolution: 0.5 * RPM, noise: 0.3 * RPM, range: 2400 * RPM },
    protectionSpeed: { timeConstant: 0.02, resolution: 0.02 * RPM, noise: 0.01 * RPM, range: 30 * RPM },
    windTimeConstant: 1,
  },
};

/** C_p = 0.22 (116/m − 0.4 θ − 5) e^(−12.5/m) with 1/m = 1/(λ + 0.08 θ) − 0.035/(θ³ + 1), a textbook fit; C_t = 0.9 C_p + 0.1. */
export function closedFormRotor(turbine: Turbine): Rotor {
  const { radius } = turbine.rotor;
  const area = Math.PI * radius * radius;
  const steadyLoads: Rotor['steadyLoads'] = (windSpeed, rotorSpeed, pitch, out) => {
    const wind = Math.max(windSpeed, 0.1);
    const turning = (rotorSpeed * radius) / wind;
    const ratio = Math.max(turning, 4);
    const degrees = Math.max(pitch / DEGREE, 0);
    const inverse = 1 / (ratio + 0.08 * degrees) - 0.035 / (degrees ** 3 + 1);
    const power = 0.22 * (116 * inverse - 0.4 * degrees - 5) * Math.exp(-12.5 * inverse);
    const pressure = 0.5 * turbine.airDensity * area * wind * wind;
    // Below a tip-speed ratio of 4 the fit is worthless: let the torque fade with speed.
    out.torque = (pressure * radius * power * Math.min(turning / 4, 1)) / ratio;
    out.thrust = pressure * (0.9 * Math.max(power, 0) + 0.1);
  };
  return {
    ...RIGID_BLADES,
    resolvesBlades: false,
    steadyLoads,
    loads(t, wind, motion, x, _stateAt, pitchAt, _dx, out) {
      const pitch = (x[pitchAt[0]] + x[pitchAt[1]] + x[pitchAt[2]]) / 3;
      steadyLoads(wind.rotorMean(t) - motion.foreAft, motion.speed, pitch, out);
    },
  };
}

export const MACHINE: Machine = machineOf(TURBINE);

export const PROTECTION: ProtectionSettings = {
  sampleTime: 0.01,
  guards: [
    {
      watch: 'rotor overspeed',
      above: 1.12 * 12 * RPM,
      name: 'rotor overspeed',
      hold: 0,
      reset: 'manual',
      stop: 'emergency',
    },
    { watch: 'grid loss', name: 'grid loss', hold: 0.2, reset: 'manual', stop: 'emergency' },
    { watch: 'manual button', name: 'button', hold: 0, reset: 'manual', stop: 'manual' },
  ],
  stops: {
    normal: [
      { kind: 'feather', rate: 3 * DEGREE, to: 88 * DEGREE },
      { kind: 'torque off', over: 5 },
      { kind: 'wait', rotorSpeedBelow: 3 * RPM, atMost: 60 },
      { kind: 'park' },
    ],
    emergency: [
      { kind: 'feather', rate: 6 * DEGREE, to: 88 * DEGREE },
      { kind: 'torque off', over: 1 },
      { kind: 'wait', rotorSpeedBelow: 5 * RPM, atMost: 30 },
      { kind: 'brake', apply: true },
      { kind: 'wait', rotorSpeedBelow: 0.05 * RPM },
      { kind: 'park' },
    ],
    manual: [
      { kind: 'feather', rate: 6 * DEGREE, to: 88 * DEGREE },
      { kind: 'torque off', over: 1 },
      { kind: 'brake', apply: true },
      { kind: 'wait', rotorSpeedBelow: 0.05 * RPM },
      { kind: 'park' },
    ],
  },
};

const TORQUE_LAW: TorqueLawSettings = {
  optimalGain: 2.0,
  aboveRated: 'constant power',
  cutInSpeed: 400 * RPM,
  optimalFrom: 650 * RPM,
  optimalTo: 1100 * RPM,
  handoverPitch: 1 * DEGREE,
  maximumTorque: 34e3,
  rateLimit: 5e4,
};

/** Torque (N m) over generator speed (rad/s) on which the test law settles. */
export const testTorqueCurve = steadyTorque(TORQUE_LAW, MACHINE);

export function testController(sampleTime = 0.01): Controller {
  return stackLaws('test law', sampleTime, [
    scheduledPiPitch(
      {
        proportional: 0.012,
        integral: 0.0035,
        schedule: { kind: 'reciprocal', halvingPitch: 8 * DEGREE },
        scheduled: 'after integral',
        antiWindup: { kind: 'clamping' },
        minimum: 0,
        maximum: 88 * DEGREE,
        rateLimit: 8 * DEGREE,
      },
      sampleTime,
    ),
    torqueCurve(TORQUE_LAW, MACHINE, sampleTime),
  ]);
}

export function testSupervisor(): Supervisor {
  return supervisor(
    {
      sampleTime: 0.01,
      startUp: { pitch: 12 * DEGREE, pitchRate: 2 * DEGREE, connectSpeed: 7.5 * RPM, setpointRate: 0.2 * RPM },
      highWind: { above: 25, averaging: 30 },
      normalStop: PROTECTION.stops.normal,
    },
    MACHINE,
  );
}

export function testProtection(): Protection {
  return safetyChain(PROTECTION, 3);
}

/** A run of the test turbine from trim at `wind` (m/s), with anything replaced. */
export function testRun(windSpeed: number, changes: Partial<RunSetup> = {}): Clock {
  const turbine = changes.turbine ?? TURBINE;
  const rotor = changes.rotor ?? closedFormRotor(turbine);
  return new Clock({
    turbine,
    rotor,
    wind: steadyWind({ speed: windSpeed }),
    controller: testController(),
    supervisor: testSupervisor(),
    protection: testProtection(),
    events: [],
    duration: 60,
    seed: 1,
    integrator: { kind: 'odex', relativeTolerance: 1e-6 },
    initial: {
      steady: new Trim(turbine, rotor).at(windSpeed, testTorqueCurve),
      state: 'power production',
      brakeApplied: false,
    },
    ...changes,
  });
}

export function eventsOf(clock: Clock): RunEvent[] {
  const events: RunEvent[] = [];
  clock.events.subscribe((event) => events.push(event));
  return events;
}
