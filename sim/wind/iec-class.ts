/** The wind turbine classes of IEC 61400-1, editions 3 (2005) and 4 (2019), and what their conditions start from. */

export interface IecClass {
  edition: 3 | 4;
  windClass: 'I' | 'II' | 'III' | 'S';
  /** Turbulence category. A+ came with edition 4. */
  turbulence: 'A+' | 'A' | 'B' | 'C' | 'S';
  /** Whether the site sees tropical cyclones: edition 4 then gives every class the same extreme reference wind. */
  tropical?: boolean;
  /** Reference wind speed V_ref of class S, m/s. */
  referenceWind?: number;
  /** Reference turbulence intensity I_ref at 15 m/s of category S, as a fraction. */
  turbulenceIntensity?: number;
}

/** IEC 61400-1, table 1: V_ref, the ten-minute mean that comes once in 50 years, m/s. */
const REFERENCE_WIND = { I: 50, II: 42.5, III: 37.5 } as const;
/** Edition 4, table 1: V_ref,T, m/s; from memory. */
const TROPICAL_REFERENCE_WIND = 57;
const REFERENCE_INTENSITY = { 'A+': 0.18, A: 0.16, B: 0.14, C: 0.12 } as const;

/**
 * V_ref of the class, m/s. A tropical site does not change it: it only enters the extremes.
 * @throws RangeError when class S lacks its own
 */
export function referenceWindOf({ windClass, referenceWind }: IecClass): number {
  if (windClass !== 'S') return REFERENCE_WIND[windClass];
  if (referenceWind === undefined) throw new RangeError('wind class S needs its own reference wind speed');
  return referenceWind;
}

/**
 * The reference wind that the extreme wind speed model starts from, m/s: V_ref, or V_ref,T where cyclones come.
 * @throws RangeError as `referenceWindOf`, and when edition 3 is asked for cyclones
 */
export function extremeReferenceWindOf(iec: IecClass): number {
  if (!iec.tropical) return referenceWindOf(iec);
  if (iec.edition === 3) {
    throw new RangeError('the reference wind of tropical cyclones came with edition 4 of IEC 61400-1');
  }
  return iec.windClass === 'S' ? referenceWindOf(iec) : TROPICAL_REFERENCE_WIND;
}

/** Annual mean wind at the hub, V_ave = 0.2 V_ref, m/s. */
export function averageWindOf(iec: IecClass): number {
  return 0.2 * referenceWindOf(iec);
}

/**
 * I_ref, as a fraction.
 * @throws RangeError when the edition lacks the category, or category S lacks its own value
 */
export function referenceIntensityOf({ edition, turbulence, turbulenceIntensity }: IecClass): number {
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

/** Longitudinal turbulence scale parameter Λ₁ at hub height, m: 0.7 z up to 60 m, 42 m above. */
export function turbulenceScaleOf(hubHeight: number): number {
  return hubHeight <= 60 ? 0.7 * hubHeight : 42;
}

/**
 * Makes sure that a condition's mean wind is one that the class knows.
 * @throws RangeError when it is not above 0 and below the reference wind of the class
 */
export function requireMeanWind(iec: IecClass, hubWind: number): void {
  const highest = referenceWindOf(iec);
  if (hubWind > 0 && hubWind < highest) return;
  throw new RangeError(
    `a mean wind of ${hubWind} m/s lies outside wind class ${iec.windClass}, which reaches up to its reference wind, ` +
      `${highest} m/s`,
  );
}

/**
 * Standard deviation σ₁ of the normal turbulence model (NTM), m/s.
 * @throws RangeError as `referenceIntensityOf`
 */
export function normalDeviation(iec: IecClass, hubWind: number): number {
  // σ₁ = I_ref (0.75 V_hub + 5.6)
  return referenceIntensityOf(iec) * (0.75 * hubWind + 5.6);
}

/**
 * Standard deviation σ₁ of the extreme turbulence model (ETM), m/s.
 * @throws RangeError as `normalDeviation`
 */
export function extremeDeviation(iec: IecClass, hubWind: number): number {
  const c = 2;
  // σ₁ = c I_ref (0.072 (V_ave/c + 3)(V_hub/c − 4) + 10)
  return c * referenceIntensityOf(iec) * (0.072 * (averageWindOf(iec) / c + 3) * (hubWind / c - 4) + 10);
}
