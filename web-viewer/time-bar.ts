/** The cursor as a slider with its time and state in words, and the buttons that zoom: everything the mouse can do, by keys. */
import { element } from './element.ts';
import type { Range } from './plot-stack.ts';

export interface TimeBar {
  readonly host: HTMLElement;
  showExtent(extent: Range): void;
  showRange(range: Range): void;
  showCursor(at: number, state: string): void;
}

export interface TimeBarActions {
  move(at: number): void;
  zoom(range: Range): void;
  fit(on: boolean): void;
}

/** Seconds by which the slider steps. */
const STEP = 0.05;
const SHORTEST_RANGE = 0.5;

export function createTimeBar(actions: TimeBarActions): TimeBar {
  let extent: Range = [0, 1];
  let range: Range = extent;
  let cursor = 0;

  const readout = element('output', { class: 'time-readout' });
  const slider = element('input', { type: 'range', class: 'no-print', step: STEP, 'aria-label': 'Time at the cursor' });
  slider.addEventListener('input', () => actions.move(Number(slider.value)));

  const fit = element('input', { type: 'checkbox' });
  fit.addEventListener('change', () => actions.fit(fit.checked));

  function button(sign: string, name: string, act: () => void): HTMLButtonElement {
    const made = element('button', { type: 'button', title: name, 'aria-label': name }, sign);
    made.addEventListener('click', act);
    return made;
  }

  /** About the cursor where it is in sight, so that what one looks at stays in sight. */
  function scaled(factor: number): Range {
    const [from, to] = range;
    const centre = cursor >= from && cursor <= to ? cursor : (from + to) / 2;
    const width = Math.max(SHORTEST_RANGE, (to - from) * factor);
    const share = (centre - from) / (to - from);
    return [centre - share * width, centre + (1 - share) * width];
  }

  function shifted(share: number): Range {
    const shift = share * (range[1] - range[0]);
    return [range[0] + shift, range[1] + shift];
  }

  const host = element(
    'div',
    { class: 'time-bar', role: 'group', 'aria-label': 'Time' },
    readout,
    slider,
    element(
      'span',
      { class: 'zoom-buttons no-print' },
      button('+', 'zoom in on the cursor', () => actions.zoom(scaled(0.5))),
      button('−', 'zoom out', () => actions.zoom(scaled(2))),
      button('‹', 'earlier', () => actions.zoom(shifted(-0.5))),
      button('›', 'later', () => actions.zoom(shifted(0.5))),
      button('whole run', 'show the whole run', () => actions.zoom(extent)),
    ),
    element(
      'label',
      { class: 'fit no-print', title: 'scale each plot to the lines in the time shown, leaving levels aside' },
      fit,
      'fit heights',
    ),
  );

  return {
    host,
    showExtent(next) {
      extent = next;
    },
    showRange(next) {
      range = next;
      slider.min = String(next[0]);
      slider.max = String(next[1]);
      slider.value = String(cursor);
    },
    showCursor(at, state) {
      cursor = at;
      slider.value = String(at);
      slider.setAttribute('aria-valuetext', `${at.toFixed(2)} s, ${state}`);
      readout.replaceChildren(element('b', {}, `${at.toFixed(2)} s`), element('span', { class: 'state-word' }, state));
    },
  };
}
