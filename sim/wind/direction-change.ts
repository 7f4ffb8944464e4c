import { type IecClass, normalDeviation, requireMeanWind, turbulenceScaleOf } from './iec-class.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

export interface DirectionChange extends IecClass {
  /** Mean wind at hub height, m/s. */
  hubWind: number;
  /** m */
  rotorDiameter: number;
  hubHeight: number;
  /** s */
  start: number;
  /** Which way the flow turns: 1 towards +y (left, looking downwind), −1 the other way. */
  sense: 1 | -1;
}

/** Length of the change, s. */
const PERIOD = 6;

/**
 * How far the wind turns, θ_e, rad, without its sign.
 * @throws RangeError as `normalDeviation` and `requireMeanWind`
 */
export function directionChangeSize(change: DirectionChange): number {
  requireMeanWind(change, change.hubWind);
  const deviation = normalDeviation(change, change.hubWind);
  // θ_e = 4 arctan(σ₁ / (V_hub (1 + 0.1 D/Λ₁))), at most 180°
  const slenderness = 1 + (0.1 * change.rotorDiameter) / turbulenceScaleOf(change.hubHeight);
  return Math.min(4 * Math.atan(deviation / (change.hubWind * slenderness)), Math.PI);
}

/**
 * The extreme direction change (EDC) of IEC 61400-1: the whole wind turns within 6 s and stays turned.
 * @throws RangeError as `directionChangeSize`
 */
export function directionChange(change: DirectionChange): WindField {
  const angle = change.sense * directionChangeSize(change);
  return {
    ...uniformWind({
      speed: () => 0,
      jumps: [change.start, change.start + PERIOD],
      marks: turningMarks(change.start, PERIOD, angle),
    }),
    direction: (t) => angle * riseOf(t - change.start, PERIOD),
  };
}

/** 0 before, ½ (1 − cos(πt/T)) on the way, 1 after: how the standard lets directions and coherent gusts rise. */
export function riseOf(t: number, period: number): number {
  if (t <= 0) return 0;
  return t >= period ? 1 : 0.5 * (1 - Math.cos((Math.PI * t) / period));
}

export function turningMarks(start: number, period: number, angle: number) {
  const degrees = Number(((Math.abs(angle) * 180) / Math.PI).toFixed(1));
  const side = angle < 0 ? 'right' : 'left';
  return [
    { time: start, kind: 'gust start', text: `wind starts to turn by ${degrees}° to the ${side}` },
    { time: start + period, kind: 'gust end', text: 'wind holds its new direction' },
  ] as const;
}
