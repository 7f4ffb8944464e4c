/** The command as a user or a script meets it: exit codes, what is printed, what is left on the disk. */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CAUTION, type Summary } from '../../scenarios/summary.ts';

const MAIN = resolve('dist/cli/main.js');
let project = '';

function galehold(...words: string[]) {
  const { status, stdout, stderr } = spawnSync(process.execPath, [MAIN, ...words], {
    cwd: project,
    encoding: 'utf8',
    env: { ...process.env, GALEHOLD_CACHE: join(project, '.cache') },
  });
  return { status, stdout, stderr };
}

beforeAll(() => {
  project = mkdtempSync(join(tmpdir(), 'galehold-'));
  expect(galehold('init', 'mine').status).toBe(0);
  project = join(project, 'mine');
});
afterAll(() => rmSync(resolve(project, '..'), { recursive: true }));

const GUST = '04-operating-gust.yaml';
const GRID = '08-grid-loss-at-the-crest.yaml';

describe('galehold run', () => {
  it('ends with 0, a verdict, the caution and a whole result when limits hold', () => {
    const { status, stdout } = galehold('run', GUST);
    expect(status).toBe(0);
    expect(stdout).toMatch(/^holds +04-operating-gust/m);
    expect(stdout).toContain(CAUTION);
    const files = readdirSync(join(project, 'results/04-operating-gust')).sort();
    expect(files).toEqual(['channels.csv', 'channels.parquet', 'summary.json']);
  });

  it('gives the same bytes again', () => {
    const read = () =>
      ['summary.json', 'channels.csv', 'channels.parquet'].map((f) =>
        readFileSync(join(project, 'results/04-operating-gust', f)).toString('base64'),
      );
    galehold('run', GUST);
    const first = read();
    galehold('run', GUST);
    expect(read()).toEqual(first);
  });

  it('ends with 1 when a limit breaks that should hold', () => {
    const { status, stdout } = galehold('run', GUST, '--set', 'limits.0.below=1.05 rated');
    expect(status).toBe(1);
    expect(stdout).toMatch(/NOT AS EXPECTED/);
  });

  it('ends with 1 when limits hold that were expected to break, and with 0 when they do break', () => {
    const expectBroken = ['--set', 'expect={verdict: broken, because: a test}'];
    expect(galehold('run', GUST, ...expectBroken).status).toBe(1);
    const broken = galehold('run', GUST, ...expectBroken, '--set', 'limits.0.below=1.05 rated');
    expect(broken.status).toBe(0);
    expect(broken.stdout).toContain('expected to break: a test');
  });

  it('prints nothing but the summaries as JSON when asked', () => {
    const { status, stdout } = galehold('run', GUST, GRID, '--json', '--out', 'json');
    expect(status).toBe(0);
    const summaries: Summary[] = JSON.parse(stdout);
    expect(summaries.map((summary) => summary.scenario.name)).toEqual([
      '04-operating-gust',
      '08-grid-loss-at-the-crest',
    ]);
    expect(summaries[1].events.filter((event) => event.kind === 'guard')[0].text).toMatch(/^grid loss/);
  });

  it('takes the integrator asked for and says so', () => {
    const { stdout } = galehold('run', GUST, '--integrator', 'runge-kutta', '--json', '--out', 'rk');
    const [summary]: Summary[] = JSON.parse(stdout);
    expect(summary.provenance.integrator).toMatch(/Runge–Kutta/);
    expect(summary.provenance.overrides).toContain('--integrator runge-kutta');
  });

  it('reads every file before the first run, names every problem, and leaves nothing', () => {
    writeFileSync(
      join(project, 'wrong.yaml'),
      readFileSync(join(project, GUST), 'utf8').replace('duration: 90 s', 'duration: 90'),
    );
    const { status, stdout, stderr } = galehold('run', GUST, 'wrong.yaml', 'absent.yaml', '--out', 'none');
    expect(status).toBe(2);
    expect(stdout).toBe('');
    expect(stderr).toMatch(/^wrong\.yaml:\d+:11: 90 needs a unit, for example "90 s"$/m);
    expect(stderr).toMatch(/^absent\.yaml: cannot be read: no such file$/m);
    expect(existsSync(join(project, 'none'))).toBe(false);
  });

  it('ends with 3, the law’s name and the time when a law misbehaves in the run, and leaves no result', () => {
    writeFileSync(
      join(project, 'controllers/bad.mjs'),
      `export default () => ({ name: 'bad', sampleTime: 0.01, memory: [], needs: [], start() {},
         step(t, measured, memory, demands) { demands.pitch.fill(t < 2 ? 0.2 : NaN); demands.generator = 3e4; } });`,
    );
    const file = readFileSync(join(project, 'controllers/skerry-pi.yaml'), 'utf8');
    const supervisor = file.slice(file.indexOf('supervisor:'));
    writeFileSync(
      join(project, 'controllers/bad.yaml'),
      `galehold: controller/1\nname: bad\nmodule: ./bad.mjs\nsettings: {}\n${supervisor}`,
    );
    const { status, stderr } = galehold('run', GUST, '--set', 'controller=controllers/bad.yaml', '--out', 'bad');
    expect(status).toBe(3);
    expect(stderr).toMatch(/04-operating-gust: at 2\.000 s: control law "bad" demands pitch NaN of blade 1/);
    expect(stderr).toMatch(/state there, in SI units:\n[\s\S]*drivetrain: rotor speed +1\.2/);
    expect(existsSync(join(project, 'bad'))).toBe(false);
  });

  it('ends with 2 where results cannot be written', () => {
    writeFileSync(join(project, 'taken'), '');
    const { status, stderr } = galehold('run', GUST, '--out', 'taken');
    expect(status).toBe(2);
    expect(stderr).toMatch(/results cannot be written to taken/);
    expect(galehold('run', GUST, '--out', '/proc/none/here').status).toBe(2);
  });
});

describe('galehold', () => {
  it('explains every command with an example', () => {
    const help = galehold('--help').stdout;
    const commands = [...help.matchAll(/^ {2}([a-z]+) .*$/gm)]
      .map((match) => match[1])
      .filter((name) => name !== 'help');
    expect(commands).toEqual(expect.arrayContaining(['run', 'trim', 'blade', 'view', 'schema', 'init', 'demo']));
    for (const command of commands)
      expect(galehold(command, '--help').stdout, command).toMatch(/Examples?:\n {2}galehold/);
  });

  it('ends with 2 on words it does not know, and suggests the nearest', () => {
    const { status, stderr } = galehold('rum');
    expect(status).toBe(2);
    expect(stderr).toContain('Did you mean run?');
    expect(galehold('run').status).toBe(2);
    expect(galehold('run', GUST, '--speed', '3').status).toBe(2);
  });

  it('trims a turbine over its wind range, as text, CSV, JSON and a page', () => {
    const { status, stdout } = galehold(
      'trim',
      GUST,
      '--step',
      '5 m/s',
      '--csv',
      'trim.csv',
      '--plot',
      'plots/trim.html',
    );
    expect(status).toBe(0);
    expect(stdout).toMatch(/^rated +13\.5 +12\.00/m);
    expect(readFileSync(join(project, 'trim.csv'), 'utf8').split('\n')).toHaveLength(7);
    expect(readFileSync(join(project, 'plots/trim.html'), 'utf8')).toContain('steady operation');
    const { points } = JSON.parse(galehold('trim', GUST, '--from', '10 m/s', '--to', '10 m/s', '--json').stdout);
    expect(points).toHaveLength(1);
    expect(galehold('trim', GUST, '--from', '10').stderr).toMatch(/^--from: 10 needs a unit/);
  });

  it('tells the demo’s story: two scenarios break as they are meant to, and all is as expected', () => {
    const { status, stdout } = galehold('demo', '--out', 'story');
    expect(status).toBe(0);
    expect(stdout.match(/expected to break/g)).toHaveLength(2);
    expect(stdout).toMatch(/all as expected/);
    expect(stdout).toMatch(/^View: .*view\.html/m);
    expect(existsSync(join(project, 'story/view.html'))).toBe(true);
  }, 120_000);
});
