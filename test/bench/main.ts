/**
 * `npm run bench`: the speed and memory bars of the project, measured and printed. Never a test: a slow machine is no
 * defect. Each figure is the median of several runs after a warm-up; bars are printed beside the figures.
 */
import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { runScenario } from '../../scenarios/run.ts';
import type { ScenarioData } from '../../scenarios/scenario.ts';
import { bladeOf } from '../../sim/aerodynamics/blade.ts';
import { DEFAULT_GRID, surfaceOfBlade } from '../../sim/aerodynamics/coefficient-surface.ts';
import { surfaceOf } from '../../sim/aerodynamics/surface-rotor.ts';
import { gaussian } from '../../sim/noise.ts';
import { tableWind } from '../../sim/wind/table.ts';

const RUNS = 5;
const LONG = 600;

function median(values: readonly number[]): number {
  return values.toSorted((a, b) => a - b)[Math.floor(values.length / 2)];
}

/** Median seconds of `RUNS` calls after one that is not counted. */
function seconds(work: () => void): number {
  const times: number[] = [];
  for (let i = 0; i <= RUNS; i++) {
    const start = performance.now();
    work();
    if (i > 0) times.push((performance.now() - start) / 1000);
  }
  return median(times);
}

function row(what: string, figure: string, bar: string): void {
  console.log(`${what.padEnd(66)} ${figure.padStart(16)}   ${bar}`);
}

/** Ten minutes of gusty wind above rated, a row every half second: the loop and the drives work all the time. */
function longRun(scenario: ScenarioData, integrator: ScenarioData['integrator']): ScenarioData {
  const time = Array.from({ length: 2 * LONG + 1 }, (_, i) => i / 2);
  const gusts = time.map((_, i) => gaussian(1, i));
  const speed = gusts.map((gust, i) => (i === 0 ? 16 : 16 + 0.8 * (gust + gusts[i - 1])));
  const wind = tableWind({ time, speed });
  return { ...scenario, wind, start: { kind: 'trim', wind: 16 }, duration: LONG, events: [], limits: [], integrator };
}

const scenario = await loadScenario(join(shippedFolder(), '04-operating-gust.yaml'));
const blade = bladeOf(scenario.turbine.rotor);
const surface = surfaceOf(scenario.turbine);
const odex = longRun(scenario, { kind: 'odex', relativeTolerance: 1e-6 });
const fixed = longRun(scenario, { kind: 'runge-kutta', step: 0.01 });

row('what', 'figure', 'bar');
row(
  'C_p and C_t surfaces, 31 by 61',
  `${seconds(() => surfaceOfBlade(blade, { ...DEFAULT_GRID, speedKnots: 31, pitchKnots: 61 })).toFixed(2)} s`,
  'under 1 s',
);
row(
  `C_p and C_t surfaces, ${DEFAULT_GRID.speedKnots} by ${DEFAULT_GRID.pitchKnots} (as runs use them; cached)`,
  `${seconds(() => surfaceOfBlade(blade)).toFixed(2)} s`,
  '',
);
row(
  `${LONG} s at 100 Hz, surface rotor, odex`,
  `${Math.round(LONG / seconds(() => runScenario(odex, surface)))} x real time`,
  '1000 or more',
);
row(
  `${LONG} s at 100 Hz, surface rotor, Runge–Kutta 10 ms`,
  `${Math.round(LONG / seconds(() => runScenario(fixed, surface)))} x real time`,
  '5000 or more',
);
const main = new URL('../../cli/main.js', import.meta.url).pathname;
row(
  'start of the command (--help), whole process',
  `${seconds(() => spawnSync(process.execPath, [main, '--help'])).toFixed(2)} s`,
  'under 0.3 s',
);
const memory = spawnSync(
  process.execPath,
  [
    '--input-type=module',
    '-e',
    `const { runScenarios } = await import(${JSON.stringify(new URL('../../cli/scenario-runs.js', import.meta.url).href)});
     const file = ${JSON.stringify(join(shippedFolder(), '04-operating-gust.yaml'))};
     await runScenarios([file], { set: ['duration=${LONG} s'], out: ${JSON.stringify(join(process.env.TMPDIR ?? '/tmp', 'galehold-bench'))}, json: false });
     console.error(process.resourceUsage().maxRSS);`,
  ],
  { encoding: 'utf8' },
);
row(
  `peak memory of a ${LONG} s run, results written`,
  `${Math.round(Number(memory.stderr.trim().split('\n').at(-1)) / 1024)} MB`,
  'under 200 MB',
);
