import { closest, distance } from 'fastest-levenshtein';

/** The known word that a misspelt one most likely means, or undefined where none is near. */
export function nearest(word: string, known: readonly string[]): string | undefined {
  if (known.length === 0) return undefined;
  const guess = closest(word, known);
  return distance(word, guess) <= Math.max(2, Math.floor(guess.length / 3)) ? guess : undefined;
}

/** ` - did you mean "duration"?`, or the known words where none is near. */
export function suggestion(word: string, known: readonly string[]): string {
  const guess = nearest(word, known);
  if (guess !== undefined) return ` - did you mean "${guess}"?`;
  if (known.length === 0) return '';
  return known.length <= 12 ? ` - known: ${known.join(', ')}` : '';
}
