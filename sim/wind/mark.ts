import type { WindMark } from './wind.ts';

/** A change of wind speed (m/s) in words, such as "+8.6 m/s". */
export function speedChange(change: number): string {
  const size = Number(Math.abs(change).toFixed(1));
  return `${change < 0 ? '−' : '+'}${size} m/s`;
}

/** The three marks of a gust that starts, peaks and ends at the given instants (s), `change` m/s off at its peak. */
export function gustMarks(start: number, peak: number, end: number, change: number): readonly WindMark[] {
  return [
    { time: start, kind: 'gust start', text: 'gust starts' },
    { time: peak, kind: 'gust peak', text: `gust at its peak (${speedChange(change)})` },
    { time: end, kind: 'gust end', text: 'gust ends' },
  ];
}
