import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { Command } from 'commander';
import { parquetReadObjects } from 'hyparquet';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { registerWind } from '../../cli/wind.ts';
import { shippedFolder } from '../../scenarios/disk.ts';
import { browserPresent, openBrowser, type TestBrowser } from '../web-viewer/browser.ts';

const GUST = join(shippedFolder(), '04-operating-gust.yaml');
const MEAN = '{ kind: normal_profile, speed: 18 m/s }';
const TURBULENT =
  '{ kind: normal_turbulence, edition: 4, wind_class: III, turbulence: B, hub_wind: 18 m/s, rate: 4 Hz, rings: 5, spokes: 12 }';

let folder: string;
let printed: string[];

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'galehold-wind-'));
  printed = [];
  vi.spyOn(console, 'log').mockImplementation((line: string) => printed.push(line));
  vi.stubEnv('GALEHOLD_CACHE', join(folder, 'cache'));
});
afterEach(async () => {
  vi.restoreAllMocks();
  vi.unstubAllEnvs();
  await rm(folder, { recursive: true, force: true });
});

async function wind(...words: string[]): Promise<string> {
  const program = new Command().exitOverride();
  registerWind(program);
  await program.parseAsync(['wind', ...words], { from: 'user' });
  return printed.join('\n');
}

function turbulentWords(...more: string[]): string[] {
  return ['--part', MEAN, '--part', TURBULENT, '--duration', '300 s', ...more];
}

describe('The wind command', () => {
  it('says what the wind of a scenario is like, and when what happens', async () => {
    const told = await wind(GUST);
    // σ₁ = 0.14 (0.75 · 14 + 5.6) = 2.254, Λ₁ = 42 m: V_gust = 3.3 · 2.254/(1 + 0.1 · 130/42) = 5.680 m/s, of which
    // 0.74 come on top of 14 m/s: 18.203.
    expect(told).toMatch(/hub, along the axis +14\.\d+ +0\.\d+ +12\.\d+ +18\.203/);
    expect(told).toMatch(/25\.25 s {2}gust at its peak \(\+4\.2 m\/s\)/);
  });

  it('takes changes of the scenario', async () => {
    expect(await wind(GUST, '--set', 'wind.0.speed=16 m/s')).toMatch(/hub, along the axis +16\./);
  });

  it('holds turbulence against what it should be', async () => {
    const told = await wind(...turbulentWords());
    // σ₁ = 0.14 (0.75 · 18 + 5.6) = 2.674, and 0.8 and 0.5 of it.
    expect(told).toMatch(/hub, along the axis +18\.000 +2\.\d+ +2\.674/);
    expect(told).toMatch(/hub, across .* 2\.139/);
    expect(told).toMatch(/hub, up .* 1\.337/);
    const shares = [...told.matchAll(/(\d+) of (\d+)$/gm)].map(([, inside, of]) => [Number(inside), Number(of)]);
    const [inside = 0, of = 0] = shares.reduce(([a = 0, b = 0], [c = 0, d = 0]) => [a + c, b + d], [0, 0]);
    expect(of).toBeGreaterThan(50);
    expect(inside / of).toBeGreaterThan(0.87);
  });

  it('writes the wind at the hub and at points of the rotor, alike as CSV and as Parquet', async () => {
    const [csv, parquet] = [join(folder, 'wind.csv'), join(folder, 'wind.parquet')];
    await wind(...turbulentWords('--csv', csv, '--parquet', parquet, '--points', '2x3', '--rate', '2 Hz'));
    const [header = '', ...rows] = (await readFile(csv, 'utf8')).trim().split('\n');
    const names = header.split(',');
    expect(names.slice(0, 6)).toEqual([
      'time_s',
      'rotor_mean_m_s',
      'direction_deg',
      'u_hub_m_s',
      'v_hub_m_s',
      'w_hub_m_s',
    ]);
    expect(names).toContain('w_32p5m_240deg_m_s');
    expect(names).toHaveLength(3 + 3 * 7);
    expect(rows).toHaveLength(601);
    const bytes = await readFile(parquet);
    const read = await parquetReadObjects({
      file: bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length),
    });
    expect(read).toHaveLength(601);
    names.forEach((name, column) => {
      expect(read[300]?.[name]).toBeCloseTo(Number(rows[300]?.split(',')[column]), 6);
    });
  });

  it('names points by radius and azimuth: a quarter of a turn past the top is right of the hub, looking downwind', async () => {
    const csv = join(folder, 'shear.csv');
    const shear =
      '{ kind: extreme_shear, edition: 4, wind_class: III, turbulence: B, hub_wind: 12 m/s, start: 4 s, faster: left }';
    await wind('--part', shear, '--duration', '20 s', '--csv', csv, '--points', '1x4', '--rate', '1 Hz');
    const [header = '', ...rows] = (await readFile(csv, 'utf8')).trim().split('\n');
    const crest = rows[10]?.split(',') ?? [];
    const along = (azimuth: number) => Number(crest[header.split(',').indexOf(`u_65m_${azimuth}deg_m_s`)]);
    // 2.5 + 0.2 · 6.4 · 2.044 · (130/42)^¼ = 2.5 + 2.61632 · 1.326397 = 5.97028 m/s at the edge
    expect(along(270)).toBeCloseTo(5.97028, 4);
    expect(along(90)).toBeCloseTo(-5.97028, 4);
    expect(along(0)).toBeCloseTo(0, 9);
  });

  it('reads a record that is named on the command line', async () => {
    const csv = join(folder, 'mast.csv');
    await writeFile(
      csv,
      `time (s), speed (m/s)\n${Array.from({ length: 61 }, (_, i) => `${i}, ${10 + (i % 2)}`).join('\n')}\n`,
    );
    expect(await wind('--part', `{ kind: recorded, series: ${csv} }`, '--duration', '60 s')).toMatch(/axis +10\.\d+/);
  });

  it.each([
    { what: 'no wind', words: [], message: /^wind: no wind is named/ },
    { what: 'two winds', words: [GUST, '--part', MEAN], message: /^--part: a scenario has its own wind/ },
    {
      what: 'a seed that is not whole',
      words: ['--part', MEAN, '--seed', '1.5'],
      message: /^--seed: a whole number.*"1\.5"/,
    },
    {
      what: 'a duration without a unit',
      words: ['--part', MEAN, '--duration', '60'],
      message: /^--duration: 60 needs a unit/,
    },
    {
      what: 'a duration of nothing',
      words: ['--part', MEAN, '--duration', '0 s'],
      message: /^--duration: must be above 0/,
    },
    {
      what: 'points that are none',
      words: ['--part', MEAN, '--csv', 'x.csv', '--points', '5'],
      message: /^--points: rings and spokes are due/,
    },
    {
      what: 'more points than a file should hold',
      words: ['--part', MEAN, '--csv', 'x.csv', '--points', '100x100'],
      message: /^--points: .* are too many/,
    },
    {
      what: 'changes of nothing',
      words: ['--part', MEAN, '--set', 'seed=2'],
      message: /^--set: changes a scenario file/,
    },
    {
      what: 'a wind outside the class',
      words: ['--part', TURBULENT.replace('18 m/s', '60 m/s')],
      message: /^--part:1:1: a mean wind of 60 m\/s/,
    },
  ])('refuses $what in words', async ({ words, message }) => {
    await expect(wind(...words)).rejects.toThrow(message);
  });
});

describe.skipIf(!browserPresent('the page of a wind'))('The page of a wind', () => {
  let browser: TestBrowser;
  beforeAll(async () => {
    browser = await openBrowser();
  });
  afterAll(() => browser?.close());

  it('opens from disk, shows the disc in motion, and follows the slider and the chart', async () => {
    const file = join(folder, 'wind.html');
    await wind(...turbulentWords('--plot', file));
    const page = await browser.context.newPage();
    const faults: string[] = [];
    page.on('pageerror', (error) => faults.push(error.message));
    page.on('request', (request) => {
      if (!/^(file|data):/.test(request.url())) faults.push(request.url());
    });
    await page.goto(pathToFileURL(file).href);
    const reading = () => page.locator('#reading').textContent();
    const picture = () => page.locator('#disc').evaluate((canvas) => (canvas as HTMLCanvasElement).toDataURL());
    const [firstWords, firstPicture] = [await reading(), await picture()];
    await expect.poll(reading).not.toBe(firstWords);
    expect(await picture()).not.toBe(firstPicture);

    await page.getByRole('button', { name: 'Pause' }).click();
    await page.locator('#instant').fill('150');
    expect(await reading()).toMatch(/^150\.0 s: hub \d+\.\d m\/s, rotor mean \d+\.\d m\/s/);
    const box = await page.locator('#time-chart').boundingBox();
    await page.locator('#time-chart').click({ position: { x: (box?.width ?? 0) / 2, y: 40 } });
    expect(Number.parseFloat((await reading()) ?? '')).toBeGreaterThan(120);
    const left = await page.locator('#time-chart').getAttribute('data-left');
    expect(await page.locator('#time-chart .cursor').getAttribute('x1')).not.toBe(left);
    expect(await page.locator('figure h3').allInnerTexts()).toEqual(
      expect.arrayContaining(['Along the axis', 'Spectra at the hub', "Spectrum of the rotor's mean"]),
    );
    expect(faults).toEqual([]);
    await page.close();
  });

  it('shows a gust that turns, without turbulence', async () => {
    const file = join(folder, 'gust.html');
    const gust = '{ kind: coherent_gust, edition: 4, wind_class: III, turbulence: B, hub_wind: 12 m/s, start: 20 s }';
    await wind('--part', '{ kind: steady, speed: 12 m/s }', '--part', gust, '--duration', '60 s', '--plot', file);
    const page = await browser.context.newPage();
    await page.goto(pathToFileURL(file).href);
    await page.locator('#instant').fill('40');
    // 720°/12 = 60°; (12 + 15) cos 60° = 13.5
    expect(await page.locator('#reading').textContent()).toMatch(/hub 13\.5 m\/s.*turned 60° to the left/);
    expect(await page.locator('figure h3').allInnerTexts()).not.toContain('Spectra at the hub');
    await page.close();
  });
});
