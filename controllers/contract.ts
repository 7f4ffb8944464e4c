/**
 * What a control law, a supervisor and a safety chain may see and do.
 *
 * To write a control law:
 * 1. Export a function that takes its settings and the machine's data and returns a `Controller`.
 * 2. Declare `sampleTime`, the names of the numbers it remembers, and the measurements it reads.
 * 3. In `start`, fill the memory so that a run that begins in trim stays in trim.
 * 4. In `step`, read `measured`, update `memory` in place, write every field of `demands`.
 * 5. Keep nothing anywhere else: no clock, no random numbers, no variables between calls, no allocation.
 *
 * The run stops with the law's name, the time and the value when a demand is not a finite number,
 * when an array changes its length, or when the law throws.
 *
 * SI units and radians throughout. Pitch is positive towards feather.
 */

/** The operating states of the machine, in the words of IEC 61400-1. Index = the value of the `state` channel. */
export const OPERATING_STATES = [
  'parked',
  'start-up',
  'power production',
  'normal stop',
  'emergency stop',
  'manual stop',
] as const;
export type OperatingState = (typeof OPERATING_STATES)[number];

/** Data of the machine that a control law or a supervisor may rely on. */
export interface Machine {
  readonly bladeCount: number;
  /** Generator speed over rotor speed. */
  readonly gearRatio: number;
  /** Rated rotor speed, rad/s. */
  readonly ratedRotorSpeed: number;
  /** Rated generator speed, rad/s. */
  readonly ratedGeneratorSpeed: number;
  /** Rated electrical power, W. */
  readonly ratedPower: number;
  /** Electrical power over mechanical generator power. */
  readonly generatorEfficiency: number;
  /** Generator torque at rated speed and power, N m (high-speed shaft). */
  readonly ratedTorque: number;
  /** Lowest pitch angle used in power production, rad. */
  readonly finePitch: number;
  /** Feathered pitch angle, rad. */
  readonly featherPitch: number;
  /** Fastest pitch rate of the drives on grid supply, rad/s. */
  readonly pitchRateLimit: number;
  /** Cut-in and cut-out wind speed at hub height, m/s. */
  readonly cutInWind: number;
  readonly cutOutWind: number;
}

/** What the sensors report at a sample instant. The clock owns it and reuses it: copy, do not keep. */
export interface Measured {
  /** Generator speed by the control sensor, rad/s. */
  generatorSpeed: number;
  /** Rotor speed by the second sensor, rad/s. */
  rotorSpeed: number;
  /** Azimuth of blade 1, rad in [0, 2π); 0 points up. */
  rotorAzimuth: number;
  /** Pitch angle of each blade, rad. */
  readonly pitch: Float64Array;
  /** Nacelle anemometer, m/s, and wind direction against the nacelle, rad. */
  windSpeed: number;
  windDirection: number;
  /** Tower-top acceleration, m/s². */
  towerAccelerationForeAft: number;
  towerAccelerationSideSide: number;
  /** Flapwise root moment of each blade, N m; NaN where the chosen rotor does not resolve single blades. */
  readonly flapMoment: Float64Array;
  /** Electrical power, W. */
  electricalPower: number;
  gridConnected: boolean;
  /** Whether the safety chain has taken the machine over. */
  safetyChainActive: boolean;
  /** The state that the supervisor asks for, an index into OPERATING_STATES. */
  state: number;
  /** Set-points handed over by the supervisor: generator speed, rad/s, and electrical power, W. */
  speedSetpoint: number;
  powerSetpoint: number;
}

export type Measurement = keyof Measured;

/** What a control law asks for. The clock owns it; `step` writes every field. */
export interface Demands {
  /** Per blade: angle in rad, or rate in rad/s, as `pitchAs` says. */
  readonly pitch: Float64Array;
  pitchAs: 'angle' | 'rate';
  /** Generator torque in N m (high-speed shaft), or electrical power in W, as `generatorAs` says. */
  generator: number;
  generatorAs: 'torque' | 'power';
  /** Request to apply the shaft brake. */
  brake: boolean;
}

/** The steady point at which a law starts. */
export interface OperatingPoint {
  /** rad/s */
  generatorSpeed: number;
  /** rad, collective */
  pitch: number;
  /** N m, high-speed shaft */
  generatorTorque: number;
  /** m/s; NaN if unknown */
  windSpeed: number;
}

export interface Controller {
  readonly name: string;
  /** s */
  readonly sampleTime: number;
  /** One name per number remembered. */
  readonly memory: readonly string[];
  readonly needs: readonly Measurement[];
  /** Fills `memory` for a bumpless start at `point`. */
  start(point: OperatingPoint, memory: Float64Array): void;
  /** One sample at time `t` (s). */
  step(t: number, measured: Readonly<Measured>, memory: Float64Array, demands: Demands): void;
}

/** What a control-law module exports as its default. `settings` is the controller file's own mapping, in SI. */
export type ControllerFactory<S = unknown> = (settings: S, machine: Machine) => Controller;

/**
 * Orders that stand above the control law while a stop or a start-up is in progress.
 * The clock owns them and resets them to "nothing ordered" before each step of their author.
 */
export interface Orders {
  /** Whether this author takes the machine out of the control law's hands. */
  active: boolean;
  /** Index into OPERATING_STATES. */
  state: number;
  /** Pitch demand per blade, rad; NaN leaves the blade where its last demand put it. */
  readonly pitch: Float64Array;
  /** Fraction (0..1) of the control law's last torque demand that is still allowed. */
  torqueFraction: number;
  brake: boolean;
}

/** What an operator or the scenario may ask of the supervisor. */
export type Request = 'start' | 'normal stop';

/** Moves the machine between its states and hands set-points over. The control law runs in power production only. */
export interface Supervisor {
  readonly sampleTime: number;
  readonly memory: readonly string[];
  start(state: OperatingState, point: OperatingPoint, brakeApplied: boolean, memory: Float64Array): void;
  /** Takes note of a request; it is acted on at the next step. */
  request(request: Request, memory: Float64Array): void;
  /** Reads `measured`, writes its state and set-points back into it, and `orders` where it drives the machine itself. */
  step(t: number, measured: Measured, memory: Float64Array, orders: Orders): void;
}

/** What the safety chain sees: its own sensor and hard-wired signals, nothing of the control law. */
export interface ProtectionSignals {
  /** Rotor speed by the protection's own sensor, rad/s. */
  rotorSpeed: number;
  /** Generator speed by the encoder, rad/s. */
  generatorSpeed: number;
  /** W */
  electricalPower: number;
  /** rad per blade: where the blades are and where they were asked to be. */
  readonly pitch: Float64Array;
  readonly pitchDemand: Float64Array;
  gridConnected: boolean;
  /** The manual stop button. */
  buttonPressed: boolean;
  /** m/s² */
  towerAccelerationForeAft: number;
}

export interface Protection {
  readonly sampleTime: number;
  readonly memory: readonly string[];
  /** Names of the guards in the order of the file; the `active_guard` channel holds 1 + index, 0 for none. */
  readonly guards: readonly string[];
  start(memory: Float64Array): void;
  step(t: number, signals: Readonly<ProtectionSignals>, memory: Float64Array, orders: Orders): void;
  /** Index of the guard that is latched first, -1 for none. */
  firstGuard(memory: Float64Array): number;
  isLatched(guard: number, memory: Float64Array): boolean;
  /** The reading that latched a guard, in words, e.g. "13.46 rpm above 13.44 rpm". */
  latchedBy(guard: number, memory: Float64Array): string;
  /** Names of the stop sequences. */
  readonly stops: readonly string[];
  /** Index of the stop sequence in progress, -1 for none. */
  activeStop(memory: Float64Array): number;
}

/** `value` held between `low` and `high`; NaN stays NaN. */
export function clamp(value: number, low: number, high: number): number {
  return value < low ? low : Math.min(value, high);
}
