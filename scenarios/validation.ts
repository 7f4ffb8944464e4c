/** Checks a tree against a schema and words what is wrong for people. */
import type { z } from 'zod';
import { keyPlaceOf, placeOf, type Tree, type TreePath, toPlain } from './document.ts';
import { type Problem, problemAt } from './input-error.ts';
import { nearest, suggestion } from './nearest.ts';

type RawIssue = z.core.$ZodRawIssue;
type Issue = z.core.$ZodIssue;

function inWords(input: unknown): string {
  if (input === null) return 'nothing';
  if (Array.isArray(input)) return 'a list';
  if (typeof input === 'object') return 'a mapping';
  return typeof input === 'string' ? `the text "${input}"` : String(input);
}

const DUE: Readonly<Record<string, string>> = {
  object: 'a mapping',
  record: 'a mapping',
  array: 'a list',
  string: 'a text',
  number: 'a plain number',
  int: 'a whole number',
  boolean: 'true or false',
};

function wrongType(expected: string, input: unknown): string {
  const hint = expected === 'number' && typeof input === 'string' ? ' (without a unit)' : '';
  return `${DUE[expected] ?? expected} is due here${hint}, not ${inWords(input)}`;
}

function outOfRange(issue: RawIssue & { code: 'too_small' | 'too_big' }): string {
  const isLow = issue.code === 'too_small';
  const bound = isLow ? issue.minimum : issue.maximum;
  if (issue.origin === 'string') return 'this text must not be empty';
  if (issue.origin === 'array') return `at ${isLow ? 'least' : 'most'} ${bound} item(s) are due here`;
  const relation = isLow ? (issue.inclusive ? 'at least' : 'above') : issue.inclusive ? 'at most' : 'below';
  return `${issue.input} is out of range: it must be ${relation} ${bound}`;
}

function unknownWord(input: unknown, known: readonly string[]): string {
  if (typeof input === 'string') return `unknown word "${input}"${suggestion(input, known)}`;
  return `one of ${known.join(', ')} is due here, not ${inWords(input)}`;
}

/** What the members of a union take, in words. */
function noMember(issue: RawIssue & { code: 'invalid_union' }): string {
  const expected = issue.errors.flat().flatMap((inner) => (inner.code === 'invalid_type' ? [inner.expected] : []));
  const words = [...new Set(expected)].map((type) => DUE[type] ?? type);
  return `${words.join(' or ')} is due here, not ${inWords(issue.input)}`;
}

/** The value at the path's last key, as the issue's own input shows it. */
function discriminatorOf(issue: RawIssue & { code: 'invalid_union' }): unknown {
  const { input, discriminator } = issue;
  return discriminator !== undefined && typeof input === 'object' && input !== null
    ? Reflect.get(input, discriminator)
    : undefined;
}

/** The message where a schema has none of its own. */
function message(issue: RawIssue): string | undefined {
  if (issue.code === 'invalid_type') {
    return issue.input === undefined ? MISSING : wrongType(issue.expected, issue.input);
  }
  if (issue.code === 'invalid_value') {
    return issue.input === undefined ? MISSING : unknownWord(issue.input, issue.values.map(String));
  }
  if (issue.code === 'too_small' || issue.code === 'too_big') return outOfRange(issue);
  if (issue.code === 'invalid_union' && 'discriminator' in issue && issue.discriminator !== undefined) {
    const given = discriminatorOf(issue);
    const known = ('options' in issue ? (issue.options as unknown[]) : []).map(String);
    return given === undefined ? `${MISSING}: ${known.join(', ')}` : unknownWord(given, known);
  }
  if (issue.input === undefined) return MISSING;
  return issue.code === 'invalid_union' ? noMember(issue) : undefined;
}

/** Stands for "missing key ..." until the path is known. */
const MISSING = '\u0000missing';

/** How far an input is from a union member: unknown keys tell most. */
function strangeness(issues: readonly Issue[]): number {
  const unknown = issues.filter((issue) => issue.code === 'unrecognized_keys').length;
  return 100 * unknown + issues.length;
}

/** The issues of the union member that the input was meant for: of those whose own type fits, the nearest. */
function unfolded(issue: Issue): Issue[] {
  if (issue.code !== 'invalid_union') return [issue];
  const fitsItself = (inner: Issue) => inner.path.length > 0 || inner.code === 'unrecognized_keys';
  const [meant] = issue.errors
    .filter((issues) => issues.length > 0 && issues.every(fitsItself))
    .toSorted((a, b) => strangeness(a) - strangeness(b));
  if (!meant) return [issue];
  return meant.flatMap((inner) => unfolded({ ...inner, path: [...issue.path, ...inner.path] }));
}

function unknownKeys(issue: Issue & { code: 'unrecognized_keys' }, tree: Tree): Problem[] {
  const known = issue.message.split(' ');
  return issue.keys.map((key) => {
    const path = [...issue.path, key];
    return problemAt(keyPlaceOf(tree, path) ?? placeOf(tree, path), `unknown key "${key}"${suggestion(key, known)}`);
  });
}

function problemsOf(issue: Issue, tree: Tree): Problem[] {
  if (issue.code === 'unrecognized_keys') return unknownKeys(issue, tree);
  const place = placeOf(tree, issue.path);
  if (!issue.message.startsWith(MISSING)) return [problemAt(place, issue.message)];
  const last = issue.path.at(-1);
  const what = typeof last === 'string' ? `missing key "${last}"` : 'something is missing here';
  return [problemAt(place, what + issue.message.slice(MISSING.length))];
}

/** A misspelt key is one mistake: the key it was meant for is not missing besides. */
function isMisspelt(issue: Issue, issues: readonly Issue[]): boolean {
  if (!issue.message.startsWith(MISSING)) return false;
  const key = String(issue.path.at(-1));
  const around = issue.path.slice(0, -1);
  return issues.some(
    (other) =>
      other.code === 'unrecognized_keys' &&
      samePath(other.path, around) &&
      other.keys.some((k) => nearest(k, other.message.split(' ')) === key),
  );
}

function samePath(a: TreePath, b: TreePath): boolean {
  return a.length === b.length && a.every((step, i) => step === b[i]);
}

export type Checked<T> = { value: T; problems: readonly [] } | { value?: undefined; problems: readonly Problem[] };

/** Decodes a tree, or says everything that is wrong with it. */
export function checked<T>(tree: Tree, schema: z.ZodType<T>): Checked<T> {
  const result = schema.safeParse(toPlain(tree), { error: message });
  if (result.success) return { value: result.data, problems: [] };
  const issues = result.error.issues.flatMap(unfolded);
  return { problems: issues.filter((issue) => !isMisspelt(issue, issues)).flatMap((issue) => problemsOf(issue, tree)) };
}
