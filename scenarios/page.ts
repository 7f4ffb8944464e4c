/** Puts results and the built viewer together into one HTML file that needs nothing else. Runs in a browser and in Node. */
import { escaped } from './markup.ts';
import { type Column, type PackedColumn, packColumns } from './packed-column.ts';
import { CAUTION, type Summary } from './summary.ts';

/** The built viewer: `page.js` and `page.css` of `dist/web-viewer`, as text. */
export interface PageTemplate {
  script: string;
  style: string;
}

/** One run to show. `name` is short and tells runs of the same scenario apart, e.g. the results folder's name. */
export interface ViewedRun {
  name: string;
  summary: Summary;
  /** `time_s` and any of the channels of sim/channels.ts, in the units that their names say. */
  columns: readonly Column[];
  /** The air at the blades, as `section-recorder.ts` makes it; absent where the rotor does not resolve its sections. */
  sections?: { stations: readonly Column[]; columns: readonly Column[] };
  /** What the result lacks, a sentence each; shown with the run. */
  missing?: readonly string[];
}

export interface View {
  title: string;
  runs: readonly ViewedRun[];
}

/** A page of plots that are not against time, e.g. trim over the wind range. Panels with the same x label share their x axis. */
export interface Figure {
  title: string;
  note: string;
  panels: readonly FigurePanel[];
}

export interface FigurePanel {
  title: string;
  x: { label: string; values: ArrayLike<number> };
  /** Each line has as many values as `x`; NaN leaves a gap. */
  lines: readonly { label: string; values: ArrayLike<number> }[];
  /** What is plotted, with its unit. */
  yLabel: string;
  /** Whether the panel concerns trips, stops or brakes: then the page carries the caution line. */
  caution?: boolean;
}

/** What the page finds in itself when it opens. */
export type PageData =
  | {
      kind: 'runs';
      title: string;
      runs: {
        name: string;
        summary: Summary;
        columns: PackedColumn[];
        sections: { stations: PackedColumn[]; columns: PackedColumn[] } | null;
        missing: string[];
      }[];
    }
  | {
      kind: 'figure';
      title: string;
      note: string;
      caution: string | null;
      panels: {
        title: string;
        yLabel: string;
        x: { label: string; values: (number | null)[] };
        lines: { label: string; values: (number | null)[] }[];
      }[];
    };

export const PAGE_DATA_ID = 'page-data';

/** The HTML text of the view of one or several runs. */
export function assemblePage(template: PageTemplate, view: View): string {
  return html(template, {
    kind: 'runs',
    title: view.title,
    runs: view.runs.map(({ name, summary, columns, sections, missing = [] }) => ({
      name,
      summary,
      columns: packColumns(columns),
      sections: sections ? { stations: packColumns(sections.stations), columns: packColumns(sections.columns) } : null,
      missing: [...missing],
    })),
  });
}

/** The HTML text of a figure. Throws where a line has another number of values than its x. */
export function assembleFigure(template: PageTemplate, figure: Figure): string {
  for (const panel of figure.panels) {
    for (const line of panel.lines) {
      if (line.values.length !== panel.x.values.length) {
        throw new RangeError(
          `panel "${panel.title}": line "${line.label}" has ${line.values.length} values against ${panel.x.values.length} of "${panel.x.label}"`,
        );
      }
    }
  }
  return html(template, {
    kind: 'figure',
    title: figure.title,
    note: figure.note,
    caution: figure.panels.some((panel) => panel.caution) ? CAUTION : null,
    panels: figure.panels.map(({ title, yLabel, x, lines }) => ({
      title,
      yLabel,
      x: { label: x.label, values: Array.from(x.values) },
      lines: lines.map(({ label, values }) => ({ label, values: Array.from(values) })),
    })),
  });
}

/** The policy forbids the page every request: what it shows is what the file holds. */
const POLICY = "default-src 'none'; script-src 'unsafe-inline'; style-src 'unsafe-inline'; img-src data:";

function html(template: PageTemplate, data: PageData): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${POLICY}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<link rel="icon" href="data:,">
<title>${escaped(data.title)}</title>
<style>${template.style.replaceAll('</', '<\\/')}</style>
</head>
<body>
<noscript>This page draws its plots with the script that it carries; please allow scripts for this file.</noscript>
<script type="application/json" id="${PAGE_DATA_ID}">${escapeJson(JSON.stringify(data))}</script>
<script>${escapeScript(template.script)}</script>
</body>
</html>
`;
}

/** JSON in which nothing can end the script element or, read as a script, a string. */
function escapeJson(json: string): string {
  return json.replace(
    /[<>&\u2028\u2029]/g,
    (character) => `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`,
  );
}

/** Our own bundle, kept from ending its element early: both sequences can only stand inside its strings. */
function escapeScript(script: string): string {
  return script.replace(/<\/(?=script)/gi, '<\\/').replaceAll('<!--', '<\\!--');
}
