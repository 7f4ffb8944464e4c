/** Writes the results folder of a run: `summary.json`, `channels.csv`, `channels.parquet`, and the air at the blades. Node only. */
import { randomUUID } from 'node:crypto';
import { mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { parquetWriteBuffer } from 'hyparquet-writer';
import { faultText, makeFolders } from './file-fault.ts';
import type { SectionRecording } from './section-recorder.ts';
import { SUMMARY_FORMAT, type Summary } from './summary.ts';

export const SUMMARY_FILE = 'summary.json';
export const CHANNELS_CSV_FILE = 'channels.csv';
export const CHANNELS_PARQUET_FILE = 'channels.parquet';
/** Of a run with the blade-element rotor: the air at stations of every blade, and what stands at the stations. */
export const SECTIONS_FILE = 'sections.csv';
export const STATIONS_FILE = 'stations.csv';
const RESULT_FILES: readonly string[] = [
  SUMMARY_FILE,
  CHANNELS_CSV_FILE,
  CHANNELS_PARQUET_FILE,
  SECTIONS_FILE,
  STATIONS_FILE,
];

/** A column of the result, `time_s` first; all of one length. NaN where a channel has no value. */
export interface ResultColumn {
  readonly name: string;
  readonly values: Float64Array;
}

export interface Result {
  readonly summary: Summary;
  readonly columns: readonly ResultColumn[];
  readonly sections?: SectionRecording;
}

/** A results folder that cannot be written, in one sentence for the user. Commands end with exit code 2. */
export class OutputError extends Error {
  override readonly name = 'OutputError';
  readonly folder: string;

  constructor(folder: string, reason: string, cause?: unknown) {
    super(`results cannot be written to ${folder}: ${reason}`, { cause });
    this.folder = folder;
  }
}

/**
 * Writes a result into `folder`, whole or not at all: into a new folder beside it that then takes its name. Makes the
 * folders above it. Replaces an earlier result and leaves other files in its folder alone.
 * The same result gives the same bytes.
 * @throws OutputError when the place is taken by something else or the file system refuses; no part of the result is left behind then.
 */
export function writeResult(folder: string, result: Result): void {
  const place = resolve(folder);
  const draft = join(dirname(place), `.${basename(place)}-${randomUUID()}`);
  try {
    refuseTakenPlace(folder, place);
    makeFolders(dirname(draft));
    mkdirSync(draft);
    writeDurably(join(draft, SUMMARY_FILE), summaryText(result.summary));
    writeDurably(join(draft, CHANNELS_CSV_FILE), csvText(result.columns));
    writeDurably(join(draft, CHANNELS_PARQUET_FILE), parquetBytes(result.columns));
    if (result.sections) {
      writeDurably(join(draft, SECTIONS_FILE), csvText(result.sections.columns, SECTION_DIGITS));
      writeDurably(join(draft, STATIONS_FILE), csvText(result.sections.stations, SECTION_DIGITS));
    }
    moveIntoPlace(draft, place);
  } catch (cause) {
    discard(draft);
    throw cause instanceof OutputError ? cause : new OutputError(folder, faultText(cause), cause);
  }
}

/** JSON with two spaces a level and keys in the order of the summary's making. */
export function summaryText(summary: Summary): string {
  return `${JSON.stringify(summary, null, 2)}\n`;
}

/** Enough for a picture of the air at a section. */
const SECTION_DIGITS = 6;

/** A header line, then a line a row; so many significant digits, shortest form, nothing where there is no value. */
export function csvText(columns: readonly ResultColumn[], digits = 9): string {
  const rows = columns[0]?.values.length ?? 0;
  const lines = [columns.map(({ name }) => name).join(',')];
  for (let row = 0; row < rows; row++) {
    let line = shortest(columns[0].values[row], digits);
    for (let column = 1; column < columns.length; column++) line += `,${shortest(columns[column].values[row], digits)}`;
    lines.push(line);
  }
  lines.push('');
  return lines.join('\n');
}

function shortest(value: number, digits: number): string {
  return Number.isFinite(value) ? String(Number(value.toPrecision(digits))) : '';
}

/** The columns as a Parquet file. */
export function parquetBytes(columns: readonly ResultColumn[]): Uint8Array {
  const columnData = columns.map(({ name, values }) => ({
    name,
    data: values,
    type: 'DOUBLE' as const,
    nullable: false,
  }));
  return new Uint8Array(parquetWriteBuffer({ columnData, createdBy: 'galehold' }));
}

/** Waits until the bytes are on the disk, so that a full disk is noticed before the folder takes its name. */
function writeDurably(file: string, content: string | Uint8Array): void {
  writeFileSync(file, content, { flush: true });
}

/** Removes a draft as far as the file system lets it: the reason why it failed is what the user should hear. */
function discard(draft: string): void {
  try {
    rmSync(draft, { recursive: true, force: true });
  } catch {}
}

function refuseTakenPlace(folder: string, place: string): void {
  const taken = statSync(place, { throwIfNoEntry: false });
  if (taken === undefined) return;
  if (!taken.isDirectory()) throw new OutputError(folder, 'a file of that name is in the way');
  if (readdirSync(place).length > 0 && !holdsResult(place)) {
    throw new OutputError(
      folder,
      'the folder holds other things than an earlier result; name a new or an empty folder, or remove it yourself',
    );
  }
}

function holdsResult(place: string): boolean {
  try {
    const summary: unknown = JSON.parse(readFileSync(join(place, SUMMARY_FILE), 'utf8'));
    return typeof summary === 'object' && summary !== null && 'format' in summary && summary.format === SUMMARY_FORMAT;
  } catch {
    return false;
  }
}

/** Sets an earlier result aside, and brings it back where the new one cannot take its place. */
function moveIntoPlace(draft: string, place: string): void {
  if (statSync(place, { throwIfNoEntry: false }) === undefined) {
    renameSync(draft, place);
    return;
  }
  const aside = `${draft}-earlier`;
  renameSync(place, aside);
  try {
    renameSync(draft, place);
  } catch (cause) {
    renameSync(aside, place);
    throw cause;
  }
  for (const other of readdirSync(aside).filter((file) => !RESULT_FILES.includes(file))) {
    renameSync(join(aside, other), join(place, other));
  }
  rmSync(aside, { recursive: true });
}
