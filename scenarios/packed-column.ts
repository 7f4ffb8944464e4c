/** Columns of numbers as text, small enough that one page can hold a dozen runs. Runs in a browser and in Node. */

/** A channel's values over a run, by the name it has in `channels.csv`; NaN where there is no number. */
export interface Column {
  name: string;
  values: ArrayLike<number>;
}

/** Base64 of 32-bit floats (little-endian), or the name of an earlier column with exactly the same values. */
export type PackedColumn = { name: string; base64: string } | { name: string; sameAs: string };

/** Bytes per call of `String.fromCharCode`, well under every engine's limit on arguments. */
const CHUNK = 8192;

/** Packs columns; a value keeps seven significant digits. Blades that move as one are stored once. */
export function packColumns(columns: readonly Column[]): PackedColumn[] {
  const nameByText = new Map<string, string>();
  return columns.map(({ name, values }) => {
    const base64 = toBase64(Float32Array.from(values));
    const sameAs = nameByText.get(base64);
    if (sameAs !== undefined) return { name, sameAs };
    nameByText.set(base64, name);
    return { name, base64 };
  });
}

/** The columns by name. Throws where a column refers to one that is not there. */
export function unpackColumns(packed: readonly PackedColumn[]): Map<string, Float32Array> {
  const columns = new Map<string, Float32Array>();
  for (const column of packed) {
    const values = 'base64' in column ? fromBase64(column.base64) : columns.get(column.sameAs);
    if (!values) throw new Error(`column ${column.name} refers to a column that is not there`);
    columns.set(column.name, values);
  }
  return columns;
}

function toBase64(values: Float32Array): string {
  const bytes = new Uint8Array(values.buffer, values.byteOffset, values.byteLength);
  let binary = '';
  for (let start = 0; start < bytes.length; start += CHUNK) {
    binary += String.fromCharCode(...bytes.subarray(start, start + CHUNK));
  }
  return btoa(binary);
}

function fromBase64(text: string): Float32Array {
  const binary = atob(text);
  const bytes = Uint8Array.from(binary, (character) => character.charCodeAt(0));
  return new Float32Array(bytes.buffer);
}
