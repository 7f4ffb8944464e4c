/** Trim points over the wind range as a table, a page of plots, CSV, or JSON. */
import { readFile } from 'node:fs/promises';
import { torqueCurveOf } from '../scenarios/control.ts';
import { loadScenario, loadTurbine } from '../scenarios/disk.ts';
import { refusal } from '../scenarios/input-error.ts';
import { machineOf } from '../scenarios/machine.ts';
import { assembleFigure, type FigurePanel } from '../scenarios/page.ts';
import { parseQuantity } from '../scenarios/quantity.ts';
import { formatTag } from '../scenarios/schema/file-kind.ts';
import { cachedSurface } from '../scenarios/surface-cache.ts';
import { surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
import { Layout } from '../sim/layout.ts';
import { TowerMode } from '../sim/tower.ts';
import { Trim, type TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { readPageTemplate } from './page-template.ts';
import { textTable } from './text-table.ts';
import type { TrimOptions } from './trim.ts';
import { writeAsked } from './whole-file.ts';

interface Column {
  name: string;
  label: string;
  digits: number;
  value: (point: TrimPoint) => number;
}

const RPM = Math.PI / 30;
const DEGREE = Math.PI / 180;

function columnsFor(turbine: Turbine): Column[] {
  const tower = new TowerMode('tower', turbine.tower, new Layout());
  return [
    { name: 'wind_m_s', label: 'Wind speed, m/s', digits: 1, value: (p) => p.windSpeed },
    { name: 'rotor_speed_rpm', label: 'Rotor speed, rpm', digits: 2, value: (p) => p.rotorSpeed / RPM },
    { name: 'pitch_deg', label: 'Pitch, deg', digits: 2, value: (p) => p.pitch / DEGREE },
    { name: 'tip_speed_ratio', label: 'Tip-speed ratio', digits: 2, value: (p) => p.tipSpeedRatio },
    { name: 'power_coefficient', label: 'Power coefficient', digits: 3, value: (p) => p.powerCoefficient },
    { name: 'thrust_coefficient', label: 'Thrust coefficient', digits: 3, value: (p) => p.thrustCoefficient },
    {
      name: 'generator_torque_kn_m',
      label: 'Generator torque, kN m',
      digits: 2,
      value: (p) => p.generatorTorque / 1e3,
    },
    { name: 'electrical_power_kw', label: 'Electrical power, kW', digits: 0, value: (p) => p.power / 1e3 },
    { name: 'thrust_kn', label: 'Thrust, kN', digits: 0, value: (p) => p.thrust / 1e3 },
    {
      name: 'tower_deflection_m',
      label: 'Tower-top deflection, m',
      digits: 3,
      value: (p) => p.thrust / tower.stiffness,
    },
  ];
}

/** @throws InputError where file, range or places to write are unusable, or no wind speed can be trimmed */
export async function trimTable(file: string, options: TrimOptions): Promise<void> {
  const { turbine, torqueCurve } = await subjectOf(file, options.set);
  const trim = new Trim(turbine, surfaceRotor(cachedSurface(turbine)));
  const { points, refusals } = trimAll(trim, windSpeeds(turbine, options), torqueCurve);
  if (points.length === 0) throw refusal(file, `no wind speed can be trimmed: ${refusals[0]}`);

  const columns = columnsFor(turbine);
  if (options.csv !== undefined) await writeAsked(options.csv, csv(columns, points));
  if (options.plot !== undefined) await writeAsked(options.plot, await page(turbine, columns, points));
  if (options.json) {
    console.log(JSON.stringify({ turbine: turbine.name, best: trim.best(), points }, null, 2));
    return;
  }
  const best = trim.best();
  console.log(`${turbine.name}: steady operation\n`);
  console.log(
    textTable(
      ['', ...columns.map((c) => c.name)],
      points.map((p) => [p.region, ...columns.map((c) => c.value(p).toFixed(c.digits))]),
    ),
  );
  console.log(
    `\nBest at fine pitch: power coefficient ${best.powerCoefficient.toFixed(4)} at tip-speed ratio ` +
      `${best.tipSpeedRatio.toFixed(2)}; torque law k = ${best.optimalGain.toPrecision(4)} N m s^2/rad^2.`,
  );
  for (const refusal of refusals) console.error(refusal);
}

/** The turbine of a turbine file, or of a scenario together with its controller's torque curve. */
async function subjectOf(file: string, set: readonly string[]) {
  const text = await readFile(file, 'utf8').catch(() => '');
  if (!new RegExp(`^galehold:\\s*${formatTag('scenario')}`, 'm').test(text)) {
    return { turbine: await loadTurbine(file, { set }), torqueCurve: undefined };
  }
  const { turbine, controller } = await loadScenario(file, { set });
  return { turbine, torqueCurve: torqueCurveOf(controller, machineOf(turbine)) };
}

function windSpeeds({ ratings }: Turbine, { from, to, step }: TrimOptions): number[] {
  const first = from === undefined ? ratings.cutInWind : speed('--from', from);
  const last = to === undefined ? ratings.cutOutWind : speed('--to', to);
  const by = speed('--step', step);
  if (!(by > 0)) throw refusal('--step', 'must be larger than zero');
  if (!(last >= first)) throw refusal('--to', 'must not lie below the lowest wind speed');
  const count = Math.floor((last - first) / by + 1e-9) + 1;
  return Array.from({ length: count }, (_, i) => first + i * by);
}

function speed(option: string, text: string): number {
  try {
    return parseQuantity(text, 'speed');
  } catch (cause) {
    throw refusal(option, cause instanceof Error ? cause.message : String(cause));
  }
}

function trimAll(trim: Trim, winds: readonly number[], torqueCurve?: (generatorSpeed: number) => number) {
  const points: TrimPoint[] = [];
  const refusals: string[] = [];
  for (const wind of winds) {
    try {
      points.push(trim.at(wind, torqueCurve));
    } catch (cause) {
      refusals.push(cause instanceof Error ? cause.message : String(cause));
    }
  }
  return { points, refusals };
}

function csv(columns: readonly Column[], points: readonly TrimPoint[]): string {
  const rows = points.map((p) => [p.region, ...columns.map((c) => Number(c.value(p).toPrecision(9)))].join(','));
  return `${[['region', ...columns.map((c) => c.name)].join(','), ...rows].join('\n')}\n`;
}

async function page(turbine: Turbine, columns: readonly Column[], points: readonly TrimPoint[]): Promise<string> {
  const [wind, ...curves] = columns;
  const x = { label: wind.label, values: points.map(wind.value) };
  const panels = curves.map(({ label, value }): FigurePanel => {
    return { title: label, x, yLabel: label, lines: [{ label, values: points.map(value) }] };
  });
  const note = 'Steady operation in uniform wind; partial load at fine pitch, then rated speed and power.';
  return assembleFigure(await readPageTemplate(), { title: `${turbine.name}: steady operation`, note, panels });
}
