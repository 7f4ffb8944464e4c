/** The blades at an instant as one picture: triangles to scale, and angles of attack between the angles of stall. */

import { escaped } from '../scenarios/markup.ts';
import type { BladeInstant } from './blade-instant.ts';
import { instantText } from './blade-instant.ts';
import { degrees, INK, MARGIN, PANEL_WIDTH, type Panel, px, svgText, trianglePanel } from './blade-picture.ts';
import { CHART_STYLE, type ChartLine, chartPicture } from './chart-picture.ts';

const DEGREE = Math.PI / 180;
/** Stations of each blade whose triangles are drawn: five, from root to tip. */
const MOST_TRIANGLES = 5;
const HEAD = 84;
const BLADE_HEAD = 36;

/** Triangles of every blade in SVG, a row a blade. */
export function instantPicture(instant: BladeInstant): string {
  const drawn: string[] = [];
  let top = HEAD;
  let columns = 0;
  instant.blades.forEach((blade, b) => {
    const panels: Panel[] = evenly(blade.stations, MOST_TRIANGLES).map((station) =>
      trianglePanel(station, blade.pitch, instant.tipRadius),
    );
    columns = Math.max(columns, panels.length);
    const words = `Blade ${b + 1}: azimuth ${degrees(blade.azimuth)}, pitch ${degrees(blade.pitch)}`;
    drawn.push(svgText({ x: MARGIN, y: top + 18 }, words, { size: 17, weight: 600 }));
    top += BLADE_HEAD;
    panels.forEach((panel, i) => {
      drawn.push(`<g transform="translate(${px(MARGIN + i * PANEL_WIDTH)} ${px(top)})">${panel.svg}</g>`);
    });
    top += Math.max(...panels.map((panel) => panel.height)) + 20;
  });
  const width = 2 * MARGIN + columns * PANEL_WIDTH;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${px(width)} ${px(top)}" width="${px(width)}" height="${px(top)}" ` +
      'font-family="system-ui, sans-serif" font-size="14" role="img">',
    `<title>Velocity triangles of each blade</title>`,
    `<rect width="${px(width)}" height="${px(top)}" fill="#ffffff"/>`,
    svgText({ x: MARGIN, y: 34 }, `${instant.run} at ${instant.time} s: the air at each blade`, {
      size: 22,
      weight: 600,
    }),
    svgText(
      { x: MARGIN, y: 60 },
      'The air as the moving section meets it, speeds in m/s. The section moves to the left in the rotor plane (dashed); ' +
        'the wind blows up the page. Each triangle has its own scale, shown by its bar.',
      { colour: INK, size: 13 },
    ),
    ...drawn,
    '</svg>',
    '',
  ].join('\n');
}

/** Picture, angles of attack and table in one page. */
export function instantPage(instant: BladeInstant): string {
  const title = escaped(`${instant.run} at ${instant.time} s: the air at each blade`);
  return `<!doctype html>
<html lang="en">
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${title}</title>
<style>${CHART_STYLE}
body { margin: 1rem auto; max-width: 2040px; padding: 0 1rem; font-family: system-ui, sans-serif; color: var(--ink); background: var(--ground); }
body > svg { width: 100%; height: auto; }
.attack { max-width: 900px; }
pre { overflow-x: auto; font-size: 0.8rem; }
</style>
<body>
${instantPicture(instant)}
<div class="attack">${attackChart(instant)}</div>
<pre>${escaped(instantText(instant))}</pre>
</body>
</html>
`;
}

/** Angle of attack along each blade between the angles of stall. */
function attackChart({ blades }: BladeInstant): string {
  const [{ stations }] = blades;
  const lifting = stations.filter(({ stall }) => stall !== undefined);
  const limit = (label: string, side: 'positive' | 'negative'): ChartLine => ({
    label,
    x: lifting.map(({ radius }) => radius),
    y: lifting.map(({ stall }) => (stall?.[side] ?? Number.NaN) / DEGREE),
    dashed: true,
    colour: side === 'positive' ? 1 : 4,
  });
  return chartPicture({
    title: 'Angle of attack along the blades, and the angles of stall',
    x: { label: 'radius, m' },
    y: { label: 'angle of attack, deg' },
    lines: [
      ...blades.map(
        (blade, b): ChartLine => ({
          label: `blade ${b + 1}`,
          x: blade.stations.map(({ radius }) => radius),
          y: blade.stations.map(({ angleOfAttack }) => angleOfAttack / DEGREE),
          colour: [0, 2, 3][b],
        }),
      ),
      limit('stall, largest lift', 'positive'),
      limit('stall, most negative lift', 'negative'),
    ],
  });
}

/** `count` of the list, evenly from its first to its last. */
function evenly<T>(list: readonly T[], count: number): T[] {
  if (list.length <= count) return [...list];
  return Array.from({ length: count }, (_, i) => list[Math.round((i * (list.length - 1)) / (count - 1))]);
}
