/** What the machine did, along the plots' axis: a band of states for each run, and the numbered events of one of them. */
import type { RunEventRecord } from '../scenarios/summary.ts';
import type { RunEventKind } from '../sim/frame.ts';
import { drawing } from './element.ts';
import { cssColour, STATE_COLOURS } from './palette.ts';
import { type Frame, toPixel } from './plot-stack.ts';
import type { Run } from './run.ts';
import { textWidth } from './text-width.ts';

/** Who acts: the weather, a scripted hand, the machine's own decision, or its iron. */
type Actor = 'weather' | 'script' | 'decision' | 'iron';

const ACTORS: Readonly<Record<RunEventKind, Actor>> = {
  wind: 'weather',
  fault: 'script',
  order: 'script',
  guard: 'decision',
  stop: 'decision',
  state: 'decision',
  brake: 'iron',
  standstill: 'iron',
};

export const KIND_WORDS: Readonly<Record<RunEventKind, string>> = {
  wind: 'wind',
  fault: 'fault',
  order: 'order',
  guard: 'guard fires',
  stop: 'stop',
  state: 'state',
  brake: 'brake',
  standstill: 'standstill',
};

/** Outlines about the origin, so that a kind is known without its colour. */
const OUTLINES: Readonly<Record<Actor, string>> = {
  weather: 'M -9 0 a 9 9 0 1 0 18 0 a 9 9 0 1 0 -18 0',
  script: 'M -8 -8 h 16 v 16 h -16 Z',
  decision: 'M 0 -11 L 11 0 L 0 11 L -11 0 Z',
  iron: 'M -10 0 L -5 -8.5 H 5 L 10 0 L 5 8.5 H -5 Z',
};

/** The event's number in the shape of its kind. */
export function eventMark(number: number, kind: RunEventKind): SVGGElement {
  return drawing(
    'g',
    { class: 'event-mark', 'data-actor': ACTORS[kind] },
    drawing('path', { d: OUTLINES[ACTORS[kind]] }),
    drawing('text', { 'text-anchor': 'middle', y: 3.5 }, String(number)),
  );
}

/** The same as a drawing of its own, for lists. */
export function eventBadge(number: number, kind: RunEventKind): SVGSVGElement {
  return drawing(
    'svg',
    { class: 'event-badge', width: 24, height: 24, viewBox: '-12 -12 24 24', 'aria-hidden': 'true' },
    eventMark(number, kind),
  );
}

const BAND_HEIGHT = 20;
/** Of many runs' bands: too low for words, which their colours and the readout give. */
const LOW_BAND_HEIGHT = 10;
const MANY_RUNS = 4;
const BAND_GAP = 3;
const ROW_HEIGHT = 24;
const MARK_RADIUS = 12;
const LONGEST_TEXT = 330;
const FONT = '12px system-ui, sans-serif';

/** Draws into `host`: a band for each of `runs`, then the events of `told`. */
export function drawStrip(host: SVGSVGElement, frame: Frame, runs: readonly Run[], told: Run | undefined): void {
  const bandHeight = runs.length > MANY_RUNS ? LOW_BAND_HEIGHT : BAND_HEIGHT;
  const bands = runs.map((run, index) =>
    band(run, { top: index * (bandHeight + BAND_GAP), height: bandHeight, withSample: runs.length > 1 }, frame),
  );
  const below = runs.length * (bandHeight + BAND_GAP);
  const { group, height } = told ? eventRows(told.summary.events, below, frame) : { group: drawing('g'), height: 0 };
  const total = below + height + 4;
  host.setAttribute('width', String(frame.total));
  host.setAttribute('height', String(total));
  host.replaceChildren(
    group,
    ...bands,
    drawing('rect', {
      class: 'strip-frame',
      x: frame.left,
      y: 0,
      width: frame.width,
      height: Math.max(0, below - BAND_GAP),
    }),
  );
}

interface BandPlace {
  top: number;
  height: number;
  withSample: boolean;
}

function band(run: Run, { top, height, withSample }: BandPlace, frame: Frame): SVGGElement {
  const [from, to] = frame.range;
  const spans = run.summary.states
    .filter((span) => span.to > from && span.from < to)
    .map((span) => {
      const left = toPixel(frame, Math.max(span.from, from));
      const right = toPixel(frame, Math.min(span.to, to));
      const label = height < BAND_HEIGHT ? undefined : fitted(span.state, right - left - 8);
      return drawing(
        'g',
        { class: 'state-span', 'data-state': span.state },
        drawing('title', {}, `${span.state}, ${span.from.toFixed(2)} s to ${span.to.toFixed(2)} s`),
        drawing('rect', {
          x: left,
          y: top,
          width: Math.max(0, right - left),
          height,
          fill: STATE_COLOURS[span.state],
        }),
        label ? drawing('text', { x: left + 5, y: top + 14 }, label) : undefined,
      );
    });
  const guards = run.summary.events
    .filter(({ kind, time }) => kind === 'guard' && time >= from && time <= to)
    .map(({ time }) => {
      const at = toPixel(frame, time);
      return drawing('path', { class: 'guard-tick', d: `M ${at} ${top} v ${height}` });
    });
  const sample = withSample
    ? drawing('line', {
        x1: 4,
        x2: frame.left - 8,
        y1: top + height / 2,
        y2: top + height / 2,
        style: `stroke: ${cssColour(run.style)}`,
        'stroke-width': 3,
        'stroke-dasharray': run.style.dash || undefined,
      })
    : undefined;
  return drawing('g', { class: 'state-band', 'data-run': run.name }, sample, ...spans, ...guards);
}

interface PlacedEvent {
  event: RunEventRecord;
  number: number;
  at: number;
  text: string;
  /** Which side of its mark the text stands on. */
  side: 'right' | 'left';
  row: number;
}

/** Marks with their words in as many rows as keep them apart; where there is no width for words, marks alone. */
function eventRows(
  events: readonly RunEventRecord[],
  top: number,
  frame: Frame,
): { group: SVGGElement; height: number } {
  const placed = placeEvents(events, frame);
  const rows = 1 + Math.max(-1, ...placed.map(({ row }) => row));
  const middle = (row: number) => top + 14 + row * ROW_HEIGHT;
  const group = drawing(
    'g',
    { class: 'events' },
    ...placed.map(({ at, row }) =>
      drawing('path', {
        class: 'event-lead',
        d: `M ${at} ${top - BAND_GAP} V ${top + rows * ROW_HEIGHT + 4}`,
        'data-row': row,
      }),
    ),
    ...placed.map(({ event, number, at, text, side, row }) => {
      const mark = eventMark(number, event.kind);
      mark.setAttribute('transform', `translate(${at} ${middle(row)})`);
      mark.setAttribute('data-time', String(event.time));
      const label = drawing('text', {
        class: 'event-text',
        x: side === 'right' ? at + MARK_RADIUS + 3 : at - MARK_RADIUS - 3,
        y: middle(row) + 4,
        'text-anchor': side === 'right' ? 'start' : 'end',
      });
      label.textContent = text;
      return drawing('g', {}, mark, label);
    }),
  );
  return { group, height: rows * ROW_HEIGHT };
}

/** From the last event to the first, each in the highest row with room: so no lead line of an earlier event crosses a later one's words. */
function placeEvents(events: readonly RunEventRecord[], frame: Frame): PlacedEvent[] {
  const right = frame.total - 8;
  const taken: [from: number, to: number][][] = [];
  return events
    .map((event, index) => ({ event, number: index + 1 }))
    .filter(({ event }) => event.time >= frame.range[0] && event.time <= frame.range[1])
    .reverse()
    .map(({ event, number }) => {
      const at = toPixel(frame, event.time);
      const text = frame.narrow ? '' : (fitted(event.text, LONGEST_TEXT) ?? '');
      const extent = MARK_RADIUS + (text ? textWidth(text, FONT) + 8 : 0);
      const side = at + extent > right ? 'left' : 'right';
      const from = side === 'right' ? at - MARK_RADIUS : at - extent;
      const to = side === 'right' ? at + extent : at + MARK_RADIUS;
      let row = 0;
      while (taken[row]?.some(([start, end]) => from < end && to > start)) row += 1;
      const inRow = taken[row] ?? [];
      taken[row] = inRow;
      inRow.push([from, to]);
      return { event, number, at, text, side, row };
    });
}

/** The text, shortened to a width; undefined where not even a few letters fit. */
function fitted(text: string, width: number): string | undefined {
  if (textWidth(text, FONT) <= width) return text;
  for (let length = text.length - 1; length >= 4; length -= 1) {
    const short = `${text.slice(0, length).trimEnd()}…`;
    if (textWidth(short, FONT) <= width) return short;
  }
  return undefined;
}
