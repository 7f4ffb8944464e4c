/** The air at every blade at an instant of a run: a table, and a picture to scale. */
import { basename, resolve } from 'node:path';
import { refusal } from '../scenarios/input-error.ts';
import { parseQuantity } from '../scenarios/quantity.ts';
import { readStoredSections, type StationAir, type StoredSections } from '../scenarios/stored-sections.ts';
import type { DrawnTriangle } from './blade-picture.ts';
import { textTable } from './text-table.ts';

const DEGREE = Math.PI / 180;

/** One blade at the instant, stations from the root out; SI and radians. */
export interface BladeAtInstant {
  azimuth: number;
  pitch: number;
  stations: (DrawnTriangle & StationAir)[];
}

export interface BladeInstant {
  run: string;
  /** Of the recorded frame that is nearest to the asked instant, s. */
  time: number;
  tipRadius: number;
  blades: BladeAtInstant[];
}

/**
 * @param folder a results folder
 * @param asked the instant, such as "25.2 s"
 * @throws InputError where the folder holds no air at blades, or the instant lies outside the run
 */
export async function bladeInstant(folder: string, asked: string): Promise<BladeInstant> {
  const stored = await readStoredSections(folder);
  const time = instant(asked);
  const { times, stations, bladeCount } = stored;
  const last = times[times.length - 1];
  if (time < times[0] || time > last) {
    throw refusal('--time', `${time} s lies outside the run, which was recorded from ${times[0]} s to ${last} s`);
  }
  const row = nearestRow(times, time);
  const [innermost] = stations;
  return {
    run: basename(resolve(folder)),
    time: times[row],
    tipRadius: innermost.radius / innermost.relativeRadius,
    blades: Array.from({ length: bladeCount }, (_, b) => bladeAt(stored, row, b)),
  };
}

function instant(asked: string): number {
  try {
    return parseQuantity(asked, 'time');
  } catch (cause) {
    throw refusal('--time', (cause as Error).message);
  }
}

function nearestRow(times: Float64Array, time: number): number {
  let best = 0;
  for (let i = 1; i < times.length; i++) if (Math.abs(times[i] - time) < Math.abs(times[best] - time)) best = i;
  return best;
}

/** Blade `b` of the recorded frame `row`. */
export function bladeAt(stored: StoredSections, row: number, b: number): BladeAtInstant {
  const turn = 2 * Math.PI;
  return {
    azimuth: (stored.azimuth(row) + (turn * b) / stored.bladeCount) % turn,
    pitch: stored.pitch(row, b),
    stations: stored.stations.map(({ radius, chord, twist, stall }, s) => {
      const air = stored.air(row, b, s);
      const { normalSpeed, tangentialSpeed, angleOfAttack } = air;
      const stallMargin = stall && Math.min(stall.positive - angleOfAttack, angleOfAttack - stall.negative);
      return {
        ...air,
        radius,
        chord,
        twist,
        inflowAngle: Math.atan2(normalSpeed, tangentialSpeed),
        relativeSpeed: Math.hypot(normalSpeed, tangentialSpeed),
        ...(stall && { stall, stallMargin }),
      };
    }),
  };
}

const HEADER = [
  'blade',
  'radius',
  'r/R',
  'inflow',
  'attack',
  'to +stall',
  'to -stall',
  'v_n',
  'v_t',
  'W',
  'axial',
  'swirl',
];
const UNITS = ['', 'm', '%', 'deg', 'deg', 'deg', 'deg', 'm/s', 'm/s', 'm/s', 'm/s', 'm/s'];
const NOTES = [
  'inflow: angle of the relative wind to the rotor plane; attack = inflow - twist - pitch.',
  'to +stall, to -stall: distance to the angles of largest and most negative lift; negative when past them.',
  'v_n, v_t: speeds of the air normal to and in the rotor plane as the moving section meets it; W: both together.',
  'axial, swirl: the part of v_n that the rotor takes from the wind, and of v_t that it adds.',
];

/** The instant as a text table. */
export function instantText({ run, time, tipRadius, blades }: BladeInstant): string {
  const degrees = (angle: number | undefined): string =>
    angle === undefined ? '-' : (Math.round((10 * angle) / DEGREE) / 10 + 0).toFixed(1);
  const rows = blades.flatMap(({ stations }, b) =>
    stations.map((s) => [
      String(b + 1),
      s.radius.toFixed(1),
      ((100 * s.radius) / tipRadius).toFixed(0),
      degrees(s.inflowAngle),
      degrees(s.angleOfAttack),
      degrees(s.stall && s.stall.positive - s.angleOfAttack),
      degrees(s.stall && s.angleOfAttack - s.stall.negative),
      s.normalSpeed.toFixed(2),
      s.tangentialSpeed.toFixed(2),
      s.relativeSpeed.toFixed(2),
      s.axialInduced.toFixed(2),
      s.tangentialInduced.toFixed(2),
    ]),
  );
  const where = blades.map(
    ({ azimuth, pitch }, b) => `blade ${b + 1}: azimuth ${degrees(azimuth)} deg, pitch ${degrees(pitch)} deg`,
  );
  return [`${run} at ${time} s`, ...where, '', textTable(HEADER, [UNITS, ...rows]), '', ...NOTES].join('\n');
}
