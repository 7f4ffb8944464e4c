/** A wind on one HTML page that needs nothing else: the disc in motion, curves, statistics. */

import { escaped } from '../scenarios/markup.ts';
import { CHART_STYLE, type Chart, type ChartAxis, type ChartLine, chartPicture } from './chart-picture.ts';
import { type DiscData, moveDisc } from './wind-disc.ts';
import type { TurbulenceStudy, WindStudy } from './wind-study.ts';
import { headline, scaling } from './wind-text.ts';

const DEGREE = Math.PI / 180;
/** How long before its first mark the disc starts to move, s. */
const LEAD = 3;

/** The policy forbids the page every request: what it shows is what the file holds. */
const POLICY = "default-src 'none'; script-src 'unsafe-inline'; style-src 'unsafe-inline'; img-src data:";

const STYLE = `${CHART_STYLE}
:root { --accent: #00548a; }
@media (prefers-color-scheme: dark) { :root { --accent: #7cc4f2; } }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 1500px; padding: 0 clamp(10px, 2.5vw, 36px) 2rem; background: var(--ground);
  color: var(--ink); font: 15px/1.45 system-ui, sans-serif; overflow-wrap: anywhere; }
h1 { font-size: 1.5rem; line-height: 1.2; margin: 1rem 0 .2rem; }
h2 { font-size: 1.2rem; margin: 1.8rem 0 .6rem; padding-bottom: .2rem; border-bottom: 2px solid var(--grid); }
h3 { font-size: 1rem; margin: 0; }
p { margin: .2rem 0; max-width: 90ch; }
.faint { color: var(--faint); }
.motion { display: grid; gap: 18px 28px; grid-template-columns: minmax(0, 1fr); margin-top: 1rem; }
.plots { display: grid; gap: 18px 28px; grid-template-columns: repeat(auto-fill, minmax(min(100%, 480px), 1fr)); }
@media (min-width: 900px) { .motion { grid-template-columns: minmax(320px, 5fr) 8fr; } }
canvas { display: block; width: 100%; max-width: 470px; height: auto; margin: 0 auto; }
.controls { display: flex; flex-wrap: wrap; gap: 8px 12px; align-items: center; margin: .5rem 0; }
.controls input { flex: 1 1 160px; accent-color: var(--accent); }
button, select { font: inherit; color: var(--ink); background: var(--sheet); border: 1px solid var(--faint);
  border-radius: 4px; min-height: 32px; padding: 2px 12px; cursor: pointer; }
:focus-visible { outline: 3px solid var(--accent); outline-offset: 1px; }
#reading { min-height: 3em; font-variant-numeric: tabular-nums; }
.scale { display: grid; grid-template-columns: 1fr 1fr 1fr; font-size: 12px; }
.scale i { grid-column: 1 / -1; height: 11px; border-radius: 3px; background: linear-gradient(90deg, #0072b2, #f8f8f8, #d55e00); }
.scale span:nth-of-type(2) { text-align: center; } .scale span:nth-of-type(3) { text-align: right; }
#time-chart { cursor: pointer; }
table { border-collapse: collapse; font-variant-numeric: tabular-nums; }
.wide { overflow-x: auto; }
th, td { padding: 3px 14px 3px 0; text-align: right; white-space: nowrap; border-bottom: 1px solid var(--grid); }
th:first-child, td:first-child { text-align: left; }
@media print { .controls { display: none; } }
`;

export function windPage(study: WindStudy): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${POLICY}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<link rel="icon" href="data:,">
<title>${escaped(study.title)}</title>
<style>${STYLE}</style>
</head>
<body>
<h1>${escaped(study.title)}</h1>
<p class="faint">${escaped(headline(study).slice(study.title.length + 2))}</p>
${motion(study)}
<h2>Statistics</h2>
${statistics(study)}
<h2>${study.turbulence.length > 0 ? 'Height, spectra and coherence' : 'Height'}</h2>
${study.turbulence
  .filter(({ turbulence }) => turbulence.variance === 'exact')
  .map(({ spectra }) => `<p class="faint">${scaling(spectra)}</p>`)
  .join('')}
<div class="plots">
${[profileChart(study), ...study.turbulence.flatMap((t, i) => turbulenceCharts(t, study.turbulence.length > 1 ? ` (${i + 1})` : ''))].map(chartPicture).join('\n')}
</div>
<script>(${moveDisc.toString()})(${JSON.stringify(discData(study)).replaceAll('<', '\\u003c')})</script>
</body>
</html>
`;
}

function motion(study: WindStudy): string {
  const { middle, reach } = scaleOf(study);
  const ends = [middle - reach, middle, middle + reach].map((speed) => `<span>${speed.toFixed(1)} m/s</span>`);
  return `<div class="motion">
<section aria-label="The rotor disc">
<h3>On the rotor, looking downwind</h3>
<canvas id="disc" width="700" height="700" role="img" aria-label="Wind speed over the rotor disc"></canvas>
<div class="scale faint"><i></i>${ends.join('')}</div>
<div class="controls"><button id="play" type="button">Play</button>
<label>pace <select id="pace"><option value="1">1×</option><option value="4">4×</option><option value="15">15×</option></select></label>
<input id="instant" type="range" min="0" max="${study.duration}" step="0.1" aria-label="Instant"></div>
<p id="reading" class="faint" aria-live="off"></p>
</section>
<section>
${timeCharts(study).map(chartPicture).join('\n')}
${study.marks.length > 0 ? `<ul class="faint">${study.marks.map(({ time, text }) => `<li>${time.toFixed(1)} s: ${escaped(text)}</li>`).join('')}</ul>` : ''}
</section>
</div>`;
}

/** Colours about the run's mean, to the farther end of what the disc sees. */
function scaleOf({ statistics: [hub], disc }: WindStudy): {
  middle: number;
  reach: number;
  lowest: number;
  highest: number;
} {
  const { lowest, highest } = extentOf(disc.values);
  const middle = hub?.mean ?? 0;
  return { middle, reach: Math.max(highest - middle, middle - lowest, 0.5), lowest, highest };
}

function extentOf(...series: ArrayLike<number>[]): { lowest: number; highest: number } {
  let lowest = Number.POSITIVE_INFINITY;
  let highest = Number.NEGATIVE_INFINITY;
  for (const values of series) {
    for (let i = 0; i < values.length; i++) {
      lowest = Math.min(lowest, values[i]);
      highest = Math.max(highest, values[i]);
    }
  }
  return { lowest, highest };
}

/** From the lowest to the highest with some air. */
function roomFor(label: string, ...series: ArrayLike<number>[]): ChartAxis {
  const { lowest, highest } = extentOf(...series);
  const air = Math.max(0.06 * (highest - lowest), 0.02 * Math.abs(highest), 0.1);
  return { label, range: [lowest - air, highest + air] };
}

function timeCharts({ series, duration, marks }: WindStudy): Chart[] {
  const { time, along, across, up, rotorMean, withoutTurbulence, direction } = series;
  const x: ChartAxis = { label: 'Time, s', range: [0, duration] };
  const instants = marks.map((mark) => mark.time);
  const calm: ChartLine[] = withoutTurbulence
    ? [{ label: 'hub without turbulence', x: time, y: withoutTurbulence, colour: 'ink', dashed: true, width: 1.2 }]
    : [];
  const charts: Chart[] = [
    {
      id: 'time-chart',
      title: 'Along the axis',
      x,
      y: roomFor('m/s', along, rotorMean),
      marks: instants,
      lines: [
        { label: 'hub', x: time, y: along, colour: 0, width: 1 },
        { label: 'mean over the rotor', x: time, y: rotorMean, colour: 1, width: 1.8 },
        ...calm,
      ],
      width: 860,
      height: 330,
    },
  ];
  if (extentOf(across, up).highest > 0 || extentOf(across, up).lowest < 0) {
    charts.push({
      title: 'Across and up, at the hub',
      x,
      y: roomFor('m/s', across, up),
      marks: instants,
      lines: [
        { label: 'across, to the left', x: time, y: across, colour: 2, width: 1 },
        { label: 'up', x: time, y: up, colour: 3, width: 1 },
      ],
      width: 860,
      height: 220,
    });
  }
  if (direction) {
    const degrees = direction.map((angle) => angle / DEGREE);
    charts.push({
      title: 'Turned to the left, looking downwind',
      x,
      y: roomFor('deg', degrees),
      marks: instants,
      lines: [{ x: time, y: degrees, colour: 2 }],
      width: 860,
      height: 200,
    });
  }
  return charts;
}

function profileChart({ profile: { height, mean, lowest, highest } }: WindStudy): Chart {
  return {
    title: 'Along the axis over height',
    x: roomFor('m/s', lowest, highest),
    y: { label: 'Height above ground, m', range: [height[0], height[height.length - 1]] },
    lines: [
      { label: 'mean', x: mean, y: height, colour: 0, width: 2.2 },
      { label: 'lowest and highest', x: lowest, y: height, colour: 1, dashed: true },
      { label: 'lowest and highest', x: highest, y: height, colour: 1, dashed: true },
    ],
  };
}

function turbulenceCharts({ spectra, rotor, coherence, turbulence }: TurbulenceStudy, number: string): Chart[] {
  const colours = [0, 2, 3];
  const frequencies = extentOf(spectra[0].frequency);
  const x: ChartAxis = {
    label: 'Frequency, Hz',
    logarithmic: true,
    range: [frequencies.lowest / 1.2, frequencies.highest * 1.1],
  };
  const density = (...series: ArrayLike<number>[]): ChartAxis => {
    const { lowest, highest } = extentOf(...series);
    return {
      label: 'Power density, m²/s² per Hz',
      logarithmic: true,
      range: [Math.max(lowest, 1e-7 * highest) / 1.6, highest * 1.6],
    };
  };
  const target = spectra.map(
    (s): ChartLine => ({ label: 'due (Kaimal)', x: s.frequency, y: s.target, colour: 'ink', dashed: true, width: 1.2 }),
  );
  return [
    {
      title: `Spectra at the hub${number}`,
      x,
      y: density(...spectra.flatMap((s) => [s.density, s.low, s.high])),
      lines: [
        ...target,
        ...spectra.map(
          (s, i): ChartLine => ({ label: s.what, x: s.frequency, y: s.density, colour: colours[i], points: true }),
        ),
      ],
      bands: spectra.map((s, i) => ({
        label: `95 % band ${s.what}`,
        x: s.frequency,
        low: s.low,
        high: s.high,
        colour: colours[i],
      })),
    },
    {
      title: `Spectrum of the rotor's mean${number}`,
      x,
      y: density(rotor.density, spectra[0].target),
      lines: [
        { label: 'mean over the rotor', x: rotor.frequency, y: rotor.density, colour: 1, width: 2 },
        { label: 'hub', x: spectra[0].frequency, y: spectra[0].density, colour: 0, width: 1.2 },
      ],
    },
    ...coherence.map(
      (c): Chart => ({
        title: `Coherence of hub and a point ${Number(c.distance.toFixed(1))} m away${number}`,
        x: { label: 'Frequency, Hz', range: [0, 1.05 * c.frequency[c.frequency.length - 1]] },
        y: { label: `Along the axis, at ${turbulence.meanWind} m/s`, range: [0, 1] },
        lines: [
          { label: 'due', x: c.frequency, y: c.target, colour: 'ink', dashed: true, width: 1.2 },
          { label: 'estimate', x: c.frequency, y: c.coherence, colour: 0, points: true },
        ],
        bands: [{ label: '95 % band', x: c.frequency, low: c.low, high: c.high, colour: 0 }],
      }),
    ),
  ];
}

function statistics({ statistics: rows }: WindStudy): string {
  const cells = rows.map(({ what, mean, deviation, due, lowest, highest }) => {
    const numbers = [mean, deviation, due, lowest, highest].map(
      (value) => `<td>${value === undefined ? '' : shown(value)}</td>`,
    );
    return `<tr><td>${what}</td>${numbers.join('')}</tr>`;
  });
  const head = ['m/s', 'mean', 'deviation', 'due', 'lowest', 'highest'].map((name) => `<th>${name}</th>`);
  return `<div class="wide"><table><thead><tr>${head.join('')}</tr></thead><tbody>${cells.join('')}</tbody></table></div>`;
}

function shown(value: number): string {
  return value
    .toFixed(3)
    .replace(/^-(0\.0+)$/, '$1')
    .replace('-', '−');
}

function discData(study: WindStudy): DiscData {
  const { disc, series, duration, marks, rotorSpeed, bladeCount } = study;
  const { middle, reach, lowest, highest } = scaleOf(study);
  const perStep = 255 / Math.max(highest - lowest, 1e-9);
  const cells = Uint8Array.from(disc.values, (value) => Math.round((value - lowest) * perStep));
  const atFrames = (values: Float64Array, digits: number) =>
    Array.from({ length: disc.frames }, (_, frame) => {
      const index = Math.min(values.length - 1, Math.round((frame / disc.rate / duration) * (values.length - 1)));
      return Number(values[index].toFixed(digits));
    });
  const { rings, spokes, rate, frames } = disc;
  return {
    rings,
    spokes,
    rate,
    frames,
    cells: Buffer.from(cells).toString('base64'),
    lowest,
    highest,
    middle,
    reach,
    rotorSpeed,
    bladeCount,
    duration,
    start: Math.min(duration, Math.max(0, (marks[0]?.time ?? 0) - LEAD)),
    hub: atFrames(series.along, 2),
    rotorMean: atFrames(series.rotorMean, 2),
    direction: series.direction
      ? atFrames(
          series.direction.map((angle) => angle / DEGREE),
          1,
        )
      : null,
  };
}
