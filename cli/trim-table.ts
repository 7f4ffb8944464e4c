/** Trim points over the wind range as a table, a page of plots, CSV, or JSON. */
import { refusal } from '../scenarios/input-error.ts';
import { assembleFigure, type FigurePanel } from '../scenarios/page.ts';
import { bladeOf } from '../sim/aerodynamics/blade.ts';
import type { LoadSlopes } from '../sim/aerodynamics/coefficient-surface.ts';
import { Layout } from '../sim/layout.ts';
import { TowerMode } from '../sim/tower.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { rotorSlopes, type StallMargin, stallMargin } from '../tuning/rotor-slopes.ts';
import { type ScheduleFit, scheduleFits } from '../tuning/schedule-fit.ts';
import { readPageTemplate } from './page-template.ts';
import { scheduleText } from './schedule-text.ts';
import { textTable } from './text-table.ts';
import type { TrimOptions } from './trim.ts';
import { type MachineSubject, machineSubject, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { windSpeeds } from './wind-range.ts';

/** A trim point with what the rotor would do about it. */
interface Row extends TrimPoint {
  slopes: LoadSlopes;
  stall?: StallMargin;
}

interface Column {
  name: string;
  label: string;
  digits: number;
  value: (row: Row) => number;
}

const RPM = Math.PI / 30;
const DEGREE = Math.PI / 180;

function operationColumns(turbine: Turbine): Column[] {
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

/** Slopes with the other two of wind, rotor speed and pitch held. */
const SLOPE_COLUMNS: readonly Column[] = [
  {
    name: 'stall_margin_deg',
    label: 'Angle of attack to stall, deg',
    digits: 1,
    value: ({ stall }) => (stall ? stall.margin / DEGREE : Number.NaN),
  },
  {
    name: 'torque_per_pitch_kn_m_deg',
    label: 'Torque by pitch, kN m/deg',
    digits: 1,
    value: ({ slopes }) => (slopes.torquePerPitch * DEGREE) / 1e3,
  },
  {
    name: 'torque_per_speed_kn_m_rpm',
    label: 'Torque by rotor speed, kN m/rpm',
    digits: 1,
    value: ({ slopes }) => (slopes.torquePerRotorSpeed * RPM) / 1e3,
  },
  {
    name: 'torque_per_wind_kn_s',
    label: 'Torque by wind, kN m/(m/s)',
    digits: 1,
    value: ({ slopes }) => slopes.torquePerWind / 1e3,
  },
  {
    name: 'power_per_pitch_kw_deg',
    label: 'Power by pitch, kW/deg',
    digits: 1,
    value: ({ slopes, rotorSpeed }) => (slopes.torquePerPitch * rotorSpeed * DEGREE) / 1e3,
  },
  {
    name: 'thrust_per_pitch_kn_deg',
    label: 'Thrust by pitch, kN/deg',
    digits: 1,
    value: ({ slopes }) => (slopes.thrustPerPitch * DEGREE) / 1e3,
  },
  {
    name: 'thrust_per_speed_kn_rpm',
    label: 'Thrust by rotor speed, kN/rpm',
    digits: 1,
    value: ({ slopes }) => (slopes.thrustPerRotorSpeed * RPM) / 1e3,
  },
  {
    name: 'thrust_per_wind_kn_s_m',
    label: 'Thrust by wind, kN/(m/s)',
    digits: 1,
    value: ({ slopes }) => slopes.thrustPerWind / 1e3,
  },
];

/** @throws InputError where file, range or places to write are unusable, or no wind speed can be trimmed */
export async function trimTable(file: string, options: TrimOptions): Promise<void> {
  const subject = await machineSubject(file, options.set);
  const { turbine, trim } = subject;
  const { points, refusals } = trimAll(file, subject, windSpeeds(turbine, options));
  const rows = withSlopes(file, subject, points);
  const fits = fitsOf(rows);

  const operation = operationColumns(turbine);
  const columns = [...operation, ...SLOPE_COLUMNS];
  if (options.csv !== undefined) await writeAsked(options.csv, csv(columns, rows));
  if (options.plot !== undefined) await writeAsked(options.plot, await page(turbine, columns, rows));
  const best = trim.best();
  if (options.json) {
    console.log(JSON.stringify({ turbine: turbine.name, best, points: rows, scheduleFits: fits }, null, 2));
    return;
  }
  console.log(`${turbine.name}: steady operation\n`);
  console.log(tableOf(operation, rows));
  console.log('\nAngle of attack nearest to stall (30 to 95 % of the radius), and slopes, the other variables held:\n');
  console.log(tableOf([operation[0], ...SLOPE_COLUMNS], rows));
  console.log(
    `\nBest at fine pitch: power coefficient ${best.powerCoefficient.toFixed(4)} at tip-speed ratio ` +
      `${best.tipSpeedRatio.toFixed(2)}; torque law k = ${best.optimalGain.toPrecision(4)} N m s^2/rad^2.`,
  );
  if (fits.length > 0) console.log(`\n${fitText(fits)}`);
  for (const refusal of refusals) console.error(refusal);
}

function withSlopes(file: string, { turbine, surface }: MachineSubject, points: readonly TrimPoint[]): Row[] {
  const blade = turbine.rotor.aerodynamics.kind === 'blade' ? bladeOf(turbine.rotor) : undefined;
  try {
    return points.map((point) => ({
      ...point,
      slopes: rotorSlopes(surface, point),
      stall: blade && stallMargin(blade, point, turbine.airDensity),
    }));
  } catch (cause) {
    throw refusal(file, cause instanceof Error ? cause.message : String(cause));
  }
}

/** Schedules that keep slope times gain the same at every pitch; none where too few points are in the rated region. */
function fitsOf(rows: readonly Row[]): ScheduleFit[] {
  const rated = rows.filter(({ region, slopes }) => region === 'rated' && slopes.torquePerPitch < 0);
  if (rated.length < 3) return [];
  return scheduleFits(
    rated.map(({ pitch, slopes, rotorSpeed }) => ({ pitch, gain: -1 / (slopes.torquePerPitch * rotorSpeed) })),
    'nearest',
  ).filter((fit, i, all) => fit.schedule.kind !== 'table' || i === all.length - 1);
}

function fitText(fits: readonly ScheduleFit[]): string {
  const lines = fits.map(
    ({ schedule, largestError, meanError }) =>
      `  ${scheduleText(schedule)}: off by ${(100 * largestError).toFixed(1)} % at most, ${(100 * meanError).toFixed(1)} % on average`,
  );
  return ['Schedules that hold slope times gain constant over the rated region, as far as each can:', ...lines].join(
    '\n',
  );
}

function tableOf(columns: readonly Column[], rows: readonly Row[]): string {
  const cell = (column: Column, row: Row) => {
    const value = column.value(row);
    return Number.isNaN(value) ? '-' : value.toFixed(column.digits);
  };
  return textTable(
    ['', ...columns.map((c) => c.name)],
    rows.map((row) => [row.region, ...columns.map((column) => cell(column, row))]),
  );
}

function csv(columns: readonly Column[], points: readonly Row[]): string {
  const rows = points.map((p) => [p.region, ...columns.map((c) => csvNumber(c.value(p)))].join(','));
  return `${[['region', ...columns.map((c) => c.name)].join(','), ...rows].join('\n')}\n`;
}

/** Nothing where there is no value. */
function csvNumber(value: number): string {
  return Number.isNaN(value) ? '' : String(Number(value.toPrecision(9)));
}

async function page(turbine: Turbine, columns: readonly Column[], points: readonly Row[]): Promise<string> {
  const [wind, ...curves] = columns;
  const x = { label: wind.label, values: points.map(wind.value) };
  const panels = curves.map(({ label, value }): FigurePanel => {
    return { title: label, x, yLabel: label, lines: [{ label, values: points.map(value) }] };
  });
  const note = 'Steady operation in uniform wind; partial load at fine pitch, then rated speed and power.';
  return assembleFigure(await readPageTemplate(), { title: `${turbine.name}: steady operation`, note, panels });
}
