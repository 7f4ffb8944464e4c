import type { WindField } from './wind.ts';

/** The sum of several fields: mean wind, gusts, swings. */
export function sumWind(parts: readonly WindField[]): WindField {
  const count = parts.length;
  const velocityOfPart = new Float64Array(3);
  return {
    velocity(t, y, z, out) {
      out.fill(0, 0, 3);
      for (let i = 0; i < count; i++) {
        parts[i].velocity(t, y, z, velocityOfPart);
        out[0] += velocityOfPart[0];
        out[1] += velocityOfPart[1];
        out[2] += velocityOfPart[2];
      }
    },
    rotorMean(t) {
      let mean = 0;
      for (let i = 0; i < count; i++) mean += parts[i].rotorMean(t);
      return mean;
    },
    breakpoints(end) {
      const instants = new Set(parts.flatMap((part) => part.breakpoints(end)));
      return [...instants].sort((a, b) => a - b);
    },
    marks: () => parts.flatMap((part) => part.marks()).sort((a, b) => a.time - b.time),
  };
}
