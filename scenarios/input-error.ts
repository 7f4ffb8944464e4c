/** What is wrong with the user's files, and where. */

/** A point in a file, or an override given on the command line. */
export type Place = { file: string; line: number; column: number } | { argument: string };

export interface Problem {
  /** The file's path, or the command-line argument. */
  file: string;
  /** From 1; 0 where the whole file, or an argument, is meant. */
  line: number;
  column: number;
  message: string;
}

export function problemAt(place: Place, message: string): Problem {
  return 'argument' in place ? { file: place.argument, line: 0, column: 0, message } : { ...place, message };
}

export function problemText({ file, line, column, message }: Problem): string {
  return line > 0 ? `${file}:${line}:${column}: ${message}` : `${file}: ${message}`;
}

/** Problems in the order of their files, each file's by line and column. */
function sorted(problems: readonly Problem[]): Problem[] {
  const files = [...new Set(problems.map((p) => p.file))];
  return problems.toSorted(
    (a, b) => files.indexOf(a.file) - files.indexOf(b.file) || a.line - b.line || a.column - b.column,
  );
}

/** Input that cannot be used. The message lists every problem found, one a line. */
export class InputError extends Error {
  override readonly name = 'InputError';
  readonly problems: readonly Problem[];

  constructor(problems: readonly Problem[]) {
    const inOrder = sorted(problems);
    super(inOrder.map(problemText).join('\n'));
    this.problems = inOrder;
  }
}

/** The error that a whole file, or a command-line argument, is unusable. */
export function refusal(what: string, message: string): InputError {
  return new InputError([problemAt({ argument: what }, message)]);
}
