/**
 * Reads scenarios and turbines with every file they refer to. Knows no disk: `Files` says where texts come from, so
 * that the same code serves the command line and the browser.
 */
import type { z } from 'zod';
import type { ControllerFactory, Machine } from '../controllers/contract.ts';
import type { StopSequence } from '../controllers/stop-sequence.ts';
import { bladeOf } from '../sim/aerodynamics/blade.ts';
import type { ScriptedEvent } from '../sim/scripted-event.ts';
import type { Turbine } from '../sim/turbine.ts';
import type { PolarSeries } from '../sim/wind/polar-grid.ts';
import { sumWind } from '../sim/wind/sum.ts';
import type { Turbulence } from '../sim/wind/turbulence.ts';
import type { WindField } from '../sim/wind/wind.ts';
import { parseCsvTable } from './csv-table.ts';
import {
  entryOf,
  type Mapping,
  merge,
  type Override,
  parseOverride,
  parseYaml,
  placeOf,
  type Tree,
  withEntry,
  withOverride,
  without,
} from './document.ts';
import { InputError, type Place, type Problem, problemAt, problemText } from './input-error.ts';
import { machineOf, UNKNOWN_MACHINE } from './machine.ts';
import { parseAnyQuantity } from './quantity.ts';
import type { ControllerData, ScenarioData } from './scenario.ts';
import { type ControllerFileData, controllerFile } from './schema/controller.ts';
import type { WrittenEvent } from './schema/event.ts';
import { mapping } from './schema/field.ts';
import { FILE_KINDS, type FileKind, formatTag } from './schema/file-kind.ts';
import { protectionFile } from './schema/protection.ts';
import { scenarioFile } from './schema/scenario.ts';
import { TABLE_KEYS } from './schema/table.ts';
import { turbineFile } from './schema/turbine.ts';
import { type Site, type WindPart, wind } from './schema/wind.ts';
import { checked } from './validation.ts';

/** Where texts and modules come from. Paths are whatever `resolve` returns. */
export interface Files {
  /** The text of a file. Throws Error with the reason in plain words, such as "no such file". */
  read(path: string): Promise<string>;
  /** The path that `reference` names when it is written in the file `from`, or on the command line when absent. */
  resolve(reference: string, from?: string): string;
  /** `path` as seen from the folder of the file `from`. */
  relative(path: string, from: string): string;
  /** SHA-256 of a text, hexadecimal. */
  digest(text: string): Promise<string>;
  /** The default export of an ES module. Throws what the module throws. */
  importDefault(path: string): Promise<unknown>;
  /** A turbulent field, made or kept from before; made in memory when absent. */
  turbulence?(turbulence: Turbulence): PolarSeries;
}

/**
 * Reads a scenario.
 * @param sets overrides as the command line gives them: `turbine.`, `controller.` and `protection.` lead into those
 * files, any other path into the scenario, as in `wind.0.speed=16 m/s`
 * @throws InputError with every problem found in any of the files
 */
export async function readScenario(files: Files, path: string, sets: readonly string[] = []): Promise<ScenarioData> {
  const reading = new Reading(files);
  const overrides = reading.overrides(sets);
  const main = files.resolve(path);
  const tree = await reading.scenario(main, overrides);

  const turbine = await reading.part('turbine', tree, overrides, turbineFile);
  if (turbine) reading.checkBlade(turbine.value, turbine.tree);
  const machine = turbine ? machineOf(turbine.value) : UNKNOWN_MACHINE;
  const protection = await reading.part('protection', tree, overrides, protectionFile(machine));
  const controller = await reading.part('controller', tree, overrides, controllerFile(machine));
  const scenario = reading.check(tree, scenarioFile(machine));
  const factory =
    turbine && controller?.value.kind === 'module'
      ? await reading.factory(controller.value, controller.tree, machine)
      : undefined;
  if (!turbine || !protection || !controller || !scenario || reading.hasProblems) throw reading.error();

  const { airDensity = turbine.value.airDensity, wind: parts, ...rest } = scenario;
  const site = siteOf(turbine.value, scenario, files);
  const wind = sumWind(reading.windParts(parts, site, tree).map(({ field }) => field));
  const events = reading.events(scenario.events, wind, tree);
  if (reading.hasProblems) throw reading.error();
  return {
    ...rest,
    name: nameOf(main),
    file: main,
    turbine: { ...turbine.value, airDensity },
    controller: controllerData(controller.value, protection.value.normalStop, factory),
    protection: protection.value.settings,
    protectionName: protection.value.name,
    wind,
    events,
    inputs: reading.inputs(main),
    overrides: sets,
  };
}

/**
 * Reads a turbine.
 * @param sets overrides, as in `rotor.radius=66 m`
 * @throws InputError with every problem found
 */
export async function readTurbine(files: Files, path: string, sets: readonly string[] = []): Promise<Turbine> {
  const reading = new Reading(files);
  const overrides = reading.overrides(sets);
  const main = files.resolve(path);
  const opened = await reading.open('turbine', main, { argument: main });
  const tree = opened && (await reading.complete(opened, overrides));
  const turbine = tree && reading.check(tree, turbineFile);
  if (turbine) reading.checkBlade(turbine, tree);
  if (!turbine || reading.hasProblems) throw reading.error();
  return turbine;
}

/** A part of a wind, and what it is made of where it is turbulent. */
export interface WindPartData {
  field: WindField;
  turbulence?: Turbulence;
}

/** A wind without what it does to a machine. */
export interface WindData {
  title: string;
  turbine: Turbine;
  site: Site;
  parts: readonly WindPartData[];
}

/** How the command line names a part of the wind, for messages. */
const WIND_OPTION = '--part';

/**
 * Reads the wind of a scenario; its controller and protection are left alone.
 * @param sets overrides, as `readScenario`
 * @throws InputError with every problem found
 */
export async function readWind(files: Files, path: string, sets: readonly string[] = []): Promise<WindData> {
  const reading = new Reading(files);
  const overrides = reading.overrides(sets);
  const tree = await reading.scenario(files.resolve(path), overrides);
  const turbine = await reading.part('turbine', tree, overrides, turbineFile);
  const scenario = reading.check(tree, scenarioFile(turbine ? machineOf(turbine.value) : UNKNOWN_MACHINE));
  if (!turbine || !scenario || reading.hasProblems) throw reading.error();
  const site = siteOf(turbine.value, scenario, files);
  const parts = reading.windParts(scenario.wind, site, tree);
  if (reading.hasProblems) throw reading.error();
  return { title: scenario.title, turbine: turbine.value, site, parts };
}

/**
 * Reads a wind from its parts, each written as in a scenario's list.
 * @param run the turbine's file, how long the wind blows (s), and the seed
 * @throws InputError with every problem found
 */
export async function readWindParts(
  files: Files,
  texts: readonly string[],
  run: { turbine: string; duration: number; seed: number },
): Promise<WindData> {
  const turbine = await readTurbine(files, run.turbine);
  const reading = new Reading(files);
  const place = { argument: WIND_OPTION };
  const items = texts.flatMap((text) => reading.windTree(text) ?? []);
  if (reading.hasProblems) throw reading.error();
  const list: Tree = { kind: 'list', items, place };
  const tree = await reading.complete(
    { kind: 'mapping', place, entries: new Map([['wind', { key: place, value: list }]]) },
    [],
  );
  const written = tree && reading.check(tree, mapping({ wind }));
  if (!tree || !written || reading.hasProblems) throw reading.error();
  const site = siteOf(turbine, run, files);
  const parts = reading.windParts(written.wind, site, tree);
  written.wind.forEach(({ lasts = run.duration }, index) => {
    if (lasts >= run.duration) return;
    const due = `this wind ends at ${lasts} s, before the ${run.duration} s that are asked for`;
    reading.problem(placeOf(tree, ['wind', index]), due);
  });
  if (reading.hasProblems) throw reading.error();
  return { title: 'Wind', turbine, site, parts };
}

type PartKind = 'turbine' | 'controller' | 'protection';

/** The file that an override leads into; undefined for the scenario itself. */
function routeOf({ path }: Override): PartKind | undefined {
  const first = path.slice(0, Math.max(path.indexOf('.'), 0));
  return (['turbine', 'controller', 'protection'] as const).find((part) => part === first);
}

/** What the wind's parts may ask of the turbine and the run. */
function siteOf(
  { rotor, ratings }: Turbine,
  { duration, seed }: { duration: number; seed: number },
  { turbulence }: Files,
): Site {
  return {
    rotorDiameter: 2 * rotor.radius,
    hubHeight: rotor.hubHeight,
    bladeCount: rotor.bladeCount,
    rotorSpeed: ratings.rotorSpeed,
    duration,
    seed,
    ...(turbulence && { turbulence }),
  };
}

function into(part: PartKind, overrides: readonly Override[]): Override[] {
  return overrides.filter((o) => routeOf(o) === part).map((o) => ({ ...o, path: o.path.slice(part.length + 1) }));
}

function nameOf(path: string): string {
  return (path.split(/[\\/]/).at(-1) ?? path).replace(/\.ya?ml$/, '');
}

function placeText(place: Place): string {
  return problemText(problemAt(place, '')).replace(/: $/, '');
}

function controllerData(
  file: ControllerFileData,
  normalStop: StopSequence,
  factory: ControllerFactory | undefined,
): ControllerData {
  const supervisor = { ...file.supervisor, normalStop };
  if (file.kind === 'laws') return { ...file, supervisor };
  if (!factory) throw new Error(`the module ${file.module} was not loaded`);
  return { kind: file.kind, name: file.name, factory, settings: inSi(file.settings), supervisor };
}

/** A module's settings with every quantity in SI. */
function inSi(settings: unknown): unknown {
  if (typeof settings === 'string') return parseAnyQuantity(settings) ?? settings;
  if (Array.isArray(settings)) return settings.map(inSi);
  if (typeof settings !== 'object' || settings === null) return settings;
  return Object.fromEntries(Object.entries(settings).map(([key, value]) => [key, inSi(value)]));
}

/** What keeps a factory's product from being a controller, or undefined. */
function contractBreach(product: unknown): string | undefined {
  if (typeof product !== 'object' || product === null) return 'returns no controller';
  const { sampleTime, memory, needs, start, step } = product as Record<string, unknown>;
  if (typeof sampleTime !== 'number' || !(sampleTime > 0)) return 'returns a controller without a positive sampleTime';
  if (!Array.isArray(memory)) return 'returns a controller without a list of memory names';
  if (!Array.isArray(needs)) return 'returns a controller without the list of measurements that it needs';
  if (typeof start !== 'function' || typeof step !== 'function') return 'returns a controller without start and step';
  return undefined;
}

function reasonOf(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

/** One act of reading: gathers problems instead of stopping at the first, and notes every file read. */
class Reading {
  private readonly problems: Problem[] = [];
  private readonly texts = new Map<string, { text: string; sha256: string }>();

  constructor(private readonly files: Files) {}

  get hasProblems(): boolean {
    return this.problems.length > 0;
  }

  error(): InputError {
    return new InputError(this.problems);
  }

  inputs(main: string): { path: string; sha256: string }[] {
    return [...this.texts].map(([path, { sha256 }]) => ({ path: this.files.relative(path, main), sha256 }));
  }

  overrides(sets: readonly string[]): Override[] {
    return sets.flatMap((text) => this.gather(() => parseOverride(text)) ?? []);
  }

  /** The file's tree laid over those that it extends, without checks; undefined where there are problems. */
  async open(kind: FileKind, path: string, namedAt: Place): Promise<Mapping | undefined> {
    return this.gatherAsync(() => this.openChain(kind, path, namedAt, []));
  }

  /** The tree with overrides applied and tables read in. */
  async complete(tree: Mapping, overrides: readonly Override[]): Promise<Tree | undefined> {
    const overridden = overrides.reduce<Tree>(
      (changed, override) => this.gather(() => withOverride(changed, override)) ?? changed,
      tree,
    );
    return this.gatherAsync(() => this.withTables(overridden));
  }

  check<T>(tree: Tree, schema: z.ZodType<T>): T | undefined {
    const result = checked(tree, schema);
    this.problems.push(...result.problems);
    return result.value;
  }

  /** Builds the blade once: what cannot be built, such as a polar that does not close, is told here. */
  checkBlade({ rotor }: Turbine, tree: Tree): void {
    if (rotor.aerodynamics.kind !== 'blade') return;
    try {
      bladeOf(rotor);
    } catch (error) {
      this.problems.push(problemAt(placeOf(tree, ['rotor', 'aerodynamics']), reasonOf(error)));
    }
  }

  /** The file that the scenario refers to under `kind`, decoded, with its tree for messages. */
  async part<T>(
    kind: PartKind,
    scenario: Tree,
    overrides: readonly Override[],
    schema: z.ZodType<T>,
  ): Promise<{ value: T; tree: Tree } | undefined> {
    const written = entryOf(scenario, kind)?.value;
    if (!written) return undefined;
    const file = entryOf(written, 'file')?.value ?? written;
    if (file.kind !== 'scalar' || typeof file.value !== 'string') return undefined;
    const opened = await this.open(kind, this.resolved(file.value, file.place), file.place);
    const tree = opened && (await this.complete(opened, [...setsOf(written), ...into(kind, overrides)]));
    const value = tree && this.check(tree, schema);
    return tree && value !== undefined ? { value, tree } : undefined;
  }

  /** The factory of the user's own control law, tried once. */
  async factory(
    { module, settings }: Extract<ControllerFileData, { kind: 'module' }>,
    tree: Tree,
    machine: Machine,
  ): Promise<ControllerFactory | undefined> {
    const place = placeOf(tree, ['module']);
    const path = this.resolved(module, place);
    return this.gatherAsync(async () => {
      await this.text(path, place);
      const factory = await this.attempt(place, `${module} cannot be loaded`, () => this.files.importDefault(path));
      if (typeof factory !== 'function') {
        throw new InputError([problemAt(place, `${module} has no default export that makes a controller`)]);
      }
      const product = await this.attempt(place, `the factory of ${module} fails`, async () =>
        factory(inSi(settings), machine),
      );
      const breach = contractBreach(product);
      if (breach) throw new InputError([problemAt(place, `the factory of ${module} ${breach}`)]);
      return factory as ControllerFactory;
    });
  }

  /** The scenario's own tree, complete. */
  async scenario(main: string, overrides: readonly Override[]): Promise<Tree> {
    const opened = await this.open('scenario', main, { argument: main });
    const own = overrides.filter((o) => routeOf(o) === undefined);
    const tree = opened && (await this.complete(opened, own));
    if (!tree) throw this.error();
    return tree;
  }

  windParts(parts: readonly WindPart[], site: Site, tree: Tree): WindPartData[] {
    return parts.flatMap((part, index) => {
      try {
        return { field: part.field(site), turbulence: part.turbulence?.(site) };
      } catch (error) {
        if (!(error instanceof RangeError)) throw error;
        this.problems.push(problemAt(placeOf(tree, ['wind', index]), error.message));
        return [];
      }
    });
  }

  /** A part of the wind as the command line writes it. */
  windTree(text: string): Tree | undefined {
    return this.gather(() => parseYaml(text, WIND_OPTION));
  }

  problem(place: Place, message: string): void {
    this.problems.push(problemAt(place, message));
  }

  /** Events with gust conditions turned into instants. */
  events(events: readonly WrittenEvent[], wind: WindField, tree: Tree): ScriptedEvent[] {
    return events.flatMap(({ trigger, action }, index) => {
      if (trigger.kind !== 'gust') return { trigger, action };
      const mark = wind.marks().find(({ kind }) => kind === trigger.mark);
      if (mark) return { trigger: { kind: 'time', at: mark.time }, action };
      this.problems.push(problemAt(placeOf(tree, ['events', index, 'when', 'gust']), 'there is no gust in the wind'));
      return [];
    });
  }

  private async openChain(kind: FileKind, path: string, namedAt: Place, chain: readonly string[]): Promise<Mapping> {
    if (chain.includes(path)) {
      const circle = [...chain.slice(chain.indexOf(path)), path].join(' extends ');
      throw new InputError([problemAt(namedAt, `circular reference: ${circle}`)]);
    }
    const tree = ofKind(kind, parseYaml(await this.text(path, namedAt), path), namedAt);
    const base = entryOf(tree, 'extends')?.value;
    if (base?.kind !== 'scalar' || typeof base.value !== 'string') return tree;
    const under = await this.openChain(kind, this.resolved(base.value, base.place), base.place, [...chain, path]);
    return merge(under, without(tree, 'extends')) as Mapping;
  }

  private async withTables(tree: Tree): Promise<Tree> {
    if (tree.kind === 'list')
      return { ...tree, items: await Promise.all(tree.items.map((item) => this.withTables(item))) };
    if (tree.kind === 'scalar') return tree;
    let completed = tree;
    for (const [key, entry] of tree.entries) {
      const { value } = entry;
      const isFile = value.kind === 'scalar' && typeof value.value === 'string' && value.value.endsWith('.csv');
      const read =
        isFile && TABLE_KEYS.includes(key)
          ? await this.csv(this.resolved(String(value.value), value.place), value.place)
          : await this.withTables(value);
      completed = withEntry(completed, key, { ...entry, value: read });
    }
    return completed;
  }

  private async csv(path: string, namedAt: Place): Promise<Tree> {
    return parseCsvTable(await this.text(path, namedAt), path);
  }

  private async text(path: string, namedAt: Place): Promise<string> {
    const known = this.texts.get(path);
    if (known) return known.text;
    const isMain = 'argument' in namedAt && namedAt.argument === path;
    const text = await this.attempt(namedAt, isMain ? 'cannot be read' : `${path} cannot be read`, () =>
      this.files.read(path),
    );
    this.texts.set(path, { text, sha256: await this.files.digest(text) });
    return text;
  }

  private resolved(reference: string, writtenAt: Place): string {
    return this.files.resolve(reference, 'file' in writtenAt ? writtenAt.file : undefined);
  }

  private async attempt<T>(place: Place, what: string, act: () => Promise<T>): Promise<T> {
    try {
      return await act();
    } catch (error) {
      throw new InputError([problemAt(place, `${what}: ${reasonOf(error)}`)]);
    }
  }

  private gather<T>(act: () => T): T | undefined {
    try {
      return act();
    } catch (error) {
      this.note(error);
      return undefined;
    }
  }

  private async gatherAsync<T>(act: () => Promise<T>): Promise<T | undefined> {
    try {
      return await act();
    } catch (error) {
      this.note(error);
      return undefined;
    }
  }

  private note(error: unknown): void {
    if (!(error instanceof InputError)) throw error;
    this.problems.push(...error.problems);
  }
}

/** The overrides that stand beside a reference. */
function setsOf(reference: Tree): Override[] {
  const set = entryOf(reference, 'set')?.value;
  if (set?.kind !== 'mapping') return [];
  return [...set.entries].map(([path, { key, value }]) => ({ path, key, value }));
}

/** The tree, if its tag says that it is a file of the kind that is due. */
function ofKind(kind: FileKind, tree: Tree, namedAt: Place): Mapping {
  const due = formatTag(kind);
  const entry = entryOf(tree, 'galehold');
  if (tree.kind !== 'mapping' || !entry) {
    throw new InputError([problemAt(tree.place, `a ${kind} file starts with "galehold: ${due}"`)]);
  }
  const written = entry.value.kind === 'scalar' ? String(entry.value.value) : '';
  if (written === due) return tree;
  const other = FILE_KINDS.find((k) => written.startsWith(`${k}/`));
  const namer = 'file' in namedAt ? ` (${placeText(namedAt)} names it as one)` : '';
  const message =
    other === undefined
      ? `"${written}" is no format that galehold knows; a ${kind} file starts with "galehold: ${due}"`
      : other === kind
        ? `the format "${written}" is not known to this version, which reads "${due}"`
        : `this is a ${other} file; a ${kind} file is due${namer}`;
  throw new InputError([problemAt(entry.value.place, message)]);
}
