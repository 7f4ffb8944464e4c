/** The blade's velocity triangles and angles of attack as one picture, in plain SVG. */

import { escaped } from '../scenarios/markup.ts';
import { type VelocityTriangle, velocityTriangles } from '../sim/aerodynamics/velocity-triangles.ts';
import { bladeText, pointText, totalsText } from './blade-text.ts';
import type { BladeView } from './blade-view.ts';

/** Okabe and Ito, *Color Universal Design*, 2008. */
export const INK = '#000000';
const BLUE = '#0072B2';
const SKY = '#56B4E9';
const GREEN = '#009E73';
const ORANGE = '#E69F00';
const VERMILION = '#D55E00';
const PURPLE = '#CC79A7';
const GREY = '#6b6b6b';

const DEGREE = Math.PI / 180;

interface MarginBand {
  /** Up to this margin, rad. */
  below: number;
  colour: string;
  words: string;
}

const MARGIN_BANDS: readonly MarginBand[] = [
  { below: 0, colour: PURPLE, words: 'stalled' },
  { below: 2 * DEGREE, colour: VERMILION, words: 'within 2° of stall' },
  { below: 5 * DEGREE, colour: ORANGE, words: '2° to 5° from stall' },
  { below: Number.POSITIVE_INFINITY, colour: GREEN, words: 'more than 5° from stall' },
];
const NO_LIFT: MarginBand = { below: Number.NaN, colour: GREY, words: 'does not lift' };

function bandOf(station: DrawnTriangle): MarginBand {
  const { stallMargin } = station;
  return stallMargin === undefined ? NO_LIFT : (MARGIN_BANDS.find((b) => stallMargin < b.below) ?? NO_LIFT);
}

const WIDTH = 1200;
export const MARGIN = 30;
const TRIANGLE_STATIONS = [0.15, 0.32, 0.49, 0.66, 0.82, 0.96];
const PANELS_A_ROW = 3;
export const PANEL_WIDTH = (WIDTH - 2 * MARGIN) / PANELS_A_ROW;
const PANEL_TOP = 150;
const CURVE_STATIONS = 120;
const CURVE_HEIGHT = 250;

/** Points of the picture: x to the right, y down, px. */
interface Point {
  x: number;
  y: number;
}

/** An SVG drawing of the blade at its operating point. */
export function bladePicture(view: BladeView): string {
  const span = view.blade.radius - view.blade.hubRadius;
  const radii = TRIANGLE_STATIONS.map((share) => view.blade.hubRadius + share * span);
  const panels = velocityTriangles(view.blade, radii, view.point).map((station) =>
    trianglePanel(station, view.point.pitch, view.blade.radius),
  );
  const rows: Panel[][] = [];
  for (let i = 0; i < panels.length; i += PANELS_A_ROW) rows.push(panels.slice(i, i + PANELS_A_ROW));

  let top = PANEL_TOP;
  const drawn: string[] = [];
  for (const row of rows) {
    row.forEach((panel, i) => {
      drawn.push(`<g transform="translate(${px(MARGIN + i * PANEL_WIDTH)} ${px(top)})">${panel.svg}</g>`);
    });
    top += Math.max(...row.map((panel) => panel.height));
  }
  const curveTop = top + 46;
  const height = curveTop + CURVE_HEIGHT + 70;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${WIDTH} ${px(height)}" width="${WIDTH}" height="${px(height)}" ` +
      'font-family="system-ui, sans-serif" font-size="14" role="img">',
    `<title>${escaped(`Velocity triangles along the blade of ${view.turbine.name}`)}</title>`,
    `<rect width="${WIDTH}" height="${px(height)}" fill="#ffffff"/>`,
    heading(view),
    ...drawn,
    attackCurve(view, curveTop),
    '</svg>',
    '',
  ].join('\n');
}

function heading(view: BladeView): string {
  const lines = [
    `${pointText(view)} (${view.origin})`,
    totalsText(view),
    'The air as a blade section meets it, speeds in m/s and angles in degrees. The section moves to the left in the rotor ' +
      'plane (dashed); the wind blows up the page.',
    'Each triangle has its own scale, shown by its bar. Induced speeds are included.',
  ];
  return [
    svgText({ x: MARGIN, y: 34 }, `${view.turbine.name}: the flow along the blade`, { size: 22, weight: 600 }),
    ...lines.map((line, i) => svgText({ x: MARGIN, y: 58 + 19 * i }, line, { colour: i < 2 ? INK : GREY, size: 13 })),
  ].join('\n');
}

/** What a triangle's drawing needs to know of its station. */
export type DrawnTriangle = Pick<
  VelocityTriangle,
  | 'radius'
  | 'chord'
  | 'twist'
  | 'inflowAngle'
  | 'angleOfAttack'
  | 'normalSpeed'
  | 'tangentialSpeed'
  | 'relativeSpeed'
  | 'stall'
  | 'stallMargin'
>;

export interface Panel {
  svg: string;
  height: number;
}

const HYPOTENUSE = 175;
const CHORD = 110;
const PANEL_HEAD = 74;
/** The angle of attack is shown as a sector a little longer than the chord. */
const SECTOR = CHORD + 12;

/** One station: the triangle left of the leading edge, the chord right of it. */
export function trianglePanel(station: DrawnTriangle, pitch: number, tipRadius: number): Panel {
  const { inflowAngle, angleOfAttack, normalSpeed, tangentialSpeed, relativeSpeed } = station;
  const setting = station.twist + pitch;
  const along = (from: Point, angle: number, length: number): Point => ({
    x: from.x + length * Math.cos(angle),
    y: from.y - length * Math.sin(angle),
  });

  const origin = { x: 0, y: 0 };
  const tail = along(origin, inflowAngle, -HYPOTENUSE);
  const corner = { x: 0, y: tail.y };
  const trailingEdge = along(origin, setting, CHORD);
  const windOn = along(origin, inflowAngle, SECTOR + 12);
  const extent = [origin, tail, corner, trailingEdge, windOn];
  const highest = Math.min(...extent.map((p) => p.y)) - 24;
  const lowest = Math.max(...extent.map((p) => p.y)) + 30;
  const leftmost = Math.min(...extent.map((p) => p.x)) - 60;
  const place = { x: -leftmost + 10, y: PANEL_HEAD - highest };
  const height = PANEL_HEAD + (lowest - highest) + 34;

  const band = bandOf(station);
  const margin = station.stallMargin === undefined ? '' : `, margin ${degrees(station.stallMargin)}`;
  const percent = ((100 * station.radius) / tipRadius).toFixed(0);
  const reference = roundNumber(0.3 * relativeSpeed);
  const barLength = relativeSpeed > 0 ? (reference / relativeSpeed) * HYPOTENUSE : 0;
  const barAt = { x: tail.x, y: lowest + 10 };
  const normalSide = tangentialSpeed >= 0 ? 8 : -8;
  // A steep triangle is narrow: its labels go beside it instead of below it.
  const steep = Math.abs(tail.x) < 110;
  const belowChord = trailingEdge.y + 20;
  const chordName = steep
    ? { x: trailingEdge.x + 12, y: trailingEdge.y + 34 }
    : { x: trailingEdge.x, y: Math.abs(belowChord - 4) < 15 ? 19 : belowChord };
  const inflowName = steep ? along(tail, inflowAngle / 2, 52) : { x: tail.x, y: tail.y + 18 };
  const middle = { x: tail.x / 2, y: tail.y / 2 };
  const speedName = steep ? { x: middle.x - 10, y: middle.y - 20 } : { x: middle.x - 14, y: middle.y - 12 };

  const drawing = [
    sector(origin, SECTOR, setting, inflowAngle, band.colour),
    line({ x: tail.x - 16, y: 0 }, { x: CHORD + 40, y: 0 }, GREY, 1, '2 5'),
    line(origin, windOn, BLUE, 1, '6 4'),
    line(origin, trailingEdge, INK, 5),
    arrow(tail, corner, SKY, 2.5),
    arrow(corner, origin, SKY, 2.5),
    arrow(tail, origin, BLUE, 3),
    arc(tail, 46, 0, inflowAngle, GREY, 1.5),
    svgText(inflowName, `φ ${degrees(inflowAngle)}`, { colour: GREY }),
    svgText({ x: corner.x, y: tail.y + 18 }, `v_t ${tangentialSpeed.toFixed(1)}`, { anchor: 'end' }),
    svgText({ x: corner.x + normalSide, y: (corner.y + origin.y) / 2 + 12 }, `v_n ${normalSpeed.toFixed(1)}`, {
      anchor: normalSide > 0 ? 'start' : 'end',
    }),
    svgText(speedName, `W ${relativeSpeed.toFixed(1)}`, {
      anchor: steep ? 'end' : 'middle',
      colour: BLUE,
      weight: 600,
    }),
    svgText({ x: windOn.x, y: windOn.y - 8 }, `α ${degrees(angleOfAttack)}`, { weight: 600, anchor: 'middle' }),
    svgText(chordName, 'chord line', { size: 12, anchor: steep ? 'start' : 'middle' }),
    line(barAt, { x: barAt.x + barLength, y: barAt.y }, INK, 3),
    svgText({ x: barAt.x + barLength + 8, y: barAt.y + 4 }, `${reference} m/s`, { size: 12 }),
  ];
  const svg = [
    svgText({ x: 10, y: 20 }, `${station.radius.toFixed(1)} m, ${percent} % of the tip radius`, {
      size: 15,
      weight: 600,
    }),
    `<rect x="10" y="29" width="14" height="14" fill="${band.colour}"/>`,
    svgText({ x: 30, y: 41 }, `${band.words}${margin}`, { size: 13 }),
    svgText(
      { x: 10, y: 62 },
      `chord ${station.chord.toFixed(2)} m, twist ${degrees(station.twist)}, pitch ${degrees(pitch)}`,
      { size: 13, colour: GREY },
    ),
    `<g transform="translate(${px(place.x)} ${px(place.y)})">${drawing.join('')}</g>`,
  ];
  return { svg: svg.join('\n'), height };
}

/** One, two or five times a power of ten, at most `limit`. */
function roundNumber(limit: number): number {
  if (!(limit > 0)) return 0;
  const decade = 10 ** Math.floor(Math.log10(limit));
  return [5, 2, 1].map((m) => m * decade).find((n) => n <= limit) ?? decade;
}

const CURVE_FLOOR = -60 * DEGREE;
const CURVE_CEILING = 60 * DEGREE;

/** Angle of attack along the span between the angles of stall. */
function attackCurve(view: BladeView, top: number): string {
  const { blade, point } = view;
  const span = blade.radius - blade.hubRadius;
  const radii = Array.from(
    { length: CURVE_STATIONS + 1 },
    (_, i) => blade.hubRadius + (span * (i + 0.01)) / (CURVE_STATIONS + 0.02),
  );
  const stations = velocityTriangles(blade, radii, point);
  const lifting = stations.filter((s) => s.stall !== undefined);
  const limits = lifting.flatMap((s) => (s.stall ? [s.stall.positive, s.stall.negative] : []));
  const angles = [...limits, ...stations.map((s) => s.angleOfAttack)].map((a) =>
    Math.max(CURVE_FLOOR, Math.min(CURVE_CEILING, a)),
  );
  const low = Math.floor(Math.min(...angles) / (5 * DEGREE)) * 5 * DEGREE;
  const high = Math.ceil(Math.max(...angles) / (5 * DEGREE)) * 5 * DEGREE;
  const left = MARGIN + 50;
  const right = WIDTH - MARGIN - 190;
  const x = (radius: number): number => left + ((right - left) * radius) / blade.radius;
  const y = (angle: number): number => top + (CURVE_HEIGHT * (high - angle)) / (high - low);
  const path = (list: readonly VelocityTriangle[], angle: (s: VelocityTriangle) => number): string =>
    list.map((s, i) => `${i === 0 ? 'M' : 'L'}${px(x(s.radius))} ${px(y(angle(s)))}`).join(' ');

  const step = high - low > 50 * DEGREE ? 10 * DEGREE : 5 * DEGREE;
  const grid: string[] = [];
  for (let angle = Math.ceil(low / step - 1e-9) * step; angle <= high + 1e-9; angle += step) {
    grid.push(line({ x: left, y: y(angle) }, { x: right, y: y(angle) }, Math.abs(angle) < 1e-9 ? GREY : '#dddddd', 1));
    grid.push(svgText({ x: left - 8, y: y(angle) + 5 }, (angle / DEGREE).toFixed(0), { anchor: 'end', size: 12 }));
  }
  const metres = roundNumber(blade.radius / 5);
  for (let at = 0; at <= blade.radius; at += metres) {
    grid.push(line({ x: x(at), y: top + CURVE_HEIGHT }, { x: x(at), y: top + CURVE_HEIGHT + 5 }, INK, 1));
    grid.push(svgText({ x: x(at), y: top + CURVE_HEIGHT + 20 }, String(at), { anchor: 'middle', size: 12 }));
  }
  const stallPath = (side: 'positive' | 'negative'): string =>
    `<path d="${path(lifting, (s) => s.stall?.[side] ?? 0)}" fill="none" stroke="${INK}" stroke-width="1.5" stroke-dasharray="7 4"/>`;
  const dots = stations
    .filter((_, i) => i % 3 === 0)
    .map((s) => `<circle cx="${px(x(s.radius))}" cy="${px(y(s.angleOfAttack))}" r="4.5" fill="${bandOf(s).colour}"/>`);
  const outermost = lifting.at(-1);
  const names =
    outermost?.stall === undefined
      ? []
      : [
          svgText({ x: right + 8, y: y(outermost.stall.positive) + 5 }, 'stall, largest lift', { size: 12 }),
          svgText({ x: right + 8, y: y(outermost.stall.negative) + 5 }, 'stall, most negative lift', { size: 12 }),
        ];
  const legend = [...MARGIN_BANDS, NO_LIFT].map((band, i) => {
    const at = left + 170 * i;
    return (
      `<circle cx="${px(at)}" cy="${px(top + CURVE_HEIGHT + 50)}" r="5" fill="${band.colour}"/>` +
      svgText({ x: at + 10, y: top + CURVE_HEIGHT + 55 }, band.words, { size: 12 })
    );
  });
  return [
    `<clipPath id="curve"><rect x="${px(left - 6)}" y="${px(top - 6)}" width="${px(right - left + 12)}" height="${CURVE_HEIGHT + 12}"/></clipPath>`,
    svgText(
      { x: MARGIN, y: top - 20 },
      'Angle of attack along the blade (dots) between the angles of stall (dashed): degrees against radius in m',
      {
        size: 15,
        weight: 600,
      },
    ),
    ...grid,
    `<g clip-path="url(#curve)">`,
    stallPath('positive'),
    stallPath('negative'),
    `<path d="${path(stations, (s) => s.angleOfAttack)}" fill="none" stroke="${GREY}" stroke-width="1.5"/>`,
    ...dots,
    '</g>',
    ...names,
    ...legend,
  ].join('\n');
}

/** The picture and the table in one page. */
export function bladePage(view: BladeView): string {
  const title = escaped(`${view.turbine.name}: the flow along the blade`);
  return `<!doctype html>
<html lang="en">
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${title}</title>
<style>
body { margin: 1rem auto; max-width: 1240px; padding: 0 1rem; font-family: system-ui, sans-serif; color: #000; background: #fff; }
svg { width: 100%; height: auto; }
pre { overflow-x: auto; font-size: 0.8rem; }
</style>
<body>
${bladePicture(view)}<pre>${escaped(bladeText(view))}</pre>
</body>
</html>
`;
}

interface TextStyle {
  size?: number;
  weight?: number;
  colour?: string;
  anchor?: 'start' | 'middle' | 'end';
}

export const px = (value: number): string => String(Math.round(10 * value) / 10);
/** To a tenth; what rounds to nothing has no sign. */
export const degrees = (angle: number): string => `${(Math.round((10 * angle) / DEGREE) / 10 + 0).toFixed(1)}°`;

/** Words; "v_t" and its like get their index set low. */
export function svgText(at: Point, words: string, style: TextStyle = {}): string {
  const { size = 14, weight = 400, colour = INK, anchor = 'start' } = style;
  const indexed = escaped(words).replace(
    /\b([A-Za-z])_([a-z])\b/g,
    '$1<tspan dy="3" font-size="75%">$2</tspan><tspan dy="-3">\u200b</tspan>',
  );
  return (
    `<text x="${px(at.x)}" y="${px(at.y)}" font-size="${size}" font-weight="${weight}" fill="${colour}" ` +
    `text-anchor="${anchor}">${indexed}</text>`
  );
}

function line(from: Point, to: Point, colour: string, width: number, dashes?: string): string {
  const dash = dashes === undefined ? '' : ` stroke-dasharray="${dashes}"`;
  return (
    `<line x1="${px(from.x)}" y1="${px(from.y)}" x2="${px(to.x)}" y2="${px(to.y)}" stroke="${colour}" ` +
    `stroke-width="${width}" stroke-linecap="round"${dash}/>`
  );
}

function arrow(from: Point, to: Point, colour: string, width: number): string {
  const length = Math.hypot(to.x - from.x, to.y - from.y);
  if (length < 1) return '';
  const head = Math.min(11, length / 2);
  const ux = (to.x - from.x) / length;
  const uy = (to.y - from.y) / length;
  const base = { x: to.x - head * ux, y: to.y - head * uy };
  const wing = 0.45 * head;
  const corners = [
    to,
    { x: base.x - wing * uy, y: base.y + wing * ux },
    { x: base.x + wing * uy, y: base.y - wing * ux },
  ];
  return (
    `<line x1="${px(from.x)}" y1="${px(from.y)}" x2="${px(base.x)}" y2="${px(base.y)}" stroke="${colour}" stroke-width="${width}"/>` +
    `<polygon points="${corners.map((p) => `${px(p.x)},${px(p.y)}`).join(' ')}" fill="${colour}"/>`
  );
}

/** From `from` to `to` about `centre`, angles in rad as they stand on the page, anticlockwise from the right. */
function arcPath(centre: Point, radius: number, from: number, to: number): { start: Point; path: string } {
  const at = (angle: number): Point => ({
    x: centre.x + radius * Math.cos(angle),
    y: centre.y - radius * Math.sin(angle),
  });
  const end = at(to);
  const large = Math.abs(to - from) > Math.PI ? 1 : 0;
  const sweep = to > from ? 0 : 1;
  return { start: at(from), path: `A${radius} ${radius} 0 ${large} ${sweep} ${px(end.x)} ${px(end.y)}` };
}

function arc(centre: Point, radius: number, from: number, to: number, colour: string, width: number): string {
  const { start, path } = arcPath(centre, radius, from, to);
  return `<path d="M${px(start.x)} ${px(start.y)} ${path}" fill="none" stroke="${colour}" stroke-width="${width}"/>`;
}

function sector(centre: Point, radius: number, from: number, to: number, colour: string): string {
  const { start, path } = arcPath(centre, radius, from, to);
  return (
    `<path d="M${px(centre.x)} ${px(centre.y)} L${px(start.x)} ${px(start.y)} ${path} Z" fill="${colour}" ` +
    `fill-opacity="0.45" stroke="${colour}" stroke-width="1"/>`
  );
}
