import { execFileSync } from 'node:child_process';
import {
  chmodSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  statSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { asyncBufferFromFile, parquetReadObjects } from 'hyparquet';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { csvText, OutputError, type Result, writeResult } from '../../scenarios/results.ts';
import { readStoredResult } from '../../scenarios/stored-result.ts';
import { CAUTION, type Summary } from '../../scenarios/summary.ts';

const FILES = ['channels.csv', 'channels.parquet', 'summary.json'];

function summary(changes: Partial<Summary> = {}): Summary {
  return {
    format: 'galehold-summary-1',
    scenario: {
      name: 'invented',
      title: 'Invented',
      story: 'Made by hand.',
      turbine: 'Invented',
      controller: 'none',
      protection: 'none',
      duration: 2,
    },
    verdict: 'holds',
    expected: { verdict: 'holds' },
    asExpected: true,
    limits: [],
    metrics: [],
    events: [],
    states: [],
    levels: [],
    channels: [
      { name: 'time_s', label: 'Time', unit: 's' },
      { name: 'rotor_speed_rpm', label: 'Rotor speed', unit: 'rpm' },
    ],
    recordRate: 1,
    provenance: {
      version: '0.1.0',
      inputs: [],
      overrides: [],
      seed: 1,
      rotorModel: 'surface',
      integrator: 'runge-kutta',
      relativeTolerance: null,
      steps: 1,
      evaluations: 4,
    },
    caution: CAUTION,
    ...changes,
  };
}

function result(changes: Partial<Summary> = {}): Result {
  return {
    summary: summary(changes),
    columns: [
      { name: 'time_s', values: Float64Array.of(0, 1, 2) },
      { name: 'rotor_speed_rpm', values: Float64Array.of(12.123456789012, Number.NaN, -4e-7) },
    ],
  };
}

/** A result of about 0.7 MB. */
function largeResult(): Result {
  const values = Float64Array.from({ length: 40_000 }, (_, i) => Math.sin(i));
  return { summary: summary(), columns: [{ name: 'time_s', values }] };
}

let room: string;
beforeEach(() => {
  room = mkdtempSync(join(tmpdir(), 'results-'));
});
afterEach(() => rmSync(room, { recursive: true, force: true }));

describe('a results folder', () => {
  it('holds summary and channels, and nothing is left beside it', () => {
    writeResult(join(room, 'a', 'b', 'run'), result());
    expect(readdirSync(join(room, 'a', 'b'))).toEqual(['run']);
    expect(readdirSync(join(room, 'a', 'b', 'run')).sort()).toEqual(FILES);
  });

  it('can be read by whoever may read folders made in the usual way', () => {
    writeResult(join(room, 'run'), result());
    mkdirSync(join(room, 'usual'));
    expect(statSync(join(room, 'run')).mode).toBe(statSync(join(room, 'usual')).mode);
  });

  it('comes back as it was written, to nine significant digits', async () => {
    writeResult(join(room, 'run'), result());
    const { summary: read, columns, missing } = await readStoredResult(join(room, 'run'));
    expect(read).toEqual(summary());
    expect(columns.map(({ name }) => name)).toEqual(['time_s', 'rotor_speed_rpm']);
    expect([...Float64Array.from(columns[0].values)]).toEqual([0, 1, 2]);
    expect([...Float64Array.from(columns[1].values)]).toEqual([12.1234568, Number.NaN, -4e-7]);
    expect(missing).toHaveLength(1);
  });

  it('holds every digit in its Parquet file', async () => {
    writeResult(join(room, 'run'), result());
    const file = await asyncBufferFromFile(join(room, 'run', 'channels.parquet'));
    expect(await parquetReadObjects({ file })).toEqual([
      { time_s: 0, rotor_speed_rpm: 12.123456789012 },
      { time_s: 1, rotor_speed_rpm: Number.NaN },
      { time_s: 2, rotor_speed_rpm: -4e-7 },
    ]);
  });

  it('holds long runs in its Parquet file whole', async () => {
    const long = largeResult();
    writeResult(join(room, 'run'), long);
    const file = await asyncBufferFromFile(join(room, 'run', 'channels.parquet'));
    const rows = await parquetReadObjects({ file });
    expect(Float64Array.from(rows, (row) => row.time_s)).toEqual(long.columns[0].values);
  });

  it('has the same bytes when the same result is written twice', () => {
    writeResult(join(room, 'one'), result());
    writeResult(join(room, 'two'), result());
    for (const file of FILES) {
      expect(readFileSync(join(room, 'one', file)).equals(readFileSync(join(room, 'two', file)))).toBe(true);
    }
  });
});

describe('channels.csv', () => {
  it('gives numbers in their shortest form, to nine significant digits, and gaps where there is no value', () => {
    const values = [0, -0, 1, 0.1 + 0.2, 123456789.6, 1e21, 2.5e-9, Number.NaN, Number.POSITIVE_INFINITY];
    const time = Float64Array.from(values, (_, i) => i / 20);
    const text = csvText([
      { name: 'time_s', values: time },
      { name: 'x', values: Float64Array.from(values) },
    ]);
    expect(text.split('\n')).toEqual([
      'time_s,x',
      '0,0',
      '0.05,0',
      '0.1,1',
      '0.15,0.3',
      '0.2,123456790',
      '0.25,1e+21',
      '0.3,2.5e-9',
      '0.35,',
      '0.4,',
      '',
    ]);
  });
});

describe('the place of a results folder', () => {
  const title = (folder: string) => JSON.parse(readFileSync(join(folder, 'summary.json'), 'utf8')).scenario.title;
  const retitled = result({ scenario: { ...summary().scenario, title: 'Second' } });

  it('may hold an earlier result, which is replaced, other files being left alone', () => {
    const folder = join(room, 'run');
    writeResult(folder, result());
    writeFileSync(join(folder, 'notes.md'), 'mine');
    writeResult(folder, retitled);
    expect(title(folder)).toBe('Second');
    expect(readFileSync(join(folder, 'notes.md'), 'utf8')).toBe('mine');
    expect(readdirSync(folder).sort()).toEqual([...FILES, 'notes.md'].sort());
    expect(readdirSync(room)).toEqual(['run']);
  });

  it('may be an empty folder', () => {
    mkdirSync(join(room, 'run'));
    writeResult(join(room, 'run'), result());
    expect(readdirSync(join(room, 'run')).sort()).toEqual(FILES);
  });

  it('is refused when the folder holds something else, which stays as it is', () => {
    for (const [name, file, content] of [
      ['photos', 'cat.jpg', 'meow'],
      ['other format', 'summary.json', '{"format":"another"}'],
      ['broken', 'summary.json', '{"format":"galeh'],
    ] as const) {
      mkdirSync(join(room, name));
      writeFileSync(join(room, name, file), content);
      expect(() => writeResult(join(room, name), result())).toThrow(/holds other things than an earlier result/);
      expect(readdirSync(join(room, name))).toEqual([file]);
      expect(readFileSync(join(room, name, file), 'utf8')).toBe(content);
    }
    expect(readdirSync(room).sort()).toEqual(['broken', 'other format', 'photos']);
  });

  it('is refused when a file is in the way, of the folder or of a folder above it', () => {
    const file = join(room, 'taken');
    writeFileSync(file, 'mine');
    expect(refusal(file)).toBe(`results cannot be written to ${file}: a file of that name is in the way`);
    expect(refusal(join(file, 'run'))).toMatch(/a part of the path is a file, not a folder$/);
    expect(refusal(join(file, 'deep', 'run'))).toMatch(/a part of the path is a file, not a folder$/);
    expect(readFileSync(file, 'utf8')).toBe('mine');
  });

  it('is refused when its name is too long', () => {
    expect(refusal(join(room, 'x'.repeat(300)))).toMatch(/the name is too long$/);
    expect(readdirSync(room)).toEqual([]);
  });

  it('is refused when a link goes round in circles, in the file system’s own words', () => {
    symlinkSync('loop', join(room, 'loop'));
    expect(refusal(join(room, 'loop', 'run'))).toMatch(/ELOOP/);
  });
});

describe('a file system that refuses', () => {
  const asRoot = process.getuid?.() === 0;

  it.skipIf(asRoot)('is told of when the folder above may not be written to (skipped: root may write anywhere)', () => {
    chmodSync(room, 0o555);
    expect(refusal(join(room, 'run'))).toMatch(/no permission to write there$/);
    expect(readdirSync(room)).toEqual([]);
    chmodSync(room, 0o755);
  });

  it('is told of when it is read-only (needs root to mount one)', ({ skip }) => {
    if (!mount(room, 'ro')) skip('only root can mount a read-only file system');
    try {
      expect(refusal(join(room, 'run'))).toMatch(/the file system is read-only$/);
      expect(refusal(join(room, 'a', 'run'))).toMatch(/the file system is read-only$/);
      expect(readdirSync(room)).toEqual([]);
    } finally {
      execFileSync('umount', [room]);
    }
  });

  it('is told of when it is full, and keeps no half of a result (needs root to mount a small one)', ({ skip }) => {
    if (!mount(room, 'size=64k')) skip('only root can mount a file system that is small enough to fill');
    try {
      writeResult(join(room, 'run'), result());
      expect(refusal(join(room, 'run'), largeResult())).toMatch(/the disk is full$/);
      expect(readdirSync(room)).toEqual(['run']);
      expect(readdirSync(join(room, 'run')).sort()).toEqual(FILES);
      expect(JSON.parse(readFileSync(join(room, 'run', 'summary.json'), 'utf8'))).toEqual(summary());
    } finally {
      execFileSync('umount', [room]);
    }
  });
});

/** The message with which writing ends. */
function refusal(folder: string, what: Result = result()): string {
  try {
    writeResult(folder, what);
  } catch (error) {
    if (error instanceof OutputError) return error.message;
    throw error;
  }
  throw new Error(`${folder} was written`);
}

/** Mounts a file system in memory, if this user may. */
function mount(folder: string, options: string): boolean {
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', options, 'none', folder], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}
