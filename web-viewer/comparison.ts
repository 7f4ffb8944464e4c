/** What changed? Every metric of every run, with its difference from the first run. */
import type { Metric } from '../scenarios/summary.ts';
import { type DisplayUnits, numberText } from './display-unit.ts';
import { element, tableHead, tableRow } from './element.ts';
import { lineSample } from './line-sample.ts';
import type { Run } from './run.ts';
import { verdictBadge } from './run-card.ts';
import { firstGuard, metricValue } from './story.ts';

const GROUP_TITLES: Readonly<Record<Metric['group'], string>> = {
  speed: 'Speed',
  pitch: 'Pitch',
  power: 'Power',
  loads: 'Loads',
  stop: 'Stop',
  account: 'Account',
};

/** The runs at a glance, a row each; the name shows its run alone in the plots. */
export function overviewTable(runs: readonly Run[], units: DisplayUnits, showAlone: (run: Run) => void): HTMLElement {
  const shown = (run: Run, metric: string, text: (value: number) => string) => {
    const value = metricValue(run.summary, metric);
    return value === undefined ? '–' : text(value);
  };
  const seconds = (value: number) => `${numberText(value)}\u00a0s`;
  return element(
    'div',
    { class: 'scroll' },
    element(
      'table',
      { class: 'overview' },
      element('caption', {}, 'The runs at a glance'),
      tableHead(
        'Run',
        'Verdict',
        'First guard',
        'Highest speed',
        'Below never-exceed by',
        'To feather',
        'To standstill',
        'Brake disc',
      ),
      element(
        'tbody',
        {},
        ...runs.map((run) => {
          const guard = firstGuard(run.summary);
          const nameButton = element(
            'button',
            { type: 'button', class: 'run-name', title: 'show this run alone in the plots' },
            lineSample(run.style),
            element('bdi', {}, run.name),
          );
          nameButton.addEventListener('click', () => showAlone(run));
          return tableRow(
            nameButton,
            verdictBadge(run),
            guard ? `${guard.text}, ${numberText(guard.time)}\u00a0s` : 'none',
            shown(run, 'rotor_speed_peak_rpm', (value) => units.text(value, 'rpm')),
            shown(run, 'margin_to_never_exceed_rpm', (value) => units.differenceText(value, 'rpm')),
            shown(run, 'stop_to_feather_s', seconds),
            shown(run, 'stop_to_standstill_s', seconds),
            shown(run, 'brake_temperature_peak_c', (value) => units.text(value, '°C')),
          );
        }),
      ),
    ),
  );
}

export function metricTable(runs: readonly Run[], units: DisplayUnits): HTMLElement {
  const [first] = runs;
  const metrics = distinctMetrics(runs);
  const groups = [...new Set(metrics.map(({ group }) => group))];
  return element(
    'div',
    { class: 'scroll' },
    element(
      'table',
      { class: 'metrics' },
      element('caption', {}, runs.length > 1 ? `Metrics; below each, the difference from ${first?.name}` : 'Metrics'),
      tableHead(
        'Metric',
        ...runs.map((run) =>
          element('span', { class: 'run-name' }, lineSample(run.style), element('bdi', {}, run.name)),
        ),
      ),
      ...groups.map((group) =>
        element(
          'tbody',
          {},
          element(
            'tr',
            { class: 'group' },
            element('th', { scope: 'rowgroup', colspan: runs.length + 1 }, GROUP_TITLES[group]),
          ),
          ...metrics.filter((metric) => metric.group === group).map((metric) => metricRow(metric, runs, units)),
        ),
      ),
    ),
  );
}

function metricRow({ name, label, unit }: Metric, runs: readonly Run[], units: DisplayUnits): HTMLTableRowElement {
  const shownUnit = units.unit(unit);
  const reference = runs[0] && metricValue(runs[0].summary, name);
  const row = tableRow(
    shownUnit === '1' || shownUnit === '' ? label : `${label}, ${shownUnit}`,
    ...runs.map((run, index) => {
      const value = metricValue(run.summary, name);
      if (value === undefined) return '–';
      const cell = element('span', {}, numberText(units.value(value, unit)));
      if (index > 0 && reference !== undefined) {
        cell.append(element('small', {}, changeText(units.difference(value - reference, unit))));
      }
      return cell;
    }),
  );
  row.dataset.metric = name;
  return row;
}

function changeText(difference: number): string {
  const text = numberText(difference);
  if (text === '0') return '=';
  return difference > 0 ? `+${text}` : text;
}

function distinctMetrics(runs: readonly Run[]): Metric[] {
  const metrics = new Map<string, Metric>();
  for (const run of runs)
    for (const metric of run.summary.metrics) if (!metrics.has(metric.name)) metrics.set(metric.name, metric);
  return [...metrics.values()];
}
