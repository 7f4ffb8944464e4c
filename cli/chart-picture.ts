/** Charts as plain SVG under their title and key: lines, points and bands over linear or logarithmic axes. */

import { escaped } from '../scenarios/markup.ts';

export interface ChartAxis {
  label: string;
  logarithmic?: boolean;
  /** What to show, where it is not all that there is. */
  range?: readonly [number, number];
}

export interface ChartLine {
  /** Stands in the key; a line without one is not in it. */
  label?: string;
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  /** Points instead of a line. */
  points?: boolean;
  /** Index of the line's colour, or the page's ink; its place among the lines when absent. */
  colour?: number | 'ink';
  dashed?: boolean;
  width?: number;
}

export interface ChartBand {
  label: string;
  x: ArrayLike<number>;
  low: ArrayLike<number>;
  high: ArrayLike<number>;
  colour: number;
}

export interface Chart {
  title: string;
  x: ChartAxis;
  y: ChartAxis;
  /** One unit is as long on both axes: x is shown about its middle as far as y's scale reaches. */
  equal?: boolean;
  lines: readonly ChartLine[];
  bands?: readonly ChartBand[];
  /** Thin upright lines. */
  marks?: readonly number[];
  /** Identifies the chart to the page's script, which finds the plotted area in its data attributes. */
  id?: string;
  width?: number;
  height?: number;
}

/** Colours of lines, as custom properties of the page: Okabe and Ito, *Color Universal Design*, 2008. */
export const CHART_STYLE = `
:root { color-scheme: light dark; --ink: #17212b; --faint: #55626e; --grid: #dde3e8; --ground: #f5f7f8; --sheet: #fff;
  --line-0: #0072b2; --line-1: #d55e00; --line-2: #009e73; --line-3: #cc79a7; --line-4: #e69f00; --line-5: #56b4e9; }
@media (prefers-color-scheme: dark) { :root { --ink: #e6ebef; --faint: #a3b0bb; --grid: #2e3841; --ground: #0e1216;
  --sheet: #151b20; --line-0: #56b4e9; --line-1: #e69f00; --line-2: #009e73; --line-3: #cc79a7; --line-4: #f0e442;
  --line-5: #d55e00; } }
.chart { display: flex; flex-direction: column; margin: 0; min-width: 0; break-inside: avoid; }
.chart figcaption { display: flex; flex-wrap: wrap; gap: 2px 18px; align-items: baseline; margin-bottom: 4px; }
.chart h3 { font-size: 1rem; margin: 0; }
.chart ul { display: flex; flex-wrap: wrap; gap: 0 16px; list-style: none; margin: 0; padding: 0; font-size: 13px; color: var(--faint); }
.chart li svg { margin-right: 6px; }
.chart > svg { width: 100%; height: auto; margin-top: auto; font: 12px system-ui, sans-serif; }
.chart text { fill: var(--faint); } .chart .label { fill: var(--ink); }
.chart .sheet { fill: var(--sheet); } .chart .grid { stroke: var(--grid); } .chart .frame { fill: none; stroke: var(--faint); }
.chart .mark { stroke: var(--faint); stroke-dasharray: 2 3; } .chart .cursor { stroke: var(--ink); stroke-width: 1.4; }
@media (max-width: 700px) { .chart > svg { font-size: 17px; } }
`;

const COLOURS = 6;
const MARGIN = { left: 80, right: 20, top: 8, bottom: 46 };
/** About how far apart labels stand on an axis, in units of the picture. */
const TICK_GAP = { x: 80, y: 48 };
const DASHES = ' stroke-dasharray="6 4"';
/** More points than this on one line are thinned to the lowest and highest of each stretch. */
const MOST_POINTS = 1600;
/** A logarithmic axis over a smaller ratio has too few powers of ten to be marked by them. */
const LEAST_DECADES = 5;
/** Over a smaller ratio, twos and fives are labelled too. */
const FEW_DECADES = 30;

interface Tick {
  value: number;
  label: string;
}

interface Scale {
  ticks: readonly Tick[];
  at(value: number): number;
}

interface Plot {
  left: number;
  right: number;
  top: number;
  bottom: number;
  x: Scale;
  y: Scale;
}

/** The chart as a figure element. */
export function chartPicture(chart: Chart): string {
  const { title, id, width = 640, height = 340, lines, bands = [], marks = [] } = chart;
  const plot = plotOf(chart, width, height);
  const { left, right, top, bottom, x, y } = plot;
  const box = `x="${left}" y="${top}" width="${right - left}" height="${bottom - top}"`;
  const clip = `clip-${title.replace(/\W+/g, '-').toLowerCase()}`;
  const data = id ? ` id="${id}" data-left="${left}" data-width="${right - left}" data-total="${width}"` : '';
  return [
    `<figure class="chart"><figcaption><h3>${escaped(title)}</h3>${key(chart)}</figcaption>`,
    `<svg viewBox="0 0 ${width} ${height}" role="img" aria-label="${escaped(title)}"${data}>`,
    `<clipPath id="${clip}"><rect ${box}/></clipPath>`,
    `<rect ${box} class="sheet"/>`,
    ...x.ticks.map(({ value, label }) => {
      const at = px(x.at(value));
      const text = label && `<text x="${at}" y="${bottom + 17}" text-anchor="middle">${label}</text>`;
      return upright(value, 'grid', plot) + text;
    }),
    ...y.ticks.map(({ value, label }) => {
      const at = px(y.at(value));
      const text = label && `<text x="${left - 7}" y="${at}" dy="0.35em" text-anchor="end">${label}</text>`;
      return `<line x1="${left}" x2="${right}" y1="${at}" y2="${at}" class="grid"/>${text}`;
    }),
    `<g clip-path="url(#${clip})">`,
    ...marks.map((at) => upright(at, 'mark', plot)),
    ...bands.map((band) => bandPath(band, plot)),
    ...lines.map((line, i) => (line.points ? pointMarks(line, i, plot) : linePath(line, i, plot))),
    id ? `<line class="cursor" x1="${left}" x2="${left}" y1="${top}" y2="${bottom}"/>` : '',
    '</g>',
    `<rect ${box} class="frame"/>`,
    `<text x="${(left + right) / 2}" y="${height - 6}" text-anchor="middle" class="label">${escaped(chart.x.label)}</text>`,
    `<text transform="translate(13 ${(top + bottom) / 2}) rotate(-90)" text-anchor="middle" class="label">${escaped(chart.y.label)}</text>`,
    '</svg></figure>',
  ].join('');
}

function plotOf({ x, y, equal, lines, bands = [] }: Chart, width: number, height: number): Plot {
  const [left, right] = [MARGIN.left, width - MARGIN.right];
  const [top, bottom] = [MARGIN.top, height - MARGIN.bottom];
  let xRange =
    x.range ??
    rangeOf(
      [...lines, ...bands].map((drawn) => drawn.x),
      x.logarithmic,
    );
  const yRange =
    y.range ??
    rangeOf([...lines.map((line) => line.y), ...bands.flatMap(({ low, high }) => [low, high])], y.logarithmic);
  if (equal) {
    const middle = 0.5 * (xRange[0] + xRange[1]);
    const half = (0.5 * (yRange[1] - yRange[0]) * (right - left)) / (bottom - top);
    xRange = [middle - half, middle + half];
  }
  return {
    left,
    right,
    top,
    bottom,
    x: scaleOf(xRange, x.logarithmic, [left, right], TICK_GAP.x),
    y: scaleOf(yRange, y.logarithmic, [bottom, top], TICK_GAP.y),
  };
}

function rangeOf(series: readonly ArrayLike<number>[], logarithmic = false): [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const values of series) {
    for (let i = 0; i < values.length; i++) {
      if (!Number.isFinite(values[i]) || (logarithmic && values[i] <= 0)) continue;
      low = Math.min(low, values[i]);
      high = Math.max(high, values[i]);
    }
  }
  if (low > high) return logarithmic ? [1, 10] : [0, 1];
  if (logarithmic) return low < high ? [low, high] : [low / 2, high * 2];
  const spare = low < high ? 0.05 * (high - low) : 1;
  return [low - spare, high + spare];
}

function scaleOf(
  [from, to]: readonly [number, number],
  logarithmic = false,
  [start, end]: readonly [number, number],
  gap: number,
): Scale {
  const measure = logarithmic ? Math.log10 : (value: number) => value;
  const [low, high] = [measure(from), measure(to)];
  return {
    ticks:
      logarithmic && to / from >= LEAST_DECADES
        ? decadeTicks(from, to)
        : evenTicks(from, to, Math.abs(end - start) / gap),
    at: (value) => start + ((measure(value) - low) / (high - low)) * (end - start),
  };
}

/** Powers of ten with labels, and bare lines between. */
function decadeTicks(from: number, to: number): Tick[] {
  const labelled = to / from < FEW_DECADES ? [1, 2, 5] : [1];
  const first = Math.floor(Math.log10(from));
  return Array.from({ length: Math.ceil(Math.log10(to)) - first + 1 }, (_, i) => 10 ** (first + i))
    .flatMap((decade) =>
      [1, 2, 3, 4, 5, 6, 7, 8, 9].map((n) => ({
        value: n * decade,
        label: labelled.includes(n) ? tickText(n * decade) : '',
      })),
    )
    .filter(({ value }) => value >= from * 0.999 && value <= to * 1.001);
}

function evenTicks(from: number, to: number, about: number): Tick[] {
  const rough = (to - from) / about;
  const decade = 10 ** Math.floor(Math.log10(rough));
  const step = decade * ([1, 2, 5, 10].find((n) => n * decade >= rough) ?? 10);
  const first = Math.ceil(from / step - 1e-9);
  return Array.from({ length: Math.floor(to / step + 1e-9) - first + 1 }, (_, i) => {
    const value = (first + i) * step;
    return { value, label: tickText(value) };
  });
}

function tickText(value: number): string {
  return String(Number(value.toPrecision(6))).replace('-', '−');
}

function upright(value: number, name: string, { x, top, bottom }: Plot): string {
  const at = px(x.at(value));
  return `<line x1="${at}" x2="${at}" y1="${top}" y2="${bottom}" class="${name}"/>`;
}

function pointMarks(line: ChartLine, place: number, { x, y }: Plot): string {
  const colour = colourOf(line.colour ?? place);
  return Array.from(line.x, (value, i) =>
    Number.isFinite(y.at(line.y[i]))
      ? `<circle cx="${px(x.at(value))}" cy="${px(y.at(line.y[i]))}" r="3" fill="${colour}" fill-opacity="0.85"/>`
      : '',
  ).join('');
}

/** The line, broken where a value is none. */
function linePath(line: ChartLine, place: number, { x, y }: Plot): string {
  let path = '';
  let pen = 'M';
  for (const [h, v] of thinned(line.x, line.y)) {
    const [across, down] = [x.at(h), y.at(v)];
    if (!Number.isFinite(across) || !Number.isFinite(down)) {
      pen = 'M';
      continue;
    }
    path += `${pen}${px(across)} ${px(down)}`;
    pen = 'L';
  }
  const stroke = `stroke="${colourOf(line.colour ?? place)}" stroke-width="${line.width ?? 2}"`;
  return `<path d="${path}" fill="none" ${stroke} stroke-linejoin="round"${line.dashed ? DASHES : ''}/>`;
}

/** The points, or of many the lowest and highest of each stretch in their order, so that no peak is lost. */
function thinned(x: ArrayLike<number>, y: ArrayLike<number>): [number, number][] {
  const count = x.length;
  if (count <= MOST_POINTS) return Array.from(x, (value, i) => [value, y[i]]);
  const stretch = (2 * count) / MOST_POINTS;
  const kept: [number, number][] = [];
  for (let from = 0; from < count; from += stretch) {
    let [low, high] = [Math.floor(from), Math.floor(from)];
    for (let i = Math.floor(from); i < Math.min(from + stretch, count); i++) {
      if (y[i] < y[low] || Number.isNaN(y[low])) low = i;
      if (y[i] > y[high] || Number.isNaN(y[high])) high = i;
    }
    for (const i of [Math.min(low, high), Math.max(low, high)]) kept.push([x[i], y[i]]);
  }
  return kept;
}

function bandPath(band: ChartBand, { x, y }: Plot): string {
  const edge = (values: ArrayLike<number>) =>
    Array.from(band.x, (value, i) => `${px(x.at(value))} ${px(y.at(values[i]))}`);
  const outline = [...edge(band.low), ...edge(band.high).reverse()].join('L');
  return `<path d="M${outline}Z" fill="${colourOf(band.colour)}" fill-opacity="0.2"/>`;
}

/** Samples of all that has a label, each label once; one alone is said by the title. */
function key({ lines, bands = [] }: Chart): string {
  const samples = new Map<string, string>();
  lines.forEach(({ label, points, colour: own, dashed }, i) => {
    if (label === undefined) return;
    const colour = colourOf(own ?? i);
    const sample = points
      ? `<circle cx="11" cy="5" r="3" fill="${colour}"/>`
      : `<line x1="0" x2="22" y1="5" y2="5" stroke="${colour}" stroke-width="2.4"${dashed ? DASHES : ''}/>`;
    samples.set(label, sample);
  });
  for (const { label, colour } of bands) {
    samples.set(label, `<rect width="22" height="10" fill="${colourOf(colour)}" fill-opacity="0.25"/>`);
  }
  if (samples.size < 2) return '';
  const entries = Array.from(
    samples,
    ([label, sample]) => `<li><svg width="22" height="10" aria-hidden="true">${sample}</svg>${escaped(label)}</li>`,
  );
  return `<ul>${entries.join('')}</ul>`;
}

function colourOf(colour: number | 'ink'): string {
  return colour === 'ink' ? 'var(--ink)' : `var(--line-${colour % COLOURS})`;
}

/** To a tenth, and not so far outside the picture that renderers lose their way. */
function px(value: number): string {
  return Math.max(-4000, Math.min(4000, value)).toFixed(1);
}
