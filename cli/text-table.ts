/** Columns lined up for a terminal: the first to the left, numbers to the right. */
export function textTable(header: readonly string[], rows: readonly (readonly string[])[]): string {
  const widths = header.map((name, i) => Math.max(name.length, ...rows.map((row) => row[i].length)));
  return [header, ...rows]
    .map((row) => row.map((cell, i) => (i === 0 ? cell.padEnd(widths[i]) : cell.padStart(widths[i]))).join('  '))
    .join('\n');
}
