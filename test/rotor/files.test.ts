import { describe, expect, it } from 'vitest';
import { readScenario, readTurbine } from '../../scenarios/load.ts';
import { setUp } from '../../scenarios/run.ts';
import { surfaceOf } from '../../sim/aerodynamics/surface-rotor.ts';
import { changed, machineText, memoryFiles, messagesOf, scenarioText, TURBINE } from '../scenarios/memory-files.ts';

/** The machine's turbine with keys added to its rotor, to its tower, and at its end. */
function turbineText({ rotor = '', tower = '', end = '' }): string {
  const text = machineText(TURBINE);
  const withRotor = rotor === '' ? text : changed(TURBINE, '  hub_height: 110 m', `${rotor}  hub_height: 110 m`);
  const marker = 'damping_ratio: 0.005';
  if (!withRotor.includes(marker)) throw new Error(`the turbine does not contain ${marker}`);
  return `${withRotor.replace(marker, `${marker}\n${tower}  # `)}\n${end}`;
}

const STRUCTURE = (mass: string, flap: string) =>
  `  structure:\n    mass:\n      columns: [radius (m), mass (kg/m)]\n      rows: ${mass}\n    flap: ${flap}\n`;
const FLAP = '{ frequency: 0.7 Hz, damping_ratio: 0.006, shape: [1, 0.4] }';

const turbine = (parts: Parameters<typeof turbineText>[0]) =>
  messagesOf(readTurbine(memoryFiles({ [TURBINE]: turbineText(parts) }), TURBINE));
const messages = (text: string, parts?: Parameters<typeof turbineText>[0]) => {
  const files = memoryFiles({ 'test.yaml': scenarioText(text), ...(parts && { [TURBINE]: turbineText(parts) }) });
  return messagesOf(readScenario(files, 'test.yaml').then((scenario) => setUp(scenario, surfaceOf(scenario.turbine))));
};

describe('A turbine file', () => {
  it('may say tilt, cone, overhang, mass, flap, side-side mode, tower shape and yaw drive', async () => {
    const text = turbineText({
      rotor: `  tilt: 5 deg\n  cone: 2 deg\n  overhang: 4 m\n${STRUCTURE('[[1.6, 900], [65, 20]]', FLAP)}`,
      tower:
        '  side_side: { modal_mass: 290 t, frequency: 0.27 Hz, damping_ratio: 1 % }\n  top_diameter: 3 m\n  base_diameter: 4 m\n',
      end: 'yaw_drive: { rate: 0.3 deg/s, dead_band: 8 deg, vane_time_constant: 30 s }\nrotor_model: blade_element\n',
    });
    const { rotor, tower, yawDrive, rotorModel } = await readTurbine(memoryFiles({ [TURBINE]: text }), TURBINE);
    expect(rotor.tilt).toBeCloseTo((5 * Math.PI) / 180, 12);
    expect(rotor.structure?.massPerLength).toEqual([900, 20]);
    expect(rotor.structure?.flap).toEqual({ frequency: 0.7, dampingRatio: 0.006, shape: [1, 0.4] });
    expect(tower.sideSide?.frequency).toBe(0.27);
    expect(tower.baseDiameter).toBe(4);
    expect(yawDrive?.deadBand).toBeCloseTo((8 * Math.PI) / 180, 12);
    expect(rotorModel).toBe('blade element');
  });

  it.each([
    ['radii of the mass that fall', { rotor: STRUCTURE('[[30, 100], [20, 200]]', FLAP) }, /radii must rise/],
    ['a blade of no mass', { rotor: STRUCTURE('[[1.6, 100], [65, 0]]', FLAP) }, /a mass must be above zero/],
    [
      'a mode shape that leaves the tip at rest',
      { rotor: STRUCTURE('[[1.6, 100], [65, 10]]', '{ frequency: 0.7 Hz, damping_ratio: 0.01, shape: [1, -1] }') },
      /must add up to more than zero/,
    ],
    ['a tilt that is a slip of the pen', { rotor: '  tilt: 50 deg\n' }, /"50 deg" is out of range/],
    ['a mass at one radius only', { rotor: STRUCTURE('[[1.6, 100]]', FLAP) }, /2/],
    [
      'a yaw drive that never turns',
      { end: 'yaw_drive: { rate: 0 deg/s, dead_band: 8 deg, vane_time_constant: 30 s }' },
      /out of range: it must be above 0/,
    ],
    [
      'a word for the rotor that does not exist',
      { end: 'rotor_model: blades' },
      /surface.*blade_element|blade_element/,
    ],
  ])('with %s is refused where it stands', async (_, parts, message) => {
    const [first, ...others] = await turbine(parts);
    expect(first).toMatch(message);
    expect(first).toMatch(/^turbines\/skerry-3.6-130.yaml:\d+:\d+: /);
    expect(others).toEqual([]);
  });
});

describe('A scenario file', () => {
  it('chooses the rotor with one word, over the turbine’s own', async () => {
    const kind = async (text: string, parts?: Parameters<typeof turbineText>[0]) => {
      const files = memoryFiles({ 'test.yaml': scenarioText(text), ...(parts && { [TURBINE]: turbineText(parts) }) });
      const scenario = await readScenario(files, 'test.yaml');
      return setUp(scenario, surfaceOf(scenario.turbine)).rotor.resolvesBlades;
    };
    const own = { end: 'rotor_model: blade_element' };
    expect(await kind('')).toBe(false);
    expect(await kind('rotor_model: blade_element')).toBe(true);
    expect(await kind('', own)).toBe(true);
    expect(await kind('rotor_model: surface', own)).toBe(false);
  });

  it.each([
    ['follows the wind without a yaw drive', 'nacelle: { yaw: follows_wind }', /the turbine has no yaw_drive/],
    ['has too few strips', 'blade_element: { sections: 2 }', /sections|5/],
    ['asks for a wake that does not exist', 'blade_element: { wake: frozen }', /dynamic/],
    ['yaws without a unit', 'nacelle: { yaw_error: 8 }', /8 needs a unit, for example "8 deg"/],
    ['lets the wind rise too steeply', 'upflow: 60 deg', /out of range/],
  ])('that %s is refused', async (_, text, message) => {
    expect((await messages(text)).join('\n')).toMatch(message);
  });
});
