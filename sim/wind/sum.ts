import type { WindField } from './wind.ts';

/** The wind of a run: the sum of its parts, turned as a whole by the sum of their directions. */
export function sumWind(parts: readonly WindField[]): WindField {
  const { direction, ...sum } = addedWind(parts);
  return direction ? turned(sum, direction) : sum;
}

/**
 * Several parts as one, which `sumWind` then turns with all the others. Parts that are the same all over the rotor are
 * asked once an instant.
 */
export function addedWind(parts: readonly WindField[]): WindField {
  const count = parts.length;
  const alike = parts.filter((part) => part.uniform === true);
  const local = parts.filter((part) => part.uniform !== true);
  const localCount = local.length;
  const everywhere = new Float64Array(3);
  const velocityOfPart = new Float64Array(3);
  let askedAt = Number.NaN;

  function ask(t: number): void {
    askedAt = t;
    everywhere.fill(0);
    for (const part of alike) {
      part.velocity(t, 0, 0, velocityOfPart);
      for (let i = 0; i < 3; i++) everywhere[i] += velocityOfPart[i];
    }
  }

  return {
    uniform: localCount === 0,
    velocity(t, y, z, out) {
      if (t !== askedAt) ask(t);
      out[0] = everywhere[0];
      out[1] = everywhere[1];
      out[2] = everywhere[2];
      for (let i = 0; i < localCount; i++) {
        local[i].velocity(t, y, z, velocityOfPart);
        out[0] += velocityOfPart[0];
        out[1] += velocityOfPart[1];
        out[2] += velocityOfPart[2];
      }
    },
    ...addedDirection(parts),
    rotorMean(t) {
      let mean = 0;
      for (let i = 0; i < count; i++) mean += parts[i].rotorMean(t);
      return mean;
    },
    breakpoints(end, start) {
      const instants = new Set(parts.flatMap((part) => part.breakpoints(end, start)));
      return [...instants].sort((a, b) => a - b);
    },
    marks: () => parts.flatMap((part) => part.marks()).sort((a, b) => a.time - b.time),
  };
}

function addedDirection(parts: readonly WindField[]): Pick<WindField, 'direction'> {
  const directions = parts.flatMap(({ direction }) => (direction ? [direction] : []));
  const count = directions.length;
  if (count === 0) return {};
  return {
    direction(t) {
      let angle = 0;
      for (let i = 0; i < count; i++) angle += directions[i](t);
      return angle;
    },
  };
}

function turned(wind: WindField, direction: (t: number) => number): WindField {
  return {
    ...wind,
    direction,
    velocity(t, y, z, out) {
      wind.velocity(t, y, z, out);
      const angle = direction(t);
      const along = out[0];
      const across = out[1];
      out[0] = along * Math.cos(angle) - across * Math.sin(angle);
      out[1] = along * Math.sin(angle) + across * Math.cos(angle);
    },
    /** Only what blows along the axis. */
    rotorMean: (t) => wind.rotorMean(t) * Math.cos(direction(t)),
  };
}
