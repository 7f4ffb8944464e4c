/** Runs a scenario from its data to its summary and recorded channels. Knows no disk. */
import { OPERATING_STATES } from '../controllers/contract.ts';
import { safetyChain } from '../controllers/protection.ts';
import { supervisor } from '../controllers/supervisor.ts';
import { BladeElementRotor } from '../sim/aerodynamics/blade-element-rotor.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { surfaceOf } from '../sim/aerodynamics/surface-rotor.ts';
import { Clock, type RunSetup } from '../sim/clock.ts';
import type { RunEvent } from '../sim/frame.ts';
import { controllerOf } from './control.ts';
import { createLimits } from './limits.ts';
import { machineOf } from './machine.ts';
import { createMetrics } from './metrics.ts';
import { createRecorder, type Recording } from './recorder.ts';
import { initialState, rotorSetup } from './rotor-choice.ts';
import type { ScenarioData } from './scenario.ts';
import { createSectionRecorder, type SectionRecording } from './section-recorder.ts';
import { CAUTION, type SpeedLevel, type StateSpan, SUMMARY_FORMAT, type Summary, type Verdict } from './summary.ts';
import { requireCoverage } from './surface-need.ts';
import { VERSION } from './version.ts';

export interface RunResult {
  summary: Summary;
  recording: Recording;
  /** Where the rotor resolves its sections. */
  sections?: SectionRecording;
}

/** Ticks between two reports of progress. */
const PROGRESS_INTERVAL = 2000;

/**
 * The run that a scenario describes, ready to go.
 * @throws InputError where the rotor's coefficients do not reach, or there is no steady state to start from
 */
export function setUp(scenario: ScenarioData, surface: CoefficientSurface): RunSetup {
  const machine = machineOf(scenario.turbine);
  const parts = rotorSetup(scenario, surface);
  requireCoverage(scenario, surface);
  return {
    ...parts,
    controller: controllerOf(scenario.controller, machine),
    supervisor: supervisor(scenario.controller.supervisor, machine),
    protection: safetyChain(scenario.protection, machine.bladeCount),
    events: scenario.events,
    duration: scenario.duration,
    seed: scenario.seed,
    integrator: scenario.integrator,
    initial: initialState(scenario, parts, machine),
  };
}

/**
 * Runs a scenario to its end.
 * @param surface the turbine's coefficient surface, where it is at hand
 * @param onProgress told the fraction done now and then
 * @throws InputError as `setUp`, SimulationError where the run cannot go on
 */
export function runScenario(
  scenario: ScenarioData,
  surface: CoefficientSurface = surfaceOf(scenario.turbine),
  onProgress?: (fraction: number) => void,
): RunResult {
  const clock = new Clock(setUp(scenario, surface));
  const recorder = createRecorder(scenario);
  const { rotor } = clock.plant;
  const sections = rotor instanceof BladeElementRotor ? createSectionRecorder(rotor, scenario.record.rate) : undefined;
  const metrics = createMetrics(scenario);
  const limits = createLimits(scenario);
  const events: RunEvent[] = [];
  clock.events.subscribe((event) => {
    events.push(event);
    metrics.event(event);
  });
  clock.frames.subscribe((frame) => {
    metrics.frame(frame);
    limits.frame(frame);
    recorder.frame(frame);
    sections?.frame(frame);
    if (onProgress && frame.tick % PROGRESS_INTERVAL === 0) onProgress(frame.tick / clock.lastTick);
  });
  clock.run();

  const recording = recorder.finish();
  const values = metrics.finish();
  const judged = limits.finish(values);
  const verdict: Verdict =
    judged.length === 0 ? 'no limits' : judged.every((limit) => limit.holds) ? 'holds' : 'broken';
  const summary: Summary = {
    format: SUMMARY_FORMAT,
    scenario: {
      name: scenario.name,
      title: scenario.title,
      story: scenario.story,
      turbine: scenario.turbine.name,
      controller: scenario.controller.name,
      protection: scenario.protectionName,
      duration: scenario.duration,
    },
    verdict,
    expected: scenario.expected,
    asExpected: verdict === 'no limits' || verdict === scenario.expected.verdict,
    limits: judged,
    metrics: values,
    events: withWindMarks(events, scenario),
    states: stateSpans(events, scenario),
    levels: speedLevels(scenario),
    channels: recording.columns.map(({ name, label, unit }) => ({ name, label, unit })),
    recordRate: recording.rate,
    provenance: {
      version: VERSION,
      inputs: [...scenario.inputs],
      overrides: [...scenario.overrides],
      seed: scenario.seed,
      rotorModel: rotor instanceof BladeElementRotor ? 'blade element' : 'surface',
      integrator: clock.integrator.name,
      relativeTolerance: clock.integrator.relativeTolerance,
      steps: clock.lastTick,
      evaluations: clock.integrator.evaluations,
    },
    caution: CAUTION,
  };
  return { summary, recording, sections: sections?.finish() };
}

function withWindMarks(events: readonly RunEvent[], { wind, duration }: ScenarioData): RunEvent[] {
  const marks = wind.marks().filter((mark) => mark.time >= 0 && mark.time <= duration);
  const windEvents = marks.map(({ time, text }): RunEvent => ({ time, kind: 'wind', text }));
  return [...windEvents, ...events].sort((a, b) => a.time - b.time);
}

function stateSpans(events: readonly RunEvent[], { start, duration }: ScenarioData): StateSpan[] {
  const spans: StateSpan[] = [{ state: start.kind === 'trim' ? 'power production' : 'parked', from: 0, to: duration }];
  for (const event of events) {
    if (event.kind !== 'state') continue;
    const state = OPERATING_STATES.find((name) => name === event.text);
    if (state === undefined) throw new Error(`a run reported the state "${event.text}", which does not exist`);
    spans[spans.length - 1].to = event.time;
    spans.push({ state, from: event.time, to: duration });
  }
  return spans.filter((span) => span.to > span.from);
}

/** Rated speed, the trip levels (a generator's as the rotor speed that goes with it), the speed never to be exceeded. */
function speedLevels({ turbine, protection }: ScenarioData): SpeedLevel[] {
  const rpm = (speed: number) => (speed * 30) / Math.PI;
  const trips = protection.guards.flatMap((guard): SpeedLevel[] => {
    if (guard.watch === 'rotor overspeed') return [{ kind: 'trip', text: guard.name, rpm: rpm(guard.above) }];
    if (guard.watch !== 'generator overspeed') return [];
    return [{ kind: 'trip', text: guard.name, rpm: rpm(guard.above / turbine.drivetrain.gearRatio) }];
  });
  return [
    { kind: 'rated', text: 'rated', rpm: rpm(turbine.ratings.rotorSpeed) },
    ...trips.sort((a, b) => a.rpm - b.rpm),
    { kind: 'never exceed', text: 'never exceed', rpm: rpm(turbine.ratings.neverExceedSpeed) },
  ];
}
