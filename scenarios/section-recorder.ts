import type { BladeElementRotor } from '../sim/aerodynamics/blade-element-rotor.ts';
import { channelIndex } from '../sim/channels.ts';
import type { Frame } from '../sim/frame.ts';

const DEGREE = Math.PI / 180;
/** Relative radii at which the air is recorded: each blade's nearest strip. */
export const STATION_RADII: readonly number[] = [0.15, 0.3, 0.45, 0.6, 0.75, 0.87, 0.96];

/** What the sections of the blades went through, as two tables. */
export interface SectionRecording {
  /** One row a station: where and what it is, and its angles of stall; NaN where nothing lifts. */
  readonly stations: readonly { name: string; values: Float64Array }[];
  /**
   * One row a recorded frame: time, azimuth, pitch of each blade, then for blade b and station s (both from 1)
   * `angle_of_attack_b_s_deg`, `normal_speed_b_s_m_s`, `tangential_speed_b_s_m_s`, `axial_induced_b_s_m_s`,
   * `tangential_induced_b_s_m_s`.
   */
  readonly columns: readonly { name: string; values: Float64Array }[];
}

export interface SectionRecorder {
  /** To be called while the rotor still holds the flows of the frame's instant. */
  frame(frame: Frame): void;
  finish(): SectionRecording;
}

/** Records the air at stations of every blade of `rotor`, `rate` times a second as near as whole frames allow. */
export function createSectionRecorder(rotor: BladeElementRotor, rate: number): SectionRecorder {
  const { sections, bladeCount, radius } = rotor.blade;
  const { flows } = rotor;
  const picked = pickedSections(sections, radius);
  const azimuth = channelIndex('azimuth_deg');
  const pitch = channelIndex('pitch_1_deg');
  const blades = Array.from({ length: bladeCount }, (_, b) => b);

  const columns: { name: string; read: (frame: Frame) => number; values: number[] }[] = [];
  const add = (name: string, read: (frame: Frame) => number) => columns.push({ name, read, values: [] });
  add('time_s', ({ time }) => time);
  add('azimuth_deg', ({ values }) => values[azimuth] / DEGREE);
  for (const b of blades) add(`pitch_${b + 1}_deg`, ({ values }) => values[pitch + b] / DEGREE);
  for (const b of blades) {
    picked.forEach((section, s) => {
      const at = b * flows.sectionCount + section;
      const place = `${b + 1}_${s + 1}`;
      add(`angle_of_attack_${place}_deg`, () => flows.angleOfAttack[at] / DEGREE);
      add(`normal_speed_${place}_m_s`, () => flows.normalSpeed[at]);
      add(`tangential_speed_${place}_m_s`, () => flows.tangentialSpeed[at]);
      add(`axial_induced_${place}_m_s`, () => flows.axialInduced[at]);
      add(`tangential_induced_${place}_m_s`, () => flows.tangentialInduced[at]);
    });
  }

  let frames = 0;
  let first = Number.NaN;
  let every = 1;
  return {
    frame(frame) {
      if (frames === 0) first = frame.time;
      if (frames === 1) every = Math.max(1, Math.round(1 / (rate * (frame.time - first))));
      if (frames++ % every !== 0) return;
      for (const { read, values } of columns) values.push(read(frame));
    },
    finish() {
      const station = (name: string, value: (i: number) => number) => ({
        name,
        values: Float64Array.from(picked, value),
      });
      return {
        stations: [
          station('radius_m', (i) => sections[i].radius),
          station('relative_radius', (i) => sections[i].radius / radius),
          station('chord_m', (i) => sections[i].chord),
          station('twist_deg', (i) => sections[i].twist / DEGREE),
          station('stall_positive_deg', (i) => (sections[i].airfoil.stall?.positive ?? Number.NaN) / DEGREE),
          station('stall_negative_deg', (i) => (sections[i].airfoil.stall?.negative ?? Number.NaN) / DEGREE),
        ],
        columns: columns.map(({ name, values }) => ({ name, values: Float64Array.from(values) })),
      };
    },
  };
}

/** Indices of the strips nearest to the stations, each once, from the root out. */
function pickedSections(sections: readonly { radius: number }[], tipRadius: number): number[] {
  const nearest = STATION_RADII.map((relative) => {
    const away = sections.map(({ radius }) => Math.abs(radius - relative * tipRadius));
    return away.indexOf(Math.min(...away));
  });
  return [...new Set(nearest)];
}
