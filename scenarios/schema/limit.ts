/** Limits that make a scenario pass or fail, and levels of channels elsewhere. */
import { z } from 'zod';
import type { Machine } from '../../controllers/contract.ts';
import { CHANNELS } from '../../sim/channels.ts';
import { METRIC_NAMES } from '../metrics.ts';
import { suggestion } from '../nearest.ts';
import type { QuantityKind } from '../quantity.ts';
import type { LimitData, Statistic } from '../scenario.ts';
import { addFault, choice, decodeQuantity, mapping, number, onceDecoded, quantity, text } from './field.ts';

/** What a unit measures, as channels and metrics spell it at the end of their names. */
const UNITS: Readonly<Record<string, { kind: QuantityKind; size: number; offset?: number }>> = {
  rpm: { kind: 'rotational speed', size: Math.PI / 30 },
  deg: { kind: 'angle', size: Math.PI / 180 },
  deg_s: { kind: 'pitch rate', size: Math.PI / 180 },
  s: { kind: 'time', size: 1 },
  m: { kind: 'length', size: 1 },
  m_s: { kind: 'speed', size: 1 },
  m_s2: { kind: 'acceleration', size: 1 },
  kn: { kind: 'force', size: 1e3 },
  kn_m: { kind: 'torque', size: 1e3 },
  mn_m: { kind: 'torque', size: 1e6 },
  kw: { kind: 'power', size: 1e3 },
  mw: { kind: 'power', size: 1e6 },
  kj: { kind: 'energy', size: 1e3 },
  mj: { kind: 'energy', size: 1e6 },
  kwh: { kind: 'energy', size: 3.6e6 },
  c: { kind: 'temperature', size: 1, offset: 273.15 },
};

type Unit = (typeof UNITS)[string];

/** The unit that a name ends in; undefined for a plain number. */
function unitOf(name: string): Unit | undefined {
  const parts = name.split('_');
  const endings = [2, 1].map((length) => parts.slice(-length).join('_'));
  return endings.map((ending) => UNITS[ending]).find((unit) => unit !== undefined);
}

/** The rated value that a channel or metric compares with, SI; undefined where there is none. */
function ratedValueOf(name: string, machine: Machine): number | undefined {
  const unit = unitOf(name);
  if (unit?.kind === 'rotational speed') {
    return name.includes('generator') ? machine.ratedGeneratorSpeed : machine.ratedRotorSpeed;
  }
  if (unit?.kind === 'power') return machine.ratedPower;
  return name.startsWith('generator_torque') ? machine.ratedTorque : undefined;
}

const CHANNEL_NAMES = CHANNELS.map((c) => c.name);

function unknownName(name: string): string {
  return `there is no channel or metric "${name}"${suggestion(name, [...CHANNEL_NAMES, ...METRIC_NAMES])}`;
}

export function channelName(description: string) {
  return z
    .string()
    .superRefine(
      onceDecoded((name, context) => {
        if (!CHANNEL_NAMES.includes(name)) {
          addFault(context, `there is no channel "${name}"${suggestion(name, CHANNEL_NAMES)}`);
        }
      }),
    )
    .meta({ description, examples: ['rotor_speed_rpm'] });
}

/** A value as written, decoded once the channel is known. */
export const level = (description: string) =>
  z.union([z.number(), z.string()]).meta({
    description: `${description} (in any unit of the channel’s kind, or a multiple of its rated value)`,
    examples: ['13.8 rpm', '1.1 rated'],
  });

/**
 * Decodes a value of a channel or metric to SI.
 * @throws Error with what would be right
 */
export function decodeLevel(written: string | number, name: string, machine: Machine): number {
  return decodeAs(written, unitOf(name), ratedValueOf(name, machine), name);
}

function decodeAs(written: string | number, unit: Unit | undefined, rated: number | undefined, name: string): number {
  if (!unit) {
    if (typeof written === 'number') return written;
    throw new Error(`"${name}" is a plain number, without a unit; "${written}" is not`);
  }
  return decodeQuantity(String(written), unit.kind, rated);
}

const STATISTICS = {
  max: 'max',
  min: 'min',
  mean: 'mean',
  spread: 'spread',
  final: 'final',
  time_above: 'time above',
  time_below: 'time below',
  travel: 'travel',
  count: 'count',
  rainflow: 'rainflow',
} as const satisfies Record<string, Statistic>;

const NEEDS_LEVEL: readonly (Statistic | undefined)[] = ['time above', 'time below', 'count'];
/** These measure differences, so that a thermometer's zero does not matter. */
const OF_DIFFERENCES: readonly (Statistic | undefined)[] = ['spread', 'travel', 'rainflow'];

const written = mapping({
  channel: text('A channel, with a statistic; or a metric of the summary, without.'),
  statistic: choice(STATISTICS, 'What is taken of the channel.').optional(),
  level: level('What time_above, time_below and count compare with').optional(),
  exponent: number('Wöhler exponent of rainflow', { above: 0 }).optional(),
  from: quantity('time', 'Start of the window; start of the run when absent', { atLeast: 0 }).optional(),
  to: quantity('time', 'End of the window; end of the run when absent', { above: 0 }).optional(),
  below: level('The value must stay below this').optional(),
  above: level('The value must stay above this').optional(),
});
type Written = z.output<typeof written>;

type Fault = { key: keyof Written; message: string };

/** What is wrong with the limit, seen on its own. */
function faultsOf(limit: Written): Fault[] {
  const { channel, statistic, level, exponent, from = 0, to = Number.POSITIVE_INFINITY } = limit;
  const faults: Fault[] = [];
  const isChannel = CHANNEL_NAMES.includes(channel);
  const isMetric = METRIC_NAMES.includes(channel);
  if (!isChannel && !isMetric) faults.push({ key: 'channel', message: unknownName(channel) });
  if (isChannel && !statistic) {
    const message = `a limit on a channel needs a statistic: ${Object.keys(STATISTICS).join(', ')}`;
    faults.push({ key: 'statistic', message });
  }
  if (isMetric && statistic)
    faults.push({ key: 'statistic', message: `"${channel}" is a metric and takes no statistic` });
  const needsLevel = NEEDS_LEVEL.includes(statistic);
  if (needsLevel && level === undefined)
    faults.push({ key: 'level', message: `the statistic ${statistic?.replace(' ', '_')} needs a level` });
  if (!needsLevel && level !== undefined)
    faults.push({ key: 'level', message: 'only time_above, time_below and count take a level' });
  if ((statistic === 'rainflow') !== (exponent !== undefined)) {
    const message =
      exponent === undefined
        ? 'rainflow needs an exponent, for example 4 for welded steel'
        : 'only rainflow takes an exponent';
    faults.push({ key: 'exponent', message });
  }
  if (from >= to) faults.push({ key: 'to', message: 'the window must end after it starts' });
  if ((limit.below === undefined) === (limit.above === undefined)) {
    faults.push({ key: 'below', message: 'a bound is due: either below or above' });
  }
  return faults;
}

/** What the statistic is measured in, and what its bound may be relative to. */
function boundUnit({ channel, statistic }: Written): Unit | undefined {
  if (statistic === 'time above' || statistic === 'time below') return UNITS.s;
  if (statistic === 'count') return undefined;
  const unit = unitOf(channel);
  if (unit?.kind === 'temperature' && OF_DIFFERENCES.includes(statistic))
    return { kind: 'temperature difference', size: 1 };
  return unit;
}

function inUnit(si: number, unit: Unit | undefined): number {
  return unit ? (si - (unit.offset ?? 0)) / unit.size : si;
}

/** A limit; `to` is Infinity where the window lasts to the end of the run. */
export function limit(machine: Machine) {
  return written.transform((given, context): LimitData => {
    const faults = faultsOf(given);
    const attempt = (key: 'level' | 'below' | 'above', decode: (value: string | number) => number) => {
      const value = given[key];
      if (value === undefined || faults.some((f) => f.key === 'channel' || f.key === key)) return undefined;
      try {
        return decode(value);
      } catch (error) {
        faults.push({ key, message: error instanceof Error ? error.message : String(error) });
        return undefined;
      }
    };
    const { channel, statistic, exponent, from = 0, to = Number.POSITIVE_INFINITY } = given;
    const unit = boundUnit(given);
    const rated = unit === unitOf(channel) ? ratedValueOf(channel, machine) : undefined;
    const decodeBound = (value: string | number) => inUnit(decodeAs(value, unit, rated, statistic ?? channel), unit);
    const relation = given.below === undefined ? 'above' : 'below';
    const bound = attempt(relation, decodeBound);
    const level = attempt('level', (value) => decodeLevel(value, channel, machine));
    for (const { key, message } of faults) addFault(context, message, [key]);
    if (faults.length > 0 || bound === undefined) return z.NEVER;
    return { channel, statistic, level, exponent, from, to, relation, bound };
  });
}
