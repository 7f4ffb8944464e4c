/** A scenario as the runner takes it: every reference loaded, every value in SI. */
import type { ControllerFactory } from '../controllers/contract.ts';
import type { ProtectionSettings } from '../controllers/protection.ts';
import type { PitchLawSettings } from '../controllers/scheduled-pi-pitch.ts';
import type { SupervisorSettings } from '../controllers/supervisor.ts';
import type { TorqueLawSettings } from '../controllers/torque-curve.ts';
import type { BladeElementOptions } from '../sim/aerodynamics/blade-element-rotor.ts';
import type { ScriptedEvent } from '../sim/scripted-event.ts';
import type { RotorModel, Turbine } from '../sim/turbine.ts';
import type { WindField } from '../sim/wind/wind.ts';

export type LawSettings =
  | ({ law: 'scheduled PI pitch' } & PitchLawSettings)
  | ({ law: 'torque curve' } & TorqueLawSettings);

export type ControllerData =
  | { kind: 'laws'; name: string; sampleTime: number; laws: readonly LawSettings[]; supervisor: SupervisorSettings }
  | {
      kind: 'module';
      name: string;
      factory: ControllerFactory;
      settings: unknown;
      supervisor: SupervisorSettings;
    };

/** How the rotor is computed, and how the nacelle stands to the wind. */
export interface RotorChoice {
  /** The turbine's own choice when absent. */
  model?: RotorModel;
  bladeElement: BladeElementOptions;
  nacelle: {
    /** How far the wind comes off the nacelle's axis at the start, rad, positive towards +y. */
    yawError: number;
    /** Whether the yaw drive works; else the nacelle keeps its heading. */
    followsWind: boolean;
  };
  /** Of the wind over sloping ground, rad. */
  upflow: number;
}

/** The initial state: steady at a wind speed (m/s), or standing still with the blades at feather and the brake as given. */
export type StartData = { kind: 'trim'; wind: number } | { kind: 'parked'; brake: boolean };

export type Statistic =
  | 'max'
  | 'min'
  | 'mean'
  /** Standard deviation. */
  | 'spread'
  | 'final'
  /** Seconds above or below `level`. */
  | 'time above'
  | 'time below'
  /** Sum of absolute changes. */
  | 'travel'
  /** Number of upward crossings of `level`. */
  | 'count'
  /** Damage-equivalent range by rainflow counting with Wöhler exponent `exponent`, referred to 1 Hz. */
  | 'rainflow';

export interface LimitData {
  /** A channel's name with a statistic, or a metric's name without. */
  channel: string;
  statistic?: Statistic;
  /** In SI. */
  level?: number;
  exponent?: number;
  /** Window, s. */
  from: number;
  to: number;
  relation: 'below' | 'above';
  /** In the channel's or metric's unit as files show it. */
  bound: number;
}

export interface ScenarioData {
  /** File name without ending. */
  name: string;
  title: string;
  story: string;
  /** Path as given, for messages. */
  file: string;
  turbine: Turbine;
  controller: ControllerData;
  protection: ProtectionSettings;
  protectionName: string;
  wind: WindField;
  rotor: RotorChoice;
  start: StartData;
  /** s */
  duration: number;
  events: readonly ScriptedEvent[];
  /** Recorded frames per second, and the channels (all when absent). */
  record: { rate: number; channels?: readonly string[] };
  limits: readonly LimitData[];
  expected: { verdict: 'holds' | 'broken'; because?: string };
  seed: number;
  integrator: { kind: 'odex'; relativeTolerance: number } | { kind: 'runge-kutta'; step: number };
  /** SHA-256 of each file read, path relative to the scenario. */
  inputs: readonly { path: string; sha256: string }[];
  overrides: readonly string[];
}
