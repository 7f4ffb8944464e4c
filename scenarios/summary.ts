/** The summary of one run, as `summary.json` holds it and as the viewer reads it. Speeds in rpm, angles in deg, times in s. */
import type { OperatingState } from '../controllers/contract.ts';
import type { RunEventKind } from '../sim/frame.ts';

export const SUMMARY_FORMAT = 'galehold-summary-1';

export const CAUTION =
  'Caution: an engineering aid, not a certificate. Protection settings are decided by licensed engineers under the ' +
  'local code and the applicable part of IEC 61400, and are verified on the machine.';

export interface LimitResult {
  /** The limit in words, e.g. "max of rotor speed below 13.8 rpm". */
  text: string;
  channel: string;
  statistic: string;
  relation: 'below' | 'above';
  /** In `unit`. */
  bound: number;
  /** null where there is nothing to judge (a stop that never came, a window outside the run): such a limit is broken. */
  value: number | null;
  unit: string;
  holds: boolean;
  /** Distance to the bound in `unit`, positive when the limit holds, null where `value` is. */
  margin: number | null;
}

export interface Metric {
  /** snake_case with unit suffix; stable. */
  name: string;
  label: string;
  group: 'speed' | 'pitch' | 'power' | 'loads' | 'stop' | 'account';
  /** null where the run never got there (no stop, never settled). */
  value: number | null;
  unit: string;
}

export interface RunEventRecord {
  time: number;
  /** `wind`: gust start, peak, end. `fault` and `order`: scripted. `guard`, `stop`, `state`: decided by the machine. `brake`, `standstill`: physical. */
  kind: RunEventKind;
  text: string;
}

export interface StateSpan {
  state: OperatingState;
  from: number;
  to: number;
}

/** A horizontal line that belongs on a rotor-speed plot. */
export interface SpeedLevel {
  kind: 'rated' | 'trip' | 'never exceed';
  text: string;
  rpm: number;
}

/** Whether all limits hold or one is broken, or that there was nothing to judge. */
export type Verdict = 'holds' | 'broken' | 'no limits';

export interface Summary {
  format: typeof SUMMARY_FORMAT;
  scenario: {
    /** File name without ending. */
    name: string;
    title: string;
    story: string;
    turbine: string;
    controller: string;
    protection: string;
    duration: number;
  };
  verdict: Verdict;
  /** What the scenario's author expects, and why where it is not `holds`. */
  expected: { verdict: 'holds' | 'broken'; because?: string };
  asExpected: boolean;
  limits: LimitResult[];
  metrics: Metric[];
  events: RunEventRecord[];
  states: StateSpan[];
  levels: SpeedLevel[];
  /** Columns of `channels.csv` and `channels.parquet`, `time_s` first. */
  channels: { name: string; label: string; unit: string }[];
  recordRate: number;
  provenance: {
    version: string;
    /** SHA-256 of every input file, path relative to the scenario's folder. */
    inputs: { path: string; sha256: string }[];
    overrides: string[];
    seed: number;
    rotorModel: 'surface' | 'blade element';
    integrator: string;
    relativeTolerance: number | null;
    steps: number;
    evaluations: number;
  };
  caution: string;
}
