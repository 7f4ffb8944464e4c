import type { WindField } from './wind.ts';

/** When and how strongly a part of the wind blows. */
export interface Placement {
  /** How much later than by itself, s. */
  delay?: number;
  /** What its speeds and its turning are multiplied by. */
  scale?: number;
  /** Where it is let through, in the run's own time. */
  window?: {
    /** s; from the start of the run and for ever when absent. */
    from?: number;
    to?: number;
    /**
     * How long it takes to come and to go, inside the window, as ½ (1 − cos), s. With 0 the edges are hard: the part is
     * there at `from` and gone at `to`.
     */
    fade: number;
  };
}

/**
 * A part of the wind, delayed, scaled and windowed.
 * @throws RangeError when the window is too short for its edges
 */
export function placedWind(field: WindField, { delay = 0, scale = 1, window }: Placement): WindField {
  if (delay === 0 && scale === 1 && !window) return field;
  const { from = Number.NEGATIVE_INFINITY, to = Number.POSITIVE_INFINITY, fade = 0 } = window ?? {};
  if (!(to - from > 0 && to - from >= 2 * fade)) {
    throw new RangeError(
      `a window from ${from} s to ${to} s is too short${fade > 0 ? ` to come and go over ${fade} s each` : ''}: it must end later`,
    );
  }

  function strength(t: number): number {
    if (t < from || t >= to) return 0;
    if (t < from + fade) return scale * 0.5 * (1 - Math.cos((Math.PI * (t - from)) / fade));
    if (t > to - fade) return scale * 0.5 * (1 - Math.cos((Math.PI * (to - t)) / fade));
    return scale;
  }

  const { direction } = field;
  return {
    uniform: field.uniform,
    velocity(t, y, z, out) {
      const share = strength(t);
      if (share === 0) {
        out.fill(0, 0, 3);
        return;
      }
      field.velocity(t - delay, y, z, out);
      for (let i = 0; i < 3; i++) out[i] *= share;
    },
    ...(direction && { direction: (t: number) => strength(t) * direction(t - delay) }),
    rotorMean: (t) => strength(t) * field.rotorMean(t - delay),
    breakpoints(end, start = 0) {
      const own = field.breakpoints(end - delay, start - delay).map((instant) => instant + delay);
      const edges = [from, from + fade, to - fade, to];
      const all = new Set([...own.filter((t) => t > from && t < to), ...edges.filter((t) => t > start && t < end)]);
      return [...all].sort((a, b) => a - b);
    },
    marks: () =>
      field.marks().flatMap((mark) => {
        const time = mark.time + delay;
        return time >= from && time <= to ? [{ ...mark, time }] : [];
      }),
  };
}
