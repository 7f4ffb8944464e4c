import { mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { z } from 'zod';
import { createProject } from '../../cli/project.ts';
import { loadScenario, loadTurbine, shippedFolder } from '../../scenarios/disk.ts';
import { readScenario } from '../../scenarios/load.ts';
import { METRIC_NAMES } from '../../scenarios/metrics.ts';
import { FILE_KINDS, type FileKind } from '../../scenarios/schema/file-kind.ts';
import { jsonSchema } from '../../scenarios/schema/json-schema.ts';
import { CHANNELS } from '../../sim/channels.ts';
import { memoryFiles, messagesOf, scenarioText } from './memory-files.ts';

async function yamlFiles(folder: string): Promise<string[]> {
  const paths = await readdir(folder, { recursive: true });
  return paths.filter((path) => path.endsWith('.yaml')).sort();
}

const shipped = await yamlFiles(shippedFolder());
const scenarios = shipped.filter((path) => !/[\\/]/.test(path));

describe('The shipped files', () => {
  it.each(scenarios)('%s can be read with everything it refers to', async (path) => {
    const { title, limits } = await loadScenario(join(shippedFolder(), path));
    expect(title).not.toBe('');
    expect(limits.length).toBeGreaterThan(0);
  });

  it.each(shipped)('%s passes the JSON Schema that editors see', async (path) => {
    const content: unknown = parse(await readFile(join(shippedFolder(), path), 'utf8'));
    const kind = FILE_KINDS.find((k) => JSON.stringify(content).includes(`"galehold":"${k}/`));
    const schema = schemaOf(kind ?? 'scenario');
    expect(schema.safeParse(content).error?.issues ?? []).toEqual([]);
    expect(schema.safeParse({ ...(content as object), tital: 'x' }).success).toBe(false);
  });

  it('describe a machine whose free-free mode and damping are what its comments say', async () => {
    const { drivetrain } = await loadTurbine(join(shippedFolder(), 'turbines/skerry-3.6-130.yaml'));
    const far = drivetrain.gearRatio ** 2 * drivetrain.generatorInertia;
    // ω² = K (1/J_r + 1/(N² J_g)): two masses on a spring
    const inertia = 1 / (1 / drivetrain.rotorInertia + 1 / far);
    expect(Math.sqrt(drivetrain.stiffness / inertia) / (2 * Math.PI)).toBeCloseTo(1.9, 2);
    expect(drivetrain.damping / (2 * Math.sqrt(drivetrain.stiffness * inertia))).toBeCloseTo(0.02, 3);
  });
});

function schemaOf(kind: FileKind): z.ZodType {
  return z.fromJSONSchema(jsonSchema(kind) as Parameters<typeof z.fromJSONSchema>[0]);
}

/** Every property in a JSON Schema, with the path to it. */
function properties(schema: unknown, path = ''): { path: string; property: Record<string, unknown> }[] {
  if (typeof schema !== 'object' || schema === null) return [];
  return Object.entries(schema).flatMap(([key, value]) => {
    if (key !== 'properties') return properties(value, `${path}/${key}`);
    return Object.entries(value as Record<string, Record<string, unknown>>).flatMap(([name, property]) => [
      { path: `${path}/${name}`, property },
      ...properties(property, `${path}/${name}`),
    ]);
  });
}

describe('The JSON Schema', () => {
  it.each(FILE_KINDS)('of a %s describes every key', (kind) => {
    const undescribed = properties(jsonSchema(kind)).filter(({ property }) => typeof property.description !== 'string');
    expect(undescribed.map(({ path }) => path)).toEqual([]);
    expect(properties(jsonSchema(kind)).length).toBeGreaterThan(10);
  });

  it('asks for a unit where one is due', () => {
    const turbine = jsonSchema('turbine') as { properties: { air_density: { pattern: string; examples: string[] } } };
    const { pattern, examples } = turbine.properties.air_density;
    expect(new RegExp(pattern).test(examples[0] ?? '')).toBe(true);
    expect(new RegExp(pattern).test('kg/m^3')).toBe(false);
  });
});

describe('A limit', () => {
  const dimensionless = new Set(['1', '%']);
  it.each(CHANNELS.map(({ name, unit }) => [name, unit] as const))(
    'on the channel %s is given in %s',
    async (name, unit) => {
      expect(await bareNumberComplaints(name, 'statistic: max, ')).toEqual(
        dimensionless.has(unit) ? [] : [expect.stringContaining('needs a unit')],
      );
    },
  );

  it.each(METRIC_NAMES)('on the metric %s is given in the unit of its name', async (name) => {
    const isPlain = name.endsWith('_pct') || !/_(rpm|deg|deg_s|s|m|kn|kn_m|mn_m|kw|kwh|kj|c)$/.test(name);
    expect(await bareNumberComplaints(name, '')).toEqual(isPlain ? [] : [expect.stringContaining('needs a unit')]);
  });

  function bareNumberComplaints(name: string, statistic: string) {
    const text = scenarioText(`limits: [{ channel: ${name}, ${statistic}below: 5 }]`);
    return messagesOf(readScenario(memoryFiles({ 'test.yaml': text }), 'test.yaml'));
  }
});

describe('A fresh project', () => {
  let around = '';
  beforeEach(async () => {
    around = await mkdtemp(join(tmpdir(), 'galehold-'));
  });
  afterEach(() => rm(around, { recursive: true }));

  it('holds scenarios that can be read, each with a schema for the editor', async () => {
    const folder = join(around, 'project');
    const written = await createProject(folder);
    expect(written).toContain(join(folder, 'README.md'));
    for (const path of await yamlFiles(folder)) {
      const [first = ''] = (await readFile(join(folder, path), 'utf8')).split('\n');
      const schema = /^# yaml-language-server: \$schema=(.*)$/.exec(first)?.[1] ?? '';
      const kind = JSON.parse(await readFile(join(folder, path, '..', schema), 'utf8')).title;
      expect(kind).toBe(`galehold ${path.match(/^(turbine|controller|protection)s/)?.[1] ?? 'scenario'}`);
      if (!/[\\/]/.test(path)) expect((await loadScenario(join(folder, path))).turbine.name).toBe('Skerry 3.6-130');
    }
  });

  it('is written into an empty folder', async () => {
    expect(await createProject(around)).toContain(join(around, '04-operating-gust.yaml'));
  });

  it('is not written over anything', async () => {
    await writeFile(join(around, 'mine.txt'), 'mine');
    expect(await messagesOf(createProject(around))).toEqual([
      `${around}: is not empty; init needs a new or an empty folder`,
    ]);
    expect(await readdir(around)).toEqual(['mine.txt']);
  });

  it('leaves nothing behind where it cannot be written', async () => {
    const folder = join(around, 'no', 'such', 'folder');
    expect(await messagesOf(createProject(folder))).toEqual([
      `${folder}: cannot be written (the folder around it does not exist)`,
    ]);
    expect(await readdir(around)).toEqual([]);
  });
});
