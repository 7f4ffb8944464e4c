import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Controller } from '../../controllers/contract.ts';
import { loadScenario } from '../../scenarios/disk.ts';
import { readScenario } from '../../scenarios/load.ts';
import {
  MACHINE_FOLDER,
  type Module,
  memoryFiles,
  messagesOf,
  PROTECTION,
  scenarioText,
  TURBINE,
} from './memory-files.ts';

const controllerText = `galehold: controller/1
name: My law
module: ./law.mjs
settings:
  gain: 0.01 s
  levels: [12 rpm, 3]
  note: a word
supervisor:
  sample_time: 10 ms
  start_up: { pitch: 15 deg, pitch_rate: 3 deg/s, connect_speed: 0.6 rated, setpoint_rate: 0.2 rpm/s }
  high_wind: { above: 25 m/s, averaging: 60 s }
`;

const idle: Controller = { name: 'idle', sampleTime: 0.01, memory: [], needs: [], start: () => {}, step: () => {} };

function read(modules: Record<string, Module>, text = controllerText) {
  const files = memoryFiles(
    { 'test.yaml': scenarioText('controller: mine/my.yaml', ['controller']), 'mine/my.yaml': text },
    modules,
  );
  return readScenario(files, 'test.yaml');
}

describe('The user’s own control law', () => {
  it('is made with its settings in SI and the data of the machine', async () => {
    let seen: unknown[] = [];
    const factory = (...given: unknown[]) => {
      seen = given;
      return idle;
    };
    const { controller } = await read({ 'mine/law.mjs': { exported: factory } });
    expect(controller).toMatchObject({
      kind: 'module',
      factory,
      settings: { gain: 0.01, levels: [expect.closeTo(0.4 * Math.PI, 12), 3], note: 'a word' },
      supervisor: { normalStop: expect.arrayContaining([{ kind: 'park' }]) },
    });
    expect(seen[0]).toEqual({ gain: 0.01, levels: [expect.closeTo(0.4 * Math.PI, 12), 3], note: 'a word' });
    expect(seen[1]).toMatchObject({ gearRatio: 100, bladeCount: 3, ratedTorque: expect.closeTo(30155.7, 1) });
  });

  const wrong: [string, Record<string, Module>, string][] = [
    ['whose module is missing', {}, 'mine/law.mjs cannot be read: no such file'],
    [
      'whose module does not load',
      { 'mine/law.mjs': { exported: new Error('Unexpected token') } },
      './law.mjs cannot be loaded: Unexpected token',
    ],
    [
      'without a default export',
      { 'mine/law.mjs': { exported: undefined } },
      './law.mjs has no default export that makes a controller',
    ],
    [
      'whose factory throws',
      {
        'mine/law.mjs': {
          exported: () => {
            throw new Error('gain is too high');
          },
        },
      },
      'the factory of ./law.mjs fails: gain is too high',
    ],
    [
      'whose factory makes nothing',
      { 'mine/law.mjs': { exported: () => undefined } },
      'the factory of ./law.mjs returns no controller',
    ],
    [
      'whose factory forgets the sample time',
      { 'mine/law.mjs': { exported: () => ({ ...idle, sampleTime: undefined }) } },
      'the factory of ./law.mjs returns a controller without a positive sampleTime',
    ],
  ];
  it.each(wrong)('%s is told at the key that names it', async (_what, modules, message) => {
    expect(await messagesOf(read(modules))).toEqual([`mine/my.yaml:3:9: ${message}`]);
  });

  it('and laws at the same time are one too many', async () => {
    const text = controllerText.replace('settings:', 'sample_time: 10 ms\nsettings:');
    expect(await messagesOf(read({ 'mine/law.mjs': { exported: () => idle } }, text))).toEqual([
      'mine/my.yaml:4:14: a module states its own sample time',
    ]);
  });
});

describe('Files on the disk', () => {
  let folder = '';
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'galehold-'));
    const text = scenarioText('controller: my.yaml', ['controller'])
      .replace(TURBINE, join(MACHINE_FOLDER, TURBINE))
      .replace(PROTECTION, join(MACHINE_FOLDER, PROTECTION));
    await writeFile(join(folder, 'test.yaml'), text);
    await writeFile(join(folder, 'my.yaml'), controllerText);
    await writeFile(
      join(folder, 'law.mjs'),
      'export default (s) => ({ name: "gain " + s.gain, sampleTime: 0.01, memory: [], needs: [], start() {}, step() {} });\n',
    );
  });
  afterAll(() => rm(folder, { recursive: true }));

  it('bring a module along', async () => {
    const { controller, inputs, name } = await loadScenario(join(folder, 'test.yaml'));
    if (controller.kind !== 'module') throw new Error('a module is due');
    expect(controller.factory(controller.settings, {} as never).name).toBe('gain 0.01');
    expect(inputs.map((i) => i.path)).toEqual(expect.arrayContaining(['test.yaml', 'my.yaml', 'law.mjs']));
    expect(name).toBe('test');
  });

  it('that are no files, or not text, are told so', async () => {
    expect(await messagesOf(loadScenario(folder))).toEqual([`${folder}: cannot be read: it is a folder, not a file`]);
    const path = join(folder, 'latin.yaml');
    await writeFile(path, Buffer.from([0x74, 0xe9, 0x0a]));
    expect(await messagesOf(loadScenario(path))).toEqual([`${path}: cannot be read: it is not UTF-8 text`]);
  });
});
