/** Coefficient surfaces kept on disk, since computing one takes longer than most runs. Node only. */
import { createHash } from 'node:crypto';
import { mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { homedir } from 'node:os';
import { join } from 'node:path';
import type { CoefficientSurface, SurfaceData } from '../sim/aerodynamics/coefficient-surface.ts';
import { surfaceDataOf, surfaceOf } from '../sim/aerodynamics/surface-rotor.ts';
import type { Turbine } from '../sim/turbine.ts';
import { VERSION } from './version.ts';

/** Change it whenever the same rotor would give another surface. */
const METHOD = 1;

/** `GALEHOLD_CACHE`, or the user's cache folder as the XDG base directory specification names it. */
export function cacheFolder(): string {
  const { GALEHOLD_CACHE, XDG_CACHE_HOME } = process.env;
  return GALEHOLD_CACHE ?? join(XDG_CACHE_HOME ?? join(homedir(), '.cache'), 'galehold');
}

function digest(text: string): string {
  return createHash('sha256').update(text).digest('hex');
}

/** The stored surface; undefined where there is none, or where the file is not what was written. */
function stored(file: string): SurfaceData | undefined {
  try {
    const [check, text] = readFileSync(file, 'utf8').split('\n');
    return check === digest(text) ? JSON.parse(text) : undefined;
  } catch {
    return undefined;
  }
}

/** A cache that cannot be written costs time, not results. */
function store(folder: string, file: string, data: SurfaceData): void {
  const text = JSON.stringify(data);
  const draft = `${file}.${process.pid}.part`;
  try {
    mkdirSync(folder, { recursive: true });
    writeFileSync(draft, `${digest(text)}\n${text}\n`);
    renameSync(draft, file);
  } catch {}
}

/** The turbine's coefficient surface, from the cache or computed and put there. */
export function cachedSurface(turbine: Turbine): CoefficientSurface {
  const folder = cacheFolder();
  const key = digest(JSON.stringify([VERSION, METHOD, turbine.rotor])).slice(0, 32);
  const file = join(folder, `surface-${key}.json`);
  const known = stored(file);
  const data = known ?? surfaceDataOf(turbine);
  if (!known) store(folder, file, data);
  return surfaceOf(turbine, data);
}
