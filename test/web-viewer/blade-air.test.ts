/** The air at the blades in a real browser: it moves with the cursor, and stays away where nothing was recorded. */
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readPageTemplate } from '../../cli/page-template.ts';
import { assemblePage, type ViewedRun } from '../../scenarios/page.ts';
import { browserPresent, openBrowser, type TestBrowser } from './browser.ts';
import { inventRun } from './invented-run.ts';

const DEGREE = Math.PI / 180;
const TIMES = Array.from({ length: 61 }, (_, i) => i);
const STALL = 12;

/** Blade b, station s at time t: 10 b + s + t/10 degrees of attack, 40 m/s along the plane, inflow 45°. */
function inventedSections(): NonNullable<ViewedRun['sections']> {
  const columns = [
    { name: 'time_s', values: TIMES },
    { name: 'azimuth_deg', values: TIMES.map((t) => 6 * t) },
    ...[1, 2, 3].map((b) => ({ name: `pitch_${b}_deg`, values: TIMES.map(() => b) })),
    ...[1, 2, 3].flatMap((b) =>
      [1, 2, 3, 4, 5, 6, 7].flatMap((s) => [
        { name: `angle_of_attack_${b}_${s}_deg`, values: TIMES.map((t) => 10 * (b - 1) + s + t / 10) },
        { name: `normal_speed_${b}_${s}_m_s`, values: TIMES.map(() => 40) },
        { name: `tangential_speed_${b}_${s}_m_s`, values: TIMES.map(() => 40) },
      ]),
    ),
  ];
  const station = (name: string, value: (s: number) => number) => ({ name, values: [1, 2, 3, 4, 5, 6, 7].map(value) });
  const stations = [
    station('radius_m', (s) => 9 * s),
    station('twist_deg', () => 2),
    station('stall_positive_deg', (s) => (s === 1 ? Number.NaN : STALL)),
    station('stall_negative_deg', (s) => (s === 1 ? Number.NaN : -STALL)),
  ];
  return { stations, columns };
}

describe.skipIf(!browserPresent('the air at the blades in a browser'))('The air at each blade on the page', () => {
  let browser: TestBrowser;
  let folder: string;

  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'galehold-air-'));
    browser = await openBrowser();
  });
  afterAll(async () => {
    await browser?.close();
    await rm(folder, { recursive: true, force: true });
  });

  async function open(run: ViewedRun) {
    const file = join(folder, 'view.html');
    await writeFile(file, assemblePage(await readPageTemplate(), { title: 'A view', runs: [run] }));
    const page = await browser.context.newPage();
    const complaints: string[] = [];
    page.on('pageerror', (error) => complaints.push(error.message));
    await page.goto(pathToFileURL(file).href);
    const moveTo = (at: number) =>
      page.$eval(
        'input[type=range]',
        (slider: HTMLInputElement, value) => {
          slider.value = String(value);
          slider.dispatchEvent(new Event('input'));
        },
        at,
      );
    return { page, complaints, moveTo };
  }

  it('shows five stations of each blade, and moves with the cursor', async () => {
    const { page, complaints, moveTo } = await open({ ...inventRun(), sections: inventedSections() });
    const captions = () => page.$$eval('#blades figcaption', (all) => all.map(({ textContent }) => textContent ?? ''));
    const heads = () => page.$$eval('#blades h3', (all) => all.map(({ textContent }) => textContent?.trim()));
    await moveTo(10);
    expect(await captions()).toHaveLength(15);
    expect((await captions())[5]).toMatch(/^9\.0 m: α 12\.0°does not lift/);
    expect((await captions())[6]).toMatch(/: α 14\.0°stalled|: α 13\.0°stalled/);
    expect((await captions())[1]).toMatch(/° from stall/);
    expect(await heads()).toEqual([
      'Blade 1: azimuth 60°, pitch 1.0°',
      'Blade 2: azimuth 180°, pitch 2.0°',
      'Blade 3: azimuth 300°, pitch 3.0°',
    ]);
    const curve = () => page.$$eval('#blades .attack .blade', (all) => all.map((path) => path.getAttribute('d')));
    const before = await curve();
    await moveTo(40);
    expect((await captions())[5]).toMatch(/^9\.0 m: α 15\.0°/);
    expect((await heads())[0]).toBe('Blade 1: azimuth 240°, pitch 1.0°');
    expect(await curve()).not.toEqual(before);
    expect(complaints).toEqual([]);
    await page.close();
  });

  it('draws each triangle at its angle: v_n up, v_t along, the chord at twist and pitch', async () => {
    const { page, moveTo } = await open({ ...inventRun(), sections: inventedSections() });
    await moveTo(10);
    const [whole, chord] = await page.$$eval('#blades figure:first-of-type', ([figure]) =>
      ['.whole', '.chord'].map((kind) => {
        const at = (name: string) => Number(figure.querySelector(kind)?.getAttribute(name));
        return Math.atan2(at('y1') - at('y2'), at('x2') - at('x1'));
      }),
    );
    expect(whole / DEGREE).toBeCloseTo(45, 0);
    expect(chord / DEGREE).toBeCloseTo(3, 0);
    await page.close();
  });

  it('stays away where the run has not recorded it', async () => {
    const { page, complaints } = await open(inventRun());
    expect(await page.isVisible('#blades')).toBe(false);
    expect(complaints).toEqual([]);
    await page.close();
  });
});
