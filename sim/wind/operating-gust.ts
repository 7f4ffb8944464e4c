import { extremeReferenceWindOf, type IecClass, normalDeviation, turbulenceScaleOf } from './iec-class.ts';
import { gustMarks } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

export interface OperatingGust extends IecClass {
  /** Mean wind at hub height, m/s. */
  hubWind: number;
  /** m */
  rotorDiameter: number;
  hubHeight: number;
  /** s */
  start: number;
}

/** Length of the gust, s. */
const PERIOD = 10.5;

/** What the class and the category say, and the size of the gust that follows from them, m/s. */
export interface GustSize {
  /** Standard deviation σ₁ of the wind by the normal turbulence model. */
  turbulenceDeviation: number;
  /** Gust magnitude V_gust. The wind peaks 0.74 V_gust above its mean, for the formula of v(t) weights it so. */
  gust: number;
}

/**
 * Size of the extreme operating gust (EOG) of IEC 61400-1, editions 3 and 4.
 * @throws RangeError when the edition lacks the category, class S lacks its own values, or the mean wind leaves no
 * room for a gust below the one-year extreme.
 */
export function operatingGustSize(gust: OperatingGust): GustSize {
  // V_e50 = 1.4 V_ref and V_e1 = 0.8 V_e50 at hub height
  const oneYearExtreme = 0.8 * 1.4 * extremeReferenceWindOf(gust);
  const turbulenceDeviation = normalDeviation(gust, gust.hubWind);
  const turbulenceScale = turbulenceScaleOf(gust.hubHeight);
  // V_gust = min(1.35 (V_e1 − V_hub), 3.3 σ₁ / (1 + 0.1 D/Λ₁))
  const size = Math.min(
    1.35 * (oneYearExtreme - gust.hubWind),
    (3.3 * turbulenceDeviation) / (1 + (0.1 * gust.rotorDiameter) / turbulenceScale),
  );
  if (!(size > 0)) {
    throw new RangeError(
      `the mean wind of an operating gust must lie below the one-year extreme of its class, ` +
        `${oneYearExtreme.toFixed(1)} m/s, but it is ${gust.hubWind} m/s`,
    );
  }
  return { turbulenceDeviation, gust: size };
}

/**
 * The extreme operating gust (EOG) of IEC 61400-1: a dip, a peak half-way, and a second dip in 10.5 s. Adds only what
 * differs from the mean wind, which is a part of its own.
 * @throws RangeError as `operatingGustSize`.
 */
export function operatingGust(gust: OperatingGust): WindField {
  const { start } = gust;
  const end = start + PERIOD;
  const size = operatingGustSize(gust).gust;
  const frequency = Math.PI / PERIOD;

  function speed(t: number): number {
    if (t <= start || t >= end) return 0;
    const phase = frequency * (t - start);
    // v(t) = V − 0.37 V_gust sin(3πt/T) (1 − cos(2πt/T))
    return -0.37 * size * Math.sin(3 * phase) * (1 - Math.cos(2 * phase));
  }

  const peak = start + PERIOD / 2;
  return uniformWind({ speed, jumps: [start, end], marks: gustMarks(start, peak, end, speed(peak)) });
}
