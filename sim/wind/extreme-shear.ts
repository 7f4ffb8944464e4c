import { type IecClass, normalDeviation, requireMeanWind, turbulenceScaleOf } from './iec-class.ts';
import type { WindField } from './wind.ts';

export interface ExtremeShear extends IecClass {
  /** Mean wind at hub height, m/s. */
  hubWind: number;
  /** m */
  rotorDiameter: number;
  hubHeight: number;
  /** s */
  start: number;
  /** Vertical: faster above (sense 1) or below (−1). Horizontal: faster at +y, left looking downwind (1), or right (−1). */
  plane: 'vertical' | 'horizontal';
  sense: 1 | -1;
}

/** Length of the event, s. */
const PERIOD = 12;

/**
 * Speed that the shear adds at its crest at the rotor's edge, m/s: half the difference across the rotor.
 * @throws RangeError as `normalDeviation` and `requireMeanWind`
 */
export function extremeShearSize(shear: ExtremeShear): number {
  const { rotorDiameter } = shear;
  requireMeanWind(shear, shear.hubWind);
  const deviation = normalDeviation(shear, shear.hubWind);
  const beta = 6.4;
  // (z/D) (2.5 + 0.2 β σ₁ (D/Λ₁)^¼) (1 − cos(2πt/T)) with z/D = ½ and 1 − cos = 2
  return 2.5 + 0.2 * beta * deviation * (rotorDiameter / turbulenceScaleOf(shear.hubHeight)) ** 0.25;
}

/**
 * The extreme wind shear (EWS) of IEC 61400-1: for 12 s the wind is faster on one side and slower on the other. Adds
 * only what differs from the mean wind; a rotor that feels only its mean wind does not notice.
 * @throws RangeError as `extremeShearSize`
 */
export function extremeShear(shear: ExtremeShear): WindField {
  const { start } = shear;
  const end = start + PERIOD;
  const size = extremeShearSize(shear);
  const slope = (shear.sense * size) / (0.5 * shear.rotorDiameter);
  const isVertical = shear.plane === 'vertical';
  const frequency = (2 * Math.PI) / PERIOD;
  const sides = { vertical: { 1: 'above', '-1': 'below' }, horizontal: { 1: 'on the left', '-1': 'on the right' } };
  const jumps = [start, end];
  const across = Number((2 * size).toFixed(1));
  return {
    velocity(t, y, z, out) {
      const share = t <= start || t >= end ? 0 : 0.5 * (1 - Math.cos(frequency * (t - start)));
      out[0] = slope * share * (isVertical ? z : y);
      out[1] = 0;
      out[2] = 0;
    },
    rotorMean: () => 0,
    breakpoints: (last, first = 0) => jumps.filter((instant) => instant > first && instant < last),
    marks: () => [
      { time: start, kind: 'gust start', text: `shear starts: faster ${sides[shear.plane][shear.sense]}` },
      { time: start + PERIOD / 2, kind: 'gust peak', text: `shear at its crest (${across} m/s across the rotor)` },
      { time: end, kind: 'gust end', text: 'shear ends' },
    ],
  };
}
