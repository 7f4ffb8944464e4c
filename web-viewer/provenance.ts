/** Where a run's numbers come from, in a fold. */
import { element, tableRow } from './element.ts';
import type { Run } from './run.ts';

export function provenanceFold(runs: readonly Run[]): HTMLElement {
  return element(
    'details',
    { class: 'provenance' },
    element('summary', {}, 'Where these numbers come from'),
    ...runs.map(provenanceTable),
  );
}

function provenanceTable({ name, summary }: Run): HTMLElement {
  const { version, seed, rotorModel, integrator, relativeTolerance, steps, evaluations, overrides, inputs } =
    summary.provenance;
  return element(
    'div',
    { class: 'scroll' },
    element(
      'table',
      {},
      element('caption', {}, name),
      element(
        'tbody',
        {},
        tableRow('galehold', version),
        tableRow('Scenario', summary.scenario.name),
        tableRow('Rotor', rotorModel),
        tableRow('Seed', String(seed)),
        tableRow(
          'Integrator',
          relativeTolerance === null ? integrator : `${integrator}, relative tolerance ${relativeTolerance}`,
        ),
        tableRow('Steps and evaluations', `${steps} and ${evaluations}`),
        tableRow('Recorded', `${summary.recordRate} samples a second`),
        tableRow('Overrides', overrides.length > 0 ? overrides.join('; ') : 'none'),
        ...inputs.map(({ path, sha256 }) => tableRow(path, element('code', {}, sha256))),
      ),
    ),
  );
}
