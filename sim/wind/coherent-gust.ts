import { riseOf, turningMarks } from './direction-change.ts';
import { type IecClass, requireMeanWind } from './iec-class.ts';
import { speedChange } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

export interface CoherentGust extends IecClass {
  /** Mean wind at hub height, m/s. */
  hubWind: number;
  /** s */
  start: number;
  /** Which way the flow turns: 1 towards +y (left, looking downwind), −1 the other way. */
  sense: 1 | -1;
}

/** Length of the rise, s, and the gust's magnitude V_cg, m/s. */
const PERIOD = 10;
const GUST = 15;

/** How far the wind turns, θ_cg, rad, without its sign: 180° below 4 m/s, 720°/V_hub (V in m/s) above. */
export function coherentGustTurn(hubWind: number): number {
  return hubWind < 4 ? Math.PI : (4 * Math.PI) / hubWind;
}

/**
 * The extreme coherent gust with direction change (ECD) of IEC 61400-1: within 10 s the wind rises by 15 m/s all over
 * the rotor and turns; both stay. Adds only what differs from the mean wind.
 * @throws RangeError when the mean wind is outside the class
 */
export function coherentGust(gust: CoherentGust): WindField {
  requireMeanWind(gust, gust.hubWind);
  const { start } = gust;
  const angle = gust.sense * coherentGustTurn(gust.hubWind);
  const [begins, ends] = turningMarks(start, PERIOD, angle);
  return {
    ...uniformWind({
      speed: (t) => GUST * riseOf(t - start, PERIOD),
      jumps: [start, start + PERIOD],
      marks: [
        { ...begins, text: `gust of ${speedChange(GUST)}: ${begins.text}` },
        { ...ends, text: 'gust stays; wind holds its new direction' },
      ],
    }),
    direction: (t) => angle * riseOf(t - start, PERIOD),
  };
}
