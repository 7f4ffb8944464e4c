import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import { linearModels } from '../../cli/linearize-models.ts';
import { marginsTable } from '../../cli/margins-table.ts';
import { trimTable } from '../../cli/trim-table.ts';
import { tuneByFormula } from '../../cli/tune-formula.ts';
import { tuneByMargin } from '../../cli/tune-margin.ts';
import { tuneByScenario } from '../../cli/tune-scenario.ts';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { InputError } from '../../scenarios/input-error.ts';
import type { ControllerData } from '../../scenarios/scenario.ts';
import { SCENARIO_FILE } from './demo-machine.ts';

const folder = mkdtempSync(join(tmpdir(), 'galehold-tuning-'));
const CONSTANT_TORQUE = 'controller.laws.1.above_rated=constant_torque';
const FORMULA = { set: [], frequency: '0.5', damping: '0.8', aerodynamicDamping: true, constantPower: true, lag: true };
const MARGIN = {
  set: [CONSTANT_TORQUE],
  sensitivityPeak: '2',
  gainMargin: '2',
  phaseMargin: '35 deg',
  delayMargin: '0.2 s',
  density: '10',
  inertia: '10',
  slope: '20',
};
const RANGE = { set: [], step: '5 m/s' };

/** A scenario that names the given controller file, with the shipped turbine. */
function scenarioWith(controller: string, name: string): string {
  const file = join(folder, `${name}.yaml`);
  const at = shippedFolder();
  const text = readFileSync(SCENARIO_FILE, 'utf8')
    .replace('turbines/', `${at}/turbines/`)
    .replace('protections/', `${at}/protections/`)
    .replace(/controller: .*/, `controller: ${controller}`);
  writeFileSync(file, text);
  return file;
}

function pitchLawOf(controller: ControllerData) {
  const law =
    controller.kind === 'laws' ? controller.laws.find((each) => each.law === 'scheduled PI pitch') : undefined;
  if (law?.law !== 'scheduled PI pitch') throw new Error('no pitch law');
  return law;
}

/** What a command prints while `act` runs. */
async function printed(act: () => Promise<void>): Promise<string> {
  const lines: string[] = [];
  const { log } = console;
  console.log = (...parts: unknown[]) => void lines.push(parts.join(' '));
  try {
    await act();
  } finally {
    console.log = log;
  }
  return lines.join('\n');
}

async function refused(act: () => Promise<void>): Promise<string> {
  try {
    await act();
  } catch (error) {
    if (error instanceof InputError) return error.message;
    throw error;
  }
  throw new Error('was not refused');
}

describe('what the tuning commands write', () => {
  it('is a controller file that loads, with the formula’s gains and a comment on each', async () => {
    const out = join(folder, 'formula.yaml');
    const report = join(folder, 'formula.html');
    await printed(() => tuneByFormula(SCENARIO_FILE, { ...FORMULA, out, report, at: '18 m/s' }));
    const law = pitchLawOf((await loadScenario(scenarioWith(out, 'with-formula'))).controller);
    const before = pitchLawOf((await loadScenario(SCENARIO_FILE)).controller);
    expect(law.proportional).not.toBe(before.proportional);
    expect(law.speedFilter).toEqual(before.speedFilter);
    expect(law.rateLimit).toBe(before.rateLimit);
    const text = readFileSync(out, 'utf8');
    expect(text).toMatch(/proportional: 0\.\d+ s # formula for 0\.5 rad\/s and damping 0\.8 at 18\.0 m\/s/);
    expect(text).toMatch(/^# Gains by formula for 0\.5 rad\/s/);
    expect(text).toContain('rate_limit: 7 deg/s # leaves the drives');
    expect(readFileSync(report, 'utf8')).toMatch(/Nyquist’s curve[\s\S]*Poles of the closed loop against wind/);
  });

  it('carries overrides of the controller along, for the margins hold with them only', async () => {
    const out = join(folder, 'margin.yaml');
    await printed(() => tuneByMargin(SCENARIO_FILE, { ...MARGIN, out }));
    const { controller } = await loadScenario(scenarioWith(out, 'with-margin'));
    const torque = controller.kind === 'laws' ? controller.laws.find((law) => law.law === 'torque curve') : undefined;
    expect(torque?.law === 'torque curve' && torque.aboveRated).toBe('constant torque');
    const margins = await printed(() =>
      marginsTable(scenarioWith(out, 'with-margin'), { ...RANGE, rotor: 'surface', json: true }),
    );
    for (const { margins: found } of JSON.parse(margins).rows) expect(1 / found.modulus.distance).toBeLessThan(2);
  });

  it('lists models whose matrices fit their names, and trims with slopes and a stall margin', async () => {
    const models = JSON.parse(
      await printed(() => linearModels(SCENARIO_FILE, { ...RANGE, rotor: 'surface', json: true })),
    );
    for (const model of models.models) {
      expect(model.a).toHaveLength(model.states.length);
      expect(model.b[0]).toHaveLength(models.inputs.length);
      expect(model.c).toHaveLength(models.outputs.length);
      expect(model.modes[0].participation).toHaveLength(model.states.length);
    }
    const csv = join(folder, 'models.csv');
    await printed(() => linearModels(SCENARIO_FILE, { ...RANGE, rotor: 'surface', csv }));
    const [head, first] = readFileSync(csv, 'utf8').split('\n');
    expect(head).toBe('wind_m_s,matrix,of,by,value');
    expect(first).toMatch(/^3\.5,A,drivetrain: rotor speed,drivetrain: rotor speed,-0\.\d+$/);
    const trim = JSON.parse(await printed(() => trimTable(SCENARIO_FILE, { ...RANGE, step: '1 m/s', json: true })));
    const last = trim.points[trim.points.length - 1];
    expect(last.slopes.torquePerPitch).toBeLessThan(0);
    expect(last.stall.margin).toBeGreaterThan(0);
    expect(trim.scheduleFits.map((fit: { schedule: { kind: string } }) => fit.schedule.kind)).toEqual([
      'constant',
      'reciprocal',
      'quadratic',
      'table',
    ]);
  });
});

describe('a search that is interrupted', () => {
  const command = fileURLToPath(new URL('../../dist/cli/main.js', import.meta.url));
  const scenario = (name: string) => {
    const file = scenarioWith(`${shippedFolder()}/controllers/skerry-pi.yaml`, name);
    writeFileSync(
      file,
      readFileSync(file, 'utf8')
        .replace(/duration: .*/, 'duration: 25 s')
        .replace(/limits:[\s\S]*$/, ''),
    );
    return file;
  };
  const search = (file: string, out: string, more: string[] = [], timeout = 100_000) =>
    spawnSync(
      process.execPath,
      [command, 'tune', 'scenario', file, '--seeds', '1', '--budget', '40', '--out', out, ...more],
      { encoding: 'utf8', timeout, killSignal: 'SIGKILL' },
    );

  it('goes on from its journal, even a cut one, to the answer of an unbroken one, whatever the number of workers', () => {
    const file = scenario('search');
    const whole = join(folder, 'whole.yaml');
    expect(search(file, whole, ['--workers', '2']).status).toBe(0);
    const journal = readFileSync(`${whole}.journal`, 'utf8');
    const lines = journal.trimEnd().split('\n');
    expect(lines.length).toBeGreaterThan(30);

    const resumed = join(folder, 'resumed.yaml');
    const half = lines.slice(0, 14).join('\n');
    writeFileSync(`${resumed}.journal`, `${half}\n${lines[15].slice(0, 20)}`);
    expect(search(file, resumed, ['--workers', '1']).status).toBe(0);
    expect(readFileSync(resumed, 'utf8')).toBe(readFileSync(whole, 'utf8'));
    const after = readFileSync(`${resumed}.journal`, 'utf8').trimEnd().split('\n');
    expect(after.length).toBe(lines.length + 1); // the cut line stands, its run was done anew
  }, 120_000);
});

describe('bad input of the tuning commands', () => {
  const out = join(folder, 'never.yaml');

  it('names a turbine that cannot reach its rated power, and how far it comes', async () => {
    const message = await refused(() =>
      tuneByFormula(SCENARIO_FILE, {
        ...FORMULA,
        out,
        set: [
          'turbine.ratings.power=30 MW',
          'controller.laws.1.maximum_torque=1.2 rated',
          'turbine.generator.maximum_torque=400 kN m',
        ],
      }),
    );
    expect(message).toMatch(/no wind speed carries the turbine to its rated power of 30000 kW; the most is \d+ kW/);
  });

  it('says why no wind speed has a trim', async () => {
    const message = await refused(() =>
      trimTable(SCENARIO_FILE, { ...RANGE, from: '0.5 m/s', to: '1 m/s', step: '0.5 m/s' }),
    );
    expect(message).toMatch(/no wind speed can be trimmed: at 0\.5 m\/s/);
  });

  it('names the mode of a machine that is unstable as given', async () => {
    const message = await refused(() =>
      tuneByMargin(SCENARIO_FILE, { ...MARGIN, out, set: ['controller.laws.1.above_rated=constant_power'] }),
    );
    expect(message).toMatch(/m\/s the machine is unstable with its pitch held: "drivetrain: shaft twist"/);
  });

  it('names the wind speed that prevents the asked margins, and the best there', async () => {
    const message = await refused(() => tuneByMargin(SCENARIO_FILE, { ...MARGIN, out, phaseMargin: '150 deg' }));
    expect(message).toMatch(/at \d+\.\d m\/s no gain keeps a phase margin of 150\.0 deg: the best found there is/);
  });

  it('says that a module has no gains to set', async () => {
    const own = join(shippedFolder(), '15-own-control-law.yaml');
    for (const act of [
      () => tuneByFormula(own, { ...FORMULA, out }),
      () => tuneByMargin(own, { ...MARGIN, set: [], out }),
      () => tuneByScenario([own], { set: [], out, seeds: '1', budget: '100', seed: '1' }),
    ]) {
      expect(await refused(act)).toMatch(/own-law\.yaml: this controller is a module of your own: it has no gains/);
    }
  });

  it.each([
    [
      () => tuneByFormula(SCENARIO_FILE, { ...FORMULA, out, frequency: 'fast' }),
      /--frequency: must be a number above 0/,
    ],
    [
      () => tuneByFormula(SCENARIO_FILE, { ...FORMULA, out, at: '6 m/s' }),
      /--at: the pitch loop does not work below rated power/,
    ],
    [
      () => tuneByMargin(SCENARIO_FILE, { ...MARGIN, out, sensitivityPeak: '1' }),
      /--sensitivity-peak: must be a number above 1/,
    ],
    [
      () => tuneByScenario([SCENARIO_FILE], { set: [], out, seeds: '3..1', budget: '100', seed: '1' }),
      /--seeds: must be whole numbers/,
    ],
    [
      () => tuneByScenario([SCENARIO_FILE], { set: [], out, seeds: '1..20', budget: '100', seed: '1' }),
      /--budget: is enough for 5 candidates/,
    ],
    [() => linearModels(SCENARIO_FILE, { ...RANGE, rotor: 'wooden' }), /--rotor: must be surface or blade_element/],
    [
      () => marginsTable(SCENARIO_FILE, { ...RANGE, rotor: 'surface', from: '4 m/s', to: '9 m/s' }),
      /no wind speed carries the turbine/,
    ],
  ])('is refused with the option at fault (%#)', async (act, message) => {
    expect(await refused(act)).toMatch(message);
  });
});
