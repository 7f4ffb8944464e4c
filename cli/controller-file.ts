/** Writes tuned gains into a copy of the user's own controller file, with a comment on each number. */
import { readFile } from 'node:fs/promises';
import { dirname, isAbsolute, join, relative, resolve } from 'node:path';
import { type Document, isMap, isScalar, isSeq, parse, parseDocument, type YAMLMap } from 'yaml';
import type { GainScheduleSettings } from '../controllers/gain-schedule.ts';
import { refusal } from '../scenarios/input-error.ts';

/** The numbers of a pitch law, each with what to say about it. */
export interface TunedLaw {
  proportional: number;
  integral: number;
  schedule: GainScheduleSettings;
  /** Corner of the speed filter, Hz; left as it is when absent. */
  filterFrequency?: number;
  comments: { proportional: string; integral: string; schedule: string; filterFrequency?: string };
  /** Lines for the head of the file. */
  head: readonly string[];
}

const DEGREE = Math.PI / 180;
const TUNABLE = 'scheduled_pi_pitch';

/**
 * The controller file that a scenario names.
 * @throws InputError where it cannot be found, or has no gains that are known here
 */
export async function controllerPathOf(scenarioFile: string): Promise<string> {
  const document = parseDocument(await readFile(scenarioFile, 'utf8'));
  const written = document.get('controller', true);
  const named = isMap(written) ? written.get('file') : document.get('controller');
  if (typeof named !== 'string') {
    throw refusal(
      scenarioFile,
      'the controller must be named in this very file, as in "controller: my-controller.yaml"',
    );
  }
  return isAbsolute(named) ? named : join(dirname(scenarioFile), named);
}

/**
 * The text of `file` with the law's gains replaced and their comments put beside them; all else is kept as it stands.
 * @param target where the text will be written
 * @param set overrides as the command line gave them: those of the controller go into the text, for the gains hold with them
 * @throws InputError where the file has no pitch law with gains
 */
export async function withTunedLaw(
  file: string,
  target: string,
  set: readonly string[],
  tuned: TunedLaw,
): Promise<string> {
  const document = parseDocument(await readFile(file, 'utf8'));
  const overrides = controllerOverrides(set);
  const law = pitchLawOf(document, file);
  for (const { path, value } of overrides) document.setIn(path, value);
  // What the head says about the gains is no longer so.
  dropHead(document);
  document.commentBefore = [...tuned.head.map((line) => ` ${line}`), ` Made from ${fromFolderOf(target, file)}.`].join(
    '\n',
  );
  put(document, law, 'proportional', `${precise(tuned.proportional)} s`, tuned.comments.proportional);
  put(document, law, 'integral', Number(precise(tuned.integral)), tuned.comments.integral);
  put(document, law, 'schedule', scheduleTree(tuned.schedule), undefined);
  const schedule = law.get('schedule', true);
  if (isMap(schedule)) {
    schedule.commentBefore = ` ${tuned.comments.schedule}`;
    for (const { value } of schedule.items) if (isSeq(value)) value.flow = true;
  }
  if (tuned.filterFrequency !== undefined) {
    put(
      document,
      law,
      'speed_filter',
      { frequency: `${precise(tuned.filterFrequency)} Hz` },
      tuned.comments.filterFrequency,
    );
  }
  return document.toString({ lineWidth: 120, flowCollectionPadding: true });
}

/** @throws InputError as `withTunedLaw` */
export async function requireGains(file: string): Promise<void> {
  pitchLawOf(parseDocument(await readFile(file, 'utf8')), file);
}

function dropHead({ contents }: Document): void {
  if (!isMap(contents)) return;
  contents.commentBefore = null;
  const key = contents.items[0]?.key;
  if (isScalar(key)) key.commentBefore = null;
}

const CONTROLLER_PATH = /^\s*controller\.([^=]+?)\s*=\s*(.*)$/s;

function controllerOverrides(set: readonly string[]): { path: (string | number)[]; value: unknown }[] {
  return set.flatMap((text) => {
    const [, path, value] = CONTROLLER_PATH.exec(text) ?? [];
    if (path === undefined) return [];
    return [{ path: path.split('.').map((part) => (/^\d+$/.test(part) ? Number(part) : part)), value: parse(value) }];
  });
}

function pitchLawOf(document: Document, file: string): YAMLMap {
  if (document.has('module')) {
    throw refusal(file, 'this controller is a module of your own: it has no gains that galehold knows how to set');
  }
  if (document.has('extends')) {
    throw refusal(file, 'this controller extends another file; tune that one, or write the laws out here');
  }
  const laws = document.get('laws', true);
  const law = isSeq(laws) ? laws.items.find((item) => isMap(item) && item.get('law') === TUNABLE) : undefined;
  if (!isMap(law)) throw refusal(file, `there is no law with gains to tune; "law: ${TUNABLE}" is due`);
  return law;
}

function put(document: Document, law: YAMLMap, key: string, value: unknown, comment: string | undefined): void {
  const node = document.createNode(value);
  if (comment !== undefined) node.comment = ` ${comment}`;
  law.set(key, node);
}

function scheduleTree(schedule: GainScheduleSettings): Record<string, unknown> {
  const degrees = (angle: number) => `${precise(angle / DEGREE)} deg`;
  switch (schedule.kind) {
    case 'constant':
      return { kind: schedule.kind };
    case 'reciprocal':
      return { kind: schedule.kind, halving_pitch: degrees(schedule.halvingPitch) };
    case 'quadratic':
      return {
        kind: schedule.kind,
        linear_pitch: degrees(schedule.linearPitch),
        quadratic_pitch: degrees(schedule.quadraticPitch),
      };
    case 'table':
      return {
        kind: schedule.kind,
        pitch: schedule.pitch.map(degrees),
        factor: schedule.factor.map((value) => Number(precise(value))),
      };
  }
}

/** Four digits: the loop does not feel the fifth. */
function precise(value: number): string {
  return String(Number(value.toPrecision(4)));
}

function fromFolderOf(target: string, file: string): string {
  return relative(dirname(resolve(target)), resolve(file)).replaceAll('\\', '/');
}
