import type { Frame, RunEvent } from '../sim/frame.ts';
import { FrameSpacing } from './frame-spacing.ts';
import { ACCOUNT_METRICS, accountMetrics } from './metrics/account.ts';
import { LOAD_METRICS, loadMetrics } from './metrics/loads.ts';
import { PITCH_METRICS, pitchMetrics } from './metrics/pitch.ts';
import { POWER_METRICS, powerMetrics } from './metrics/power.ts';
import { SPEED_METRICS, speedMetrics } from './metrics/speed.ts';
import { STOP_METRICS, StopMetrics } from './metrics/stop.ts';
import type { ScenarioData } from './scenario.ts';
import type { Metric } from './summary.ts';

/** Names of all metrics, in the order of the summary: what a limit may name instead of a channel. */
export const METRIC_NAMES: readonly string[] = [
  SPEED_METRICS,
  PITCH_METRICS,
  POWER_METRICS,
  LOAD_METRICS,
  STOP_METRICS,
  ACCOUNT_METRICS,
].flatMap((table) => Object.keys(table));

/** Takes the frames and events of a run in order of time, events of a frame's instant before it; `finish` ends the run and gives every metric. */
export interface MetricsRecorder {
  frame(frame: Frame): void;
  event(event: RunEvent): void;
  finish(): Metric[];
}

/** All metrics of a run of `scenario`. Memory does not grow with the run but for rainflow's open reversals. */
export function createMetrics(scenario: ScenarioData): MetricsRecorder {
  const speed = speedMetrics(scenario);
  const pitch = pitchMetrics(scenario);
  const power = powerMetrics(scenario);
  const loads = loadMetrics();
  const stop = new StopMetrics(scenario);
  const account = accountMetrics();
  const clock = new FrameSpacing();
  return {
    frame(frame) {
      clock.add(frame);
      speed.frame(frame);
      pitch.frame(frame);
      power.frame(frame);
      loads.frame(frame);
      stop.frame(frame);
      account.frame(frame);
    },
    event: (event) => stop.event(event),
    finish: () => [speed, pitch, power, loads, stop, account].flatMap((group) => group.metrics(clock.tick())),
  };
}
