/** Tables of numbers: columns with their units, then rows. In YAML, or as the name of a CSV file. */
import { z } from 'zod';
import { nearest, suggestion } from '../nearest.ts';
import { exampleOf, parseQuantity, type QuantityKind } from '../quantity.ts';
import { addFault, mapping } from './field.ts';

/** The keys under which a text names a CSV file; `load.ts` puts the file's table in the text's place. */
export const TABLE_KEYS: readonly string[] = ['polar', 'stations', 'backup', 'coefficients', 'series', 'mass'];

/** What a column holds: a quantity, plain numbers, or words. */
export type ColumnKind = QuantityKind | 'number' | 'word';
export interface Column {
  readonly kind: ColumnKind;
  readonly optional?: boolean;
}
/** Columns by name. A `#` in a name stands for a plain number: any number of such columns may be there, or none. */
type Columns = Readonly<Record<string, Column>>;

type Cell<C extends Column> = C['kind'] extends 'word' ? string : number;
/** A column of a name with a number in it, and that number. */
export interface NumberedColumn {
  number: number;
  values: number[];
}
/** One list a column; a column that may be absent is then undefined. Numbered columns come in the order of their numbers. */
export type TableData<C extends Columns> = {
  [K in keyof C]: K extends `${string}#${string}`
    ? NumberedColumn[]
    : C[K] extends { optional: true }
      ? Cell<C[K]>[] | undefined
      : Cell<C[K]>[];
};

const NUMBER = /\d+(?:\.\d+)?/;

/** The name under which `columns` lists a header's column; undefined where it lists none. */
function listedName(name: string, columns: Columns): string | undefined {
  return [name, name.replace(NUMBER, '#')].find((listed) => Object.hasOwn(columns, listed));
}

interface HeaderCell {
  name: string;
  unit: string;
}

function readHeader(cell: string): HeaderCell {
  const parts = /^\s*([^(]*?)\s*(?:\(([^)]*)\))?\s*$/.exec(cell);
  return { name: parts?.[1] ?? cell, unit: parts?.[2]?.trim() ?? '' };
}

function headerProblem({ name, unit }: HeaderCell, columns: Columns): string | undefined {
  const column = columns[listedName(name, columns) ?? ''];
  if (!column) return `unknown column "${name}"${suggestion(name, Object.keys(columns))}`;
  const { kind } = column;
  if (kind === 'number' || kind === 'word') {
    return unit === '' ? undefined : `column "${name}" takes no unit, but "${unit}" is given`;
  }
  const usual = exampleOf(kind).replace(/^\S+ /, '');
  if (unit === '') return `column "${name}" needs a unit, for example "${name} (${usual})"`;
  try {
    parseQuantity(`1 ${unit}`, kind);
    return undefined;
  } catch (error) {
    return `column "${name}": ${error instanceof Error ? error.message : String(error)}`;
  }
}

function readCell(cell: string | number, { kind }: Column, unit: string): string | number | undefined {
  if (kind === 'word') return String(cell);
  if (typeof cell !== 'number') return undefined;
  return kind === 'number' ? cell : parseQuantity(`${cell} ${unit}`, kind);
}

/** Adds an issue to the enclosing schema; the path starts at the table. */
type Report = (path: (string | number)[], message: string) => void;

function checkHeader(headers: readonly HeaderCell[], columns: Columns, report: Report): boolean {
  let isGood = true;
  const wrong = (path: (string | number)[], message: string) => {
    isGood = false;
    report(path, message);
  };
  headers.forEach((header, index) => {
    const problem = headerProblem(header, columns);
    if (problem) wrong(['columns', index], problem);
    if (headers.findIndex((h) => h.name === header.name) < index) {
      wrong(['columns', index], `column "${header.name}" stands here a second time`);
    }
  });
  for (const [name, column] of Object.entries(columns)) {
    const isThere = headers.some((h) => h.name === name || nearest(h.name, Object.keys(columns)) === name);
    if (!column.optional && !name.includes('#') && !isThere) wrong(['columns'], `missing column "${name}"`);
  }
  return isGood;
}

function decode<C extends Columns>(
  headers: readonly HeaderCell[],
  rows: readonly (string | number)[][],
  columns: C,
  report: Report,
) {
  const data: Record<string, (string | number)[]> = {};
  for (const { name } of headers) data[name] = [];
  rows.forEach((row, r) => {
    if (row.length !== headers.length) {
      report(['rows', r], `this row has ${row.length} cell(s), the header ${headers.length}`);
      return;
    }
    headers.forEach(({ name, unit }, c) => {
      const cell = row[c] ?? '';
      const value = readCell(cell, columns[listedName(name, columns) ?? ''] ?? { kind: 'word' }, unit);
      if (value === undefined) {
        report(
          ['rows', r, c],
          cell === '' ? 'no value stands here, and none is invented' : `"${cell}" is not a number`,
        );
      } else data[name]?.push(value);
    });
  });
  return { ...data, ...numberedColumns(data, columns) } as TableData<C>;
}

function numberedColumns(
  data: Record<string, (string | number)[]>,
  columns: Columns,
): Record<string, NumberedColumn[]> {
  const listed = Object.keys(columns).filter((name) => name.includes('#'));
  return Object.fromEntries(
    listed.map((pattern) => {
      const names = Object.keys(data).filter(
        (name) => !Object.hasOwn(columns, name) && listedName(name, columns) === pattern,
      );
      const found = names.map((name) => ({ number: Number(NUMBER.exec(name)?.[0]), values: data[name] as number[] }));
      return [pattern, found.sort((a, b) => a.number - b.number)];
    }),
  );
}

/**
 * A table with the given columns.
 * @param leastRows fewer rows than this are an error
 */
export function table<const C extends Columns>(columns: C, description: string, leastRows: number) {
  const header = Object.entries(columns).map(([name, { kind }]) =>
    kind === 'number' || kind === 'word' ? name : `${name} (${exampleOf(kind).replace(/^\S+ /, '')})`,
  );
  const written = mapping({
    columns: z.array(z.string()).meta({ description: 'Names of the columns with their units.', examples: [header] }),
    rows: z
      .array(z.array(z.union([z.number(), z.string()])))
      .min(leastRows)
      .meta({ description: 'One list a row, in the order of the columns.' }),
  });
  const file = z
    .string()
    .regex(/\.csv$/)
    .meta({ description: 'Name of a CSV file with these columns.' });
  return z
    .union([written, file], {
      error: ({ input }) =>
        input === undefined ? undefined : 'a table (columns and rows) or the name of a .csv file is due here',
    })
    .transform((given, context) => {
      const report: Report = (path, message) => addFault(context, message, path);
      const { columns: names, rows } = given as z.infer<typeof written>;
      const headers = names.map(readHeader);
      return checkHeader(headers, columns, report) ? decode(headers, rows, columns, report) : z.NEVER;
    })
    .meta({ description: `${description} (columns: ${header.join(', ')})` });
}

/** Index of the first entry that does not rise above the one before it, or -1. */
export function firstNotRising(values: readonly number[]): number {
  return values.findIndex((value, i) => i > 0 && value <= (values[i - 1] ?? Number.NEGATIVE_INFINITY));
}
