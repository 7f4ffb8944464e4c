/** A run told in plain words, from its summary: whether it held, what fired, how near it came, how it came to rest. */
import type { RunEventRecord, Summary, Verdict } from '../scenarios/summary.ts';
import { type DisplayUnits, numberText } from './display-unit.ts';

/** The verdict with a sign of its own, so that it is not told by colour alone. */
export const VERDICT_WORDS: Readonly<Record<Verdict, string>> = {
  holds: '✓ Holds',
  broken: '✕ Limit broken',
  'no limits': '– No limits set',
};

export function expectationWords({ asExpected, expected }: Summary): string {
  return asExpected ? 'as expected' : `expected: ${expected.verdict === 'holds' ? 'holds' : 'limit broken'}`;
}

/** The value of a metric; undefined where the run has none, or never got there. */
export function metricValue(summary: Summary, name: string): number | undefined {
  return summary.metrics.find((metric) => metric.name === name)?.value ?? undefined;
}

export function firstGuard(summary: Summary): RunEventRecord | undefined {
  return summary.events.find(({ kind }) => kind === 'guard');
}

/** One sentence for each thing there is to tell, in the order in which it is asked. */
export function story(summary: Summary, units: DisplayUnits): string[] {
  return [
    verdictSentence(summary, units),
    expectationSentence(summary),
    guardSentence(summary),
    peakSentence(summary, units),
    bladeSentence(summary, units),
    brakeSentence(summary, units),
    standstillSentence(summary),
  ].filter((sentence) => sentence !== undefined);
}

function verdictSentence({ verdict, limits }: Summary, units: DisplayUnits): string {
  if (verdict === 'no limits') return 'The scenario sets no limits, so there is nothing to judge.';
  if (verdict === 'holds') return limits.length === 1 ? 'Its one limit holds.' : `All ${limits.length} limits hold.`;
  const broken = limits.filter((limit) => !limit.holds);
  const [worst] = broken;
  const count = `${broken.length} of ${limits.length} limits ${broken.length === 1 ? 'is' : 'are'} broken`;
  if (!worst) return `${count}.`;
  const value = worst.value === null ? 'there is no value to judge' : `it was ${units.text(worst.value, worst.unit)}`;
  return `${count}: ${worst.text}, but ${value}.`;
}

function expectationSentence({ expected, asExpected }: Summary): string | undefined {
  const because = expected.because ? `: ${expected.because.trim().replace(/\.$/, '')}` : '';
  if (!asExpected) {
    return `That is not what the author expected (${expected.verdict === 'holds' ? 'limits hold' : 'a limit breaks'}${because}).`;
  }
  return expected.verdict === 'broken' ? `The author meant it to fail${because}.` : undefined;
}

function guardSentence(summary: Summary): string {
  const guard = firstGuard(summary);
  if (!guard) return 'No guard of the safety chain fired.';
  const others = summary.events.filter(({ kind }) => kind === 'guard').length - 1;
  const more = others === 0 ? '' : ` (${others} more after it)`;
  return `At ${numberText(guard.time)} s the safety chain acted: ${guard.text}${more}.`;
}

function peakSentence(summary: Summary, units: DisplayUnits): string | undefined {
  const peak = metricValue(summary, 'rotor_speed_peak_rpm');
  if (peak === undefined) return undefined;
  const rated = summary.levels.find(({ kind }) => kind === 'rated')?.rpm;
  const ofRated = rated ? `, ${((100 * peak) / rated).toFixed(1)} % of rated` : '';
  return `The rotor reached ${units.text(peak, 'rpm')}${ofRated}${marginClause(summary, units)}.`;
}

function marginClause(summary: Summary, units: DisplayUnits): string {
  const margin = metricValue(summary, 'margin_to_never_exceed_rpm');
  if (margin === undefined) return '';
  const side = margin >= 0 ? 'below' : 'ABOVE';
  const percent = metricValue(summary, 'margin_to_never_exceed_pct');
  const share = percent === undefined ? '' : ` (${Math.abs(percent).toFixed(1)} %)`;
  return `: ${units.differenceText(Math.abs(margin), 'rpm')}${share} ${side} the speed that it must never exceed`;
}

function bladeSentence(summary: Summary, units: DisplayUnits): string | undefined {
  const rate = metricValue(summary, 'pitch_rate_max_deg_s');
  if (rate === undefined) return undefined;
  const fastest = `The blades turned at up to ${units.text(rate, 'deg/s')}`;
  const all = metricValue(summary, 'stop_to_feather_s');
  if (all !== undefined) return `${fastest} and were feathered ${numberText(all)} s after the trip or normal stop.`;
  const moving = metricValue(summary, 'stop_to_feather_moving_s');
  if (moving !== undefined) {
    return `${fastest}; those not stuck were feathered ${numberText(moving)} s after the trip or normal stop.`;
  }
  return stopped(summary) ? `${fastest}; not all of them reached feather.` : `${fastest}.`;
}

function standstillSentence(summary: Summary): string | undefined {
  const after = metricValue(summary, 'stop_to_standstill_s');
  if (after !== undefined)
    return `The brake held the rotor at standstill ${numberText(after)} s after the trip or normal stop.`;
  return stopped(summary) ? 'The rotor was not held at standstill within the run.' : undefined;
}

function brakeSentence(summary: Summary, units: DisplayUnits): string | undefined {
  const temperature = metricValue(summary, 'brake_temperature_peak_c');
  const [first] = summary.events.filter(({ kind }) => kind === 'brake');
  if (!first) return stopped(summary) ? 'The brake was not used.' : undefined;
  const heat = temperature === undefined ? '' : `; its disc reached ${units.text(temperature, '°C')}`;
  return `${first.text.charAt(0).toUpperCase()}${first.text.slice(1)} at ${numberText(first.time)} s${heat}.`;
}

function stopped({ events }: Summary): boolean {
  return events.some(({ kind }) => kind === 'guard' || kind === 'stop');
}
