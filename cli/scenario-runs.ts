/** Loads, runs, judges, writes and reports scenarios. */
import { join } from 'node:path';
import { SingleBar } from 'cli-progress';
import { loadScenario } from '../scenarios/disk.ts';
import { InputError } from '../scenarios/input-error.ts';
import { writeResult } from '../scenarios/results.ts';
import { type RunResult, runScenario } from '../scenarios/run.ts';
import type { ScenarioData } from '../scenarios/scenario.ts';
import { CAUTION, type Summary } from '../scenarios/summary.ts';
import { cachedSurface } from '../scenarios/surface-cache.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { EXIT, report } from './exit-code.ts';
import type { RunOptions } from './run.ts';
import { verdictText } from './verdict-text.ts';
import { writePage } from './view.ts';

const FIXED_STEP = 0.01;

/**
 * Runs the scenarios in turn. All files are read before the first run, so that a slip in the last one does not cost
 * the work of the others.
 * @returns the exit code
 * @throws InputError, OutputError
 */
export async function runScenarios(files: readonly string[], options: RunOptions): Promise<number> {
  const scenarios = withDistinctNames(await loadAll(files, options));
  const progress = progressBar(scenarios.length, options);
  const surfaces = new Map<string, CoefficientSurface>();
  const results: RunResult[] = [];
  let failed = false;
  for (const [i, scenario] of scenarios.entries()) {
    progress.show(i, scenario.name);
    try {
      const result = runScenario(scenario, surfaceFor(scenario, surfaces), (part) =>
        progress.show(i + part, scenario.name),
      );
      const { summary, recording, sections } = result;
      writeResult(join(options.out, scenario.name), { summary, columns: recording.columns, sections });
      results.push(result);
      if (!options.json) progress.print(verdictText(result.summary));
    } catch (error) {
      if (!(error instanceof Error) || error.name !== 'SimulationError') throw error;
      failed = true;
      progress.stop();
      report(withName(error, scenario.name));
    }
  }
  progress.stop();
  const summaries = results.map((result) => result.summary);
  if (options.view !== undefined && results.length > 0) await view(options.view, results, options);
  if (options.json) console.log(JSON.stringify(summaries, null, 2));
  else if (summaries.length > 0) console.log(`\n${closingLines(summaries, options.out)}`);
  if (failed) return EXIT.simulationFailed;
  return summaries.every((summary) => summary.asExpected) ? EXIT.asExpected : EXIT.notAsExpected;
}

async function loadAll(files: readonly string[], { set, integrator }: RunOptions): Promise<ScenarioData[]> {
  const loaded = await Promise.allSettled(files.map((file) => loadScenario(file, { set })));
  const refused = loaded.flatMap((outcome) => (outcome.status === 'rejected' ? [outcome.reason] : []));
  const other = refused.find((reason) => !(reason instanceof InputError));
  if (other) throw other;
  if (refused.length > 0) throw new InputError(distinct(refused.flatMap((reason: InputError) => reason.problems)));
  const scenarios = loaded.flatMap((outcome) => (outcome.status === 'fulfilled' ? [outcome.value] : []));
  return integrator ? scenarios.map((scenario) => withIntegrator(scenario, integrator)) : scenarios;
}

/** Scenarios share files; a mistake in a shared one is told once. */
function distinct<T>(problems: readonly T[]): T[] {
  return [...new Map(problems.map((problem) => [JSON.stringify(problem), problem])).values()];
}

function withIntegrator(scenario: ScenarioData, kind: 'odex' | 'runge-kutta'): ScenarioData {
  if (scenario.integrator.kind === kind) return scenario;
  const integrator: ScenarioData['integrator'] =
    kind === 'odex' ? { kind, relativeTolerance: 1e-6 } : { kind, step: FIXED_STEP };
  return { ...scenario, integrator, overrides: [...scenario.overrides, `--integrator ${kind}`] };
}

/** Each result has a folder of the scenario's name. */
function withDistinctNames(scenarios: readonly ScenarioData[]): readonly ScenarioData[] {
  const seen = new Map<string, string>();
  for (const { name, file } of scenarios) {
    const earlier = seen.get(name);
    if (earlier !== undefined) {
      const message = `its results would take the folder of ${earlier}; give the scenarios different file names`;
      throw new InputError([{ file, line: 0, column: 0, message }]);
    }
    seen.set(name, file);
  }
  return scenarios;
}

function surfaceFor({ turbine }: ScenarioData, known: Map<string, CoefficientSurface>): CoefficientSurface {
  const key = JSON.stringify([turbine.rotor, turbine.airDensity]);
  const surface = known.get(key) ?? cachedSurface(turbine);
  known.set(key, surface);
  return surface;
}

function withName(error: Error, name: string): Error {
  error.message = `${name}: ${error.message}`;
  return error;
}

async function view(file: string, results: readonly RunResult[], { json }: RunOptions): Promise<void> {
  const runs = results.map(({ summary, recording, sections }) => ({
    name: summary.scenario.name,
    summary,
    columns: recording.columns,
    sections,
  }));
  const written = await writePage(file, runs);
  if (!json) console.log(`\nView: ${written}`);
}

function closingLines(summaries: readonly Summary[], out: string): string {
  const count = (verdict: Summary['verdict']) => summaries.filter((summary) => summary.verdict === verdict).length;
  const unexpected = summaries.filter((summary) => !summary.asExpected).map((summary) => summary.scenario.name);
  const tally = [
    `${count('holds')} hold`,
    `${count('broken')} broken`,
    ...(count('no limits') > 0 ? [`${count('no limits')} without limits`] : []),
  ].join(', ');
  const surprise = unexpected.length > 0 ? `not as expected: ${unexpected.join(', ')}` : 'all as expected';
  return `${summaries.length} run: ${tally}; ${surprise}. Results are in ${out}.\n${CAUTION}`;
}

/** A bar on a terminal; plain lines elsewhere. */
function progressBar(total: number, { json }: RunOptions) {
  const bar = new SingleBar({
    format: '{bar} {percentage} %  {name}',
    barsize: 24,
    hideCursor: true,
    clearOnComplete: true,
    stream: process.stderr,
    barCompleteChar: '#',
    barIncompleteChar: '.',
  });
  const live = process.stderr.isTTY && !json;
  let started = false;
  return {
    show(done: number, name: string): void {
      if (!live) return;
      if (!started) bar.start(total, done, { name });
      started = true;
      bar.update(done, { name });
      bar.updateETA();
    },
    print(text: string): void {
      if (started) bar.stop();
      started = false;
      console.log(text);
    },
    stop(): void {
      if (started) bar.stop();
      started = false;
    },
  };
}
