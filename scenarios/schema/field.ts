/** The building blocks of the file schemas: each both decodes a value to SI and describes it to editors. */
import { z } from 'zod';
import {
  exampleOf,
  formatQuantity,
  needsUnit,
  parseQuantity,
  QUANTITY_PATTERN,
  type QuantityKind,
  withArticle,
} from '../quantity.ts';

/** Physical limits, in SI. */
export interface Range {
  above?: number;
  atLeast?: number;
  below?: number;
  atMost?: number;
}

/**
 * Adds a problem to a schema's check.
 * @param path from the value that is checked to the one at fault
 */
export function addFault(
  context: Pick<z.RefinementCtx, 'addIssue'>,
  message: string,
  path: (string | number)[] = [],
): void {
  context.addIssue({ code: 'custom', message, path });
}

/** A check of a value as a whole, for `superRefine`: left out where a part of the value could not be decoded. */
export function onceDecoded<T>(check: (value: T, context: z.RefinementCtx<T>) => void) {
  return (value: T, context: z.RefinementCtx<T>): void => {
    if (context.issues.length === 0) check(value, context);
  };
}

/** A mapping that knows its keys: an unknown one is an error whose message lists the known ones for `validation.ts`. */
export function mapping<const Shape extends z.ZodRawShape>(shape: Shape) {
  const known = Object.keys(shape).join(' ');
  return z.strictObject(shape, { error: (issue) => (issue.code === 'unrecognized_keys' ? known : undefined) });
}

/** What keeps the value out of its range, or undefined. A value that is not known yet (NaN) is never out of range. */
function rangeBreach(value: number, range: Range, show: (bound: number) => string): string | undefined {
  if (range.above !== undefined && value <= range.above) return `must be above ${show(range.above)}`;
  if (range.atLeast !== undefined && value < range.atLeast) return `must be at least ${show(range.atLeast)}`;
  if (range.below !== undefined && value >= range.below) return `must be below ${show(range.below)}`;
  if (range.atMost !== undefined && value > range.atMost) return `must be at most ${show(range.atMost)}`;
  return undefined;
}

const RELATIVE = /^\s*([+-]?\d*\.?\d+)\s+rated\s*$/;

/** Reads a quantity that may also be given as a multiple of its rated value. */
export function decodeQuantity(text: string, kind: QuantityKind, rated?: number): number {
  const multiple = RELATIVE.exec(text)?.[1];
  if (multiple === undefined) return parseQuantity(text, kind);
  if (rated === undefined) {
    throw new Error(
      `"${text}" is relative, but this has no rated value; ${withArticle(kind)} is due, for example "${exampleOf(kind)}"`,
    );
  }
  return Number(multiple) * rated;
}

/**
 * A number with a unit, decoded to SI.
 * @param range physical limits; with `rated`, texts such as "1.12 rated" are multiples of it
 */
export function quantity(kind: QuantityKind, description: string, range: Range & { rated?: number } = {}) {
  const isRelative = 'rated' in range;
  const written = z
    .string({ error: ({ input }) => (typeof input === 'number' ? needsUnit(String(input), kind) : undefined) })
    .meta({
      description: `${description} (${withArticle(kind)}${isRelative ? ', or a multiple of the rated value' : ''})`,
      pattern: QUANTITY_PATTERN,
      examples: isRelative ? [exampleOf(kind), '1.1 rated'] : [exampleOf(kind)],
    });
  return written.transform((text, context) => {
    try {
      const value = decodeQuantity(text, kind, range.rated);
      const breach = rangeBreach(value, range, (bound) => formatQuantity(bound, kind));
      if (breach === undefined) return value;
      addFault(context, `"${text}" is out of range: it ${breach}`);
    } catch (error) {
      addFault(context, error instanceof Error ? error.message : String(error));
    }
    return z.NEVER;
  });
}

/** A plain number. */
export function number(description: string, range: Range = {}) {
  let schema = z.number();
  if (range.above !== undefined) schema = schema.gt(range.above);
  if (range.atLeast !== undefined) schema = schema.gte(range.atLeast);
  if (range.below !== undefined) schema = schema.lt(range.below);
  if (range.atMost !== undefined) schema = schema.lte(range.atMost);
  return schema.meta({ description: `${description} (a plain number)` });
}

/** A whole number. */
export function count(description: string, atLeast: number, atMost = Number.MAX_SAFE_INTEGER) {
  return z
    .int()
    .gte(atLeast)
    .lte(atMost)
    .meta({ description: `${description} (a whole number)` });
}

/** A fraction: a plain number, or per cent. */
export function fraction(description: string, range: Range) {
  const due = 'a plain number or a percentage is due, for example 0.97 or "97 %"';
  const written = z
    .union([z.number(), z.string()], { error: ({ input }) => (input === undefined ? undefined : due) })
    .meta({ description: `${description} (a plain number or a percentage)`, examples: [0.97, '97 %'] });
  return written.transform((given, context) => {
    const percent = /^\s*([+-]?\d*\.?\d+)\s*%\s*$/.exec(String(given))?.[1];
    const value = percent === undefined ? given : Number(percent) / 100;
    if (typeof value === 'string') {
      addFault(context, `"${given}" is no fraction; ${due}`);
      return z.NEVER;
    }
    const breach = rangeBreach(value, range, String);
    if (breach === undefined) return value;
    addFault(context, `${given} is out of range: it ${breach}`);
    return z.NEVER;
  });
}

export function text(description: string) {
  return z.string().min(1).meta({ description });
}

/** One word of several; the keys are what files write, the values what the program means by them. */
export function choice<const Words extends Readonly<Record<string, string>>>(words: Words, description: string) {
  return z
    .enum(Object.keys(words) as [keyof Words & string, ...(keyof Words & string)[]])
    .transform((word): Words[keyof Words] => words[word] as Words[keyof Words])
    .meta({ description });
}

/** The word that tells the members of a union apart, and what the program calls it. */
export function tag<const Written extends string, const Meant extends string>(
  written: Written,
  meant: Meant,
  description: string,
) {
  return z
    .literal(written)
    .transform((): Meant => meant)
    .meta({ description });
}

type CamelCase<S extends string> = S extends `${infer Head}_${infer Tail}`
  ? `${Head}${Capitalize<CamelCase<Tail>>}`
  : S;
export type CamelKeys<T> = { [K in keyof T as CamelCase<K & string>]: T[K] };

/** The mapping with its own keys (not those of mappings inside it) as the program spells them. */
export function camelKeys<T extends object>(value: T): CamelKeys<T> {
  const renamed = Object.entries(value).map(([key, inner]) => [
    key.replace(/_(\w)/g, (_, c: string) => c.toUpperCase()),
    inner,
  ]);
  return Object.fromEntries(renamed) as CamelKeys<T>;
}
