/** A chart as plain SVG: lines and bands over linear or logarithmic axes. Colours are the page's custom properties. */

export interface Axis {
  label: string;
  logarithmic?: boolean;
  from: number;
  to: number;
}

export interface ChartLine {
  /** Stands in the key; a line without one is not in it. */
  label?: string;
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  /** Name of a custom property, such as "line-1". */
  colour: string;
  dash?: string;
  width?: number;
  /** Draws points, not a line. */
  dots?: boolean;
}

export interface ChartBand {
  label: string;
  x: ArrayLike<number>;
  low: ArrayLike<number>;
  high: ArrayLike<number>;
  colour: string;
}

export interface Chart {
  title: string;
  x: Axis;
  y: Axis;
  lines: readonly ChartLine[];
  bands?: readonly ChartBand[];
  /** Thin upright lines. */
  marks?: readonly number[];
  /** Identifies the chart to the page's script, which finds the plotted area in its data attributes. */
  id?: string;
  width?: number;
  height?: number;
}

const MARGIN = { left: 62, right: 14, top: 8, bottom: 44 };
/** More points than this on one line are thinned to the lowest and highest of each stretch. */
const MOST_POINTS = 1600;

/** The chart with its title and key, as a figure element. */
export function chartFigure(chart: Chart): string {
  const { width = 640, height = 300 } = chart;
  const place = placer(chart, width, height);
  const clip = `clip-${chart.title.replace(/\W+/g, '-').toLowerCase()}`;
  const plot = {
    x: MARGIN.left,
    y: MARGIN.top,
    w: width - MARGIN.left - MARGIN.right,
    h: height - MARGIN.top - MARGIN.bottom,
  };
  const box = `x="${plot.x}" y="${plot.y}" width="${plot.w}" height="${plot.h}"`;
  const parts = [
    `<svg viewBox="0 0 ${width} ${height}" role="img" aria-label="${escaped(chart.title)}"` +
      (chart.id ? ` id="${chart.id}" data-left="${plot.x}" data-width="${plot.w}" data-total="${width}"` : '') +
      '>',
    `<clipPath id="${clip}"><rect ${box}/></clipPath>`,
    `<rect ${box} class="sheet"/>`,
    ...axisMarks(chart.x, 'x', place, plot),
    ...axisMarks(chart.y, 'y', place, plot),
    `<g clip-path="url(#${clip})">`,
    ...(chart.marks ?? []).map((at) => {
      const x = place.x(at).toFixed(1);
      return `<line x1="${x}" x2="${x}" y1="${plot.y}" y2="${plot.y + plot.h}" class="mark"/>`;
    }),
    ...(chart.bands ?? []).map((band) => bandPath(band, place)),
    ...chart.lines.map((line) => linePath(line, place)),
    chart.id ? `<line class="cursor" y1="${plot.y}" y2="${plot.y + plot.h}" x1="${plot.x}" x2="${plot.x}"/>` : '',
    '</g>',
    `<text x="${plot.x + plot.w / 2}" y="${height - 6}" text-anchor="middle" class="axis">${escaped(chart.x.label)}</text>`,
    `<text transform="translate(15 ${plot.y + plot.h / 2}) rotate(-90)" text-anchor="middle" class="axis">${escaped(chart.y.label)}</text>`,
    '</svg>',
  ];
  return `<figure><figcaption><h3>${escaped(chart.title)}</h3>${key(chart)}</figcaption>${parts.join('')}</figure>`;
}

interface Place {
  x(value: number): number;
  y(value: number): number;
}

function placer({ x, y }: Chart, width: number, height: number): Place {
  const share = ({ from, to, logarithmic }: Axis, value: number) =>
    logarithmic ? Math.log(Math.max(value, 1e-12) / from) / Math.log(to / from) : (value - from) / (to - from);
  return {
    x: (value) => MARGIN.left + share(x, value) * (width - MARGIN.left - MARGIN.right),
    y: (value) => height - MARGIN.bottom - share(y, value) * (height - MARGIN.top - MARGIN.bottom),
  };
}

function axisMarks(
  axis: Axis,
  side: 'x' | 'y',
  place: Place,
  plot: { x: number; y: number; w: number; h: number },
): string[] {
  return ticksOf(axis, side === 'x' ? 7 : 5).map(({ value, label }) => {
    const at = place[side](value).toFixed(1);
    return side === 'x'
      ? `<line x1="${at}" x2="${at}" y1="${plot.y}" y2="${plot.y + plot.h}" class="grid"/>` +
          (label ? `<text x="${at}" y="${plot.y + plot.h + 17}" text-anchor="middle">${label}</text>` : '')
      : `<line y1="${at}" y2="${at}" x1="${plot.x}" x2="${plot.x + plot.w}" class="grid"/>` +
          (label ? `<text x="${plot.x - 7}" y="${Number(at) + 4}" text-anchor="end">${label}</text>` : '');
  });
}

/** Round values on a linear axis; on a logarithmic one, labelled powers of ten and bare lines between. */
function ticksOf({ from, to, logarithmic }: Axis, about: number): { value: number; label: string }[] {
  if (logarithmic) {
    const decades = Array.from(
      { length: Math.ceil(Math.log10(to / from)) + 1 },
      (_, i) => 10 ** (Math.floor(Math.log10(from)) + i),
    );
    return decades
      .flatMap((decade) =>
        [1, 2, 3, 4, 5, 6, 7, 8, 9].map((n) => ({
          value: n * decade,
          label: n === 1 ? String(Number(decade.toPrecision(3))) : '',
        })),
      )
      .filter(({ value }) => value >= from * 0.999 && value <= to * 1.001);
  }
  const raw = (to - from) / about;
  const power = 10 ** Math.floor(Math.log10(raw));
  const step = power * ([1, 2, 5, 10].find((n) => n * power >= raw) ?? 10);
  const first = Math.ceil(from / step - 1e-9);
  return Array.from({ length: Math.floor(to / step + 1e-9) - first + 1 }, (_, i) => {
    const value = (first + i) * step;
    return { value, label: String(Number(value.toPrecision(6))).replace('-', '−') };
  });
}

function linePath({ x, y, colour, dash, width = 1.6, dots }: ChartLine, place: Place): string {
  if (dots) {
    return Array.from(
      x,
      (value, i) =>
        `<circle cx="${place.x(value).toFixed(1)}" cy="${place.y(y[i]).toFixed(1)}" r="2.6" fill="var(--${colour})"/>`,
    ).join('');
  }
  const path = thinned(x, y).map(([px, py]) => `${place.x(px).toFixed(1)} ${place.y(py).toFixed(1)}`);
  const dashes = dash ? ` stroke-dasharray="${dash}"` : '';
  return `<path d="M${path.join('L')}" fill="none" stroke="var(--${colour})" stroke-width="${width}" stroke-linejoin="round"${dashes}/>`;
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
      if (y[i] < y[low]) low = i;
      if (y[i] > y[high]) high = i;
    }
    for (const i of [Math.min(low, high), Math.max(low, high)]) kept.push([x[i], y[i]]);
  }
  return kept;
}

function bandPath({ x, low, high, colour }: ChartBand, place: Place): string {
  const at = (values: ArrayLike<number>, i: number) => `${place.x(x[i]).toFixed(1)} ${place.y(values[i]).toFixed(1)}`;
  const there = Array.from(x, (_, i) => at(low, i));
  const back = Array.from(x, (_, i) => at(high, i)).reverse();
  return `<path d="M${[...there, ...back].join('L')}Z" fill="var(--${colour})" fill-opacity="0.2"/>`;
}

function key({ lines, bands = [] }: Chart): string {
  const samples = [
    ...lines.map(({ label, colour, dash, dots }) => {
      const dashes = dash ? ` stroke-dasharray="${dash}"` : '';
      const sample = dots
        ? `<circle cx="11" cy="5" r="3" fill="var(--${colour})"/>`
        : `<line x1="0" x2="22" y1="5" y2="5" stroke="var(--${colour})" stroke-width="2.4"${dashes}/>`;
      return { label, sample };
    }),
    ...bands.map(({ label, colour }) => ({
      label,
      sample: `<rect width="22" height="10" fill="var(--${colour})" fill-opacity="0.25"/>`,
    })),
  ];
  const shown = samples.filter(({ label }, i) => label && samples.findIndex((s) => s.label === label) === i);
  if (shown.length < 2) return '';
  return `<ul>${shown.map(({ label = '', sample }) => `<li><svg width="22" height="10" aria-hidden="true">${sample}</svg>${escaped(label)}</li>`).join('')}</ul>`;
}

export function escaped(words: string): string {
  return words.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
}
