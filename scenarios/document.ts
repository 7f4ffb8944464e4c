/**
 * A text file as a tree that knows where each value was written, so that files can be merged (`extends`), values
 * overridden, tables read in, and every message can still name the line it is about.
 */
import { isAlias, isMap, isScalar, isSeq, LineCounter, type Node, parseDocument, type YAMLError } from 'yaml';
import { InputError, type Place, type Problem, problemAt } from './input-error.ts';
import { suggestion } from './nearest.ts';

export type Scalar = string | number | boolean | null;

export type Tree =
  | { kind: 'scalar'; value: Scalar; place: Place }
  | { kind: 'list'; items: readonly Tree[]; place: Place }
  | { kind: 'mapping'; entries: ReadonlyMap<string, Entry>; place: Place };

export interface Entry {
  /** Where the key stands. */
  key: Place;
  value: Tree;
}

export type Mapping = Extract<Tree, { kind: 'mapping' }>;

/** Keys and list indices from the root. */
export type TreePath = readonly PropertyKey[];

/** An override: what to set, to what, and where that was written. */
export interface Override {
  /** Keys, list indices, or names of list items, joined by dots. */
  path: string;
  key: Place;
  value: Tree;
}

function plainYamlMessage(error: YAMLError): string {
  if (error.code === 'DUPLICATE_KEY') return 'this key stands here a second time';
  const [sentence = error.message] = error.message.split(/ at line \d+/);
  return `not YAML: ${sentence.charAt(0).toLowerCase()}${sentence.slice(1)}`;
}

class TreeReader {
  readonly problems: Problem[] = [];
  private readonly enclosing = new Set<Node>();

  constructor(
    private readonly document: ReturnType<typeof parseDocument>,
    private readonly placeAt: (offset: number) => Place,
  ) {}

  read(node: unknown, fallback: Place): Tree {
    if (isAlias(node)) return this.readAlias(node.resolve(this.document), this.place(node, fallback));
    if (isScalar(node)) return this.readScalar(node.value, this.place(node, fallback));
    if (isMap(node)) {
      const place = this.place(node, fallback);
      const entries = new Map<string, Entry>();
      this.within(node, () => {
        for (const pair of node.items) {
          const key = this.place(pair.key, place);
          entries.set(this.keyText(pair.key, key), { key, value: this.read(pair.value, key) });
        }
      });
      return { kind: 'mapping', entries, place };
    }
    if (isSeq(node)) {
      const place = this.place(node, fallback);
      const items: Tree[] = [];
      this.within(node, () => {
        for (const item of node.items) items.push(this.read(item, place));
      });
      return { kind: 'list', items, place };
    }
    return { kind: 'scalar', value: null, place: fallback };
  }

  private readAlias(target: Node | undefined, place: Place): Tree {
    if (target && !this.enclosing.has(target)) return this.read(target, place);
    this.problems.push(problemAt(place, 'this alias stands inside the very value that it names'));
    return { kind: 'scalar', value: null, place };
  }

  private readScalar(value: unknown, place: Place): Tree {
    if (value === null || typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') {
      return { kind: 'scalar', value, place };
    }
    this.problems.push(problemAt(place, 'a text, a number, true or false is due'));
    return { kind: 'scalar', value: null, place };
  }

  private keyText(key: unknown, place: Place): string {
    if (isScalar(key)) return String(key.value);
    this.problems.push(problemAt(place, 'a key must be a word'));
    return '';
  }

  private within(node: Node, read: () => void): void {
    this.enclosing.add(node);
    read();
    this.enclosing.delete(node);
  }

  private place(node: unknown, fallback: Place): Place {
    const offset = (node as Node | null)?.range?.[0];
    return offset === undefined ? fallback : this.placeAt(offset);
  }
}

/**
 * Reads YAML.
 * @param file the path that messages name
 * @throws InputError with every syntax error and duplicate key
 */
export function parseYaml(text: string, file: string): Tree {
  const lines = new LineCounter();
  const document = parseDocument(text, { lineCounter: lines, prettyErrors: false, stringKeys: false });
  const placeAt = (offset: number): Place => {
    const { line, col } = lines.linePos(offset);
    return { file, line: Math.max(line, 1), column: Math.max(col, 1) };
  };
  if (document.errors.length > 0) {
    throw new InputError(document.errors.map((e) => problemAt(placeAt(e.pos[0]), plainYamlMessage(e))));
  }
  const reader = new TreeReader(document, placeAt);
  const tree = reader.read(document.contents, placeAt(0));
  if (reader.problems.length > 0) throw new InputError(reader.problems);
  return tree;
}

/** The tree as plain mappings, lists and values. */
export function toPlain(tree: Tree): unknown {
  switch (tree.kind) {
    case 'scalar':
      return tree.value;
    case 'list':
      return tree.items.map(toPlain);
    case 'mapping':
      return Object.fromEntries([...tree.entries].map(([key, entry]) => [key, toPlain(entry.value)]));
  }
}

export function entryOf(tree: Tree, key: string): Entry | undefined {
  return tree.kind === 'mapping' ? tree.entries.get(key) : undefined;
}

/** What stands at the path's end; undefined where nothing does. */
export function treeAt(tree: Tree, path: TreePath): Tree | undefined {
  let at: Tree | undefined = tree;
  for (const step of path) {
    if (at?.kind === 'mapping') at = at.entries.get(String(step))?.value;
    else if (at?.kind === 'list') at = at.items[Number(step)];
    else return undefined;
  }
  return at;
}

/**
 * Where the value at the path stands (a mapping or list: its key) or, where there is none, the nearest thing around it
 * that does.
 */
export function placeOf(tree: Tree, path: TreePath): Place {
  for (let length = path.length; length > 0; length--) {
    const found = treeAt(tree, path.slice(0, length));
    if (found) return (found.kind === 'scalar' ? undefined : keyPlaceOf(tree, path.slice(0, length))) ?? found.place;
  }
  return tree.place;
}

/** Where the key that ends the path stands; undefined where the path ends in a list item or in nothing. */
export function keyPlaceOf(tree: Tree, path: TreePath): Place | undefined {
  const around = treeAt(tree, path.slice(0, -1));
  return around && entryOf(around, String(path.at(-1)))?.key;
}

/** `over` on top of `base`: mappings merge key by key, anything else in `over` replaces what `base` has. */
export function merge(base: Tree, over: Tree): Tree {
  if (base.kind !== 'mapping' || over.kind !== 'mapping') return over;
  const entries = new Map(base.entries);
  for (const [key, entry] of over.entries) {
    const under = entries.get(key);
    entries.set(key, under ? { key: entry.key, value: merge(under.value, entry.value) } : entry);
  }
  return { ...over, entries };
}

export function without(tree: Mapping, key: string): Mapping {
  const entries = new Map(tree.entries);
  entries.delete(key);
  return { ...tree, entries };
}

/** The same tree with another value under a key. */
export function withEntry(tree: Mapping, key: string, entry: Entry): Mapping {
  return { ...tree, entries: new Map(tree.entries).set(key, entry) };
}

/**
 * The tree with the override applied. Mappings that do not exist yet are made, so that a whole optional part can be set.
 * @throws InputError, placed where the override was written, when the path leads into a value or past a list's end
 */
export function withOverride(tree: Tree, override: Override): Tree {
  return replaced(tree, override.path.split('.'), [], override);
}

function replaced(tree: Tree | undefined, steps: readonly string[], done: readonly string[], by: Override): Tree {
  const [step, ...rest] = steps;
  if (step === undefined) return by.value;
  const onward = (next: Tree | undefined) => replaced(next, rest, [...done, step], by);
  if (tree === undefined || tree.kind === 'mapping') {
    const mapping: Mapping = tree ?? { kind: 'mapping', entries: new Map(), place: by.key };
    const old = mapping.entries.get(step);
    const key = rest.length === 0 ? by.key : (old?.key ?? by.key);
    return withEntry(mapping, step, { key, value: onward(old?.value) });
  }
  if (tree.kind === 'list') {
    const index = itemIndex(tree.items, step, done, by);
    return { ...tree, items: tree.items.with(index, onward(tree.items[index])) };
  }
  throw new InputError([
    problemAt(by.key, `"${done.join('.')}" holds a single value; nothing named "${step}" is inside it`),
  ]);
}

function itemIndex(items: readonly Tree[], step: string, done: readonly string[], by: Override): number {
  const names = items.map((item) => {
    const name = entryOf(item, 'name')?.value;
    return name?.kind === 'scalar' ? String(name.value) : '';
  });
  const index = /^\d+$/.test(step) ? Number(step) : names.indexOf(step);
  if (index >= 0 && index < items.length) return index;
  const named = names.filter((name) => name !== '');
  const known = named.length > 0 ? suggestion(step, named) : '';
  throw new InputError([
    problemAt(by.key, `"${done.join('.')}" has ${items.length} item(s), counted from 0, and none is "${step}"${known}`),
  ]);
}

/**
 * Reads an override as the command line gives it.
 * @param text `path=value`, the value in YAML, for example `wind.0.speed=16 m/s`
 * @throws InputError when there is no `=` or the value is not YAML
 */
export function parseOverride(text: string): Override {
  const place: Place = { argument: `--set ${text}` };
  const equals = text.indexOf('=');
  if (equals <= 0) {
    throw new InputError([problemAt(place, 'an override is written path=value, for example "seed=7"')]);
  }
  return { path: text.slice(0, equals).trim(), key: place, value: parseArgumentValue(text.slice(equals + 1), place) };
}

function parseArgumentValue(text: string, place: Place): Tree {
  try {
    return placedAt(parseYaml(text, ''), place);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError(error.problems.map((p) => problemAt(place, p.message)));
  }
}

function placedAt(tree: Tree, place: Place): Tree {
  switch (tree.kind) {
    case 'scalar':
      return { ...tree, place };
    case 'list':
      return { ...tree, place, items: tree.items.map((item) => placedAt(item, place)) };
    case 'mapping': {
      const entries = [...tree.entries].map(([k, e]) => [k, { key: place, value: placedAt(e.value, place) }] as const);
      return { ...tree, place, entries: new Map(entries) };
    }
  }
}
