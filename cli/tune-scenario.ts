/** `galehold tune scenario`: a search for the best trades over scenarios and seeds, on all cores, kept in a journal. */
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { fileURLToPath } from 'node:url';
import { SingleBar } from 'cli-progress';
import { Tinypool } from 'tinypool';
import { loadScenario } from '../scenarios/disk.ts';
import { refusal } from '../scenarios/input-error.ts';
import type { ScenarioData } from '../scenarios/scenario.ts';
import { CAUTION } from '../scenarios/summary.ts';
import { withPitchScale } from '../tuning/schedule-fit.ts';
import { searchTrades, type TradeResult, type TriedCandidate } from '../tuning/trade-search.ts';
import type { Chart } from './chart-picture.ts';
import { controllerPathOf, requireGains, withTunedLaw } from './controller-file.ts';
import { pitchLawOf, withGains } from './loop-view.ts';
import { RunJournal } from './run-journal.ts';
import { scheduleText } from './schedule-text.ts';
import type { ScenarioOptions } from './tune.ts';
import { loopSections, reportPage, type Section } from './tune-report.ts';
import { OBJECTIVES, type TuneRun, type TuneRunResult } from './tune-run.ts';
import { ratedPoints, scenarioSubject, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { evenWinds, optionNumber } from './wind-range.ts';

/** Spread of the first candidates in the logarithm of each variable. */
const FIRST_STEP = 0.35;
const PEAK_SHOWN = 2;
/** Corners of the filter that make sense, Hz; the upper one also stays below 40 % of the sampling. */
const LOWEST_FILTER = 0.05;

/** The gains that the search started from. */
interface Start {
  proportional: number;
  integral: number;
  filterFrequency?: number;
  sampleTime: number;
}

/** @throws InputError, SimulationError */
export async function tuneByScenario(files: readonly string[], options: ScenarioOptions): Promise<void> {
  const seeds = seedList(options.seeds);
  const budget = optionNumber('--budget', options.budget, 0);
  const searchSeed = optionNumber('--seed', options.seed, -1);
  const workers =
    options.workers === undefined ? availableParallelism() : optionNumber('--workers', options.workers, 0, 256);
  const scenarios = await Promise.all(files.map((file) => loadScenario(file, { set: options.set })));
  const source = await controllerPathOf(files[0]);
  await requireGains(source);
  for (const other of files.slice(1)) {
    if ((await controllerPathOf(other)) !== source)
      throw refusal(other, `names another controller than ${files[0]}; one is tuned at a time`);
  }
  const start = startOf(scenarios[0], source);
  const perCandidate = files.length * seeds.length;
  const candidates = Math.floor(budget / perCandidate);
  if (candidates < 10)
    throw refusal('--budget', `is enough for ${candidates} candidates of ${perCandidate} runs each; 10 are the least`);

  const journal = new RunJournal<TuneRunResult>(options.journal ?? `${options.out}.journal`);
  const runs = createRunner(scenarios, files, options.set, journal, workers, candidates * perCandidate);
  process.once('SIGINT', () => {
    runs.stop();
    console.error(
      `\nInterrupted: ${journal.size} simulations are kept in ${journal.file}; the same command goes on from there.`,
    );
    process.exit(130);
  });
  try {
    const evaluate = async (tried: readonly (readonly number[])[], over = seeds) => {
      const work = tried.map((variables) => runs.candidate(gainsOf(start, variables), over, start.sampleTime));
      return Promise.all(work);
    };
    const result = await searchTrades({
      start: start.filterFrequency === undefined ? [0, 0, 0] : [0, 0, 0, 0],
      step: FIRST_STEP,
      seed: searchSeed,
      budget: candidates,
      objectives: OBJECTIVES.length,
      evaluate,
    });
    const chosen = choose(result);
    if (!chosen) throw refusal(files[0], 'no candidate came through all runs without a trip or a broken limit');
    const unseen = seeds.map((seed) => Math.max(...seeds) - Math.min(...seeds) + 1 + seed);
    const [asItWas, tuned] = await evaluate([result.start.variables, chosen.variables], unseen);
    runs.finish();
    const check = OBJECTIVES.map((_, i) => tuned.objectives[i] / asItWas.objectives[i]);
    await tell(files, options, source, start, result, chosen, { seeds, unseen, check, broken: tuned.broken });
  } finally {
    runs.stop();
  }
}

function startOf({ controller }: ScenarioData, file: string): Start {
  const law = pitchLawOf(controller);
  if (controller.kind !== 'laws' || !law) throw refusal(file, 'there is no law with gains to tune');
  if (!(law.proportional > 0 && law.integral > 0))
    throw refusal(file, 'the search needs gains above zero to start from; try "galehold tune formula"');
  const { proportional, integral, speedFilter } = law;
  return { proportional, integral, filterFrequency: speedFilter?.frequency, sampleTime: controller.sampleTime };
}

/** The gains that a candidate's variables stand for: logarithms of factors on the start's. */
function gainsOf(start: Start, [proportional, integral, pitchScale, filter]: readonly number[]) {
  return {
    proportional: start.proportional * Math.exp(proportional),
    integral: start.integral * Math.exp(integral),
    pitchScale: Math.exp(pitchScale),
    filterFrequency: start.filterFrequency === undefined ? undefined : start.filterFrequency * Math.exp(filter),
  };
}

/** Runs candidates over all scenarios and seeds; what the journal knows is not run again. */
function createRunner(
  scenarios: readonly ScenarioData[],
  files: readonly string[],
  set: readonly string[],
  journal: RunJournal<TuneRunResult>,
  workers: number,
  total: number,
) {
  const pool = new Tinypool({
    filename: workerFile(),
    runtime: 'worker_threads',
    minThreads: workers,
    maxThreads: workers,
  });
  const bar = progress(total);
  const digests = scenarios.map(({ inputs }) => JSON.stringify(inputs));

  async function run(i: number, seed: number, gains: ReturnType<typeof gainsOf>): Promise<TuneRunResult> {
    const { filterFrequency, pitchScale, ...both } = gains;
    const task: TuneRun = { file: files[i], set, seed, gains: both, pitchScale, filterFrequency };
    const key = createHash('sha256')
      .update(JSON.stringify([digests[i], task]))
      .digest('hex')
      .slice(0, 32);
    const known = journal.find(key);
    const result = known ?? ((await pool.run(task)) as TuneRunResult);
    if (!known) journal.add(key, result);
    bar.step();
    return result;
  }

  return {
    /** Means of the objectives over all runs; infinite where one could not go on. */
    async candidate(gains: ReturnType<typeof gainsOf>, seeds: readonly number[], sampleTime: number) {
      const { filterFrequency: filter } = gains;
      if (filter !== undefined && !(filter >= LOWEST_FILTER && filter <= 0.4 / sampleTime)) {
        return { objectives: OBJECTIVES.map(() => Number.POSITIVE_INFINITY), broken: 1 };
      }
      const results = await Promise.all(files.flatMap((_, i) => seeds.map((seed) => run(i, seed, gains))));
      const broken = results.filter((result) => result.broken).length / results.length;
      const objectives = OBJECTIVES.map((_, k) =>
        results.reduce(
          (sum, { objectives: each }) => sum + (each ? each[k] : Number.POSITIVE_INFINITY) / results.length,
          0,
        ),
      );
      return { objectives, broken };
    },
    finish: () => bar.stop(),
    stop(): void {
      bar.stop();
      void pool.destroy();
    },
  };
}

/** The built worker: threads do not read TypeScript. */
function workerFile(): string {
  const places = ['./tune-run.js', '../dist/cli/tune-run.js'].map((place) =>
    fileURLToPath(new URL(place, import.meta.url)),
  );
  const built = places.find((place) => existsSync(place));
  if (built === undefined) throw new Error('the command has not been built: run "npm run build" first');
  return built;
}

/** A bar on a terminal; a line every tenth elsewhere. */
function progress(total: number) {
  const live = process.stderr.isTTY;
  const bar = new SingleBar({
    format: '{bar} {value}/{total} simulations, {eta_formatted} left',
    barsize: 30,
    stream: process.stderr,
    barCompleteChar: '#',
    barIncompleteChar: '.',
    clearOnComplete: true,
  });
  let done = 0;
  if (live) bar.start(total, 0);
  return {
    step(): void {
      done++;
      if (live) bar.update(Math.min(done, total));
      else if (Math.floor((10 * done) / total) > Math.floor((10 * (done - 1)) / total))
        console.error(`${done} of ${total} simulations`);
    },
    stop(): void {
      if (live) bar.stop();
    },
  };
}

/** Of the front, the trade whose worst objective is best: what it gains in all three is likeliest to last in other winds. */
function choose({ front }: TradeResult): TriedCandidate | undefined {
  const worst = ({ objectives }: TriedCandidate) => Math.max(...objectives);
  return front.reduce<TriedCandidate | undefined>(
    (best, next) => (best && worst(best) <= worst(next) ? best : next),
    undefined,
  );
}

interface Check {
  seeds: readonly number[];
  unseen: readonly number[];
  /** Objectives over those of the start, on the unseen seeds. */
  check: readonly number[];
  broken: number;
}

async function tell(
  files: readonly string[],
  { out, report, set }: ScenarioOptions,
  source: string,
  start: Start,
  result: TradeResult,
  chosen: TriedCandidate,
  { seeds, unseen, check, broken }: Check,
): Promise<void> {
  const subject = await scenarioSubject(files[0], set);
  const { scenario, turbine } = subject;
  const law = pitchLawOf(scenario.controller);
  if (!law) throw new Error('the controller has lost its pitch law');
  const { filterFrequency, pitchScale, ...gains } = gainsOf(start, chosen.variables);
  const schedule = withPitchScale(law.schedule, pitchScale);
  const percent = (values: readonly number[]) =>
    OBJECTIVES.map(({ label }, i) => `${label} ${(100 * (values[i] - 1)).toFixed(1)} %`).join(', ');
  const found = `over the seeds of the search: ${percent(chosen.objectives)}; over ${unseen.length} others: ${percent(check)}`;
  const text = await withTunedLaw(source, out, set, {
    ...gains,
    schedule,
    filterFrequency,
    comments: {
      proportional: `search: ${start.proportional.toPrecision(4)} s before`,
      integral: `search: ${start.integral.toPrecision(4)} before`,
      schedule: `search: its pitch angles are ${pitchScale.toPrecision(3)} times what they were`,
      ...(filterFrequency === undefined
        ? {}
        : { filterFrequency: `search: ${start.filterFrequency?.toPrecision(4)} Hz before` }),
    },
    head: [
      `Gains by search over ${files.length} scenario(s) and seeds ${seeds.join(', ')}: ${result.tried.length} candidates.`,
      `Change against before ${found}.`,
    ],
  });
  await writeAsked(out, text);
  console.log(`${turbine.name}: ${result.tried.length} candidates tried, ${result.front.length} on the front`);
  console.log(`  change ${found}`);
  if (broken > 0)
    console.log(`  over the unseen seeds ${(100 * broken).toFixed(0)} % of the runs trip or break a limit`);
  console.log(
    `  proportional ${gains.proportional.toPrecision(4)} s, integral ${gains.integral.toPrecision(4)}, ${scheduleText(schedule)}${filterFrequency === undefined ? '' : `, filter ${filterFrequency.toPrecision(3)} Hz`}`,
  );
  console.log(`Written to ${out}.\n${CAUTION}`);
  if (report === undefined) return;
  const rated = ratedPoints(files[0], subject, trimAll(files[0], subject, evenWinds(turbine, 50)).points);
  const tuned = withGains(scenario.controller, gains, schedule, filterFrequency);
  const sections = [frontSection(result, chosen, found, start), ...loopSections(subject, tuned, rated, PEAK_SHOWN)];
  await writeAsked(report, reportPage(`${turbine.name}: pitch gains by search`, sections, CAUTION));
  console.log(`Report: ${report}`);
}

function capitalised(text: string): string {
  return text[0].toUpperCase() + text.slice(1);
}

/** Rows of the front that a reader can compare. */
const ROWS = 24;

/** At most `count` items, evenly taken. */
function thinned<T>(items: readonly T[], count: number): T[] {
  if (items.length <= count) return [...items];
  return Array.from({ length: count }, (_, i) => items[Math.round((i * (items.length - 1)) / (count - 1))]);
}

function frontSection({ tried, front }: TradeResult, chosen: TriedCandidate, found: string, start: Start): Section {
  const usable = tried.filter(({ broken }) => broken === 0);
  const pair = (first: number, second: number): Chart => ({
    title: capitalised(`${OBJECTIVES[second].label} against ${OBJECTIVES[first].label}`),
    x: { label: OBJECTIVES[first].label, range: [0.5, 1.8] },
    y: { label: OBJECTIVES[second].label, range: [0.5, 1.8] },
    lines: [
      {
        label: 'tried',
        points: true,
        colour: 5,
        x: usable.map((c) => c.objectives[first]),
        y: usable.map((c) => c.objectives[second]),
      },
      {
        label: 'front',
        points: true,
        colour: 0,
        x: front.map((c) => c.objectives[first]),
        y: front.map((c) => c.objectives[second]),
      },
      { label: 'start', points: true, colour: 2, x: [1], y: [1] },
      { label: 'chosen', points: true, colour: 1, x: [chosen.objectives[first]], y: [chosen.objectives[second]] },
    ],
  });
  return {
    heading: 'What was searched, what was found',
    text: [
      `${tried.length} candidates, ${usable.length} of them without a trip or a broken limit, ${front.length} on the front.`,
      `Chosen: ${found}.`,
      'A faster or slower loop: every row is a trade that no other beats in all three. The charts show each over the start’s.',
    ],
    charts: [pair(0, 1), pair(0, 2), pair(1, 2)],
    table: {
      head: [
        'proportional, s',
        'integral',
        'filter, Hz',
        ...OBJECTIVES.map(({ label }) => `${label}, over the start's`),
      ],
      rows: thinned(front, ROWS).map((candidate) => {
        const { proportional, integral, pitchScale, filterFrequency } = gainsOf(start, candidate.variables);
        return [
          proportional.toPrecision(4),
          integral.toPrecision(4),
          pitchScale.toPrecision(3),
          filterFrequency?.toPrecision(3) ?? '-',
          ...candidate.objectives.map((value) => value.toFixed(3)),
        ];
      }),
    },
  };
}

function seedList(text: string): number[] {
  const range = /^\s*(\d+)\s*\.\.\s*(\d+)\s*$/.exec(text);
  const list = range
    ? Array.from(
        { length: Math.max(0, Math.min(1000, Number(range[2]) - Number(range[1]) + 1)) },
        (_, i) => Number(range[1]) + i,
      )
    : text.split(',').map(Number);
  if (list.length > 0 && list.every((seed) => Number.isSafeInteger(seed) && seed >= 0)) return list;
  throw refusal('--seeds', `must be whole numbers as in "1..4" or "1,3,7", not "${text}"`);
}
