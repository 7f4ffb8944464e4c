/** A wind against time as columns: at the hub, over the rotor, and at points of it where asked. */
import { refusal } from '../scenarios/input-error.ts';
import type { WindData } from '../scenarios/load.ts';
import type { ResultColumn } from '../scenarios/results.ts';
import { sumWind } from '../sim/wind/sum.ts';
import { positiveOption } from './wind-source.ts';

/** The most values that are written, so that a slip of the pen fills no disk. */
const MOST_VALUES = 2e7;

interface Point {
  /** How the columns' names tell it from others; empty at the hub. */
  name: string;
  y: number;
  z: number;
}

/**
 * Columns in m/s and degrees, `time_s` first. `u`, `v`, `w` blow along the rotor's axis, to the left looking downwind,
 * and up.
 * @throws InputError for a rate or points that make no sense, or more values than a file should hold
 */
export function windColumns({ parts, site }: WindData, options: { rate: string; points?: string }): ResultColumn[] {
  const rate = positiveOption('--rate', options.rate, 'frequency');
  const points = [{ name: 'hub', y: 0, z: 0 }, ...pointsOf(options.points, site.rotorDiameter / 2)];
  const rows = Math.floor(site.duration * rate + 1e-9) + 1;
  if (rows * (3 * points.length + 3) > MOST_VALUES) {
    throw refusal(
      '--points',
      `${rows} rows of ${3 * points.length + 3} values are too many: fewer points or a lower --rate is due`,
    );
  }
  const wind = sumWind(parts.map(({ field }) => field));
  const time = Float64Array.from({ length: rows }, (_, row) => row / rate);
  const columns: ResultColumn[] = [
    { name: 'time_s', values: time },
    { name: 'rotor_mean_m_s', values: time.map((t) => wind.rotorMean(t)) },
    { name: 'direction_deg', values: time.map((t) => ((wind.direction?.(t) ?? 0) * 180) / Math.PI) },
  ];
  const velocity = new Float64Array(3);
  for (const { name, y, z } of points) {
    const components = ['u', 'v', 'w'].map((component) => ({
      name: `${component}_${name}_m_s`,
      values: new Float64Array(rows),
    }));
    for (let row = 0; row < rows; row++) {
      wind.velocity(time[row], y, z, velocity);
      components.forEach(({ values }, i) => {
        values[row] = velocity[i];
      });
    }
    columns.push(...components);
  }
  return columns;
}

function pointsOf(asked: string | undefined, radius: number): Point[] {
  if (asked === undefined) return [];
  const [, rings, spokes] = /^(\d+)x(\d+)$/.exec(asked) ?? [];
  if (!(Number(rings) > 0 && Number(spokes) > 0)) {
    throw refusal('--points', `rings and spokes are due, such as 5x12, but it is "${asked}"`);
  }
  return Array.from({ length: Number(rings) * Number(spokes) }, (_, i) => {
    const r = (radius * (1 + Math.floor(i / Number(spokes)))) / Number(rings);
    const azimuth = (360 * (i % Number(spokes))) / Number(spokes);
    const angle = (azimuth * Math.PI) / 180;
    const name = `${Number(r.toFixed(2))}m_${Number(azimuth.toFixed(2))}deg`.replaceAll('.', 'p');
    return { name, y: -r * Math.sin(angle), z: r * Math.cos(angle) };
  });
}
