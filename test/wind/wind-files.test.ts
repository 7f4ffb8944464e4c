/** The wind as scenario files write it. */
import { describe, expect, it } from 'vitest';
import { readScenario, readWind, readWindParts } from '../../scenarios/load.ts';
import { turbulenceField } from '../../sim/wind/turbulence.ts';
import { memoryFiles, messagesOf, scenarioText, TURBINE } from '../scenarios/memory-files.ts';

const DEGREE = Math.PI / 180;
const velocity = new Float64Array(3);

function read(wind: string, more = '', files: Record<string, string> = {}) {
  const text = scenarioText(`wind:\n${wind}\n${more}`, ['wind']);
  return readScenario(memoryFiles({ 'test.yaml': text, ...files }), 'test.yaml');
}

async function complaint(wind: string, files: Record<string, string> = {}): Promise<string> {
  const messages = await messagesOf(read(wind, '', files));
  expect(messages).toHaveLength(1);
  return messages[0] ?? '';
}

const IEC = 'edition: 4, wind_class: III, turbulence: B';

describe('The wind of a scenario', () => {
  it.each([
    { part: '{ kind: steady, speed: 10 m/s, profile: { kind: power_law, exponent: 0.2 } }', hub: 10 },
    { part: '{ kind: steady, speed: 10 m/s, profile: { kind: logarithmic, roughness: 0.03 m } }', hub: 10 },
    { part: '{ kind: normal_profile, speed: 12 m/s }', hub: 12 },
    { part: `{ kind: direction_change, ${IEC}, hub_wind: 12 m/s, start: 5 s, towards: right }`, hub: 0 },
    { part: `{ kind: coherent_gust, ${IEC}, hub_wind: 12 m/s, start: 5 s }`, hub: 0 },
    { part: `{ kind: extreme_shear, ${IEC}, hub_wind: 12 m/s, start: 5 s, faster: below }`, hub: 0 },
    { part: `{ kind: extreme_wind, ${IEC}, years: 50 }`, hub: 52.5 },
    { part: `{ kind: extreme_wind, ${IEC}, years: 1, tropical: true }`, hub: 63.84 },
  ])('can be $part', async ({ part, hub }) => {
    const { wind } = await read(`  - ${part}`);
    wind.velocity(0, 0, 0, velocity);
    expect(velocity[0]).toBeCloseTo(hub, 9);
  });

  it.each([
    { part: `{ kind: normal_turbulence, ${IEC}, hub_wind: 12 m/s }`, deviation: 2.044 },
    { part: `{ kind: extreme_turbulence, ${IEC}, hub_wind: 12 m/s }`, deviation: 3.07216 },
    { part: '{ kind: turbulence, hub_wind: 12 m/s, intensity: 10 % }', deviation: 1.2 },
    { part: `{ kind: turbulent_extreme_wind, ${IEC}, years: 50 }`, deviation: 4.125 },
  ])('can be turbulent: $part', async ({ part, deviation }) => {
    const text = scenarioText(`wind:\n  - ${part}\nseed: 9`, ['wind']);
    const { parts } = await readWind(memoryFiles({ 'test.yaml': text }), 'test.yaml');
    expect(parts).toHaveLength(1);
    expect(parts[0]?.turbulence).toMatchObject({ duration: 60, seed: 9, rate: 20, variance: 'exact' });
    expect(parts[0]?.turbulence?.deviation[0]).toBeCloseTo(deviation, 9);
    expect(parts[0]?.field.rotorMean(10)).not.toBe(parts[0]?.field.rotorMean(20));
  });

  it('turns as a whole with a direction change, turbulence and all', async () => {
    const turbulent = '  - { kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, duration: 100 s, rate: 4 Hz }';
    const change = `  - { kind: direction_change, ${IEC}, hub_wind: 12 m/s, start: 5 s }`;
    const straight = (await read(`  - { kind: steady, speed: 12 m/s }\n${turbulent}`)).wind;
    const turning = (await read(`  - { kind: steady, speed: 12 m/s }\n${turbulent}\n${change}`)).wind;
    straight.velocity(40, 10, 20, velocity);
    const [u = 0, v = 0, w] = velocity;
    turning.velocity(40, 10, 20, velocity);
    const angle = turning.direction?.(40) ?? 0;
    expect(angle).toBeGreaterThan(20 * DEGREE);
    expect(velocity[0]).toBeCloseTo(u * Math.cos(angle) - v * Math.sin(angle), 9);
    expect(velocity[1]).toBeCloseTo(u * Math.sin(angle) + v * Math.cos(angle), 9);
    expect(velocity[2]).toBe(w);
  });

  it('turns the mean wind of an extreme wind once', async () => {
    const { wind } = await read(
      `  - { kind: turbulent_extreme_wind, ${IEC}, years: 50, misalignment: 30 deg, rate: 2 Hz }`,
    );
    const { wind: straight } = await read(`  - { kind: turbulent_extreme_wind, ${IEC}, years: 50, rate: 2 Hz }`);
    expect(wind.rotorMean(7)).toBeCloseTo(straight.rotorMean(7) * Math.cos(30 * DEGREE), 9);
  });

  it('has parts that come later, stronger and for a while', async () => {
    const { wind } = await read(
      '  - { kind: steady, speed: 10 m/s }\n' +
        '  - { kind: step, at: 0 s, rise: 2 m/s, delay: 10 s, scale: 1.5, window: { to: 30 s, fade: 2 s } }',
    );
    expect([9, 20, 29, 31].map((t) => Number(wind.rotorMean(t).toFixed(9)))).toEqual([10, 13, 11.5, 10]);
  });

  it('takes its fields from where the files are kept, if they are kept', async () => {
    const asked: number[] = [];
    const files = memoryFiles({
      'test.yaml': scenarioText('wind: [{ kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, rate: 2 Hz, seed: 5 }]', [
        'wind',
      ]),
    });
    const { wind } = await readScenario(
      {
        ...files,
        turbulence(turbulence) {
          asked.push(turbulence.seed);
          return turbulenceField(turbulence);
        },
      },
      'test.yaml',
    );
    wind.velocity(1, 0, 30, velocity);
    expect(asked).toEqual([5]);
  });
});

describe('A wind that the command line writes', () => {
  const asked = (texts: string[], duration = 60) =>
    readWindParts(memoryFiles({}), texts, { turbine: TURBINE, duration, seed: 4 });

  it('has parts as a scenario has them', async () => {
    const { parts, site } = await asked([
      '{ kind: steady, speed: 12 m/s }',
      '{ kind: turbulence, hub_wind: 12 m/s, intensity: 0.1 }',
    ]);
    expect(parts.map(({ turbulence }) => turbulence?.seed)).toEqual([undefined, 4]);
    expect(site.rotorDiameter).toBe(130);
    expect(parts[0]?.field.rotorMean(0)).toBe(12);
  });

  it('is told what is wrong with a part, and where in it', async () => {
    expect((await messagesOf(asked(['{ kind: steady, sped: 12 m/s }'])))[0]).toBe(
      '--part:1:17: unknown key "sped" - did you mean "speed"?',
    );
    expect(await messagesOf(asked(['{ kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, duration: 30 s }']))).toEqual(
      ['--part:1:1: this wind ends at 30 s, before the 60 s that are asked for'],
    );
    expect(await messagesOf(asked(['{ kind: ']))).toHaveLength(1);
  });
});

describe('The air of a scenario', () => {
  it('takes the place of the density that the turbine file names', async () => {
    const { turbine } = await read('  - { kind: steady, speed: 14 m/s }', 'air: { altitude: 2000 m }');
    expect(turbine.airDensity).toBeCloseTo(1.0066, 3);
    const cold = await read('  - { kind: steady, speed: 14 m/s }', 'air: { altitude: 0 m, temperature: -20 degC }');
    expect(cold.turbine.airDensity).toBeCloseTo(1.3944, 4);
    const usual = await read('  - { kind: steady, speed: 14 m/s }');
    expect(usual.turbine.airDensity).toBe(1.225);
  });
});

describe('A mast record', () => {
  const record = (csv: string, more = '') =>
    read(`  - { kind: recorded, series: mast.csv${more} }`, '', { 'mast.csv': csv });

  it('brings speeds at heights and the direction, in its own units', async () => {
    const rows = Array.from({ length: 8 }, (_, i) => `${10 * i}, 28.8, 43.2, ${i < 4 ? 350 : 10}`);
    const csv = `time (s), speed at 80 m (km/h), speed at 120 m (km/h), direction (deg)\n${rows.join('\n')}\n`;
    const { wind } = await record(csv, ', heading: 0 deg');
    // 8 m/s at 80 m and 12 m/s at 120 m: 11 m/s at the hub, 110 m. From 350° to 10° through north: the flow, which was
    // turned 10° to the left, is turned 10° to the right.
    wind.velocity(0, 0, 0, velocity);
    expect(velocity[0]).toBeCloseTo(11 * Math.cos(10 * DEGREE), 6);
    expect((wind.direction?.(0) ?? 0) / DEGREE).toBeCloseTo(10, 6);
    expect((wind.direction?.(70) ?? 0) / DEGREE).toBeCloseTo(-10, 6);
    expect(Math.abs(wind.direction?.(35) ?? 1) / DEGREE).toBeLessThan(1e-6);
  });

  const rows = (times: readonly number[]) => times.map((t) => `${t}, 10\n`).join('');
  it.each([
    {
      what: 'with missing rows',
      csv: `time (s), speed (m/s)\n${rows([0, 10, 20, 50, 60])}`,
      message:
        "mast.csv:5:1: a gap: 50 s follows 20 s, where the record's step is 10 s; what is missing is not invented",
    },
    {
      what: 'with a missing value',
      csv: 'time (s), speed (m/s)\n0, 10\n10,\n20, 10\n60, 10\n',
      message: 'mast.csv:3:4: no value stands here, and none is invented',
    },
    {
      what: 'whose time is no number',
      csv: 'time (s), speed (m/s)\n0, 10\nNaN, 10\n20, 10\n60, 10\n',
      message: 'mast.csv:3:1: "NaN" is not a number',
    },
    {
      what: 'whose time falls back',
      csv: `time (s), speed (m/s)\n${rows([0, 10, 5, 20, 60])}`,
      message: 'mast.csv:4:1: time must rise from row to row, but 5 s follows 10 s',
    },
    {
      what: 'with uneven steps',
      csv: `time (s), speed (m/s)\n${rows([0, 20, 40, 47, 67, 87])}`,
      message: "mast.csv:5:1: uneven steps: 47 s follows 40 s, where the record's step is 20 s",
    },
    {
      what: 'that is shorter than the run',
      csv: `time (s), speed (m/s)\n${rows([0, 10, 20, 30])}`,
      message: 'test.yaml:9:5: this wind ends at 30 s, before the run does (60 s)',
    },
    {
      what: 'that starts late',
      csv: `time (s), speed (m/s)\n${rows([20, 40, 60, 80])}`,
      message: 'mast.csv:2:1: the record starts at 20 s; it must start at 0 s or before (delay: "-20 s" shifts it)',
    },
    {
      what: 'without a speed',
      csv: 'time (s), direction (deg)\n0, 1\n20, 1\n40, 1\n60, 1\n',
      message: 'mast.csv:1:1: a column "speed (m/s)", or one or more such as "speed at 80 m (m/s)", is due',
    },
    {
      what: 'with directions but no heading',
      csv: 'time (s), speed (m/s), direction (deg)\n0, 9, 1\n20, 9, 1\n40, 9, 1\n60, 9, 1\n',
      message: 'mast.csv:1:1: a record with directions needs the direction that the rotor faces: add "heading"',
    },
    {
      what: 'of an unknown quantity at a height',
      csv: `time (s), sped at 80 m (m/s)\n${rows([0, 20, 40, 60])}`,
      message: 'mast.csv:1:11: unknown column "sped at 80 m" - did you mean "speed at # m"?',
    },
  ])('$what is told where and why', async ({ csv, message }) => {
    expect((await messagesOf(record(csv)))[0]).toBe(message);
  });

  it('that starts late is shifted by a delay', async () => {
    const { wind } = await record(`time (s), speed (m/s)\n${rows([20, 40, 60, 80])}`, ', delay: -20 s');
    expect(wind.rotorMean(0)).toBeCloseTo(10, 9);
  });
});

describe('A wind that cannot be', () => {
  it.each([
    {
      what: 'a mean wind outside the class',
      wind: `  - { kind: normal_turbulence, ${IEC}, hub_wind: 40 m/s }`,
      message:
        'test.yaml:9:5: a mean wind of 40 m/s lies outside wind class III, which reaches up to its reference wind, 37.5 m/s',
    },
    {
      what: 'a grid too coarse for the rotor',
      wind: '  - { kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, rings: 2 }',
      message:
        'test.yaml:9:5: a grid of 2 ring(s) is too coarse for a rotor of 130 m: its rings lie 32.5 m apart, and 15 % of the diameter is the most; 4 rings or more are due',
    },
    {
      what: 'turbulence shorter than the run',
      wind: '  - { kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, duration: 30 s }',
      message: 'test.yaml:9:5: this wind ends at 30 s, before the run does (60 s)',
    },
    {
      what: 'a seed that is not whole',
      wind: '  - { kind: turbulence, hub_wind: 12 m/s, intensity: 0.1, seed: 1.5 }',
      message: /^test\.yaml:9:\d+: .*whole number/,
    },
    {
      what: 'cyclones in edition 3',
      wind: '  - { kind: extreme_wind, edition: 3, wind_class: I, turbulence: A, years: 50, tropical: true }',
      message: 'test.yaml:9:5: the reference wind of tropical cyclones came with edition 4 of IEC 61400-1',
    },
    {
      what: 'a storm of seven years',
      wind: `  - { kind: extreme_wind, ${IEC}, years: 7 }`,
      message: /^test\.yaml:9:\d+: .*1.*50/,
    },
    {
      what: 'a misspelt kind',
      wind: '  - { kind: normal_turbulance, hub_wind: 12 m/s }',
      message: /^test\.yaml:9:\d+: .*did you mean "normal_turbulence"/,
    },
    {
      what: 'a window too short for its edges',
      wind: '  - { kind: steady, speed: 9 m/s, window: { from: 3 s, to: 5 s, fade: 2 s } }',
      message: 'test.yaml:9:5: a window from 3 s to 5 s is too short to come and go over 2 s each: it must end later',
    },
  ])('$what is told where and why', async ({ wind, message }) => {
    const told = await complaint(wind);
    if (message instanceof RegExp) expect(told).toMatch(message);
    else expect(told).toBe(message);
  });
});
