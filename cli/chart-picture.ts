/** Charts in plain SVG: linear or logarithmic axes, lines and points, for reports that need no script. */

export interface ChartLine {
  label: string;
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  /** Points instead of a line. */
  points?: boolean;
  /** Index of the line's colour; its place among the lines when absent. */
  colour?: number;
  dashed?: boolean;
}

export interface Chart {
  title: string;
  xLabel: string;
  yLabel: string;
  xLog?: boolean;
  yLog?: boolean;
  /** One unit is as long on both axes. */
  equal?: boolean;
  /** What to show, where it is not all that there is. */
  xRange?: readonly [number, number];
  yRange?: readonly [number, number];
  lines: readonly ChartLine[];
}

/** Colours of lines, as custom properties of the page: Okabe and Ito, *Color Universal Design*, 2008. */
export const CHART_STYLE = `
:root { --ink: #17212b; --faint: #55626e; --grid: #dde3e8; --ground: #f5f7f8; --sheet: #ffffff;
  --line-0: #0072b2; --line-1: #d55e00; --line-2: #009e73; --line-3: #cc79a7; --line-4: #e69f00; --line-5: #56b4e9; }
@media (prefers-color-scheme: dark) { :root { --ink: #e6ebef; --faint: #a3b0bb; --grid: #2e3841; --ground: #0e1216;
  --sheet: #151b20; --line-0: #56b4e9; --line-1: #e69f00; --line-2: #009e73; --line-3: #cc79a7; --line-4: #f0e442;
  --line-5: #d55e00; } }
.chart { background: var(--sheet); width: 100%; height: auto; }
.chart text { fill: var(--ink); font-size: 13px; }
.chart .title { font-weight: 600; font-size: 15px; }
.chart .tick { fill: var(--faint); font-size: 12px; }
.chart .grid { stroke: var(--grid); }
.chart .frame { fill: none; stroke: var(--faint); }
`;

const COLOURS = 6;
const WIDTH = 640;
const HEIGHT = 400;
const PLOT = { left: 74, top: 40, right: 16, bottom: 54 };
const LEGEND_ROW = 18;
const LEGEND_GAP = 10;
const LEGEND_COLUMN = 185;

interface Axis {
  from: number;
  to: number;
  log: boolean;
  ticks: readonly number[];
  at(value: number): number;
}

/** The chart as an SVG element. */
export function chartPicture(chart: Chart): string {
  const shown = chart.lines.filter(({ label }) => label !== '');
  const perRow = Math.max(1, Math.floor((WIDTH - PLOT.left) / LEGEND_COLUMN));
  const legendHeight = Math.ceil(shown.length / perRow) * LEGEND_ROW;
  const plotWidth = WIDTH - PLOT.left - PLOT.right;
  const plotHeight = HEIGHT - PLOT.top - PLOT.bottom;
  const height = HEIGHT + LEGEND_GAP + legendHeight;
  const xValues = chart.lines.flatMap(({ x }) => Array.from(x));
  const yValues = chart.lines.flatMap(({ y }) => Array.from(y));
  let xRange = chart.xRange ?? rangeOf(xValues, chart.xLog);
  const yRange = chart.yRange ?? rangeOf(yValues, chart.yLog);
  if (chart.equal) {
    const middle = 0.5 * (xRange[0] + xRange[1]);
    const half = (0.5 * (yRange[1] - yRange[0]) * plotWidth) / plotHeight;
    xRange = [middle - half, middle + half];
  }
  const x = axis(xRange, chart.xLog === true, PLOT.left, PLOT.left + plotWidth);
  const y = axis(yRange, chart.yLog === true, PLOT.top + plotHeight, PLOT.top);
  const clip = `clip-${hash(chart.title + chart.yLabel)}`;
  const bottom = PLOT.top + plotHeight;

  return [
    `<svg class="chart" viewBox="0 0 ${WIDTH} ${height}" role="img" font-family="system-ui, sans-serif">`,
    `<title>${escaped(chart.title)}</title>`,
    `<defs><clipPath id="${clip}"><rect x="${PLOT.left}" y="${PLOT.top}" width="${plotWidth}" height="${plotHeight}"/></clipPath></defs>`,
    `<text class="title" x="${PLOT.left}" y="24">${escaped(chart.title)}</text>`,
    ...x.ticks.map(
      (tick) =>
        `<line class="grid" x1="${px(x.at(tick))}" x2="${px(x.at(tick))}" y1="${PLOT.top}" y2="${bottom}"/>` +
        `<text class="tick" x="${px(x.at(tick))}" y="${bottom + 17}" text-anchor="middle">${tickText(tick)}</text>`,
    ),
    ...y.ticks.map(
      (tick) =>
        `<line class="grid" x1="${PLOT.left}" x2="${PLOT.left + plotWidth}" y1="${px(y.at(tick))}" y2="${px(y.at(tick))}"/>` +
        `<text class="tick" x="${PLOT.left - 7}" y="${px(y.at(tick) + 4)}" text-anchor="end">${tickText(tick)}</text>`,
    ),
    `<rect class="frame" x="${PLOT.left}" y="${PLOT.top}" width="${plotWidth}" height="${plotHeight}"/>`,
    `<text x="${PLOT.left + plotWidth / 2}" y="${bottom + 40}" text-anchor="middle">${escaped(chart.xLabel)}</text>`,
    `<text transform="translate(18 ${PLOT.top + plotHeight / 2}) rotate(-90)" text-anchor="middle">${escaped(chart.yLabel)}</text>`,
    `<g clip-path="url(#${clip})">`,
    ...chart.lines.map((line, i) => drawn(line, line.colour ?? i, x, y)),
    '</g>',
    ...shown.map((line, i) => legendEntry(line, chart.lines.indexOf(line), i, perRow)),
    '</svg>',
  ].join('\n');
}

function drawn(line: ChartLine, colour: number, x: Axis, y: Axis): string {
  const stroke = `var(--line-${colour % COLOURS})`;
  if (line.points) {
    return Array.from(line.x, (value, i) =>
      Number.isFinite(line.y[i])
        ? `<circle cx="${px(x.at(value))}" cy="${px(y.at(line.y[i]))}" r="3.5" fill="${stroke}" fill-opacity="0.8"/>`
        : '',
    ).join('');
  }
  let path = '';
  let pen = 'M';
  for (let i = 0; i < line.x.length; i++) {
    const [h, v] = [x.at(line.x[i]), y.at(line.y[i])];
    if (!Number.isFinite(h) || !Number.isFinite(v)) {
      pen = 'M';
      continue;
    }
    path += `${pen}${px(limited(h))} ${px(limited(v))}`;
    pen = 'L';
  }
  const dash = line.dashed ? ' stroke-dasharray="6 4"' : '';
  return `<path d="${path}" fill="none" stroke="${stroke}" stroke-width="2"${dash}/>`;
}

function legendEntry(line: ChartLine, place: number, index: number, perRow: number): string {
  const left = PLOT.left + (index % perRow) * LEGEND_COLUMN;
  const top = HEIGHT + LEGEND_GAP + Math.floor(index / perRow) * LEGEND_ROW;
  const colour = `var(--line-${(line.colour ?? place) % COLOURS})`;
  const mark = line.points
    ? `<circle cx="${left + 11}" cy="${top - 4}" r="3.5" fill="${colour}"/>`
    : `<line x1="${left}" x2="${left + 22}" y1="${top - 4}" y2="${top - 4}" stroke="${colour}" stroke-width="2"${line.dashed ? ' stroke-dasharray="6 4"' : ''}/>`;
  return `${mark}<text x="${left + 28}" y="${top}">${escaped(line.label)}</text>`;
}

function rangeOf(values: readonly number[], log = false): [number, number] {
  const usable = values.filter((value) => Number.isFinite(value) && (!log || value > 0));
  const low = usable.reduce((least, value) => Math.min(least, value), Number.POSITIVE_INFINITY);
  const high = usable.reduce((most, value) => Math.max(most, value), Number.NEGATIVE_INFINITY);
  if (!(low < high)) return Number.isFinite(low) ? [low - 1, low + 1] : [0, 1];
  if (log) return [low, high];
  const spare = 0.05 * (high - low);
  return [low - spare, high + spare];
}

function axis([from, to]: readonly [number, number], log: boolean, start: number, end: number): Axis {
  const scale = log ? Math.log10 : (value: number) => value;
  const [low, high] = [scale(from), scale(to)];
  return {
    from,
    to,
    log,
    ticks: log ? decades(from, to) : evenTicks(from, to),
    at: (value) => start + ((scale(value) - low) / (high - low)) * (end - start),
  };
}

function decades(from: number, to: number): number[] {
  const steps = to / from < 30 ? [1, 2, 5] : [1];
  const first = Math.floor(Math.log10(from));
  const last = Math.ceil(Math.log10(to));
  return Array.from({ length: last - first + 1 }, (_, i) => 10 ** (first + i))
    .flatMap((decade) => steps.map((step) => step * decade))
    .filter((tick) => tick >= from * 0.999 && tick <= to * 1.001);
}

function evenTicks(from: number, to: number): number[] {
  const rough = (to - from) / 6;
  const decade = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((m) => m * decade).find((s) => s >= rough) ?? decade;
  const first = Math.ceil(from / step - 1e-9);
  return Array.from({ length: Math.floor(to / step + 1e-9) - first + 1 }, (_, i) => (first + i) * step);
}

function tickText(value: number): string {
  return String(Number(value.toPrecision(6)));
}

function px(value: number): string {
  return value.toFixed(1);
}

/** Renderers lose their way far outside the picture. */
function limited(value: number): number {
  return Math.max(-4000, Math.min(4000, value));
}

function hash(text: string): string {
  let sum = 0;
  for (const letter of text) sum = (sum * 31 + (letter.codePointAt(0) ?? 0)) >>> 0;
  return sum.toString(36);
}

export function escaped(text: string): string {
  return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
}
