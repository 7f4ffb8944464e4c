import type { WindField } from './wind.ts';

/** A wind that rises over sloping ground: the field turned up by `angle`, rad. */
export function inclinedWind(field: WindField, angle: number): WindField {
  if (angle === 0) return field;
  const sin = Math.sin(angle);
  const cos = Math.cos(angle);
  return {
    ...field,
    velocity(t, y, z, out) {
      field.velocity(t, y, z, out);
      const along = out[0];
      const up = out[2];
      out[0] = along * cos - up * sin;
      out[2] = along * sin + up * cos;
    },
    rotorMean: (t) => field.rotorMean(t) * cos,
  };
}
