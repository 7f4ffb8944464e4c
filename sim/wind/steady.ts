import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

/** The same wind for ever: `speed` in m/s. */
export function steadyWind({ speed }: { speed: number }): WindField {
  return uniformWind({ speed: () => speed });
}
