import type { WindField } from './wind.ts';

/** A wind that is turned out of the rotor's axis by the same angle all the time: rad, positive towards +y. */
export function turnedWind(field: WindField, angle: number): WindField {
  if (angle === 0) return field;
  const { direction } = field;
  return { ...field, direction: direction ? (t) => direction(t) + angle : () => angle };
}
