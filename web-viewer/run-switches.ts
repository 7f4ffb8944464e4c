/** Switches runs on and off, and says whose events are told. */
import { element } from './element.ts';
import { lineSample } from './line-sample.ts';
import type { Run } from './run.ts';

export interface RunSwitches {
  readonly host: HTMLElement;
  /** Brings the switches in line with the runs. */
  show(told: Run | undefined): void;
}

export interface RunSwitchActions {
  /** `shown` of some runs has changed. */
  switched(): void;
  tell(run: Run): void;
}

export function createRunSwitches(runs: readonly Run[], { switched, tell }: RunSwitchActions): RunSwitches {
  const switches = runs.map((run) => {
    const shown = element('input', { type: 'checkbox' });
    const told = element('input', { type: 'radio', name: 'told' });
    shown.addEventListener('change', () => {
      run.shown = shown.checked;
      switched();
    });
    told.addEventListener('change', () => {
      run.shown = true;
      tell(run);
    });
    const host = element(
      'span',
      { class: 'run-switch', 'data-run': run.name },
      element('label', {}, shown, lineSample(run.style), element('bdi', {}, run.name)),
      element('label', { class: 'tell' }, told, 'events'),
    );
    return { run, shown, told, host };
  });

  function switchAll(name: string, on: boolean): HTMLButtonElement {
    const button = element('button', { type: 'button', class: 'no-print' }, name);
    button.addEventListener('click', () => {
      for (const run of runs) run.shown = on;
      switched();
    });
    return button;
  }

  return {
    host: element(
      'fieldset',
      { class: 'run-switches' },
      element('legend', {}, 'Runs in the plots, and the one whose events are shown'),
      ...switches.map(({ host }) => host),
      switchAll('all', true),
      switchAll('none', false),
    ),
    show(toldRun) {
      for (const { run, shown, told } of switches) {
        shown.checked = run.shown;
        told.checked = run === toldRun;
      }
    },
  };
}
