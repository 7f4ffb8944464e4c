import { extremeReferenceWindOf, type IecClass } from './iec-class.ts';

/** Once in so many years. */
export type ReturnPeriod = 1 | 50;

/** Exponent of the power law over height in extreme wind, IEC 61400-1. */
export const EXTREME_EXPONENT = 0.11;

/**
 * Hub wind of the steady extreme wind speed model (EWM), a three-second mean, m/s.
 * @throws RangeError as `extremeReferenceWindOf`
 */
export function steadyExtremeWind(iec: IecClass, years: ReturnPeriod): number {
  // V_e50 = 1.4 V_ref (z/z_hub)^0.11, V_e1 = 0.8 V_e50
  return 1.4 * turbulentExtremeWind(iec, years);
}

/**
 * Hub wind of the turbulent extreme wind speed model (EWM), a ten-minute mean, m/s.
 * @throws RangeError as `extremeReferenceWindOf`
 */
export function turbulentExtremeWind(iec: IecClass, years: ReturnPeriod): number {
  // V_50 = V_ref (z/z_hub)^0.11, V_1 = 0.8 V_50
  return (years === 50 ? 1 : 0.8) * extremeReferenceWindOf(iec);
}

/** Standard deviation σ₁ of the turbulent extreme wind speed model, m/s. */
export function extremeWindDeviation(hubWind: number): number {
  // σ₁ = 0.11 V_hub
  return 0.11 * hubWind;
}
