/** The page of runs in a real browser, opened from disk. Numbers are read back from the plots' data, places from the drawing. */
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { readPageTemplate } from '../../cli/page-template.ts';
import { assembleFigure, assemblePage, type PageTemplate, type ViewedRun } from '../../scenarios/page.ts';
import { browserPresent, openBrowser, type TestBrowser } from './browser.ts';
import { inventRun } from './invented-run.ts';

/** What plotly.js hangs on the element that it draws in. */
interface PlotElement extends HTMLElement {
  data: {
    mode: string;
    y: Float64Array;
    x: Float64Array;
    meta: { owner: string; label: string };
    line: { color: string };
  }[];
  layout: {
    shapes: { y0: number; x0: number; yref?: string; line: { width: number } }[];
    xaxis: { range: [number, number] };
    yaxis: { range: [number, number] };
  };
}

const STOP = inventRun();
const SLOW = inventRun({ name: 'half-rate', title: 'Feathering at half the rate', featherRate: 3 });
const STUCK = inventRun({ name: 'blade-3-stuck', title: 'Blade 3 stuck', stuckBlade: true });

describe.skipIf(!browserPresent('the view of runs and of figures in a browser'))('the page', () => {
  let browser: TestBrowser;
  let folder: string;
  let template: PageTemplate;
  let page: Page;
  let complaints: string[];

  beforeAll(async () => {
    template = await readPageTemplate();
    folder = await mkdtemp(join(tmpdir(), 'galehold-page-'));
    browser = await openBrowser();
  });

  afterAll(async () => {
    await browser?.close();
    await rm(folder, { recursive: true, force: true });
  });

  afterEach(async () => {
    await page.close();
    expect(complaints, 'console errors and requests beyond the file').toEqual([]);
  });

  async function openHtml(html: string, width = 1440): Promise<void> {
    const file = join(folder, 'view.html');
    await writeFile(file, html);
    page = await browser.context.newPage();
    complaints = [];
    page.on('console', (message) => {
      if (message.type() === 'error' || message.type() === 'warning') complaints.push(message.text());
    });
    page.on('pageerror', (error) => complaints.push(error.message));
    page.on('request', (request) => {
      if (!/^(file|data|blob):/.test(request.url())) complaints.push(request.url());
    });
    await page.setViewportSize({ width, height: 900 });
    await page.goto(pathToFileURL(file).href);
  }

  const open = (runs: readonly ViewedRun[], width?: number) =>
    openHtml(assemblePage(template, { title: 'A view', runs }), width);

  const lines = (plot: string) =>
    page.evaluate(
      (title) =>
        (document.querySelector(`[data-plot="${title}"] .plot-area`) as PlotElement).data
          .filter(({ mode }) => mode === 'lines')
          .map(({ x, y, meta, line }) => ({ x: [...x], y: [...y], meta, colour: line.color })),
      plot,
    );

  const levels = (plot: string) =>
    page.evaluate(
      (title) =>
        (document.querySelector(`[data-plot="${title}"] .plot-area`) as PlotElement).layout.shapes
          .filter(({ yref }) => yref !== 'paper')
          .map(({ y0 }) => y0),
      plot,
    );

  const ranges = () =>
    page.evaluate(() =>
      [...document.querySelectorAll<PlotElement>('.plot-area')].map(({ layout }) => [...layout.xaxis.range]),
    );

  const column = (run: ViewedRun, name: string) => [
    ...Array.from(run.columns.find((c) => c.name === name)?.values ?? []),
  ];

  function expectSeries(shown: readonly number[], recorded: readonly number[], factor = 1): void {
    expect(shown).toHaveLength(recorded.length);
    const worst = Math.max(...shown.map((value, index) => Math.abs(value - (recorded[index] ?? Number.NaN) * factor)));
    expect(worst).toBeLessThan(1e-6 * Math.max(...recorded.map(Math.abs)) * factor);
  }

  test('a single run shows fully: every plot holds what was recorded', async () => {
    await open([STOP]);
    const [speed] = await lines('Rotor speed');
    expectSeries(speed?.x ?? [], column(STOP, 'time_s'));
    expectSeries(speed?.y ?? [], column(STOP, 'rotor_speed_rpm'));
    for (const [plot, name] of [
      ['Wind at the hub', 'wind_hub_m_s'],
      ['Pitch angle', 'pitch_1_deg'],
      ['Pitch rate', 'pitch_rate_1_deg_s'],
      ['Generator torque', 'generator_torque_kn_m'],
      ['Brake torque', 'brake_torque_kn_m'],
      ['Brake disc temperature', 'brake_temperature_c'],
      ['Electrical power', 'electrical_power_kw'],
      ['Tower-top deflection', 'tower_deflection_m'],
    ] as const) {
      const shown = await lines(plot);
      expect(shown, plot).toHaveLength(1);
      expectSeries(shown[0]?.y ?? [], column(STOP, name));
    }
  });

  test('a stuck blade gets a line of its own, told apart by a symbol and a name; the others share theirs', async () => {
    await open([STUCK]);
    const shown = await lines('Pitch angle');
    expect(shown.map(({ meta }) => meta.label)).toEqual(['blades 1, 2', 'blade 3']);
    expectSeries(shown[0]?.y ?? [], column(STUCK, 'pitch_1_deg'));
    expectSeries(shown[1]?.y ?? [], column(STUCK, 'pitch_3_deg'));
  });

  test('rotor speed stands against its rated, trip and never-exceed levels', async () => {
    await open([STOP]);
    expect((await levels('Rotor speed')).sort((a, b) => a - b)).toEqual([12, 13.2, 13.8, 15]);
    const labels = await page.locator('[data-plot="Rotor speed"] .level-label').allTextContents();
    expect(labels.sort()).toEqual([
      '12 rated',
      '13.2 rotor overspeed',
      '13.8 rotor overspeed, second level',
      '15 never exceed',
    ]);
    const boxes = await Promise.all((await page.locator('.level-label').all()).map((label) => label.boundingBox()));
    const tops = boxes.map((box) => box?.y ?? Number.NaN).sort((a, b) => a - b);
    tops.slice(1).forEach((top, index) => {
      expect(top - (tops[index] ?? Number.NaN), 'labels of levels overlap').toBeGreaterThanOrEqual(13.5);
    });
  });

  /** Page x of the tick label in the lowest plot, and of the event's mark and the state's edge in the strip. */
  const placeOf = (selector: string, edge: 'left' | 'middle') =>
    page
      .locator(selector)
      .first()
      .evaluate((node, at) => {
        const box = node.getBoundingClientRect();
        return at === 'left' ? box.left : box.left + box.width / 2;
      }, edge);

  const tickPlace = (plot: string, text: string) =>
    page.evaluate(
      ([title, label]) => {
        const ticks = [...document.querySelectorAll(`[data-plot="${title}"] .xtick text`)];
        const box = ticks.find((tick) => tick.textContent === label)?.getBoundingClientRect();
        return box ? box.left + box.width / 2 : Number.NaN;
      },
      [plot, text] as const,
    );

  test.each([1440, 820, 390])(
    'the strip of states and events lines up with every plot at a width of %i px',
    async (width) => {
      await open([STOP], width);
      for (const plot of ['Rotor speed', 'Pitch angle', 'Tower-top deflection']) {
        expect(
          Math.abs((await tickPlace(plot, '20')) - (await placeOf('.event-mark[data-time="20"]', 'middle'))),
        ).toBeLessThan(1);
      }
      const [production, stop] = STOP.summary.states;
      const perSecond = ((await tickPlace('Rotor speed', '40')) - (await tickPlace('Rotor speed', '20'))) / 20;
      const tripAt = (await tickPlace('Rotor speed', '20')) + perSecond * ((production?.to ?? Number.NaN) - 20);
      expect(stop?.state).toBe('emergency stop');
      expect(Math.abs((await placeOf('[data-state="emergency stop"] rect', 'left')) - tripAt)).toBeLessThan(1.5);
    },
  );

  test('marks and words of events do not lie over each other', async () => {
    await open([STOP]);
    const boxes = await page.locator('.strip .event-mark path, .strip .event-text').evaluateAll((nodes) =>
      nodes.map((node) => {
        const { left, right, top, bottom } = node.getBoundingClientRect();
        return { left, right, top, bottom, text: node.textContent };
      }),
    );
    expect(boxes).toHaveLength(2 * STOP.summary.events.length);
    const overlaps = boxes.flatMap((one, index) =>
      boxes
        .slice(index + 1)
        .filter(
          (other) =>
            one.left < other.right - 1 &&
            other.left < one.right - 1 &&
            one.top < other.bottom - 4 &&
            other.top < one.bottom - 4,
        )
        .map((other) => `${one.text} / ${other.text}`),
    );
    expect(overlaps).toEqual([]);
  });

  test('zooming keeps all plots and the strip on the same time', async () => {
    await open([STOP]);
    await page.getByRole('button', { name: 'zoom in on the cursor' }).click();
    const all = await ranges();
    expect(new Set(all.map(String)).size).toBe(1);
    expect((all[0]?.[1] ?? 0) - (all[0]?.[0] ?? 0)).toBeCloseTo(30, 6);
    expect(
      Math.abs((await tickPlace('Pitch rate', '20')) - (await placeOf('.event-mark[data-time="20"]', 'middle'))),
    ).toBeLessThan(1);
    await page.getByRole('button', { name: 'show the whole run' }).click();
    expect((await ranges())[0]).toEqual([0, 60]);
  });

  test('dragging across the plots shows the time between press and release', async () => {
    await open([STOP]);
    await page.locator('[data-plot="Wind at the hub"] .plot-area').scrollIntoViewIfNeeded();
    const y = (await page.locator('[data-plot="Wind at the hub"] .plot-area').boundingBox())?.y ?? 0;
    const [from, to] = [await tickPlace('Wind at the hub', '20'), await tickPlace('Wind at the hub', '40')];
    await page.mouse.move(from, y + 30);
    await page.mouse.down();
    await page.mouse.move(to, y + 40, { steps: 4 });
    await page.mouse.up();
    const [range] = await ranges();
    expect(range?.[0]).toBeCloseTo(20, 0);
    expect(range?.[1]).toBeCloseTo(40, 0);
  });

  test('the cursor starts at the trip and moves by keys; values beside the titles follow', async () => {
    await open([STOP]);
    const trip = STOP.summary.events.find(({ kind }) => kind === 'guard')?.time ?? Number.NaN;
    expect(await page.locator('.time-readout').textContent()).toBe(`${trip.toFixed(2)} semergency stop`);
    const slider = page.getByRole('slider', { name: 'Time at the cursor' });
    await slider.fill('30');
    await slider.press('ArrowRight');
    expect(await page.locator('.time-readout b').textContent()).toBe('30.05 s');
    const wind = column(STOP, 'wind_hub_m_s')[601] ?? Number.NaN;
    const pitch = column(STOP, 'pitch_1_deg')[601] ?? Number.NaN;
    expect(Number(await page.locator('[data-plot="Wind at the hub"] output').textContent())).toBeCloseTo(wind, 2);
    expect(Number(await page.locator('[data-plot="Pitch angle"] output').textContent())).toBeCloseTo(pitch, 1);
  });

  test('an event in the list puts the cursor on its instant', async () => {
    await open([STOP]);
    const brake = STOP.summary.events.find(({ kind }) => kind === 'brake')?.time ?? Number.NaN;
    await page.getByRole('button', { name: /brake ordered on/ }).click();
    expect(await page.locator('.time-readout b').textContent()).toBe(`${brake.toFixed(2)} s`);
  });

  test('runs are switched off and on, and keep colour and dash', async () => {
    await open([STOP, SLOW, STUCK]);
    const before = await lines('Rotor speed');
    expect(before.map(({ meta }) => meta.owner)).toEqual(['grid-loss-at-crest', 'half-rate', 'blade-3-stuck']);
    expect(new Set(before.map(({ colour }) => colour)).size).toBe(3);
    expect(await page.locator('.state-band').count()).toBe(3);
    await page.locator('[data-run="grid-loss-at-crest"] input[type=checkbox]').uncheck();
    const after = await lines('Rotor speed');
    expect(after).toEqual(before.slice(1));
    expect(await page.locator('.state-band').count()).toBe(2);
    expect(await page.locator('aside h3').textContent()).toBe('Events of half-rate');
    await page.locator('[data-run="grid-loss-at-crest"] input[type=checkbox]').check();
    expect(await lines('Rotor speed')).toEqual(before);
  });

  test('all runs can be switched off, and one back on', async () => {
    await open([STOP, SLOW]);
    await page.getByRole('button', { name: 'none' }).click();
    expect(await page.locator('.plot').count()).toBe(0);
    await page.locator('.run-switch input[type=checkbox]').first().check();
    expect(await page.locator('.plot').count()).toBe(9);
  });

  test('many runs start with the first that tripped; a name in the overview shows its run alone, on its own time', async () => {
    const calm = { ...STOP, name: 'calm', summary: { ...STOP.summary, events: [] } };
    const long = inventRun({ name: 'long', duration: 90 });
    await open([calm, SLOW, STOP, STUCK, long]);
    expect((await lines('Rotor speed')).map(({ meta }) => meta.owner)).toEqual(['half-rate']);
    await page.locator('.overview').getByRole('button', { name: 'long' }).click();
    expect((await lines('Rotor speed')).map(({ meta }) => meta.owner)).toEqual(['long']);
    expect((await ranges())[0]).toEqual([0, 90]);
    expect(await page.locator('.run-switch[data-run="long"] input[type=radio]').isChecked()).toBe(true);
    expect(await page.locator('aside h3').textContent()).toBe('Events of long');
    await page.locator('.overview').getByRole('button', { name: 'half-rate' }).click();
    expect((await ranges())[0]).toEqual([0, 60]);
    await page.getByRole('button', { name: 'all', exact: true }).click();
    expect(await lines('Rotor speed')).toHaveLength(5);
  });

  test('a speed that hardly changes is not blown up to fill its plot', async () => {
    const steady = STOP.columns.map(({ name, values }) => ({
      name,
      values:
        name === 'brake_temperature_c' ? Float64Array.from(values, (_, index) => 15 + 1e-4 * (index % 2)) : values,
    }));
    await open([{ ...STOP, columns: steady }]);
    const [low, high] = await page.evaluate(
      () =>
        (document.querySelector('[data-plot="Brake disc temperature"] .plot-area') as PlotElement).layout.yaxis.range,
    );
    expect(high - low).toBeGreaterThan(0.3);
  });

  test('another unit rescales plots, levels, story and tables', async () => {
    await open([STOP]);
    await page.locator('select[data-group="Rotation"]').selectOption({ label: 'rad/s' });
    await page.locator('select[data-group="Temperature"]').selectOption({ label: 'K' });
    expectSeries((await lines('Rotor speed'))[0]?.y ?? [], column(STOP, 'rotor_speed_rpm'), Math.PI / 30);
    expect(Math.max(...(await levels('Rotor speed')))).toBeCloseTo((15 * Math.PI) / 30, 9);
    expect(await page.locator('[data-plot="Rotor speed"] .unit').textContent()).toBe(', rad/s');
    const peak = (Math.max(...column(STOP, 'rotor_speed_rpm')) * Math.PI) / 30;
    expect(await page.locator('.story').textContent()).toContain(`The rotor reached ${peak.toFixed(3)}\u00a0rad/s`);
    const heat = (await lines('Brake disc temperature'))[0]?.y ?? [];
    expect(heat[0]).toBeCloseTo(15 + 273.15, 3);
    const margin = STOP.summary.limits[1]?.margin ?? Number.NaN;
    expect(await page.locator('.limits tbody tr').nth(1).locator('td').nth(2).textContent()).toBe(
      `${margin.toFixed(1)}\u00a0K`,
    );
  });

  test('further recorded channels can be added to the plots', async () => {
    await open([STOP]);
    await page.getByText('More plots').click();
    await page.getByLabel('Rotor thrust').check();
    expectSeries((await lines('Rotor thrust'))[0]?.y ?? [], column(STOP, 'thrust_kn'));
  });

  test('the caution is in sight without scrolling, and the verdict in words', async () => {
    await open([STOP], 390);
    const box = await page.locator('.caution').boundingBox();
    expect((box?.y ?? 9999) + (box?.height ?? 0)).toBeLessThanOrEqual(900);
    expect(await page.locator('.caution').textContent()).toBe(STOP.summary.caution);
    expect(await page.locator('.verdict').textContent()).toContain('Limit broken');
  });

  test('text from a file stays text', async () => {
    const attack = '</script><script>window.taken=1</script><img src=x onerror="window.taken=1">\u2028</style><!--';
    const run: ViewedRun = {
      ...STOP,
      name: attack,
      missing: [attack],
      summary: {
        ...STOP.summary,
        scenario: { ...STOP.summary.scenario, title: attack, story: attack, turbine: attack },
        expected: { verdict: 'holds', because: attack },
        events: STOP.summary.events.map((event) => ({ ...event, text: attack })),
        levels: STOP.summary.levels.map((level) => ({ ...level, text: attack })),
        limits: STOP.summary.limits.map((limit) => ({ ...limit, text: attack, unit: attack })),
        metrics: STOP.summary.metrics.map((metric) => ({ ...metric, label: attack })),
        channels: STOP.summary.channels.map((channel) => ({ ...channel, label: attack, unit: attack })),
        provenance: { ...STOP.summary.provenance, overrides: [attack] },
      },
    };
    await openHtml(assemblePage(template, { title: attack, runs: [run, { ...run, name: 'b' }] }));
    await page.getByText('More plots').click();
    await page.locator('.further input').first().check();
    expect(await page.evaluate(() => 'taken' in window)).toBe(false);
    expect(await page.locator('img').count()).toBe(0);
    expect(await page.locator('h1').textContent()).toBe(attack);
    expect(await page.title()).toBe(attack);
    expect(await page.locator('.event-list .event-words').first().textContent()).toContain(attack);
    expect(await page.evaluate(() => document.documentElement.scrollWidth <= innerWidth)).toBe(true);
  });

  test.each([320, 390, 768])('nothing makes the page scroll sideways at %i px', async (width) => {
    const long = { ...STOP, name: 'a-name-without-any-space-that-goes-on-and-on-and-on-for-a-very-long-while-indeed' };
    await open([long, SLOW, STUCK], width);
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
  });

  test('on paper every plot, fold and table is there, light, within the width of the sheet', async () => {
    await open([STOP, SLOW, STUCK], 1440);
    await page.emulateMedia({ media: 'print', colorScheme: 'dark' });
    await page.setViewportSize({ width: 690, height: 900 });
    await expect
      .poll(() =>
        page
          .locator('.plot-area')
          .first()
          .evaluate((area) => area.scrollWidth),
      )
      .toBeLessThanOrEqual(690);
    expect(await page.locator('.plot .main-svg:first-child').count()).toBe(9);
    for (const plot of await page.locator('.plot').all()) expect(await plot.isVisible()).toBe(true);
    expect(await page.locator('details.provenance').getAttribute('open')).not.toBeNull();
    expect(await page.locator('.time-bar input').first().isVisible()).toBe(false);
    expect(await page.locator('.caution').isVisible()).toBe(true);
    expect(await page.evaluate(() => getComputedStyle(document.body).backgroundColor)).toBe('rgb(255, 255, 255)');
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(690);
    await page.emulateMedia({ media: 'screen', colorScheme: 'light' });
    await expect.poll(() => page.locator('details.provenance').getAttribute('open')).toBeNull();
  });

  test('what a result lacks is said, and the rest is shown', async () => {
    const partial: ViewedRun = {
      ...STOP,
      columns: STOP.columns.filter(({ name }) => ['time_s', 'rotor_speed_rpm'].includes(name)),
      missing: ['channels.csv ends at 12 s of 60 s.'],
    };
    await open([partial]);
    const note = await page.locator('.missing').textContent();
    expect(note).toContain('channels.csv ends at 12 s of 60 s.');
    expect(note).toContain('Not recorded: Wind at the hub, Pitch angle');
    expect(await page.locator('.plot').count()).toBe(1);
  });

  test('a run without channels still tells its verdict, events and states', async () => {
    await open([{ ...STOP, columns: [], missing: ['channels.csv is missing, so there are no plots of this run.'] }]);
    expect(await page.locator('.missing').textContent()).toContain('channels.csv is missing');
    expect(await page.locator('.event-list li').count()).toBe(STOP.summary.events.length);
    expect(await page.locator('.state-span').count()).toBe(3);
  });

  test('a figure shows its lines over its own axis, with their values at the cursor', async () => {
    const wind = [4, 8, 12, 16, 20, 24];
    const axis = { label: 'Wind speed, m/s', values: wind };
    const pitch = [0, 0, 5, 11, 16, Number.NaN];
    await openHtml(
      assembleFigure(template, {
        title: 'Trim <b>',
        note: 'Invented numbers.',
        panels: [
          { title: 'Pitch, deg', yLabel: 'Pitch, deg', x: axis, lines: [{ label: 'Pitch, deg', values: pitch }] },
          { title: 'Power', yLabel: 'kW', x: axis, lines: [{ label: 'electrical', values: wind.map((v) => 100 * v) }] },
        ],
      }),
    );
    expect(await page.locator('.stack').count()).toBe(1);
    expect((await lines('Pitch, deg'))[0]?.y).toEqual(pitch);
    expect(await page.locator('[data-plot="Pitch, deg"] .plot-head').textContent()).toMatch(/^Pitch, deg\s*–$/);
    expect((await lines('Power'))[0]?.x).toEqual(wind);
    expect(await page.locator('h1').textContent()).toBe('Trim <b>');
    expect(await page.locator('.axis-title').textContent()).toBe('Wind speed, m/s');
    await page.locator('.stack').focus();
    await page.keyboard.press('ArrowRight');
    expect(await page.locator('[data-plot="Power"] output').textContent()).toBe('400');
    await page.keyboard.press('ArrowRight');
    expect(await page.locator('[data-plot="Power"] output').textContent()).toBe('410');
    const box = await page.locator('[data-plot="Power"] .plot-area').boundingBox();
    const [ten, twenty] = [await tickPlace('Power', '10'), await tickPlace('Power', '20')];
    await page.mouse.move((ten + twenty) / 2, (box?.y ?? 0) + 40);
    expect(await page.locator('[data-plot="Power"] output').textContent()).toMatch(/^1(49|50)\d$/);
  });
});
