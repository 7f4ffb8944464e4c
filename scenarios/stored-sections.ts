/** Reads back the air at the blades that a run with the blade-element rotor has left in its results folder. Node only. */
import { existsSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { parse } from 'csv-parse/sync';
import { InputError, refusal } from './input-error.ts';
import { SECTIONS_FILE, STATIONS_FILE } from './results.ts';

const DEGREE = Math.PI / 180;

/** A station of a blade, SI and radians. */
export interface Station {
  radius: number;
  relativeRadius: number;
  chord: number;
  twist: number;
  /** Absent where nothing lifts. */
  stall?: { positive: number; negative: number };
}

/** The air at one station of one blade at an instant, SI and radians. */
export interface StationAir {
  angleOfAttack: number;
  normalSpeed: number;
  tangentialSpeed: number;
  axialInduced: number;
  tangentialInduced: number;
}

export interface StoredSections {
  stations: readonly Station[];
  bladeCount: number;
  /** s, rising */
  times: Float64Array;
  /** rad */
  azimuth(row: number): number;
  pitch(row: number, blade: number): number;
  air(row: number, blade: number, station: number): StationAir;
}

/** @throws InputError where the folder holds no such record, or one that is cut or altered */
export async function readStoredSections(folder: string): Promise<StoredSections> {
  const sections = await readTable(folder, SECTIONS_FILE);
  const stations = stationsOf(await readTable(folder, STATIONS_FILE));
  const column = (name: string): Float64Array => {
    const found = sections.get(name);
    if (!found) throw refusal(join(folder, SECTIONS_FILE), `the column "${name}" is missing; run the scenario again`);
    return found;
  };
  const bladeCount = [...sections.keys()].filter((name) => /^pitch_\d_deg$/.test(name)).length;
  const times = column('time_s');
  const azimuth = column('azimuth_deg');
  const blades = Array.from({ length: bladeCount }, (_, b) => ({
    pitch: column(`pitch_${b + 1}_deg`),
    stations: stations.map((_, s) => {
      const place = `${b + 1}_${s + 1}`;
      return {
        angleOfAttack: column(`angle_of_attack_${place}_deg`),
        normalSpeed: column(`normal_speed_${place}_m_s`),
        tangentialSpeed: column(`tangential_speed_${place}_m_s`),
        axialInduced: column(`axial_induced_${place}_m_s`),
        tangentialInduced: column(`tangential_induced_${place}_m_s`),
      };
    }),
  }));
  if (times.length === 0 || bladeCount === 0) throw refusal(join(folder, SECTIONS_FILE), 'holds no samples');
  return {
    stations,
    bladeCount,
    times,
    azimuth: (row) => azimuth[row] * DEGREE,
    pitch: (row, blade) => blades[blade].pitch[row] * DEGREE,
    air: (row, blade, station) => {
      const at = blades[blade].stations[station];
      return {
        angleOfAttack: at.angleOfAttack[row] * DEGREE,
        normalSpeed: at.normalSpeed[row],
        tangentialSpeed: at.tangentialSpeed[row],
        axialInduced: at.axialInduced[row],
        tangentialInduced: at.tangentialInduced[row],
      };
    },
  };
}

/**
 * Both tables as they are; undefined for a run that has left none.
 * @throws InputError where they are cut or altered
 */
export async function storedSectionTables(
  folder: string,
): Promise<
  { stations: { name: string; values: Float64Array }[]; columns: { name: string; values: Float64Array }[] } | undefined
> {
  if (!existsSync(join(folder, SECTIONS_FILE))) return undefined;
  const listed = (table: ReadonlyMap<string, Float64Array>) => [...table].map(([name, values]) => ({ name, values }));
  return {
    stations: listed(await readTable(folder, STATIONS_FILE)),
    columns: listed(await readTable(folder, SECTIONS_FILE)),
  };
}

function stationsOf(table: ReadonlyMap<string, Float64Array>): Station[] {
  const read = (name: string, row: number): number => table.get(name)?.[row] ?? Number.NaN;
  return Array.from(table.get('radius_m') ?? [], (radius, i) => {
    const positive = read('stall_positive_deg', i) * DEGREE;
    const negative = read('stall_negative_deg', i) * DEGREE;
    return {
      radius,
      relativeRadius: read('relative_radius', i),
      chord: read('chord_m', i),
      twist: read('twist_deg', i) * DEGREE,
      ...(Number.isNaN(positive) || Number.isNaN(negative) ? {} : { stall: { positive, negative } }),
    };
  });
}

/** Columns by name; NaN where a cell is empty. */
async function readTable(folder: string, name: string): Promise<Map<string, Float64Array>> {
  const file = join(folder, name);
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch {
    throw refusal(
      folder,
      `holds no ${name}: only a run with the blade-element rotor (rotor_model: blade_element) records the air at its blades`,
    );
  }
  const [names = [], ...rows] = rowsOf(file, text);
  const cut = rows.findIndex((row) => row.length !== names.length);
  if (cut >= 0) {
    const message = `${rows[cut].length} values against ${names.length} columns; run the scenario again`;
    throw new InputError([{ file, line: cut + 2, column: 1, message }]);
  }
  return new Map(
    names.map((column, i) => [
      column,
      Float64Array.from(rows, (row, at) => {
        const value = row[i] === '' ? Number.NaN : Number(row[i]);
        if (row[i] === '' || Number.isFinite(value)) return value;
        throw new InputError([{ file, line: at + 2, column: 1, message: `${column}: "${row[i]}" is not a number` }]);
      }),
    ]),
  );
}

function rowsOf(file: string, text: string): string[][] {
  try {
    return parse(text, { bom: true, relax_column_count: true, skip_empty_lines: true });
  } catch (cause) {
    throw refusal(file, (cause as Error).message);
  }
}
