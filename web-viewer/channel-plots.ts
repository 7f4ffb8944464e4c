/** Which plots a view of runs has, in the order in which a reader asks: speed, its cause, the blades, the brake, the rest. */
import type { DisplayUnits } from './display-unit.ts';
import { numberText } from './display-unit.ts';
import type { LineSymbol } from './line-sample.ts';
import type { Plot, PlotLevel, PlotLine } from './plot-stack.ts';
import type { Run } from './run.ts';

interface ChannelPlot {
  title: string;
  /** As recorded. */
  unit: string;
  height: number;
  /** One channel, or one per blade. */
  channels: readonly string[];
}

const blades = (name: (blade: number) => string) => [1, 2, 3].map(name);

const FIRST_PLOTS: readonly ChannelPlot[] = [
  { title: 'Rotor speed', unit: 'rpm', height: 240, channels: ['rotor_speed_rpm'] },
  { title: 'Wind at the hub', unit: 'm/s', height: 110, channels: ['wind_hub_m_s'] },
  { title: 'Pitch angle', unit: 'deg', height: 150, channels: blades((b) => `pitch_${b}_deg`) },
  { title: 'Pitch rate', unit: 'deg/s', height: 110, channels: blades((b) => `pitch_rate_${b}_deg_s`) },
  { title: 'Generator torque', unit: 'kN m', height: 110, channels: ['generator_torque_kn_m'] },
  { title: 'Brake torque', unit: 'kN m', height: 110, channels: ['brake_torque_kn_m'] },
  { title: 'Brake disc temperature', unit: '°C', height: 110, channels: ['brake_temperature_c'] },
  { title: 'Electrical power', unit: 'kW', height: 110, channels: ['electrical_power_kw'] },
  { title: 'Tower-top deflection', unit: 'm', height: 110, channels: ['tower_deflection_m'] },
];

/** Codes and clocks, told by the strip instead. */
const NOT_PLOTTED = new Set(['time_s', 'state', 'active_guard']);

/** The further channels that runs have recorded and that a reader may add. */
export function furtherChannels(runs: readonly Run[]): ChannelPlot[] {
  const known = new Set([...NOT_PLOTTED, ...FIRST_PLOTS.flatMap((plot) => plot.channels)]);
  const further = new Map<string, ChannelPlot>();
  for (const run of runs) {
    for (const { name, label, unit } of run.summary.channels) {
      if (known.has(name) || further.has(name) || !run.columns.has(name)) continue;
      further.set(name, { title: label, unit, height: 110, channels: [name] });
    }
  }
  return [...further.values()];
}

/** The plots of the runs given, as far as any of them has recorded the channels. */
export function channelPlots(runs: readonly Run[], further: readonly ChannelPlot[], units: DisplayUnits): Plot[] {
  return [...FIRST_PLOTS, ...further]
    .map((plot) => ({
      title: plot.title,
      unit: units.unit(plot.unit),
      height: plot.height,
      lines: runs.flatMap((run) => runLines(run, plot, units)),
      levels: plot.channels[0] === 'rotor_speed_rpm' ? speedLevels(runs, units) : [],
    }))
    .filter((plot) => plot.lines.length > 0);
}

/** Plots of FIRST_PLOTS that a run cannot have, by title. */
export function absentPlots(run: Run): string[] {
  return FIRST_PLOTS.filter(({ channels }) => !channels.some((name) => run.columns.has(name))).map(
    ({ title }) => title,
  );
}

const BLADE_SYMBOLS: readonly LineSymbol[] = ['circle', 'triangle-up', 'square'];

/** One line for each channel; blades that move as one share theirs. */
function runLines(run: Run, { channels, unit }: ChannelPlot, units: DisplayUnits): PlotLine[] {
  const groups: { values: Float32Array; blades: number[] }[] = [];
  channels.forEach((name, index) => {
    const values = run.columns.get(name);
    if (!values) return;
    const alike = groups.find((group) => !differ(values, group.values));
    if (alike) alike.blades.push(index + 1);
    else groups.push({ values, blades: [index + 1] });
  });
  return groups.map(({ values, blades }, index) => ({
    label: groups.length > 1 ? `${blades.length > 1 ? 'blades' : 'blade'} ${blades.join(', ')}` : '',
    owner: run.name,
    style: run.style,
    x: run.time,
    y: Float64Array.from(values, (value) => units.value(value, unit)),
    ...(groups.length > 1 ? { symbol: BLADE_SYMBOLS[index] } : {}),
  }));
}

/** Blades closer than this are seen as one, in the channel's unit (deg or deg/s). */
const SAME_BLADE = 0.05;

function differ(one: Float32Array, other: Float32Array): boolean {
  return one.some((value, index) => Math.abs(value - (other[index] ?? Number.NaN)) > SAME_BLADE);
}

function speedLevels(runs: readonly Run[], units: DisplayUnits): PlotLevel[] {
  const levels = new Map<string, PlotLevel>();
  for (const { summary } of runs) {
    for (const { kind, text, rpm } of summary.levels) {
      levels.set(`${kind} ${numberText(rpm)}`, { text, value: units.value(rpm, 'rpm'), severity: kind });
    }
  }
  return [...levels.values()];
}
