import type { WindField, WindMark } from './wind.ts';

export interface UniformWind {
  /** Wind speed along the rotor axis, m/s, at time `t`, s. Allocates nothing; continuous from the right. */
  speed(t: number): number;
  /** Instants, rising, at which `speed` or one of its derivatives jumps, s. */
  jumps?: readonly number[];
  marks?: readonly WindMark[];
}

/** A field that is the same all over the rotor and blows along its axis. */
export function uniformWind({ speed, jumps = [], marks = [] }: UniformWind): WindField {
  return {
    uniform: true,
    velocity(t, _y, _z, out) {
      out[0] = speed(t);
      out[1] = 0;
      out[2] = 0;
    },
    rotorMean: speed,
    breakpoints: (end, start = 0) => jumps.filter((instant) => instant > start && instant < end),
    marks: () => marks,
  };
}
