/** Turbulent fields kept on disk, since many runs share one. Node only. */
import { createHash } from 'node:crypto';
import { mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync, utimesSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { type PolarSeries, pointCount } from '../sim/wind/polar-grid.ts';
import { type Turbulence, turbulenceField } from '../sim/wind/turbulence.ts';
import { cacheFolder } from './surface-cache.ts';
import { VERSION } from './version.ts';

/** Change it whenever the same turbulence would give another field. */
const METHOD = 1;

/** All fields together may take this much, bytes; `GALEHOLD_CACHE_LIMIT` gives another bound in MB. */
const USUAL_LIMIT = 2 ** 30;

const NAME = /^field-[0-9a-f]{32}\.bin$/;
/** What a process that was killed while it wrote left behind, and when that is sure, ms. */
const DRAFT = /^field-.*\.part$/;
const DRAFT_LIFE = 3.6e6;
const DIGEST_BYTES = 32;

/** Where fields are kept and how much they may take, bytes. */
export interface FieldCache {
  folder: string;
  limit: number;
}

function usualCache(): FieldCache {
  const megabytes = Number(process.env.GALEHOLD_CACHE_LIMIT);
  return { folder: cacheFolder(), limit: megabytes > 0 ? megabytes * 1e6 : USUAL_LIMIT };
}

/** The file's name says all that determines the field. */
function fileName(turbulence: Turbulence): string {
  const { meanWind, deviation, lengthScale, coherenceScale, grid, duration, rate, seed, variance } = turbulence;
  const { radius, rings, spokes } = grid;
  const determinants = [
    meanWind,
    deviation,
    lengthScale,
    coherenceScale,
    radius,
    rings,
    spokes,
    duration,
    rate,
    seed,
    variance,
  ];
  const key = createHash('sha256')
    .update(JSON.stringify([VERSION, METHOD, determinants]))
    .digest('hex')
    .slice(0, 32);
  return `field-${key}.bin`;
}

/** A file is the SHA-256 of what follows, the number of samples, and the values, all in the machine's byte order. */
function digestOf(body: Uint8Array): Buffer {
  return createHash('sha256').update(body).digest();
}

/** The stored field; undefined where there is none, or where the file is not what was written. */
function stored(file: string, { grid, duration }: Turbulence): PolarSeries | undefined {
  try {
    const bytes = readFileSync(file);
    const body = bytes.subarray(DIGEST_BYTES);
    if (!digestOf(body).equals(bytes.subarray(0, DIGEST_BYTES))) return undefined;
    const words = new Uint8Array(body).buffer;
    const samples = new Uint32Array(words, 0, 1)[0];
    const values = new Float32Array(words, 4);
    if (values.length !== 3 * pointCount(grid) * samples) return undefined;
    return { grid, period: duration, samples, values };
  } catch {
    return undefined;
  }
}

/** A cache that cannot be written costs time, not results. */
function store({ folder, limit }: FieldCache, file: string, { samples, values }: PolarSeries): void {
  const body = new Uint8Array(4 + values.byteLength);
  new Uint32Array(body.buffer, 0, 1)[0] = samples;
  new Float32Array(body.buffer, 4).set(values);
  if (body.byteLength + DIGEST_BYTES > limit) return;
  const draft = `${file}.${process.pid}.part`;
  try {
    mkdirSync(folder, { recursive: true });
    makeRoom(folder, limit - body.byteLength - DIGEST_BYTES);
    writeFileSync(draft, Buffer.concat([digestOf(body), body]));
    renameSync(draft, file);
  } catch {
    remove(draft);
  }
}

function remove(path: string): void {
  try {
    rmSync(path, { force: true });
  } catch {}
}

/** Removes the fields that were used longest ago until the others take no more than `limit` bytes, and dead drafts. */
function makeRoom(folder: string, limit: number): void {
  const names = readdirSync(folder);
  for (const name of names.filter((n) => DRAFT.test(n))) {
    const path = join(folder, name);
    if (Date.now() - sizeAndUse(path).used > DRAFT_LIFE) remove(path);
  }
  const fields = names
    .filter((name) => NAME.test(name))
    .map((name) => ({ path: join(folder, name), ...sizeAndUse(join(folder, name)) }))
    .sort((a, b) => b.used - a.used);
  let total = 0;
  for (const { path, size } of fields) {
    total += size;
    if (total > limit) remove(path);
  }
}

/** Another process may just have removed it. */
function sizeAndUse(path: string): { size: number; used: number } {
  const found = statSync(path, { throwIfNoEntry: false });
  return { size: found?.size ?? 0, used: found?.mtimeMs ?? 0 };
}

/**
 * The field of a turbulence, from the cache or made and put there. A file that was cut or altered is made again.
 * @throws RangeError as `turbulenceField`
 */
export function cachedField(turbulence: Turbulence, cache: FieldCache = usualCache()): PolarSeries {
  const file = join(cache.folder, fileName(turbulence));
  const known = stored(file, turbulence);
  if (known) {
    noteUse(file);
    return known;
  }
  const field = turbulenceField(turbulence);
  store(cache, file, field);
  return field;
}

function noteUse(file: string): void {
  try {
    const now = new Date();
    utimesSync(file, now, now);
  } catch {}
}
