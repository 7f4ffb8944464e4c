import { gustMarks } from './mark.ts';
import { uniformWind } from './uniform.ts';
import type { WindField } from './wind.ts';

export interface OperatingGust {
  /** Edition of IEC 61400-1. The gust's formulas are alike in both; turbulence category A+ came with edition 4. */
  edition: 3 | 4;
  windClass: 'I' | 'II' | 'III' | 'S';
  turbulence: 'A+' | 'A' | 'B' | 'C' | 'S';
  /** Mean wind at hub height, m/s. */
  hubWind: number;
  /** m */
  rotorDiameter: number;
  hubHeight: number;
  /** s */
  start: number;
  /** Reference wind speed V_ref of class S, m/s. */
  referenceWind?: number;
  /** Reference turbulence intensity I_ref at 15 m/s of category S, as a fraction. */
  turbulenceIntensity?: number;
}

/** IEC 61400-1, table 1. */
const REFERENCE_WIND = { I: 50, II: 42.5, III: 37.5 } as const;
const REFERENCE_INTENSITY = { 'A+': 0.18, A: 0.16, B: 0.14, C: 0.12 } as const;

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
  const referenceWind = referenceWindOf(gust);
  const intensity = intensityOf(gust);
  // σ₁ = I_ref (0.75 V_hub + 5.6)
  const turbulenceDeviation = intensity * (0.75 * gust.hubWind + 5.6);
  // V_e50 = 1.4 V_ref and V_e1 = 0.8 V_e50 at hub height
  const oneYearExtreme = 0.8 * 1.4 * referenceWind;
  // Λ₁ = 0.7 z up to 60 m, 42 m above
  const turbulenceScale = gust.hubHeight <= 60 ? 0.7 * gust.hubHeight : 42;
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

function referenceWindOf({ windClass, referenceWind }: OperatingGust): number {
  if (windClass !== 'S') return REFERENCE_WIND[windClass];
  if (referenceWind === undefined) throw new RangeError('wind class S needs its own reference wind speed');
  return referenceWind;
}

function intensityOf({ edition, turbulence, turbulenceIntensity }: OperatingGust): number {
  if (turbulence === 'S') {
    if (turbulenceIntensity === undefined) {
      throw new RangeError('turbulence category S needs its own turbulence intensity');
    }
    return turbulenceIntensity;
  }
  if (turbulence === 'A+' && edition === 3) {
    throw new RangeError('turbulence category A+ came with edition 4 of IEC 61400-1; edition 3 knows A, B, C and S');
  }
  return REFERENCE_INTENSITY[turbulence];
}
