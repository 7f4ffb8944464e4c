/**
 * `npm run bench`: the speed and memory bars of the project, measured and printed. Never a test: a slow machine is no
 * defect. Each figure is the median of several runs after a warm-up; bars are printed beside the figures. Quote them from
 * a machine that does nothing else.
 */
import { spawnSync } from 'node:child_process';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { bladeOf } from '../../sim/aerodynamics/blade.ts';
import { DEFAULT_GRID, surfaceOfBlade } from '../../sim/aerodynamics/coefficient-surface.ts';
import { turbulenceField } from '../../sim/wind/turbulence.ts';
import { type Choice, GUSTS, LONG, type RunSpeed } from './run-speed.ts';
import { seconds } from './stopwatch.ts';

const SCENARIO = join(shippedFolder(), '04-operating-gust.yaml');
const COMMAND = new URL('../../cli/main.js', import.meta.url).pathname;

function row(what: string, figure: string, bar = ''): void {
  console.log(`${what.padEnd(70)} ${figure.padStart(16)}   ${bar}`);
}

function runSpeed(choice: Choice): RunSpeed {
  const file = new URL('./run-speed.js', import.meta.url).pathname;
  const words = ['--expose-gc', file, choice.rotor, choice.wind, choice.integrator];
  return JSON.parse(spawnSync(process.execPath, words, { encoding: 'utf8' }).stdout);
}

function speedRow(what: string, choice: Choice, bar: string): RunSpeed {
  const speed = runSpeed(choice);
  row(what, `${Math.round(speed.timesRealTime)} x real time`, bar);
  return speed;
}

function commandRow(what: string, words: readonly string[], bar: string): void {
  const command = () => spawnSync(process.execPath, [COMMAND, ...words], { cwd: tmpdir() });
  row(what, `${seconds(command).toFixed(2)} s`, bar);
}

/** Peak memory of a ten-minute run with its results written, MB. */
function peakMemory(): number {
  const runs = new URL('../../cli/scenario-runs.js', import.meta.url).href;
  const options = { set: [`duration=${LONG} s`], out: join(tmpdir(), 'galehold-bench') };
  const script = `const { runScenarios } = await import(${JSON.stringify(runs)});
    await runScenarios([${JSON.stringify(SCENARIO)}], ${JSON.stringify(options)});
    console.error(process.resourceUsage().maxRSS);`;
  const { stderr } = spawnSync(process.execPath, ['--input-type=module', '-e', script], { encoding: 'utf8' });
  return Number(stderr.trim().split('\n').at(-1)) / 1024;
}

const blade = bladeOf((await loadScenario(SCENARIO)).turbine.rotor);
const coarse = { ...DEFAULT_GRID, speedKnots: 31, pitchKnots: 61 };
const { speedKnots, pitchKnots } = DEFAULT_GRID;

row('what', 'figure', 'bar');
row('C_p and C_t surfaces, 31 by 61', `${seconds(() => surfaceOfBlade(blade, coarse)).toFixed(2)} s`, 'under 1 s');
row(
  `C_p and C_t surfaces, ${speedKnots} by ${pitchKnots}, as runs use and cache them`,
  `${seconds(() => surfaceOfBlade(blade)).toFixed(2)} s`,
);

const run = `${LONG} s at 100 Hz,`;
speedRow(`${run} surface rotor, odex`, { rotor: 'surface', wind: 'gusty', integrator: 'odex' }, '1000 or more');
speedRow(
  `${run} surface rotor, Runge–Kutta 10 ms`,
  { rotor: 'surface', wind: 'gusty', integrator: 'fixed-step' },
  '5000 or more',
);
speedRow(
  `${run} blade-element rotor, odex`,
  { rotor: 'blade-element', wind: 'steady', integrator: 'odex' },
  '60 or more',
);
const calm = speedRow(
  `${run} blade-element rotor, Runge–Kutta 10 ms`,
  { rotor: 'blade-element', wind: 'steady', integrator: 'fixed-step' },
  '300 or more',
);
row('  heap that it holds on to, records apart', `${calm.heapGrowth.toFixed(1)} MB`, 'under 5 MB');
const blown = runSpeed({ rotor: 'blade-element', wind: 'turbulent', integrator: 'fixed-step' });
row(
  '  time in turbulence over time in steady wind',
  `${(calm.timesRealTime / blown.timesRealTime).toFixed(2)} times`,
  'under 1.25',
);
row(
  `turbulence of ${LONG} s at 20 Hz in 61 points, three components`,
  `${seconds(() => turbulenceField(GUSTS)).toFixed(2)} s`,
  'under 3 s',
);
row('  its samples', `${(turbulenceField(GUSTS).values.byteLength / 2 ** 20).toFixed(0)} MB`, 'under 150 MB');

commandRow('trim at 50 wind speeds, whole command', ['trim', SCENARIO, '--step', '0.43 m/s'], '');
commandRow(
  'linear models and loops at 50 wind speeds, whole command',
  ['linearize', SCENARIO, '--step', '0.43 m/s', '--json'],
  'both under 2 s',
);
commandRow(
  'gains by margin, proven at 50 wind speeds, whole command',
  ['tune', 'margin', SCENARIO, '--out', 'galehold-bench.yaml'],
  'under 10 s',
);
commandRow('start of the command (--help), whole process', ['--help'], 'under 0.3 s');
row(`peak memory of a ${LONG} s run, results written`, `${Math.round(peakMemory())} MB`, 'under 200 MB');
