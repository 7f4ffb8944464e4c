/** Reads a run's results folder back: `summary.json` whole, `channels.csv` as far as it goes. */
import { readdir, readFile } from 'node:fs/promises';
import { basename, join, resolve } from 'node:path';
import { parse } from 'csv-parse/sync';
import { z } from 'zod';
import { OPERATING_STATES } from '../controllers/contract.ts';
import { InputError } from './input-error.ts';
import type { Column } from './packed-column.ts';
import type { ViewedRun } from './page.ts';
import { CHANNELS_CSV_FILE, SUMMARY_FILE } from './results.ts';
import { storedSectionTables } from './stored-sections.ts';
import { SUMMARY_FORMAT, type Summary } from './summary.ts';

const TIME = 'time_s';

/**
 * The run in `folder`, named after the folder. What `channels.csv` lacks (the file, its end, single numbers) is told in
 * `missing` and the rest is kept. Throws `InputError` where there is no readable summary, or where
 * `channels.csv` holds something that is not a table of numbers over a rising time.
 */
export async function readStoredResult(folder: string): Promise<ViewedRun> {
  const summary = await readSummary(folder);
  const { columns, missing } = await readChannels(join(folder, CHANNELS_CSV_FILE));
  const end = columns[0]?.values[(columns[0]?.values.length ?? 0) - 1];
  if (end !== undefined && summary.scenario.duration - end > 2 / summary.recordRate) {
    missing.push(`${CHANNELS_CSV_FILE} ends at ${end} s of ${summary.scenario.duration} s.`);
  }
  const sections = await storedSectionTables(folder);
  return { name: basename(resolve(folder)), summary, columns, ...(sections && { sections }), missing };
}

const verdict = z.enum(['holds', 'broken', 'no limits']);

const summarySchema = z.object({
  format: z.literal(SUMMARY_FORMAT),
  scenario: z.object({
    name: z.string(),
    title: z.string(),
    story: z.string(),
    turbine: z.string(),
    controller: z.string(),
    protection: z.string(),
    duration: z.number(),
  }),
  verdict,
  expected: z.object({ verdict: z.enum(['holds', 'broken']), because: z.string().optional() }),
  asExpected: z.boolean(),
  limits: z.array(
    z.object({
      text: z.string(),
      channel: z.string(),
      statistic: z.string(),
      relation: z.enum(['below', 'above']),
      bound: z.number(),
      value: z.number().nullable(),
      unit: z.string(),
      holds: z.boolean(),
      margin: z.number().nullable(),
    }),
  ),
  metrics: z.array(
    z.object({
      name: z.string(),
      label: z.string(),
      group: z.enum(['speed', 'pitch', 'power', 'loads', 'stop', 'account']),
      value: z.number().nullable(),
      unit: z.string(),
    }),
  ),
  events: z.array(
    z.object({
      time: z.number(),
      kind: z.enum(['wind', 'fault', 'order', 'guard', 'stop', 'state', 'brake', 'standstill']),
      text: z.string(),
    }),
  ),
  states: z.array(z.object({ state: z.enum(OPERATING_STATES), from: z.number(), to: z.number() })),
  levels: z.array(z.object({ kind: z.enum(['rated', 'trip', 'never exceed']), text: z.string(), rpm: z.number() })),
  channels: z.array(z.object({ name: z.string(), label: z.string(), unit: z.string() })),
  recordRate: z.number(),
  provenance: z.object({
    version: z.string(),
    inputs: z.array(z.object({ path: z.string(), sha256: z.string() })),
    overrides: z.array(z.string()),
    seed: z.number(),
    rotorModel: z.enum(['surface', 'blade element']),
    integrator: z.string(),
    relativeTolerance: z.number().nullable(),
    steps: z.number(),
    evaluations: z.number(),
  }),
  caution: z.string(),
}) satisfies z.ZodType<Summary>;

async function readSummary(folder: string): Promise<Summary> {
  const file = join(folder, SUMMARY_FILE);
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch (cause) {
    throw unusable(folder, await absence(folder, cause));
  }
  let data: unknown;
  try {
    data = JSON.parse(text);
  } catch (cause) {
    throw unusable(file, `cut short or not JSON (${(cause as Error).message})`);
  }
  const format = z.object({ format: z.string() }).safeParse(data);
  if (!format.success) throw unusable(file, 'not a summary of a run: it names no format');
  if (format.data.format !== SUMMARY_FORMAT) {
    throw unusable(
      file,
      `its format is "${format.data.format}", this version reads "${SUMMARY_FORMAT}"; run the scenario again`,
    );
  }
  const summary = summarySchema.safeParse(data);
  if (!summary.success) {
    const [issue] = summary.error.issues;
    throw unusable(file, `${issue?.path.join('.')}: ${issue?.message}`);
  }
  return summary.data;
}

/** Why there is no summary to read, and what to name instead. */
async function absence(folder: string, cause: unknown): Promise<string> {
  let entries: string[];
  try {
    entries = (await readdir(folder, { recursive: true })).filter((entry) => basename(entry) === SUMMARY_FILE);
  } catch {
    return 'no such results folder';
  }
  const [first] = entries.sort();
  if (first === undefined) {
    return `holds no ${SUMMARY_FILE}, so it is not a results folder (${(cause as Error).message})`;
  }
  return `holds no ${SUMMARY_FILE} itself; name the runs inside it, e.g. ${join(folder, first, '..')}`;
}

/** A place without a line means the whole file. */
function unusable(file: string, message: string, line = 0, column = line === 0 ? 0 : 1): InputError {
  return new InputError([{ file, line, column, message }]);
}

interface Channels {
  columns: Column[];
  missing: string[];
}

async function readChannels(file: string): Promise<Channels> {
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch (cause) {
    if ((cause as NodeJS.ErrnoException).code !== 'ENOENT') {
      throw unusable(file, `cannot be read (${(cause as Error).message})`);
    }
    return { columns: [], missing: [`${CHANNELS_CSV_FILE} is missing, so there are no plots of this run.`] };
  }
  let rows: string[][];
  try {
    rows = parse(text, { bom: true, relax_column_count: true, skip_empty_lines: true });
  } catch (cause) {
    throw unusable(file, (cause as Error).message);
  }
  return columnsOf(file, rows);
}

function columnsOf(file: string, rows: string[][]): Channels {
  const [names = [], ...body] = rows;
  if (names[0] !== TIME) {
    throw unusable(file, `the first column is "${names[0] ?? ''}", it should be "${TIME}"`, 1);
  }
  const missing: string[] = [];
  const cut = body.findIndex((row) => row.length !== names.length);
  if (cut >= 0 && cut < body.length - 1) {
    throw unusable(file, `${body[cut]?.length} values against ${names.length} columns`, cut + 2);
  }
  const whole = cut < 0 ? body : body.slice(0, cut);
  if (whole.length === 0) missing.push(`${CHANNELS_CSV_FILE} holds no samples, so there are no plots of this run.`);
  else if (cut >= 0) missing.push(`${CHANNELS_CSV_FILE} is cut short in line ${cut + 2}.`);
  const columns: Column[] = [];
  names.forEach((name, index) => {
    const { values, gaps, firstGap } = numbers(file, name, index, whole);
    const empty = gaps > 0 && gaps === whole.length;
    if (empty) missing.push(`${name} holds no numbers.`);
    else if (gaps > 0) missing.push(`${name} has gaps: no number in ${gaps} samples, first in line ${firstGap}.`);
    if (!empty) columns.push({ name, values });
  });
  checkRising(file, columns[0]?.values ?? new Float64Array());
  return { columns, missing };
}

function numbers(file: string, name: string, index: number, rows: readonly string[][]) {
  const values = new Float64Array(rows.length);
  let gaps = 0;
  let firstGap = 0;
  rows.forEach((row, at) => {
    const cell = (row[index] ?? '').trim();
    const value = cell === '' ? Number.NaN : Number(cell);
    if (Number.isNaN(value) && cell !== '' && cell.toLowerCase() !== 'nan') {
      const column = row.slice(0, index).join().length + (index > 0 ? 2 : 1);
      throw unusable(file, `${name}: "${cell}" is not a number`, at + 2, column);
    }
    values[at] = Number.isFinite(value) ? value : Number.NaN;
    if (Number.isFinite(value)) return;
    gaps += 1;
    firstGap ||= at + 2;
  });
  return { values, gaps, firstGap };
}

function checkRising(file: string, time: ArrayLike<number>): void {
  for (let at = 0; at < time.length; at += 1) {
    const previous = at === 0 ? Number.NEGATIVE_INFINITY : (time[at - 1] ?? Number.NaN);
    const now = time[at] ?? Number.NaN;
    if (!(now > previous)) {
      throw unusable(file, `the time ${now} s does not follow ${previous} s`, at + 2);
    }
  }
}
