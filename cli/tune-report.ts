/** The report on a tuned loop as one HTML page without a script. */
import { gainSchedule } from '../controllers/gain-schedule.ts';
import { escaped } from '../scenarios/markup.ts';
import type { ControllerData } from '../scenarios/scenario.ts';
import type { TrimPoint } from '../sim/trim.ts';
import { logarithm } from '../tuning/complex.ts';
import { CHART_STYLE, type Chart, type ChartLine, chartPicture } from './chart-picture.ts';
import { type LoopView, loopView, pitchLawOf } from './loop-view.ts';
import type { ScenarioSubject } from './tuning-subject.ts';

const DEGREE = Math.PI / 180;
const RPM = Math.PI / 30;

export interface Section {
  heading: string;
  /** Paragraphs of plain text. */
  text: readonly string[];
  table?: { head: readonly string[]; rows: readonly (readonly string[])[] };
  charts?: readonly Chart[];
}

/** A page of sections, charts two in a row; with a closing line where there is one to say. */
export function reportPage(title: string, sections: readonly Section[], closing = ''): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<link rel="icon" href="data:,">
<title>${escaped(title)}</title>
<style>${CHART_STYLE}
body { margin: 0 auto; max-width: 1400px; padding: 1rem 1.5rem 3rem; background: var(--ground); color: var(--ink);
  font: 16px/1.45 system-ui, sans-serif; }
h1 { font-size: 1.5rem; } h2 { font-size: 1.15rem; margin: 2rem 0 0.5rem; }
p { max-width: 75ch; margin: 0.4rem 0; }
.charts { display: grid; grid-template-columns: repeat(auto-fit, minmax(min(100%, 520px), 1fr)); gap: 0.8rem; margin-top: 0.8rem; }
.wide { overflow-x: auto; margin-top: 0.8rem; } summary { cursor: pointer; }
table { border-collapse: collapse; background: var(--sheet); margin-top: 0.8rem; font-variant-numeric: tabular-nums; }
th, td { padding: 0.25rem 0.7rem; border: 1px solid var(--grid); text-align: right; }
th { color: var(--faint); font-weight: 600; }
</style>
</head>
<body>
<h1>${escaped(title)}</h1>
${sections.map(sectionText).join('\n')}
<footer><p>${escaped(closing)}</p></footer>
</body>
</html>
`;
}

function sectionText({ heading, text, table, charts = [] }: Section): string {
  return [
    `<section><h2>${escaped(heading)}</h2>`,
    ...text.map((paragraph) => `<p>${escaped(paragraph)}</p>`),
    charts.length > 0 ? `<div class="charts">${charts.map(chartPicture).join('\n')}</div>` : '',
    table ? tableText(table) : '',
    '</section>',
  ].join('\n');
}

/** Opens at a click: the charts say it first. */
function tableText({ head, rows }: NonNullable<Section['table']>): string {
  const cells = (tag: 'th' | 'td', row: readonly string[]) =>
    `<tr>${row.map((cell) => `<${tag}>${escaped(cell)}</${tag}>`).join('')}</tr>`;
  const table = `<table>${cells('th', head)}${rows.map((row) => cells('td', row)).join('')}</table>`;
  return `<details class="wide"><summary>In numbers</summary>${table}</details>`;
}

/** Wind speeds drawn one by one. */
const DRAWN = 5;

/**
 * Bode, Nyquist, poles, step responses and margins of the tuned loop, beside the loop as it was.
 * @param peak the asked sensitivity peak, whose circle is drawn in Nyquist's plane
 */
export function loopSections(
  subject: ScenarioSubject,
  tuned: ControllerData,
  points: readonly TrimPoint[],
  peak: number,
): Section[] {
  const views = points.map((point) => loopView(subject, tuned, point));
  const before = points.flatMap((point) => {
    try {
      return [loopView(subject, subject.scenario.controller, point)];
    } catch {
      return [];
    }
  });
  const drawn = Array.from({ length: DRAWN }, (_, i) => views[Math.round((i * (views.length - 1)) / (DRAWN - 1))]);
  return [
    {
      heading: 'Margins over the wind range',
      text: [
        'The loop is cut at the pitch demand, the torque loop closed. Sampling, transport delay, sensors, filters and the drive are included exactly.',
      ],
      table: marginTable(views),
      charts: [
        againstWind(
          'Sensitivity peak',
          'peak of |1/(1 + L)|',
          views,
          before,
          ({ margins }) => 1 / margins.modulus.distance,
        ),
        againstWind('Bandwidth', 'rad/s', views, before, ({ margins }) => margins.bandwidth),
        againstWind('Phase margin', 'deg', views, before, ({ margins }) => margins.phase.angle / DEGREE),
        againstWind(
          'Pitch rate by sensor noise',
          'deg/s',
          views,
          before,
          ({ noiseRate }) => (noiseRate ?? Number.NaN) / DEGREE,
        ),
        againstWind('Gain margin', 'factor', views, before, ({ margins }) => margins.gain.factor),
      ],
    },
    {
      heading: 'The loop at single wind speeds',
      text: [
        'Bode’s diagrams and Nyquist’s curve of the tuned loop; the circle about −1 is the asked sensitivity peak.',
      ],
      charts: [
        bode(drawn, 'gain'),
        bode(drawn, 'phase'),
        nyquist(drawn, peak),
        poleMap(views),
        {
          title: 'Generator speed after a rise of the wind by 1 m/s, linear',
          x: { label: 'time, s' },
          y: { label: 'rpm above set-point' },
          lines: drawn.map(({ point, step }) => ({
            label: windLabel(point.windSpeed),
            x: step.time,
            y: step.speed.map((speed) => speed / RPM),
          })),
        },
        schedulePicture(tuned, points),
      ],
    },
  ];
}

function windLabel(windSpeed: number): string {
  return `${windSpeed.toFixed(1)} m/s`;
}

function againstWind(
  title: string,
  yLabel: string,
  tuned: readonly LoopView[],
  before: readonly LoopView[],
  value: (view: LoopView) => number,
): Chart {
  const line = (label: string, views: readonly LoopView[], dashed: boolean): ChartLine => ({
    label,
    x: views.map(({ point }) => point.windSpeed),
    y: views.map((view) => {
      const at = value(view);
      return Number.isFinite(at) ? at : Number.NaN;
    }),
    dashed,
  });
  const lines = [line('tuned', tuned, false), ...(before.length > 0 ? [line('as it was', before, true)] : [])];
  return { title, x: { label: 'wind speed, m/s' }, y: { label: yLabel }, lines };
}

function bode(views: readonly LoopView[], part: 'gain' | 'phase'): Chart {
  const lines = views.map(({ point, frequencies, gain }): ChartLine => {
    let turns = 0;
    let last = 0;
    const y = gain.map((value) => {
      const { re, im } = logarithm(value);
      if (part === 'gain') return Math.exp(re);
      turns += im - last > Math.PI ? -1 : im - last < -Math.PI ? 1 : 0;
      last = im;
      return im / DEGREE + 360 * turns;
    });
    return { label: windLabel(point.windSpeed), x: frequencies, y };
  });
  const isGain = part === 'gain';
  return {
    title: isGain ? 'Size of the loop’s gain' : 'Angle of the loop’s gain',
    x: { label: 'frequency, rad/s', logarithmic: true },
    y: { label: isGain ? '|L|' : 'deg', logarithmic: isGain },
    lines,
  };
}

function nyquist(views: readonly LoopView[], peak: number): Chart {
  const angles = Array.from({ length: 121 }, (_, i) => (2 * Math.PI * i) / 120);
  const circle: ChartLine = {
    label: `sensitivity peak ${peak}`,
    x: angles.map((angle) => -1 + Math.cos(angle) / peak),
    y: angles.map((angle) => Math.sin(angle) / peak),
    dashed: true,
    colour: 5,
  };
  const curves = views.map(({ point, gain }): ChartLine => {
    return { label: windLabel(point.windSpeed), x: gain.map(({ re }) => re), y: gain.map(({ im }) => im) };
  });
  const edge: ChartLine = { label: 'the edge, −1', x: [-1], y: [0], points: true, colour: 5 };
  return {
    title: 'Nyquist’s curve',
    x: { label: 'Re L', range: [-2.2, 0.6] },
    y: { label: 'Im L', range: [-1.6, 0.8] },
    equal: true,
    lines: [...curves, circle, edge],
  };
}

/** Poles up to a few times the tower's frequency, coloured in five bands of wind speed. */
function poleMap(views: readonly LoopView[]): Chart {
  const size = Math.ceil(views.length / DRAWN);
  const bands = Array.from({ length: Math.ceil(views.length / size) }, (_, i) => views.slice(i * size, (i + 1) * size));
  return {
    title: 'Poles of the closed loop against wind',
    x: { label: 'real part, 1/s', range: [-3, 0.2] },
    y: { label: 'imaginary part, rad/s', range: [-0.1, 3] },
    lines: bands.map((band) => {
      const poles = band.flatMap(({ modes }) => modes.map(({ pole }) => pole));
      return {
        label: `${band[0].point.windSpeed.toFixed(1)} to ${band[band.length - 1].point.windSpeed.toFixed(1)} m/s`,
        x: poles.map(({ re }) => re),
        y: poles.map(({ im }) => im),
        points: true,
      };
    }),
  };
}

function schedulePicture(tuned: ControllerData, points: readonly TrimPoint[]): Chart {
  const law = pitchLawOf(tuned);
  const factor = law ? gainSchedule(law.schedule) : () => 1;
  const gain = law ? law.proportional : 1;
  const last = points[points.length - 1].pitch;
  const pitch = Array.from({ length: 120 }, (_, i) => (last * i) / 119);
  return {
    title: 'Schedule: proportional gain against pitch',
    x: { label: 'pitch, deg' },
    y: { label: 's' },
    lines: [
      { label: 'as scheduled', x: pitch.map((angle) => angle / DEGREE), y: pitch.map((angle) => gain * factor(angle)) },
    ],
  };
}

function marginTable(views: readonly LoopView[]): Section['table'] {
  const number = (value: number, digits: number) => (Number.isFinite(value) ? value.toFixed(digits) : 'any');
  return {
    head: [
      'wind, m/s',
      'pitch, deg',
      'gain',
      'phase, deg',
      'delay, s',
      'sensitivity peak',
      'bandwidth, rad/s',
      'least damping',
    ],
    rows: views.map(({ point, margins, least }) => [
      number(point.windSpeed, 1),
      number(point.pitch / DEGREE, 2),
      number(margins.gain.factor, 2),
      number(margins.phase.angle / DEGREE, 1),
      number(margins.delay.time, 3),
      number(1 / margins.modulus.distance, 2),
      number(margins.bandwidth, 2),
      least ? number(least.damping, 4) : '',
    ]),
  };
}
