/** The page of one or several runs: did it hold, what happened and when, what changed. */
import type { PageData } from '../scenarios/page.ts';
import { createBladeAir } from './blade-air.ts';
import { channelPlots, furtherChannels } from './channel-plots.ts';
import { metricTable, overviewTable } from './comparison.ts';
import { DisplayUnits, UNIT_GROUPS } from './display-unit.ts';
import { drawing, element } from './element.ts';
import { drawStrip, eventBadge, KIND_WORDS } from './event-strip.ts';
import { followMedium, screenTheme } from './paper.ts';
import { createPlotStack, type PlotStack, type Range } from './plot-stack.ts';
import { provenanceFold } from './provenance.ts';
import { openRuns, peakTime, type Run } from './run.ts';
import { runCard } from './run-card.ts';
import { createRunSwitches } from './run-switches.ts';
import { firstGuard } from './story.ts';
import { createTimeBar } from './time-bar.ts';

/** Above this many runs, their cards start folded. */
const OPEN_CARDS = 3;

export function showRuns(host: HTMLElement, data: Extract<PageData, { kind: 'runs' }>): void {
  const runs = openRuns(data);
  const units = new DisplayUnits();
  const further = furtherChannels(runs);
  const added = new Set<string>();
  let told = runs.find((run) => run.shown);

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

  const bladeAir = createBladeAir();

  const shownRuns = () => runs.filter((run) => run.shown);

  function moveCursor(at: number): void {
    stack.moveCursor(at);
    timeBar.showCursor(at, stateText(told, at));
    bladeAir.show(told, at);
  }

  function showPlots(): void {
    const shown = shownRuns();
    if (!told?.shown) told = shown[0];
    const extent = extentOf(shown.length > 0 ? shown : runs);
    switches.show(told);
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
      ...(several ? [overviewTable(runs, units, showAlone)] : []),
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

  function tell(run: Run): void {
    told = run;
    showPlots();
    moveCursor(cursorStart(run));
  }

  function showAlone(chosen: Run): void {
    for (const run of runs) run.shown = run === chosen;
    tell(chosen);
    course.scrollIntoView();
  }

  const eventsTitle = element('h3', {});
  const switches = createRunSwitches(runs, { switched: showPlots, tell });
  const choices = element(
    'div',
    { class: 'choices' },
    ...(runs.length > 1 ? [switches.host] : []),
    unitChoices(runs, units, () => {
      showNumbers();
      showPlots();
    }),
    ...(further.length > 0 ? [furtherChoice()] : []),
  );

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

  const course = element(
    'section',
    { id: 'course', 'aria-labelledby': 'course-title' },
    element('h2', { id: 'course-title' }, 'What happened, and when?'),
    choices,
    timeBar.host,
    element('div', { class: 'course' }, stack.host, element('aside', {}, eventsTitle, events)),
  );

  host.append(verdicts, course, bladeAir.host, changes);
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
