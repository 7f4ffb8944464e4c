import { describe, expect, it } from 'vitest';
import { readScenario, readTurbine } from '../../scenarios/load.ts';
import { machineText, memoryFiles, messagesOf, scenarioText, TURBINE } from './memory-files.ts';

const RPM = Math.PI / 30;

function read(text: string, sets: string[] = [], extra: Record<string, string> = {}) {
  return readScenario(memoryFiles({ 'test.yaml': text, ...extra }), 'test.yaml', sets);
}

describe('An override on the command line', () => {
  it('changes a value of the scenario', async () => {
    const scenario = await read(scenarioText(), ['wind.0.speed=16 m/s', 'duration=10 s', 'seed=7']);
    expect(scenario.wind.rotorMean(0)).toBe(16);
    expect(scenario.duration).toBe(10);
    expect(scenario.seed).toBe(7);
    expect(scenario.overrides).toEqual(['wind.0.speed=16 m/s', 'duration=10 s', 'seed=7']);
  });

  it('led by turbine, controller or protection changes a value of that file', async () => {
    const scenario = await read(scenarioText(), [
      'turbine.rotor.radius=66 m',
      'controller.laws.0.proportional=0.02 s',
      'protection.guards.1.above=1.15 rated',
    ]);
    expect(scenario.turbine.rotor.radius).toBe(66);
    expect(scenario.controller).toMatchObject({ laws: [{ proportional: 0.02 }, {}] });
    expect(scenario.protection.guards[1]).toMatchObject({ above: expect.closeTo(1.15 * 12 * RPM, 12) });
  });

  it('finds a list item by its name', async () => {
    const scenario = await read(scenarioText(), ['protection.guards.rotor overspeed, first level.above=1.14 rated']);
    expect(scenario.protection.guards[1]).toMatchObject({ above: expect.closeTo(1.14 * 12 * RPM, 12) });
    expect(scenario.protection.guards[0]).toMatchObject({ above: expect.closeTo(1.2 * 12 * RPM, 12) });
  });

  it('makes a part that the file leaves out', async () => {
    const { integrator } = await read(scenarioText(), ['integrator.kind=runge_kutta', 'integrator.step=10 ms']);
    expect(integrator).toEqual({ kind: 'runge-kutta', step: 0.01 });
  });

  it('puts another file in the place of the one referred to', async () => {
    const other = machineText(TURBINE).replace('name: Skerry 3.6-130', 'name: Another');
    expect((await read(scenarioText(), ['turbine=other.yaml'], { 'other.yaml': other })).turbine.name).toBe('Another');
  });

  it('of a turbine read alone needs no leading word', async () => {
    const turbine = await readTurbine(memoryFiles({}), TURBINE, ['rotor.hub_height=100 m']);
    expect(turbine.rotor.hubHeight).toBe(100);
  });

  const wrong: [string, string][] = [
    ['wind.0.speed=16 kg', '"16 kg" is a mass; a speed is due, for example "12 m/s"'],
    ['wind.0.sped=16 m/s', 'unknown key "sped" - did you mean "speed"?'],
    ['wind.3.speed=16 m/s', '"wind" has 1 item(s), counted from 0, and none is "3"'],
    ['title.x=3', '"title" holds a single value; nothing named "x" is inside it'],
    ['turbine.rotor.radus=66 m', 'unknown key "radus" - did you mean "radius"?'],
    ['wind=[]', 'at least 1 item(s) are due here'],
    ['nonsense', 'an override is written path=value, for example "seed=7"'],
    ['seed=[1', 'not YAML: flow sequence must end with a ]'],
  ];
  it.each(wrong)('%s is an error that names the override', async (set, message) => {
    expect(await messagesOf(read(scenarioText(), [set]))).toEqual([`--set ${set}: ${message}`]);
  });
});

describe('An override beside a reference', () => {
  const withSet = (set: string) => scenarioText(`turbine:\n  file: ${TURBINE}\n  set:\n    ${set}`, ['turbine']);

  it('changes the file where it is used', async () => {
    expect((await read(withSet('rotor.radius: 66 m'))).turbine.rotor.radius).toBe(66);
  });

  it('gives way to the command line', async () => {
    const scenario = await read(withSet('rotor.radius: 66 m'), ['turbine.rotor.radius=67 m']);
    expect(scenario.turbine.rotor.radius).toBe(67);
  });

  it('that is wrong is told where the override stands, not where the turbine does', async () => {
    expect(await messagesOf(read(withSet('drivetrain.rotor_inertia: -3 kg m^2')))).toEqual([
      'test.yaml:11:31: "-3 kg m^2" is out of range: it must be above 0 kg m^2',
    ]);
  });
});

describe('A file that extends another', () => {
  const extra = {
    'base/common.yaml': scenarioText(
      'limits: [{ channel: rotor_speed_rpm, statistic: max, below: 14 rpm }]',
    ).replaceAll(/: (turbines|controllers|protections)\//g, ': ../$1/'),
  };

  it('takes what it does not say itself, with paths as seen from the other file', async () => {
    const scenario = await read(
      'galehold: scenario/1\nextends: base/common.yaml\nstart: { wind: 11 m/s }\n',
      [],
      extra,
    );
    expect(scenario.start).toEqual({ kind: 'trim', wind: 11 });
    expect(scenario.turbine.name).toBe('Skerry 3.6-130');
    expect(scenario.limits[0]?.bound).toBeCloseTo(14, 12);
    expect(scenario.inputs.map((i) => i.path)).toContain('base/common.yaml');
  });

  it('is told of a mistake in the other file where that stands', async () => {
    const bad = { 'base/common.yaml': extra['base/common.yaml'].replace('duration: 60 s', 'duration: 60') };
    expect(await messagesOf(read('galehold: scenario/1\nextends: base/common.yaml\n', [], bad))).toEqual([
      'base/common.yaml:8:11: 60 needs a unit, for example "60 s"',
    ]);
  });
});

describe('A scenario as read', () => {
  it('lists every file with its SHA-256', async () => {
    const { inputs } = await read(scenarioText());
    expect(inputs.map((i) => i.path)).toEqual([
      'test.yaml',
      TURBINE,
      'protections/skerry-chain.yaml',
      'controllers/skerry-pi.yaml',
    ]);
    // sha256sum of the empty-suffix text is not known beforehand; two equal texts must agree and two others differ.
    const again = await read(scenarioText());
    const other = await read(scenarioText('seed: 2'));
    expect(again.inputs).toEqual(inputs);
    expect(other.inputs[0]?.sha256).not.toBe(inputs[0]?.sha256);
    expect(other.inputs.slice(1)).toEqual(inputs.slice(1));
  });

  it('has the peak of its gust where an event waits for it', async () => {
    const text = scenarioText(
      'wind:\n  - { kind: steady, speed: 14 m/s }\n  - { kind: cosine_gust, start: 20 s, duration: 8 s, amplitude: 6 m/s }\n' +
        'events: [{ when: { gust: peak }, do: pitch_stuck, blades: [2] }, { when: { channel: rotor_speed_rpm, above: 1.1 rated }, do: grid_loss }]',
      ['wind'],
    );
    const { events, wind } = await read(text);
    expect(wind.rotorMean(24)).toBeCloseTo(20, 12);
    expect(events).toEqual([
      { trigger: { kind: 'time', at: 24 }, action: { kind: 'pitch stuck', blades: [1] } },
      {
        trigger: {
          kind: 'crossing',
          channel: expect.any(Number),
          direction: 'above',
          level: expect.closeTo(13.2 * RPM, 12),
        },
        action: { kind: 'grid loss' },
      },
    ]);
  });

  it('has bounds in the units that results show', async () => {
    const text = scenarioText(
      [
        'limits:',
        '  - { channel: rotor_speed_rpm, statistic: max, below: 1.1 rated }',
        '  - { channel: brake_temperature_c, statistic: max, below: 623.15 K }',
        '  - { channel: brake_temperature_c, statistic: travel, below: 50 K }',
        '  - { channel: electrical_power_kw, statistic: time_above, level: 1.05 rated, below: 2 s }',
        '  - { channel: tower_base_moment_mn_m, statistic: rainflow, exponent: 4, below: 9000 kN m }',
        '  - { channel: brake_energy_kj, below: 3 MJ }',
        '  - { channel: pitch_reversals, below: 30 }',
      ].join('\n'),
    );
    const { limits } = await read(text);
    expect(limits.map((l) => l.bound)).toEqual([13.2, 350, 50, 2, 9, 3000, 30].map((b) => expect.closeTo(b, 9)));
    expect(limits[3]?.level).toBeCloseTo(1.05 * 3.6e6, 6);
  });
});
