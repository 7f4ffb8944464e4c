/** A CSV file as the table it stands for, each cell with its own line and column. */
import { type CastingContext, CsvError, parse } from 'csv-parse/browser/esm/sync';
import type { Scalar, Tree } from './document.ts';
import { InputError, type Place, problemAt } from './input-error.ts';

const SEPARATOR = /[,;\t]/g;

/** Column of the cell's first character, counted from 1. */
function columnOf(line: string, cell: number): number {
  if (cell === 0) return 1 + line.length - line.trimStart().length;
  const separators = [...line.matchAll(SEPARATOR)];
  const start = (separators[cell - 1]?.index ?? line.length - 1) + 1;
  return 1 + start + (line.slice(start).length - line.slice(start).trimStart().length);
}

function cellValue(text: string): Scalar {
  const number = Number(text);
  return text !== '' && Number.isFinite(number) ? number : text;
}

/**
 * Reads a table: a header line that names columns and their units, as in `time (s), speed (m/s)`, then one line a row.
 * Commas, semicolons or tabs separate cells; `#` starts a comment.
 * @returns a mapping of `columns` and `rows`, as a table written in YAML would read
 * @throws InputError where the text is no CSV or has no header
 */
export function parseCsvTable(text: string, file: string): Tree {
  const lines = text.split(/\r?\n/);
  const cell = (value: string, { lines: line, index }: CastingContext): Tree => ({
    kind: 'scalar',
    value: cellValue(value),
    place: { file, line, column: columnOf(lines[line - 1] ?? '', index) },
  });
  const [header, ...rows] = parseRows(text, file, cell);
  const top: Place = { file, line: 1, column: 1 };
  if (!header)
    throw new InputError([problemAt(top, 'the table is empty; a header line such as "time (s), speed (m/s)" is due')]);
  return {
    kind: 'mapping',
    place: top,
    entries: new Map([
      ['columns', { key: top, value: rowTree(header, top) }],
      ['rows', { key: top, value: { kind: 'list', items: rows.map((row) => rowTree(row, top)), place: top } }],
    ]),
  };
}

function parseRows(text: string, file: string, cell: (value: string, context: CastingContext) => Tree): Tree[][] {
  try {
    return parse(text, {
      bom: true,
      cast: cell,
      comment: '#',
      delimiter: [',', ';', '\t'],
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
    }) as unknown as Tree[][];
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    const line = typeof error.lines === 'number' ? error.lines : 1;
    throw new InputError([problemAt({ file, line, column: 1 }, `not CSV: ${error.message}`)]);
  }
}

function rowTree(cells: readonly Tree[], fallback: Place): Tree {
  return { kind: 'list', items: cells, place: cells[0]?.place ?? fallback };
}
