import { describe, expect, it } from 'vitest';
import { readScenario, readTurbine } from '../../scenarios/load.ts';
import { CONTROLLER, changed, memoryFiles, messagesOf, PROTECTION, scenarioText, TURBINE } from './memory-files.ts';

function scenario(text: string, extra: Record<string, string> = {}) {
  return messagesOf(readScenario(memoryFiles({ 'test.yaml': text, ...extra }), 'test.yaml'));
}

function turbine(from: string | RegExp, to: string) {
  return messagesOf(readTurbine(memoryFiles({ [TURBINE]: changed(TURBINE, from, to) }), TURBINE));
}

function withController(from: string | RegExp, to: string) {
  return scenario(scenarioText(), { [CONTROLLER]: changed(CONTROLLER, from, to) });
}

function withProtection(from: string | RegExp, to: string) {
  return scenario(scenarioText(), { [PROTECTION]: changed(PROTECTION, from, to) });
}

/** Where a piece of text stands in a file, as messages write it. */
function at(path: string, text: string, piece: string): string {
  const before = text.slice(0, text.indexOf(piece)).split('\n');
  return `${path}:${before.length}:${(before.at(-1) ?? '').length + 1}`;
}

describe('A scenario file', () => {
  it('that is right is read without complaint', async () => {
    expect(await scenario(scenarioText())).toEqual([]);
  });

  it('that is missing is named', async () => {
    expect(await messagesOf(readScenario(memoryFiles({}), 'nope.yaml'))).toEqual([
      'nope.yaml: cannot be read: no such file',
    ]);
  });

  it('that is not YAML is told with line and column', async () => {
    expect(await scenario('galehold: scenario/1\nwind: [1, 2\n')).toEqual([
      'test.yaml:3:1: not YAML: flow sequence in block collection must be sufficiently indented and end with a ]',
    ]);
  });

  it('with a key twice is told where the second stands', async () => {
    expect(await scenario(scenarioText('seed: 1\nseed: 2'))).toEqual([
      'test.yaml:10:1: this key stands here a second time',
    ]);
  });

  it('with a misspelt key is told the nearest one, and not that the right one is missing', async () => {
    expect(await scenario(scenarioText('durration: 60 s', ['duration']))).toEqual([
      'test.yaml:8:1: unknown key "durration" - did you mean "duration"?',
    ]);
  });

  it('with a misspelt key deep inside is told line and column of that key', async () => {
    const gust = 'wind:\n  - kind: cosine_gust\n    start: 5 s\n    durration: 3 s\n    amplitude: 4 m/s';
    expect(await scenario(scenarioText(gust, ['wind']))).toEqual([
      'test.yaml:11:5: unknown key "durration" - did you mean "duration"?',
    ]);
  });

  it('without a key is told which one', async () => {
    expect(await scenario(scenarioText('', ['duration', 'start']))).toEqual([
      'test.yaml:1:1: missing key "start"',
      'test.yaml:1:1: missing key "duration"',
    ]);
  });

  it('with several mistakes is told all of them, by line', async () => {
    expect(
      await scenario(
        scenarioText('duration: 60\nwind: [{ kind: stedy, speed: 3 m/s }, { kind: steady, speed: 12 kg }]\nseed: 1.5', [
          'duration',
          'wind',
        ]),
      ),
    ).toEqual([
      'test.yaml:7:11: 60 needs a unit, for example "60 s"',
      'test.yaml:8:16: unknown word "stedy" - did you mean "steady"?',
      'test.yaml:8:62: "12 kg" is a mass; a speed is due, for example "12 m/s"',
      'test.yaml:9:7: a whole number is due here, not 1.5',
    ]);
  });

  it('that names another kind of file is told so, with the place that names it', async () => {
    expect(await scenario(scenarioText(`controller: ${TURBINE}`, ['controller']))).toEqual([
      `${TURBINE}:3:11: this is a turbine file; a controller file is due (test.yaml:8:13 names it as one)`,
    ]);
  });

  it('without its tag, or with one of another version, is told which tag is due', async () => {
    expect(await scenario('title: x\n')).toEqual(['test.yaml:1:1: a scenario file starts with "galehold: scenario/1"']);
    expect(await scenario('galehold: scenario/7\n')).toEqual([
      'test.yaml:1:11: the format "scenario/7" is not known to this version, which reads "scenario/1"',
    ]);
    expect(await scenario('')).toEqual(['test.yaml:1:1: a scenario file starts with "galehold: scenario/1"']);
  });

  it('that refers to a missing file is told at the reference', async () => {
    expect(await scenario(scenarioText('turbine: nope.yaml', ['turbine']))).toEqual([
      'test.yaml:8:10: nope.yaml cannot be read: no such file',
    ]);
  });

  it('that extends itself in a circle is told the chain', async () => {
    const messages = await scenario('galehold: scenario/1\nextends: a.yaml\n', {
      'a.yaml': 'galehold: scenario/1\nextends: b.yaml\n',
      'b.yaml': 'galehold: scenario/1\nextends: a.yaml\n',
    });
    expect(messages).toEqual(['b.yaml:2:10: circular reference: a.yaml extends b.yaml extends a.yaml']);
  });

  it('whose alias stands inside the value it names is told where', async () => {
    expect(await scenario('galehold: scenario/1\nwind: &w\n  - *w\n')).toEqual([
      'test.yaml:3:5: this alias stands inside the very value that it names',
    ]);
  });

  it('with limits that cannot be judged is told what would be right', async () => {
    const limits = [
      'limits:',
      '  - { channel: rotor_sped_rpm, statistic: max, below: 13 rpm }',
      '  - { channel: rotor_speed_rpm, statistic: max, below: 13 }',
      '  - { channel: rotor_speed_rpm, statistic: max, below: 13 m/s }',
      '  - { channel: rotor_speed_rpm, statistic: time_above, below: 3 s }',
      '  - { channel: pitch_1_deg, statistic: max, below: 1.1 rated }',
      '  - { channel: rotor_speed_rpm, statistic: max }',
      '  - { channel: rotor_speed_rpm, statistic: max, below: 13 rpm, from: 70 s }',
      '  - { channel: brake_energy_kj, statistic: max, below: 3 MJ }',
    ];
    expect(await scenario(scenarioText(limits.join('\n')))).toEqual([
      'test.yaml:10:16: there is no channel or metric "rotor_sped_rpm" - did you mean "rotor_speed_rpm"?',
      'test.yaml:11:56: 13 needs a unit, for example "13 rpm"',
      'test.yaml:12:56: "13 m/s" is a speed; a rotational speed is due, for example "12 rpm"',
      'test.yaml:13:5: the statistic time_above needs a level',
      'test.yaml:14:52: "1.1 rated" is relative, but this has no rated value; an angle is due, for example "5 deg"',
      'test.yaml:15:5: a bound is due: either below or above',
      'test.yaml:17:44: "brake_energy_kj" is a metric and takes no statistic',
    ]);
  });

  it('with a window after the end of the run is told so', async () => {
    const limits = 'limits: [{ channel: rotor_speed_rpm, statistic: max, below: 13 rpm, from: 70 s }]';
    expect(await scenario(scenarioText(limits))).toEqual([
      'test.yaml:9:75: this window starts at or after the end of the run (60 s)',
    ]);
  });

  it('with events that cannot happen is told why', async () => {
    const events = [
      'events:',
      '  - { do: grid_los, at: 3 s }',
      '  - { do: pitch_stuck, blades: [4], at: 3 s }',
      '  - { do: grid_loss, when: { channel: rotor_speed_rpm, above: 3 m } }',
      '  - { do: grid_loss, when: { gust: pek } }',
      '  - { do: grid_loss }',
    ];
    expect(await scenario(scenarioText(events.join('\n')))).toEqual([
      'test.yaml:10:11: unknown word "grid_los" - did you mean "grid_loss"?',
      'test.yaml:11:33: there is no blade 4; blades are counted 1 to 3',
      'test.yaml:12:63: "3 m" is a length; a rotational speed is due, for example "12 rpm"',
      'test.yaml:13:36: unknown word "pek" - did you mean "peak"?',
      'test.yaml:14:5: a time is due: either "at" or "when"',
    ]);
  });

  it('that waits for a gust where there is none is told so', async () => {
    expect(await scenario(scenarioText('events: [{ do: grid_loss, when: { gust: peak } }]'))).toEqual([
      'test.yaml:9:41: there is no gust in the wind',
    ]);
  });

  it('with a gust that the standard does not know is told by the standard’s rule', async () => {
    const gust =
      'wind: [{ kind: operating_gust, edition: 3, wind_class: III, turbulence: A+, hub_wind: 12 m/s, start: 5 s }]';
    expect(await scenario(scenarioText(gust, ['wind']))).toEqual([
      'test.yaml:8:8: turbulence category A+ came with edition 4 of IEC 61400-1; edition 3 knows A, B, C and S',
    ]);
  });

  it('that expects to fail must say why', async () => {
    expect(await scenario(scenarioText('expect: { verdict: broken }'))).toEqual([
      'test.yaml:9:1: an expected failure needs a reason: add "because"',
    ]);
  });
});

describe('A turbine file', () => {
  it('that is given where a scenario is due is told so', async () => {
    expect(await messagesOf(readScenario(memoryFiles({}), TURBINE))).toEqual([
      `${TURBINE}:3:11: this is a turbine file; a scenario file is due`,
    ]);
  });

  const cases: [string, string, string, string, string][] = [
    [
      'a negative inertia',
      'rotor_inertia: 3.2e7 kg m^2',
      'rotor_inertia: -1 kg m^2',
      '-1 kg m^2',
      '"-1 kg m^2" is out of range: it must be above 0 kg m^2',
    ],
    ['a bare number', 'radius: 65 m', 'radius: 65', '65 #', '65 needs a unit, for example "65 m"'],
    [
      'an efficiency above one',
      'gear_efficiency: 0.97',
      'gear_efficiency: 1.2',
      '1.2 #',
      '1.2 is out of range: it must be at most 1',
    ],
    [
      'a hub wider than the rotor',
      'hub_radius: 1.6 m',
      'hub_radius: 70 m',
      '70 m',
      'the hub radius must be smaller than the tip radius',
    ],
    [
      'travel limits the wrong way round',
      'minimum: -2 deg',
      'minimum: 95 deg',
      '95 deg',
      'the minimum must be smaller than the maximum',
    ],
    [
      'a never-exceed speed below rated',
      'never_exceed_speed: 15.6 rpm',
      'never_exceed_speed: 11 rpm',
      '11 rpm',
      'the never-exceed speed must lie above the rated speed',
    ],
    [
      'an unknown airfoil',
      'airfoil: tip 18 }',
      'airfoil: tip 81 }',
      'tip 81',
      'unknown airfoil "tip 81" - did you mean "tip 18"?',
    ],
    [
      'a second airfoil of a name',
      'name: outer 24',
      'name: tip 18',
      'tip 18\n        thickness: 0.18',
      'a second airfoil is called "tip 18"',
    ],
    [
      'airfoils out of order',
      'relative_radius: 0.40',
      'relative_radius: 0.20',
      '0.20, airfoil',
      'relative radii must rise',
    ],
    [
      'a generator too weak for its rating',
      'maximum_torque: 34 kN m',
      'maximum_torque: 20 kN m',
      '20 kN m',
      'rated power at rated speed takes 30.1557 kN m, more than this maximum',
    ],
    [
      'a protection sensor that cannot see overspeed',
      'range: 30 rpm',
      'range: 14 rpm',
      '14 rpm',
      'the sensor must reach beyond 15.6 rpm',
    ],
    [
      'a brake that fades before it is warm',
      'fade_end: 650 degC',
      'fade_end: 300 degC',
      '300 degC',
      'the fade must end at a higher temperature than it starts at',
    ],
    ['backup travel that does not rise', '- [180, 3.0]', '- [80, 3.0]', '80, 3.0', 'travel must rise from row to row'],
    [
      'an unknown kind',
      'kind: two_masses',
      'kind: two_mases',
      'two_mases',
      'unknown word "two_mases" - did you mean "two_masses"?',
    ],
  ];
  it.each(cases)('with %s is told where and why', async (_what, from, to, piece, message) => {
    const text = changed(TURBINE, from, to);
    expect(await turbine(from, to)).toEqual([
      `${at(TURBINE, text, piece).replace(/:\d+$/, '')}:${columnOf(text, piece, message)}: ${message}`,
    ]);
  });

  /** List items are placed at their first cell; everything else where the value stands. */
  function columnOf(text: string, piece: string, message: string): string {
    const column = Number(at('', text, piece).split(':').at(-1));
    return String(message.startsWith('travel') ? column - 1 : column);
  }
});

describe('A blade given by stations', () => {
  function blade(rows: string[]): string {
    const stations = [
      'kind: stations',
      '      stations:',
      '        columns: [radius (m), chord (m), twist (deg), airfoil]',
      '        rows:',
      ...rows.map((row) => `          - [${row}]`),
    ].join('\n');
    return changed(TURBINE, /kind: optimum_layout[\s\S]*?(?= {4}airfoils:)/, `${stations}\n`);
  }
  const read = (rows: string[]) => messagesOf(readTurbine(memoryFiles({ [TURBINE]: blade(rows) }), TURBINE));
  const good = ['1.6, 2.6, 14, root cylinder', '12, 4.2, 12, inner 40', '40, 2.2, 2, outer 24', '65, 0.4, 0, tip 18'];
  const row = (index: number) => new RegExp(`^${TURBINE}:${at('', blade(good), good[index] ?? '').split(':')[1]}:13: `);

  it('is read with its units', async () => {
    const turbine = await readTurbine(memoryFiles({ [TURBINE]: blade(good) }), TURBINE);
    const { aerodynamics } = turbine.rotor;
    if (aerodynamics.kind !== 'blade' || aerodynamics.blade.kind !== 'stations') throw new Error('stations are due');
    expect(aerodynamics.blade.stations[1]).toEqual({
      radius: 12,
      chord: 4.2,
      twist: expect.closeTo(Math.PI / 15, 12),
      airfoil: 'inner 40',
    });
  });

  it('may not have a chord of zero', async () => {
    const [message, ...others] = await read(good.with(2, '40, 0, 2, outer 24'));
    expect(message).toMatch(row(2));
    expect(message).toContain('a chord must be above 0 m, but is 0 m');
    expect(others).toEqual([]);
  });

  it('may not have two stations at a radius', async () => {
    const [message, ...others] = await read(good.with(2, '12, 2.2, 2, outer 24'));
    expect(message).toMatch(row(2));
    expect(message).toContain('a second station stands at radius 12 m');
    expect(others).toEqual([]);
  });

  it('may not reach beyond the tip', async () => {
    const [message, ...others] = await read(good.with(3, '70, 0.4, 0, tip 18'));
    expect(message).toMatch(row(3));
    expect(message).toContain('the station at 70 m lies outside the blade, 1.6 m to 65 m');
    expect(others).toEqual([]);
  });
});

describe('A protection file', () => {
  it('whose trip level lies below rated speed is told so, at the level', async () => {
    const text = changed(PROTECTION, '1.12 rated', '0.98 rated');
    expect(await withProtection('1.12 rated', '0.98 rated')).toEqual([
      `${at(PROTECTION, text, '0.98 rated')}: the trip level 11.76 rpm must lie above rated speed, 12 rpm`,
    ]);
  });

  it('whose guard starts a stop that does not exist is told the nearest', async () => {
    const text = changed(PROTECTION, 'stop: brake_at_once', 'stop: brake_at_onse');
    expect(await withProtection('stop: brake_at_once', 'stop: brake_at_onse')).toEqual([
      `${at(PROTECTION, text, 'brake_at_onse')}: unknown stop "brake_at_onse" - did you mean "brake_at_once"?`,
    ]);
  });

  it('without a normal stop is told that the supervisor needs one', async () => {
    const text = changed(PROTECTION, '  normal:', '  ordinary:');
    expect(await withProtection('  normal:', '  ordinary:')).toEqual([
      `${at(PROTECTION, text, 'stops:')}: a stop called "normal" is due; the supervisor uses it`,
    ]);
  });

  it('whose step waits for nothing is told so', async () => {
    const [message] = await withProtection(
      '{ do: wait, rotor_speed_below: 2 rpm, at_most: 120 s }',
      '{ do: wait, at_most: 120 s }',
    );
    expect(message).toContain('a condition is due: for_time, rotor_speed_below or pitch_above');
  });
});

describe('A controller file', () => {
  it('without a law for the torque is told which to add', async () => {
    const text = changed(CONTROLLER, /\n {2}- law: torque_curve[\s\S]*?(?=\nsupervisor)/, '');
    expect(await withController(/\n {2}- law: torque_curve[\s\S]*?(?=\nsupervisor)/, '')).toEqual([
      `${at(CONTROLLER, text, 'laws:')}: no law sets the generator torque; add "law: torque_curve"`,
    ]);
  });

  it('whose pitch limits are the wrong way round is told so', async () => {
    const text = changed(CONTROLLER, 'minimum: 0 deg', 'minimum: 89 deg');
    expect(await withController('minimum: 0 deg', 'minimum: 89 deg')).toEqual([
      `${at(CONTROLLER, text, '89 deg')}: the minimum must be smaller than the maximum`,
    ]);
  });

  it('whose k ω² would pass rated torque is told by how much', async () => {
    const text = changed(CONTROLLER, '1.8 N m', '2.8 N m');
    expect(await withController('1.8 N m', '2.8 N m')).toEqual([
      `${at(CONTROLLER, text, '2.8 N m')}: k speed² reaches 39.9048 kN m at optimal_to, more than rated torque, 30.1557 kN m`,
    ]);
  });
});
