import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { InputError } from '../../scenarios/input-error.ts';
import { writeResult } from '../../scenarios/results.ts';
import { readStoredResult } from '../../scenarios/stored-result.ts';
import { inventRun } from './invented-run.ts';

const RUN = inventRun();

describe('a stored result', () => {
  let parent: string;
  let folder: string;
  const summaryFile = () => join(folder, 'summary.json');
  const channelsFile = () => join(folder, 'channels.csv');

  beforeEach(async () => {
    parent = await mkdtemp(join(tmpdir(), 'galehold-stored-'));
    folder = join(parent, 'grid-loss-at-crest');
    writeResult(folder, RUN);
  });

  afterEach(() => rm(parent, { recursive: true, force: true }));

  async function rewrite(file: string, change: (text: string) => string): Promise<void> {
    await writeFile(file, change(await readFile(file, 'utf8')));
  }

  async function complaint(): Promise<string> {
    const error = await readStoredResult(folder).catch((cause: unknown) => cause);
    expect(error).toBeInstanceOf(InputError);
    return (error as InputError).message;
  }

  test('comes back as it was written, named after its folder', async () => {
    const run = await readStoredResult(folder);
    expect(run.name).toBe('grid-loss-at-crest');
    expect(run.missing).toEqual([]);
    expect(run.summary).toEqual(RUN.summary);
    expect(run.columns.map(({ name }) => name)).toEqual(RUN.columns.map(({ name }) => name));
    expect([...Array.from(run.columns[2]?.values ?? [])]).toEqual([...(RUN.columns[2]?.values ?? [])]);
  });

  test('that does not exist is refused by its name', async () => {
    folder = join(parent, 'nowhere');
    expect(await complaint()).toBe(`${folder}: no such results folder`);
  });

  test('is looked for one folder down, and the right name is suggested', async () => {
    const inner = folder;
    folder = parent;
    expect(await complaint()).toContain(`name the runs inside it, e.g. ${inner}`);
  });

  test('whose summary is cut short is refused', async () => {
    await rewrite(summaryFile(), (text) => text.slice(0, text.length / 2));
    expect(await complaint()).toMatch(/summary\.json: cut short or not JSON/);
  });

  test('whose summary is of another format is refused, with both formats named', async () => {
    await rewrite(summaryFile(), (text) => text.replace('galehold-summary-1', 'galehold-summary-9'));
    expect(await complaint()).toMatch(/"galehold-summary-9", this version reads "galehold-summary-1"/);
  });

  test('whose summary lacks a part is refused by the name of the part', async () => {
    await rewrite(summaryFile(), (text) => text.replace('"verdict": "broken"', '"verdict": "perhaps"'));
    expect(await complaint()).toMatch(/summary\.json: verdict: /);
  });

  test('without channels is shown without plots, and says so', async () => {
    await rm(channelsFile());
    const run = await readStoredResult(folder);
    expect(run.columns).toEqual([]);
    expect(run.missing).toEqual(['channels.csv is missing, so there are no plots of this run.']);
  });

  test('whose channels are cut within a line keeps the lines before it', async () => {
    await rewrite(channelsFile(), (text) => `${text.split('\n').slice(0, 242).join('\n')}\n12.05,14`);
    const run = await readStoredResult(folder);
    expect(run.columns[0]?.values.length).toBe(241);
    expect(run.missing).toEqual(['channels.csv is cut short in line 243.', 'channels.csv ends at 12 s of 60 s.']);
  });

  test('with values that are not numbers keeps gaps, and counts them', async () => {
    await rewrite(channelsFile(), (text) =>
      text
        .split('\n')
        .map((line, index) =>
          index === 2 || index === 5 ? line.replace(/^([^,]*),[^,]*/, index === 2 ? '$1,NaN' : '$1,') : line,
        )
        .join('\n'),
    );
    const run = await readStoredResult(folder);
    expect(run.missing).toEqual(['wind_hub_m_s has gaps: no number in 2 samples, first in line 3.']);
    expect(run.columns[1]?.values[1]).toBeNaN();
    expect(run.columns[1]?.values[4]).toBeNaN();
  });

  test('with a word among its numbers is refused with line and column', async () => {
    await rewrite(channelsFile(), (text) => text.replace('\n0.1,14,', '\n0.1,calm,'));
    expect(await complaint()).toBe(`${channelsFile()}:4:5: wind_hub_m_s: "calm" is not a number`);
  });

  test('whose time does not rise is refused with the line', async () => {
    await rewrite(channelsFile(), (text) => text.replace('\n0.1,', '\n0.01,'));
    expect(await complaint()).toContain(`${channelsFile()}:4:1: the time 0.01 s does not follow 0.05 s`);
  });

  test('whose first column is not time is refused', async () => {
    await rewrite(channelsFile(), (text) => text.replace('time_s', 'instant'));
    expect(await complaint()).toContain(':1:1: the first column is "instant", it should be "time_s"');
  });

  test('with a short line in the middle is refused with the line', async () => {
    await rewrite(channelsFile(), (text) => text.replace(/\n0\.1,.*\n/, '\n0.1,14\n'));
    expect(await complaint()).toContain(`${channelsFile()}:4:1: 2 values against 15 columns`);
  });
});
