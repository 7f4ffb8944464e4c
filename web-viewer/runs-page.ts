/** The page of one or several runs: did it hold, what happened and when, what changed. */
import type { PageData } from '../scenarios/page.ts';
import { channelPlots, furtherChannels } from './channel-plots.ts';
import { metricTable, overviewTable } from './comparison.ts';
import { DisplayUnits, UNIT_GROUPS } from './display-unit.ts';
import { drawing, element } from './element.ts';
import { drawStrip, eventBadge, KIND_WORDS } from './event-strip.ts';
import { lineSample } from './line-sample.ts';
import { followMedium, screenTheme } from './paper.ts';
import { createPlotStack, type PlotStack, type Range } from './plot-stack.ts';
import { provenanceFold } from './provenance.ts';
import { openRuns, peakTime, type Run } from './run.ts';
import { runCard } from './run-card.ts';
import { firstGuard } from './story.ts';
import { createTimeBar } from './time-bar.ts';

/** Above this many runs, their cards start folded. */
const OPEN_CARDS = 3;

export function showRuns(host: HTMLElement, data: Extract<PageData, { kind: 'runs' }>): void {
  const runs = openRuns(data);
  const units = new DisplayUnits();
  const further = furtherChannels(runs);
  const added = new Set<string>();
  let told = runs[0];

  const verdicts = element('section', { id: 'verdicts', 'aria-labelledby': 'verdicts-title' });
  const changes = element('section', { id: 'changes', 'aria-labelledby': 'changes-title' });
  const events = element('ol', { class: 'event-list' });
  const strip = drawing('svg', {
    class: 'strip',
    role: 'img',
    'aria-label': 'States and events over time; the list of events tells the same in words',
  });

  const timeBar = createTimeBar({
    move: (at) => moveCursor(at),
    zoom: (range) => stack.zoom(range),
    fit: (on) => stack.fitHeights(on),
  });
  const stack: PlotStack = createPlotStack({
    axis: 'Time, s',
    theme: screenTheme(),
    strip: { host: strip, draw: (frame) => drawStrip(strip, frame, shownRuns(), told?.shown ? told : undefined) },
    onCursor: (at) => moveCursor(at),
    onRange: (range) => timeBar.showRange(range),
  });

  const shownRuns = () => runs.filter((run) => run.shown);

  function moveCursor(at: number): void {
    stack.moveCursor(at);
    timeBar.showCursor(at, stateText(told, at));
  }

  function showPlots(): void {
    const shown = shownRuns();
    if (!told?.shown) told = shown[0];
    const extent = extentOf(runs);
    timeBar.showExtent(extent);
    stack.show({
      plots: channelPlots(
        shown,
        further.filter(({ channels }) => channels.some((name) => added.has(name))),
        units,
      ),
      extent,
      marks: told?.summary.events.map(({ time }) => time) ?? [],
    });
    showEvents();
  }

  function showEvents(): void {
    const list = told?.summary.events ?? [];
    eventsTitle.textContent = told ? `Events of ${told.name}` : 'No run is switched on';
    events.replaceChildren(
      ...list.map(({ time, kind, text }, index) => {
        const button = element(
          'button',
          { type: 'button', title: 'put the cursor here' },
          eventBadge(index + 1, kind),
          element('span', { class: 'event-time' }, `${time.toFixed(2)} s`),
          element('span', { class: 'event-words' }, element('b', {}, `${KIND_WORDS[kind]}: `), text),
        );
        button.addEventListener('click', () => moveCursor(time));
        return element('li', {}, button);
      }),
    );
  }

  function showNumbers(): void {
    const several = runs.length > 1;
    const cards = runs.map((run) => runCard(run, units));
    verdicts.replaceChildren(
      element('h2', { id: 'verdicts-title' }, several ? 'Did they hold?' : 'Did it hold?'),
      ...(several ? [overviewTable(runs, units)] : []),
      runs.length > OPEN_CARDS
        ? element(
            'details',
            {},
            element('summary', {}, 'Each run in words, with its limits'),
            element('div', { class: 'cards' }, ...cards),
          )
        : element('div', { class: 'cards' }, ...cards),
    );
    changes.replaceChildren(
      element('h2', { id: 'changes-title' }, several ? 'What changed?' : 'The numbers'),
      metricTable(runs, units),
      provenanceFold(runs),
    );
  }

  const eventsTitle = element('h3', {});
  const choices = element(
    'div',
    { class: 'choices' },
    ...(runs.length > 1 ? [runSwitches(runs, showPlots, tellChoice)] : []),
    unitChoices(runs, units, () => {
      showNumbers();
      showPlots();
    }),
    ...(further.length > 0 ? [furtherChoice()] : []),
  );

  function tellChoice(run: Run): void {
    told = run;
    showPlots();
    moveCursor(cursorStart(run));
  }

  function furtherChoice(): HTMLElement {
    return element(
      'details',
      { class: 'further no-print' },
      element('summary', {}, 'More plots'),
      ...further.map(({ title, channels }) => {
        const box = element('input', { type: 'checkbox' });
        box.addEventListener('change', () => {
          for (const name of channels) box.checked ? added.add(name) : added.delete(name);
          showPlots();
        });
        return element('label', {}, box, title);
      }),
    );
  }

  host.append(
    verdicts,
    element(
      'section',
      { id: 'course', 'aria-labelledby': 'course-title' },
      element('h2', { id: 'course-title' }, 'What happened, and when?'),
      choices,
      timeBar.host,
      element('div', { class: 'course' }, stack.host, element('aside', {}, eventsTitle, events)),
    ),
    changes,
  );
  showNumbers();
  showPlots();
  if (told) moveCursor(cursorStart(told));
  followMedium((theme, width) => stack.redraw(theme, width));
}

/** The instant that is asked about first: the first guard, else the highest speed, else the start. */
function cursorStart(run: Run): number {
  return firstGuard(run.summary)?.time ?? peakTime(run, 'rotor_speed_rpm') ?? 0;
}

function extentOf(runs: readonly Run[]): Range {
  const starts = runs.map((run) => run.time[0] ?? 0);
  const ends = runs.map((run) => Math.max(run.time[run.time.length - 1] ?? 0, run.summary.scenario.duration));
  return [Math.min(...starts), Math.max(...ends)];
}

function stateText(run: Run | undefined, at: number): string {
  return run?.summary.states.findLast(({ from, to }) => at >= from && at <= to)?.state ?? '';
}

function runSwitches(runs: readonly Run[], changed: () => void, tell: (run: Run) => void): HTMLElement {
  return element(
    'fieldset',
    { class: 'run-switches' },
    element('legend', {}, 'Runs in the plots, and the one whose events are shown'),
    ...runs.map((run, index) => {
      const box = element('input', { type: 'checkbox', checked: true });
      const tellButton = element('input', { type: 'radio', name: 'told', checked: index === 0 });
      box.addEventListener('change', () => {
        run.shown = box.checked;
        changed();
      });
      tellButton.addEventListener('change', () => {
        run.shown = true;
        box.checked = true;
        tell(run);
      });
      return element(
        'span',
        { class: 'run-switch', 'data-run': run.name },
        element('label', {}, box, lineSample(run.style), element('bdi', {}, run.name)),
        element('label', { class: 'tell' }, tellButton, 'events'),
      );
    }),
  );
}

function unitChoices(runs: readonly Run[], units: DisplayUnits, changed: () => void): HTMLElement {
  const recorded = new Set(
    runs.flatMap(({ summary }) => [...summary.channels, ...summary.metrics].map(({ unit }) => unit)),
  );
  return element(
    'fieldset',
    { class: 'unit-choices no-print' },
    element('legend', {}, 'Units'),
    ...UNIT_GROUPS.filter((group) => group.recorded.some((unit) => recorded.has(unit))).map((group) => {
      const select = element(
        'select',
        { 'data-group': group.label },
        ...group.choices.map(({ label }, index) => element('option', { value: index }, label)),
      );
      select.addEventListener('change', () => {
        units.choose(group, Number(select.value));
        changed();
      });
      return element('label', {}, `${group.label} `, select);
    }),
  );
}
