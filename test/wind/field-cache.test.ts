import { mkdtempSync, readdirSync, readFileSync, rmSync, statSync, utimesSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { cachedField } from '../../scenarios/field-cache.ts';
import { standardTurbulence } from '../../sim/wind/kaimal.ts';
import type { PolarSeries } from '../../sim/wind/polar-grid.ts';
import { type Turbulence, turbulenceField } from '../../sim/wind/turbulence.ts';

const TURBULENCE: Turbulence = {
  ...standardTurbulence(12, 2, 42),
  grid: { radius: 65, rings: 4, spokes: 12 },
  duration: 30,
  rate: 4,
  seed: 1,
  variance: 'exact',
};

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'galehold-fields-'));
});
afterEach(() => rmSync(folder, { recursive: true }));

function cached(changes: Partial<Turbulence> = {}, limit = 1e9): PolarSeries {
  return cachedField({ ...TURBULENCE, ...changes }, { folder, limit });
}

function fileOf(): string {
  const [name] = readdirSync(folder);
  return join(folder, name);
}

describe('the cache of fields', () => {
  it('gives back what it was given, bit by bit, and leaves no draft', () => {
    const first = cached();
    expect(readdirSync(folder)).toHaveLength(1);
    const again = cached();
    expect(again).toEqual(first);
    expect(Buffer.from(again.values.buffer, again.values.byteOffset, again.values.byteLength)).toEqual(
      Buffer.from(turbulenceField(TURBULENCE).values.buffer),
    );
  });

  it('reads the file the second time: an unchanged file keeps its bytes but not its time of use', () => {
    cached();
    const file = fileOf();
    const old = new Date('2020-01-01');
    utimesSync(file, old, old);
    const { ino } = statSync(file);
    cached();
    expect(statSync(file).ino).toBe(ino);
    expect(statSync(file).mtime.getTime()).toBeGreaterThan(old.getTime());
  });

  it('keeps another file for whatever else determines a field', () => {
    cached();
    cached({ seed: 2 });
    cached({ rate: 5 });
    cached({ variance: 'random' });
    cached({ meanWind: 13 });
    cached({ grid: { ...TURBULENCE.grid, rings: 5 } });
    expect(readdirSync(folder)).toHaveLength(6);
  });

  it.each([
    { what: 'cut short', harm: (bytes: Buffer) => bytes.subarray(0, bytes.length - 100) },
    { what: 'emptied', harm: () => Buffer.alloc(0) },
    {
      what: 'altered in one bit',
      harm: (bytes: Buffer) => {
        bytes[2000] ^= 1;
        return bytes;
      },
    },
  ])('makes a field again whose file was $what', ({ harm }) => {
    const first = cached();
    const file = fileOf();
    const whole = readFileSync(file);
    writeFileSync(file, harm(Buffer.from(whole)));
    expect(cached()).toEqual(first);
    expect(readFileSync(file).equals(whole)).toBe(true);
  });

  it('removes what was used longest ago when it grows beyond its bound', () => {
    cached();
    const size = statSync(fileOf()).size;
    const names = [readdirSync(folder)[0]];
    for (const seed of [2, 3]) {
      cached({ seed });
      names.push(...readdirSync(folder).filter((name) => !names.includes(name)));
    }
    names.forEach((name, age) => {
      const used = new Date(2020, 0, 1 + age);
      utimesSync(join(folder, name), used, used);
    });
    cached();
    cached({ seed: 4 }, 3.5 * size);
    expect(readdirSync(folder)).toHaveLength(3);
    expect(readdirSync(folder)).toContain(names[0]);
    expect(readdirSync(folder)).not.toContain(names[1]);
  });

  it('clears away what a killed process left half-written, but not what another may be writing', () => {
    for (const name of ['field-old.bin.1.part', 'field-new.bin.2.part']) writeFileSync(join(folder, name), 'half');
    const old = new Date('2020-01-01');
    utimesSync(join(folder, 'field-old.bin.1.part'), old, old);
    cached();
    expect(readdirSync(folder).filter((name) => name.endsWith('.part'))).toEqual(['field-new.bin.2.part']);
  });

  it('keeps nothing that is larger than its bound', () => {
    cached({}, 1000);
    expect(readdirSync(folder)).toEqual([]);
  });

  it('serves a field even where nothing can be written', () => {
    const file = join(folder, 'file');
    writeFileSync(file, '');
    expect(cachedField(TURBULENCE, { folder: file, limit: 1e9 })).toEqual(turbulenceField(TURBULENCE));
  });
});
