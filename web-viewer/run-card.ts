/** Did it hold? One run's verdict, story, nearness to its speed levels, and limits. */
import { absentPlots } from './channel-plots.ts';
import { type DisplayUnits, numberText } from './display-unit.ts';
import { element, tableHead, tableRow } from './element.ts';
import { lineSample } from './line-sample.ts';
import { cssColour } from './palette.ts';
import type { Run } from './run.ts';
import { expectationWords, metricValue, story, VERDICT_WORDS } from './story.ts';

export function runCard(run: Run, units: DisplayUnits): HTMLElement {
  const { summary } = run;
  const { scenario } = summary;
  return element(
    'article',
    { class: 'run-card', 'data-run': run.name },
    element(
      'header',
      {},
      element('h3', {}, lineSample(run.style), element('bdi', {}, scenario.title)),
      verdictBadge(run),
    ),
    scenario.story ? element('p', { class: 'scenario-story' }, scenario.story) : undefined,
    element('ul', { class: 'story' }, ...story(summary, units).map((sentence) => element('li', {}, sentence))),
    missingNote(run),
    speedLadder(run, units),
    limitTable(run, units),
    element(
      'p',
      { class: 'parts' },
      `Run ${run.name}. Turbine: ${scenario.turbine}. Controller: ${scenario.controller}. Protection: ${scenario.protection}.`,
    ),
  );
}

export function verdictBadge({ summary }: Run): HTMLElement {
  return element(
    'span',
    { class: 'verdict', 'data-verdict': summary.verdict, 'data-as-expected': summary.asExpected },
    VERDICT_WORDS[summary.verdict],
    element('small', {}, expectationWords(summary)),
  );
}

function missingNote(run: Run): HTMLElement | undefined {
  const absent = run.columns.size > 0 ? absentPlots(run) : [];
  const sentences = [...run.missing, ...(absent.length > 0 ? [`Not recorded: ${absent.join(', ')}.`] : [])];
  if (sentences.length === 0) return undefined;
  return element('div', { class: 'missing', role: 'note' }, ...sentences.map((sentence) => element('p', {}, sentence)));
}

/** Rated, trip, peak and never-exceed speed as dots on one scale, one line each, so that close levels stay apart. */
function speedLadder(run: Run, units: DisplayUnits): HTMLElement | undefined {
  const peak = metricValue(run.summary, 'rotor_speed_peak_rpm');
  if (peak === undefined || run.summary.levels.length === 0) return undefined;
  const rungs = [
    ...run.summary.levels.map(({ kind, text, rpm }) => ({ kind, text, rpm })),
    { kind: 'peak' as const, text: 'highest speed of this run', rpm: peak },
  ].sort((a, b) => b.rpm - a.rpm);
  const speeds = rungs.map(({ rpm }) => rpm);
  const low = Math.min(...speeds);
  const span = Math.max(...speeds) - low || 1;
  return element(
    'div',
    { class: 'ladder' },
    element('h4', {}, `How near to its limit, ${units.unit('rpm')}`),
    ...rungs.map(({ kind, text, rpm }) => {
      const dot = element('span', { class: 'dot' });
      dot.style.left = `${(100 * (rpm - low)) / span}%`;
      if (kind === 'peak') dot.style.background = cssColour(run.style);
      return element(
        'div',
        { class: 'rung', 'data-kind': kind },
        element('span', { class: 'rung-text' }, text),
        element('span', { class: 'rail', 'aria-hidden': 'true' }, dot),
        element('span', { class: 'rung-value' }, numberText(units.value(rpm, 'rpm'))),
      );
    }),
  );
}

const LIMIT_HEADS = ['Limit', 'Value', 'Bound', 'Margin', 'Verdict'];

function limitTable({ summary }: Run, units: DisplayUnits): HTMLElement | undefined {
  if (summary.limits.length === 0) return undefined;
  return element(
    'div',
    { class: 'scroll' },
    element(
      'table',
      { class: 'limits' },
      element('caption', {}, 'Limits'),
      tableHead(...LIMIT_HEADS),
      element(
        'tbody',
        {},
        ...summary.limits.map(({ text, value, bound, unit, margin, holds }) => {
          const row = tableRow(
            text,
            value === null ? 'none' : units.text(value, unit),
            units.text(bound, unit),
            margin === null ? '–' : units.differenceText(margin, unit),
            holds ? '✓ holds' : '✕ broken',
          );
          labelCells(row, LIMIT_HEADS);
          row.dataset.holds = String(holds);
          return row;
        }),
      ),
    ),
  );
}

/** Lets a narrow layout, which sets the row's cells apart, repeat the column heads. */
function labelCells(row: HTMLTableRowElement, heads: readonly string[]): void {
  [...row.cells].forEach((cell, index) => {
    cell.dataset.head = heads[index];
  });
}
