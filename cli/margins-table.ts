/** Margins over the wind range as a table, a page of plots, CSV, or JSON. */
import { controllerOf } from '../scenarios/control.ts';
import { refusal } from '../scenarios/input-error.ts';
import { assembleFigure, type FigurePanel } from '../scenarios/page.ts';
import { setUp } from '../scenarios/run.ts';
import { BladeElementRotor } from '../sim/aerodynamics/blade-element-rotor.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { steadyWind } from '../sim/wind/steady.ts';
import { linearPlant } from '../tuning/linear-plant.ts';
import { frequencyGrid, type Margins, marginsOf } from '../tuning/margins.ts';
import { interpolatedGain, measureLoop, withQuietSensors } from '../tuning/measured-loop.ts';
import { type Mode, modesOf, sampledModesOf } from '../tuning/modes.ts';
import { sampledLaw } from '../tuning/sampled-law.ts';
import { SampledLoop, spreadByNoise } from '../tuning/sampled-loop.ts';
import type { MarginsOptions } from './margins.ts';
import { readPageTemplate } from './page-template.ts';
import { textTable } from './text-table.ts';
import { ratedPoints, rotorModelOf, type ScenarioSubject, scenarioSubject, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { windSpeeds } from './wind-range.ts';

export interface MarginRow {
  point: TrimPoint;
  margins: Margins;
  /** The closed loop's mode of least damping; absent where the loop was measured. */
  least?: Mode;
  /** Pitch rate that the noise and the steps of the speed sensor alone cause, rad/s (standard deviation); where known. */
  noiseRate?: number;
}

interface Column {
  name: string;
  label: string;
  digits: number;
  value: (row: MarginRow) => number;
}

const DEGREE = Math.PI / 180;

const COLUMNS: readonly Column[] = [
  { name: 'wind_m_s', label: 'Wind speed, m/s', digits: 2, value: ({ point }) => point.windSpeed },
  { name: 'pitch_deg', label: 'Pitch, deg', digits: 2, value: ({ point }) => point.pitch / DEGREE },
  { name: 'gain_margin', label: 'Gain margin, factor', digits: 2, value: ({ margins }) => margins.gain.factor },
  { name: 'gain_margin_down', label: 'Least gain, factor', digits: 2, value: ({ margins }) => margins.gainDown.factor },
  {
    name: 'phase_margin_deg',
    label: 'Phase margin, deg',
    digits: 1,
    value: ({ margins }) => margins.phase.angle / DEGREE,
  },
  { name: 'delay_margin_s', label: 'Delay margin, s', digits: 3, value: ({ margins }) => margins.delay.time },
  { name: 'modulus_margin', label: 'Modulus margin', digits: 3, value: ({ margins }) => margins.modulus.distance },
  {
    name: 'sensitivity_peak',
    label: 'Sensitivity peak',
    digits: 2,
    value: ({ margins }) => 1 / margins.modulus.distance,
  },
  {
    name: 'peak_at_hz',
    label: 'Frequency of the sensitivity peak, Hz',
    digits: 3,
    value: ({ margins }) => margins.modulus.frequency / (2 * Math.PI),
  },
  { name: 'bandwidth_rad_s', label: 'Bandwidth, rad/s', digits: 3, value: ({ margins }) => margins.bandwidth },
  {
    name: 'noise_pitch_rate_deg_s',
    label: 'Pitch rate by sensor noise, deg/s (standard deviation)',
    digits: 3,
    value: ({ noiseRate }) => (noiseRate ?? Number.NaN) / DEGREE,
  },
  { name: 'least_damping', label: 'Least damping', digits: 4, value: ({ least }) => least?.damping ?? Number.NaN },
];

/** @throws InputError where file, range or places to write are unusable, or there is no loop to look at */
export async function marginsTable(file: string, options: MarginsOptions): Promise<void> {
  const subject = await scenarioSubject(file, options.set, rotorModelOf(options.rotor));
  const { points } = trimAll(file, subject, windSpeeds(subject.turbine, options));
  const rated = ratedPoints(file, subject, points);
  const row = options.measured ? measuredRow : exactRow;
  const rows = rated.map((point) => inWords(file, () => row(subject, point)));

  if (options.csv !== undefined) await writeAsked(options.csv, csv(rows));
  if (options.plot !== undefined) await writeAsked(options.plot, await page(subject, rows));
  if (options.json) {
    console.log(JSON.stringify({ controller: subject.scenario.controller.name, rows }, null, 2));
    return;
  }
  const { turbine, scenario } = subject;
  console.log(
    `${turbine.name} with ${scenario.controller.name}: the pitch loop${options.measured ? ', measured' : ''}\n`,
  );
  console.log(
    textTable(
      COLUMNS.map(({ name }) => name),
      rows.map((each) => COLUMNS.map(({ value, digits }) => cell(value(each), digits))),
    ),
  );
  console.log(`\n${closingText(rows)}`);
}

/** Margins of the sampled loop at a trim point. @throws Error where the law does not close a loop there */
export function exactRow({ turbine, rotor, machine, scenario }: ScenarioSubject, point: TrimPoint): MarginRow {
  const law = sampledLaw(controllerOf(scenario.controller, machine), machine, point);
  const plant = linearPlant(turbine, rotor, point, law.pitchAs);
  const loop = new SampledLoop(turbine, plant, law);
  const modes = sampledModesOf(loop.closedLoop(), law.sampleTime);
  const grid = frequencyGrid(0.01, Math.PI / law.sampleTime, 400, [...modes, ...modesOf(plant.a)]);
  requireLoop(scenario.controller.name, point, Math.hypot(...Object.values(loop.gain(1))));
  const least = modes.reduce((worst, mode) => (mode.damping < worst.damping ? mode : worst));
  const stable = modes.every(({ pole }) => pole.re < 0);
  const noiseRate = stable ? spreadByNoise(loop, PITCH_RATE, sensorNoise(turbine)) : undefined;
  return { point, margins: marginsOf((frequency) => loop.gain(frequency), grid), least, noiseRate };
}

const PITCH_RATE = 'pitch: rate (collective)';

/** Noise of the speed sensor, and of its steps as if they were noise of their own: a step over √12. */
function sensorNoise({ sensors: { controlSpeed } }: Turbine): number {
  return Math.hypot(controlSpeed.noise, controlSpeed.resolution / Math.sqrt(12));
}

/** The same from a simulation with speed sensors that neither round nor add noise. */
export function measuredRow({ turbine, surface, rotor, scenario }: ScenarioSubject, point: TrimPoint): MarginRow {
  const { windSpeed } = point;
  const setup = setUp(
    {
      ...scenario,
      turbine: withQuietSensors(turbine),
      wind: steadyWind({ speed: windSpeed }),
      start: { kind: 'trim', wind: windSpeed },
      events: [],
      rotor: { ...scenario.rotor, model: rotor instanceof BladeElementRotor ? 'blade element' : 'surface' },
      integrator: { kind: 'runge-kutta', step: 0.01 },
    },
    surface,
  );
  const measured = measureLoop(setup);
  const { frequencies } = measured;
  requireLoop(scenario.controller.name, point, Math.hypot(measured.gain[0].re, measured.gain[0].im));
  const grid = frequencyGrid(frequencies[0], frequencies[frequencies.length - 1], 2 * frequencies.length);
  return { point, margins: marginsOf(interpolatedGain(measured), grid) };
}

function requireLoop(controller: string, { windSpeed }: TrimPoint, gain: number): void {
  if (gain > 1e-9) return;
  throw new Error(
    `at ${windSpeed} m/s "${controller}" does not move the pitch when the speed changes: there is no loop`,
  );
}

function inWords<T>(file: string, act: () => T): T {
  try {
    return act();
  } catch (cause) {
    throw refusal(file, cause instanceof Error ? cause.message : String(cause));
  }
}

function cell(value: number, digits: number): string {
  if (Number.isNaN(value)) return '-';
  return Number.isFinite(value) ? value.toFixed(digits) : 'any';
}

function closingText(rows: readonly MarginRow[]): string {
  const unstable = rows.filter(({ least }) => least && least.pole.re > 1e-6);
  const { point, margins } = rows.reduce((a, b) => (b.margins.modulus.distance < a.margins.modulus.distance ? b : a));
  const tightest =
    `Tightest at ${point.windSpeed.toFixed(2)} m/s: a sensitivity peak of ${(1 / margins.modulus.distance).toFixed(2)} ` +
    `at ${(margins.modulus.frequency / (2 * Math.PI)).toFixed(3)} Hz.`;
  if (unstable.length === 0) return tightest;
  const winds = unstable.map((row) => row.point.windSpeed.toFixed(2)).join(', ');
  return `The closed loop swings up at ${winds} m/s: margins mean nothing there.\n${tightest}`;
}

function csv(rows: readonly MarginRow[]): string {
  const lines = rows.map((row) => COLUMNS.map(({ value }) => csvNumber(value(row))).join(','));
  return `${[COLUMNS.map(({ name }) => name).join(','), ...lines].join('\n')}\n`;
}

/** Nothing where there is no value, or no limit. */
function csvNumber(value: number): string {
  return Number.isFinite(value) ? String(Number(value.toPrecision(9))) : '';
}

async function page({ turbine, scenario }: ScenarioSubject, rows: readonly MarginRow[]): Promise<string> {
  const [wind, ...curves] = COLUMNS;
  const x = { label: wind.label, values: rows.map(wind.value) };
  const panels = curves.map(({ label, value }): FigurePanel => {
    const values = rows.map(value).map((v) => (Number.isFinite(v) ? v : Number.NaN));
    return { title: label, x, yLabel: label, lines: [{ label, values }] };
  });
  const title = `${turbine.name} with ${scenario.controller.name}: margins of the pitch loop`;
  const note = 'The loop cut at the pitch demand, the torque loop closed; sampling, delay, filters and drive included.';
  return assembleFigure(await readPageTemplate(), { title, note, panels });
}
