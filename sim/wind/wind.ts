/** An instant worth showing to a reader; `kind` lets code find it. */
export interface WindMark {
  readonly time: number;
  readonly text: string;
  readonly kind?: 'gust start' | 'gust peak' | 'gust end' | 'other';
}

/**
 * A wind field over the rotor. `x` downwind, `y` left when looking downwind, `z` up, origin at the hub.
 *
 * To write a new wind condition: one file that exports a function returning a `WindField`; add it to the kinds in
 * `scenarios/schema/wind.ts`. Fields add (`sum.ts`). A field keeps parameters and tables, never memory.
 */
export interface WindField {
  /** Wind components (u, v, w) in m/s at time `t` (s) and at (y, z) in m from the hub, written to `out`. */
  velocity(t: number, y: number, z: number, out: Float64Array): void;
  /**
   * How far the flow is turned out of the rotor's axis at time `t`, rad, positive towards +y; absent from a field that
   * never turns. A part only says so: the sum of the parts turns their velocities by the sum of their directions.
   */
  direction?(t: number): number;
  /** Whether the wind is the same all over the rotor, so that one look serves every blade section. */
  readonly uniform?: boolean;
  /** Rotor-effective wind speed, m/s: what the `surface` rotor feels. */
  rotorMean(t: number): number;
  /**
   * Instants in (start, end), rising, at which the field or one of its derivatives jumps; the clock ends integration
   * intervals there. At a jump itself the field takes its new value (it is continuous from the right). `start` is 0
   * when absent.
   */
  breakpoints(end: number, start?: number): number[];
  /** Instants worth showing to a reader, such as a gust's start, peak and end. */
  marks(): readonly WindMark[];
}
