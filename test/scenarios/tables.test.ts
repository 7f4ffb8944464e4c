import { describe, expect, it } from 'vitest';
import { readScenario, readTurbine } from '../../scenarios/load.ts';
import { changed, memoryFiles, messagesOf, scenarioText, TURBINE } from './memory-files.ts';

const DEGREE = Math.PI / 180;

describe('Wind from a CSV file', () => {
  const text = scenarioText('wind: [{ kind: table, series: wind.csv }]', ['wind']);
  const read = (csv: string) => readScenario(memoryFiles({ 'test.yaml': text, 'wind.csv': csv }), 'test.yaml');
  const complaints = (csv: string) => messagesOf(read(csv));

  it('is read in the units that its header names', async () => {
    const { wind, inputs } = await read('# invented\ntime (min), speed (km/h)\n0, 36\n1, 72\n');
    expect(wind.rotorMean(30)).toBeCloseTo(15, 12);
    expect(inputs.map((i) => i.path)).toContain('wind.csv');
  });

  const cases: [string, string, string][] = [
    [
      'whose time falls back',
      'time (s), speed (m/s)\n0, 10\n20, 11\n10, 12\n60, 12\n',
      'wind.csv:4:1: time must rise from row to row, but 10 s follows 20 s',
    ],
    ['with a hole', 'time (s), speed (m/s)\n0, 10\n20, NaN\n60, 12\n', 'wind.csv:3:5: "NaN" is not a number'],
    [
      'with an empty cell',
      'time (s);speed (m/s)\n0;10\n20;\n60;12\n',
      'wind.csv:3:4: no value stands here, and none is invented',
    ],
    ['of one row', 'time (s), speed (m/s)\n0, 10\n', 'wind.csv:1:1: at least 2 item(s) are due here'],
    [
      'without units',
      'time, speed (m/s)\n0, 10\n60, 10\n',
      'wind.csv:1:1: column "time" needs a unit, for example "time (s)"',
    ],
    [
      'with a wrong unit',
      'time (s), speed (kg)\n0, 10\n60, 10\n',
      'wind.csv:1:11: column "speed": "1 kg" is a mass; a speed is due, for example "12 m/s"',
    ],
    [
      'with an unknown column',
      'time (s), sped (m/s)\n0, 10\n60, 10\n',
      'wind.csv:1:11: unknown column "sped" - did you mean "speed"?',
    ],
    [
      'with a ragged row',
      'time (s), speed (m/s)\n0, 10\n20\n60, 10\n',
      'wind.csv:3:1: this row has 1 cell(s), the header 2',
    ],
    [
      'that ends before the run',
      'time (s), speed (m/s)\n0, 10\n20, 10\n',
      'test.yaml:8:8: this wind ends at 20 s, before the run does (60 s)',
    ],
    ['that is empty', '', 'wind.csv:1:1: the table is empty; a header line such as "time (s), speed (m/s)" is due'],
  ];
  it.each(cases)('%s is told where and why', async (_what, csv, message) => {
    expect((await complaints(csv))[0]).toBe(message);
  });

  it('that is missing is told at its reference', async () => {
    expect(await messagesOf(readScenario(memoryFiles({ 'test.yaml': text }), 'test.yaml'))).toEqual([
      'test.yaml:8:31: wind.csv cannot be read: no such file',
    ]);
  });
});

describe('A polar from a CSV file', () => {
  const turbineText = changed(
    TURBINE,
    /- kind: formula\n {8}name: tip 18[\s\S]*?(?=\n\ndrivetrain)/,
    '- kind: table\n        name: tip 18\n        polar: tip.csv',
  );
  const read = (csv: string) => readTurbine(memoryFiles({ [TURBINE]: turbineText, 'turbines/tip.csv': csv }), TURBINE);
  const polar = (angles: number[]) =>
    `angle (deg),lift,drag\n${angles.map((a) => `${a},${0.1 * a},0.01`).join('\n')}\n`;

  it('is read beside the turbine’s own file', async () => {
    const { aerodynamics } = (await read(polar([-10, 0, 10, 20]))).rotor;
    const airfoil = aerodynamics.kind === 'blade' ? aerodynamics.airfoils.find((a) => a.name === 'tip 18') : undefined;
    expect(airfoil).toMatchObject({
      kind: 'table',
      angle: [-10, 0, 10, 20].map((a) => expect.closeTo(a * DEGREE, 12)),
      lift: [-1, 0, 1, 2].map((l) => expect.closeTo(l, 12)),
      drag: [0.01, 0.01, 0.01, 0.01],
    });
  });

  it.each([
    ['-5 to 20', [-5, 0, 10, 20]],
    ['-10 to 15', [-10, 0, 10, 15]],
  ])('that covers %s deg only, less than the working angles, is told so', async (covered, angles) => {
    const [message = '', ...others] = await messagesOf(read(polar(angles)));
    expect(message).toMatch(/^turbines\/skerry-3.6-130.yaml:\d+:9: /);
    expect(message).toContain(`the polar covers ${covered} deg; it must cover at least -10 to 20 deg`);
    expect(others).toEqual([]);
  });

  it('whose angle falls back is told the row', async () => {
    expect(await messagesOf(read(polar([-10, 5, 0, 20])))).toEqual([
      'turbines/tip.csv:4:1: the angle of attack must rise from row to row',
    ]);
  });

  it('with negative drag is told the row', async () => {
    expect(await messagesOf(read('angle (deg),lift,drag\n-10,-1,0.01\n0,0,-0.01\n20,1,0.1\n'))).toEqual([
      'turbines/tip.csv:3:1: the drag coefficient must not be negative',
    ]);
  });
});

describe('A rotor given by coefficient tables', () => {
  const turbineText = changed(
    TURBINE,
    /kind: blade\n[\s\S]*?(?=\n\ndrivetrain)/,
    'kind: tables\n    coefficients: rotor.csv',
  );
  const read = (csv: string) =>
    readTurbine(memoryFiles({ [TURBINE]: turbineText, 'turbines/rotor.csv': csv }), TURBINE);

  it('has its power coefficients turned into torque coefficients', async () => {
    const csv = 'tip_speed_ratio,pitch (deg),power,thrust\n4,0,0.2,0.5\n4,10,0.1,0.3\n8,0,0.48,0.8\n8,10,0.08,0.2\n';
    expect((await read(csv)).rotor.aerodynamics).toEqual({
      kind: 'tables',
      tables: {
        tipSpeedRatio: [4, 8],
        pitch: [0, expect.closeTo(10 * DEGREE, 12)],
        torqueCoefficient: [
          [0.05, 0.025],
          [0.06, 0.01],
        ],
        thrustCoefficient: [
          [0.5, 0.3],
          [0.8, 0.2],
        ],
      },
    });
  });

  it('with a hole in the grid is told which pair is missing', async () => {
    const csv = 'tip_speed_ratio,pitch (deg),torque,thrust\n0,0,0.02,0.5\n0,10,0.1,0.3\n8,0,0.06,0.8\n9,0,0.05,0.8\n';
    expect(await messagesOf(read(csv))).toEqual([
      expect.stringContaining('no row for tip-speed ratio 8 and pitch 10 deg'),
      expect.stringContaining('no row for tip-speed ratio 9 and pitch 10 deg'),
    ]);
  });

  it('that gives power at standstill is told that torque is due there', async () => {
    const csv = 'tip_speed_ratio,pitch (deg),power,thrust\n0,0,0,0.5\n0,10,0,0.3\n8,0,0.4,0.8\n8,10,0.3,0.8\n';
    expect(await messagesOf(read(csv))).toEqual([
      'turbines/rotor.csv:2:1: at zero tip-speed ratio the torque coefficient is due, not the power',
      'turbines/rotor.csv:3:1: at zero tip-speed ratio the torque coefficient is due, not the power',
    ]);
  });
});
