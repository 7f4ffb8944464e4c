import type { LimitResult, Metric, Summary } from '../scenarios/summary.ts';

const VERDICT_WIDTH = 10;
const INDENT = ' '.repeat(VERDICT_WIDTH);

/** One run's verdict for the terminal: what it was, how near it came, which guard fired, and every limit. */
export function verdictText(summary: Summary): string {
  const { scenario, limits, asExpected, expected, verdict } = summary;
  const lines = [
    `${verdict.padEnd(VERDICT_WIDTH)}${scenario.name} — ${scenario.title}`,
    `${INDENT}${keyFigures(summary)}`,
  ];
  for (const limit of limits) lines.push(`${INDENT}${limitText(limit)}`);
  if (!asExpected) lines.push(`${INDENT}NOT AS EXPECTED: its file expects "${expected.verdict}"`);
  else if (verdict === 'broken') lines.push(`${INDENT}expected to break: ${expected.because ?? 'its file says so'}`);
  return lines.join('\n');
}

function keyFigures({ metrics, events }: Summary): string {
  const guard = events.find((event) => event.kind === 'guard');
  const figures = [
    figure(metrics, 'rotor_speed_peak_rpm', 'peak'),
    figure(metrics, 'pitch_rate_max_deg_s', 'pitch rate up to'),
    guard ? `tripped at ${guard.time.toFixed(2)} s by ${guard.text}` : 'no trip',
    figure(metrics, 'stop_to_standstill_s', 'standstill after'),
    guard ? figure(metrics, 'brake_temperature_peak_c', 'brake up to') : undefined,
  ];
  return figures.filter((text) => text !== undefined).join('; ');
}

function figure(metrics: readonly Metric[], name: string, words: string): string | undefined {
  const metric = metrics.find((m) => m.name === name);
  if (!metric || metric.value === null) return undefined;
  return `${words} ${short(metric.value)} ${metric.unit}`;
}

function limitText({ text, value, unit, holds, margin }: LimitResult): string {
  const suffix = unit === '1' ? '' : ` ${unit}`;
  const found = value === null ? 'never came' : `${short(value)}${suffix}`;
  const distance = margin === null ? '' : `, ${margin < 0 ? 'over by' : 'margin'} ${short(Math.abs(margin))}${suffix}`;
  return `${holds ? 'holds ' : 'BROKEN'}  ${text}: ${found}${distance}`;
}

/** Four significant digits at most. */
function short(value: number): string {
  return String(Number(value.toPrecision(4)));
}
