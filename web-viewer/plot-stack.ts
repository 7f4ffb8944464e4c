/** Plots stacked over one shared axis, with one cursor through all of them and their values at the cursor beside their titles. */
import Plotly, { type Dash, type Data, type Layout, type Shape } from 'plotly.js-dist';
import { numberText, numberTextBeside } from './display-unit.ts';
import { element } from './element.ts';
import { type LineSymbol, lineSample } from './line-sample.ts';
import type { LineStyle, Theme } from './palette.ts';
import { valueAt } from './run.ts';
import { textWidth } from './text-width.ts';

export type Range = readonly [from: number, to: number];

export interface PlotLine {
  /** Stands beside the value at the cursor; empty where the style alone says whose line it is. */
  label: string;
  /** Told on hovering over the value, and to screen readers. */
  owner: string;
  style: LineStyle;
  x: Float32Array | Float64Array;
  /** In the shown unit. */
  y: Float64Array;
  /** Sparse symbols that tell lines of one style apart. */
  symbol?: LineSymbol;
}

export interface PlotLevel {
  text: string;
  /** In the shown unit. */
  value: number;
  severity: 'rated' | 'trip' | 'never exceed';
}

export interface Plot {
  title: string;
  unit: string;
  /** Of the plotted area, px. */
  height: number;
  lines: readonly PlotLine[];
  levels: readonly PlotLevel[];
}

/** Where the shared axis lies, px from the stack's left edge. Anything drawn by it lines up with the plots. */
export interface Frame {
  left: number;
  width: number;
  /** Of the whole stack. */
  total: number;
  range: Range;
  narrow: boolean;
  theme: Theme;
}

export function toPixel({ left, width, range: [from, to] }: Frame, at: number): number {
  return left + ((at - from) / (to - from)) * width;
}

export interface StackContent {
  plots: readonly Plot[];
  /** The whole extent of the shared axis. */
  extent: Range;
  /** Instants that get a thin line through every plot. */
  marks: readonly number[];
}

export interface StackOptions {
  /** What the shared axis is, e.g. "Time, s". */
  axis: string;
  theme: Theme;
  /** Drawn above the plots, along the same axis. */
  strip?: { host: Element; draw(frame: Frame): void };
  onCursor(at: number): void;
  onRange(range: Range): void;
}

export interface PlotStack {
  readonly host: HTMLElement;
  show(content: StackContent): void;
  moveCursor(at: number): void;
  zoom(range: Range): void;
  fitHeights(toShownRange: boolean): void;
  /** Redraws for paper of a width in px, or for the screen again. */
  redraw(theme: Theme, width?: number): void;
}

const NARROW = 640;
/** Room to the right of the plots, px: for half a tick label, and at most for the levels' labels. */
const LEAST_RIGHT = 12;
const MOST_RIGHT = 220;
const MOST_RIGHT_SHARE = 0.22;
const LEVEL_LABEL_FONT = '700 11px system-ui, sans-serif';
const AXIS_HEIGHT = 24;
/** Presses of an arrow key from one end of the shown range to the other. */
const KEY_STEPS = 200;
const TOP = 6;
/** Of a plot's height beside its values' size: what changes less looks steady. */
const LEAST_SPAN = 0.02;
/** Symbols on a line: enough to tell lines apart, few enough not to hide them. */
const SYMBOLS_PER_LINE = 12;
const LEVEL_LABEL_HEIGHT = 14;

interface Slot {
  plot: Plot;
  host: HTMLElement;
  values: HTMLElement[];
  /** The largest size of any value of the plot. */
  largest: number;
  area: HTMLElement;
  labels: HTMLElement;
}

/** Makes an empty stack; `show` fills it once its host stands in the page. */
export function createPlotStack(options: StackOptions): PlotStack {
  const cursorLine = element('div', { class: 'cursor-line' });
  const selection = element('div', { class: 'selection', hidden: true });
  const slotsHost = element('div', { class: 'plots' });
  const host = element(
    'div',
    { class: 'stack', tabindex: 0, role: 'group', 'aria-label': 'Plots; the arrow keys move the cursor' },
    options.strip?.host,
    slotsHost,
    cursorLine,
    selection,
  );

  let content: StackContent = { plots: [], extent: [0, 1], marks: [] };
  let slots: Slot[] = [];
  let range: Range = content.extent;
  let cursor = Number.NaN;
  let fit = false;
  let theme = options.theme;
  let paperWidth: number | undefined;
  let drawnWidth = 0;

  function frame(): Frame {
    const total = paperWidth ?? host.clientWidth;
    const narrow = total < NARROW;
    const left = narrow ? 46 : 64;
    const right = narrow
      ? LEAST_RIGHT
      : Math.min(MOST_RIGHT, MOST_RIGHT_SHARE * total, LEAST_RIGHT + widestLabel(content.plots));
    return { total, left, width: Math.max(80, total - left - right), range, narrow, theme };
  }

  function draw(): void {
    const where = frame();
    drawnWidth = host.clientWidth;
    host.classList.toggle('narrow', where.narrow);
    options.strip?.draw(where);
    for (const slot of slots) drawSlot(slot, where, content, fit);
    placeCursor();
  }

  function placeCursor(): void {
    const where = frame();
    const inside = cursor >= range[0] && cursor <= range[1];
    cursorLine.hidden = !inside;
    if (inside) cursorLine.style.left = `${toPixel(where, cursor)}px`;
    for (const { plot, values, largest } of slots) {
      plot.lines.forEach((line, index) => {
        const value = values[index];
        if (value) value.textContent = numberTextBeside(valueAt(line.x, line.y, cursor), largest);
      });
    }
  }

  function zoom(wanted: Range): void {
    range = within(wanted, content.extent);
    draw();
    options.onRange(range);
  }

  listenToPointer(host, selection, frame, {
    point: options.onCursor,
    select: zoom,
    whole: () => zoom(content.extent),
  });
  host.addEventListener('keydown', (event) => {
    const direction = { ArrowLeft: -1, ArrowRight: 1 }[event.key];
    if (direction === undefined) return;
    event.preventDefault();
    const step = (direction * (range[1] - range[0])) / KEY_STEPS;
    options.onCursor(Math.min(range[1], Math.max(range[0], Number.isNaN(cursor) ? range[0] : cursor + step)));
  });
  new ResizeObserver(() => {
    if (paperWidth === undefined && host.clientWidth !== drawnWidth) draw();
  }).observe(host);

  return {
    host,
    show(next) {
      const sameExtent = next.extent[0] === content.extent[0] && next.extent[1] === content.extent[1];
      content = next;
      if (!sameExtent) range = next.extent;
      slots = next.plots.map((plot, index) =>
        furnishSlot(plot, slots[index], index === next.plots.length - 1, options.axis),
      );
      slotsHost.replaceChildren(...slots.map((slot) => slot.host));
      draw();
      options.onRange(range);
    },
    moveCursor(at) {
      cursor = at;
      placeCursor();
    },
    zoom,
    fitHeights(toShownRange) {
      fit = toShownRange;
      draw();
    },
    redraw(nextTheme, width) {
      theme = nextTheme;
      paperWidth = width;
      draw();
    },
  };
}

/** Title, values at the cursor and an area for one plot; the area of the plot that stood here before is drawn over. */
function furnishSlot(plot: Plot, before: Slot | undefined, last: boolean, axis: string): Slot {
  const area = before?.area ?? element('div', { class: 'plot-area' });
  area.setAttribute('role', 'img');
  area.setAttribute('aria-label', describe(plot));
  const labels = element('div', { class: 'level-labels', 'aria-hidden': 'true' });
  const values = plot.lines.map(() => element('output', {}, '–'));
  const head = element(
    'div',
    { class: 'plot-head' },
    element('h3', {}, plot.title, plot.unit ? element('span', { class: 'unit' }, `, ${plot.unit}`) : undefined),
    ...plot.lines.map((line, index) =>
      element(
        'span',
        { class: 'value-at-cursor', title: line.owner },
        lineSample(line.style, line.symbol),
        line.label ? element('span', { class: 'line-label' }, line.label) : undefined,
        values[index],
      ),
    ),
  );
  const host = element(
    'section',
    { class: 'plot', 'data-plot': plot.title },
    head,
    element('div', { class: 'plot-body' }, area, labels),
    last ? element('p', { class: 'axis-title' }, axis) : undefined,
  );
  const largest = Math.max(...bounds(plot.lines.map(({ y }) => y)).map(Math.abs));
  return { plot, host, values, largest, area, labels };
}

function describe({ title, unit, lines, levels }: Plot): string {
  const ranges = lines.map(({ owner, label, y }) => {
    const [low, high] = bounds([y]);
    return `${owner} ${label} from ${numberText(low)} to ${numberText(high)}`;
  });
  return [`${title} in ${unit}`, ...ranges, ...levels.map(({ text, value }) => `${text} at ${numberText(value)}`)].join(
    '; ',
  );
}

function drawSlot(slot: Slot, frame: Frame, { marks }: StackContent, fit: boolean): void {
  const { plot, area, labels } = slot;
  const { left, width, theme, range } = frame;
  const heights = heightRange(plot, fit ? range : undefined);
  const axis: Partial<Layout['xaxis']> = {
    fixedrange: true,
    gridcolor: theme.grid,
    linecolor: theme.faint,
    tickcolor: theme.faint,
    zeroline: false,
    showline: true,
    ticks: 'outside',
    ticklen: 4,
    exponentformat: 'none',
  };
  const layout: Partial<Layout> = {
    width: frame.total,
    height: TOP + plot.height + AXIS_HEIGHT,
    margin: { l: left, r: frame.total - left - width, t: TOP, b: AXIS_HEIGHT, pad: 0 },
    paper_bgcolor: 'rgba(0,0,0,0)',
    plot_bgcolor: theme.sheet,
    font: { family: 'system-ui, sans-serif', size: frame.narrow ? 10 : 11, color: theme.ink },
    showlegend: false,
    hovermode: false,
    xaxis: { ...axis, range: [...range], nticks: Math.max(3, Math.round(width / 80)) },
    yaxis: { ...axis, range: [...heights], nticks: Math.max(3, Math.round(plot.height / 24)) },
    shapes: [...marks.map((at) => markShape(at, theme)), ...plot.levels.map((level) => levelShape(level, theme))],
  };
  void Plotly.react(
    area,
    plot.lines.flatMap((line) => traces(line, theme)),
    layout,
    { staticPlot: true, responsive: false },
  );
  labels.replaceChildren(...levelLabels(plot, heights, frame));
}

function traces({ style, x, y, symbol, owner, label }: PlotLine, theme: Theme): Data[] {
  const color = theme.lines[style.colour];
  const shared = { type: 'scatter', x, y, name: '', meta: { owner, label } } as const;
  const line: Data = {
    ...shared,
    mode: 'lines',
    line: { color, width: 2, dash: dashOf(style) },
    connectgaps: false,
  };
  if (!symbol) return [line];
  const step = Math.max(1, Math.floor(y.length / SYMBOLS_PER_LINE));
  const some = <T extends ArrayLike<number>>(values: T) =>
    Float64Array.from({ length: Math.ceil(values.length / step) }, (_, index) => values[index * step] ?? Number.NaN);
  return [line, { ...shared, x: some(x), y: some(y), mode: 'markers', marker: { symbol, size: 8, color } }];
}

/** Plotly also takes dash lengths in px, which its types leave out. */
function dashOf({ dash }: LineStyle): Dash {
  const lengths = dash.split(',').map((length) => `${length}px`);
  return (dash === '' ? 'solid' : lengths.join(',')) as Dash;
}

function markShape(at: number, theme: Theme): Partial<Shape> {
  const line = { color: theme.faint, width: 1, dash: 'dot' } as const;
  return { type: 'line', layer: 'below', x0: at, x1: at, yref: 'paper', y0: 0, y1: 1, line };
}

function levelShape({ value, severity }: PlotLevel, theme: Theme): Partial<Shape> {
  const line = (
    {
      rated: { color: theme.faint, width: 1, dash: 'solid' },
      trip: { color: theme.ink, width: 1.5, dash: 'dash' },
      'never exceed': { color: theme.danger, width: 2.5, dash: 'solid' },
    } as const
  )[severity];
  return { type: 'line', xref: 'paper', x0: 0, x1: 1, y0: value, y1: value, line };
}

/** The labels of levels beside the plot, moved apart where levels lie close; a key under it where there is no room beside. */
function levelLabels(
  { levels, height }: Plot,
  [low, high]: Range,
  { total, left, width, narrow }: Frame,
): HTMLElement[] {
  const inside = levels.filter(({ value }) => value >= low && value <= high).sort((a, b) => a.value - b.value);
  let ceiling = Number.POSITIVE_INFINITY;
  return inside.map(({ text, value, severity }) => {
    const words = levelWords({ text, value });
    const label = element('span', { class: 'level-label', 'data-severity': severity, title: words }, words);
    if (narrow) return label;
    const natural = TOP + (1 - (value - low) / (high - low)) * height - LEVEL_LABEL_HEIGHT / 2;
    ceiling = Math.min(natural, ceiling - LEVEL_LABEL_HEIGHT);
    label.style.top = `${ceiling}px`;
    label.style.left = `${left + width + 6}px`;
    label.style.maxWidth = `${total - left - width - 6}px`;
    return label;
  });
}

function levelWords({ text, value }: Pick<PlotLevel, 'text' | 'value'>): string {
  return `${numberText(value)} ${text}`;
}

function widestLabel(plots: readonly Plot[]): number {
  const labels = plots.flatMap(({ levels }) => levels).map(levelWords);
  return Math.max(0, ...labels.map((words) => textWidth(words, LEVEL_LABEL_FONT)));
}

/** From the lowest to the highest of lines and levels, with some air. With `window`, of the lines within it only. */
function heightRange({ lines, levels }: Plot, window: Range | undefined): Range {
  const parts = lines.map(({ x, y }) => {
    if (!window) return y;
    const from = firstAtOrAfter(x, window[0]);
    return y.subarray(Math.max(0, from - 1), firstAtOrAfter(x, window[1]) + 1);
  });
  const [low, high] = bounds([...parts, window ? [] : levels.map((level) => level.value)]);
  if (low > high) return [0, 1];
  const size = Math.max(Math.abs(low), Math.abs(high));
  const span = Math.max(high - low, window ? 0 : LEAST_SPAN * size) || 0.1 * size || 1;
  const middle = (low + high) / 2;
  return [middle - 0.56 * span, middle + 0.56 * span];
}

function bounds(parts: readonly ArrayLike<number>[]): Range {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const part of parts) {
    for (let index = 0; index < part.length; index += 1) {
      const value = part[index] ?? Number.NaN;
      if (value < low) low = value;
      if (value > high) high = value;
    }
  }
  return [low, high];
}

function firstAtOrAfter(x: ArrayLike<number>, at: number): number {
  let index = 0;
  while (index < x.length && (x[index] ?? 0) < at) index += 1;
  return index;
}

function within([from, to]: Range, [first, last]: Range): Range {
  const width = Math.min(to - from, last - first);
  const start = Math.min(Math.max(from, first), last - width);
  return [start, start + width];
}

interface PointerActions {
  point(at: number): void;
  select(range: Range): void;
  whole(): void;
}

/** Below this a press is a click, not a selection, px. */
const SHORTEST_DRAG = 6;

/** Moving points; dragging with a mouse selects a range; a double click goes back to the whole. Touch leaves scrolling alone. */
function listenToPointer(host: HTMLElement, selection: HTMLElement, frame: () => Frame, actions: PointerActions): void {
  let pressedAt: number | undefined;

  function place(event: PointerEvent): { pixel: number; at: number } {
    const { left, width, range } = frame();
    const offset = event.clientX - host.getBoundingClientRect().left - left;
    const pixel = Math.min(Math.max(offset, 0), width);
    return { pixel: left + pixel, at: range[0] + (pixel / width) * (range[1] - range[0]) };
  }

  host.addEventListener('pointermove', (event) => {
    const { pixel, at } = place(event);
    actions.point(at);
    if (pressedAt === undefined) return;
    selection.hidden = Math.abs(pixel - pressedAt) < SHORTEST_DRAG;
    selection.style.left = `${Math.min(pixel, pressedAt)}px`;
    selection.style.width = `${Math.abs(pixel - pressedAt)}px`;
  });
  host.addEventListener('pointerdown', (event) => {
    const { pixel, at } = place(event);
    actions.point(at);
    if (event.pointerType !== 'mouse' || event.button !== 0) return;
    pressedAt = pixel;
    host.setPointerCapture(event.pointerId);
  });
  host.addEventListener('pointerup', (event) => {
    if (pressedAt === undefined) return;
    const { left, width, range } = frame();
    const toAxis = (pixel: number) => range[0] + ((pixel - left) / width) * (range[1] - range[0]);
    const { pixel } = place(event);
    if (!selection.hidden) actions.select([toAxis(Math.min(pixel, pressedAt)), toAxis(Math.max(pixel, pressedAt))]);
    pressedAt = undefined;
    selection.hidden = true;
  });
  host.addEventListener('pointercancel', () => {
    pressedAt = undefined;
    selection.hidden = true;
  });
  host.addEventListener('dblclick', actions.whole);
}
