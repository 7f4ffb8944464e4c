/** The Kaimal spectrum and the exponential coherence model of IEC 61400-1, annex B (edition 3) or C (edition 4). */

/** Longitudinal (u), lateral (v) and upward (w). */
export type Component = 0 | 1 | 2;

/** Turbulence of one mean wind, m/s and m. */
export interface KaimalTurbulence {
  /** Mean wind at the hub, which carries the turbulence past the rotor (Taylor 1938), m/s. */
  meanWind: number;
  /** Standard deviation of each component, m/s. */
  deviation: readonly [number, number, number];
  /** Integral scale of each component, m. */
  lengthScale: readonly [number, number, number];
  /** Coherence scale L_c, m. */
  coherenceScale: number;
}

/**
 * The turbulence that the standard's annex gives for a longitudinal deviation σ₁ and a scale Λ₁, m/s and m.
 * The factors are written down from memory of the annex.
 */
export function standardTurbulence(meanWind: number, deviation: number, scale: number): KaimalTurbulence {
  return {
    meanWind,
    // σ₂ = 0.8 σ₁, σ₃ = 0.5 σ₁
    deviation: [deviation, 0.8 * deviation, 0.5 * deviation],
    // L₁ = 8.1 Λ₁, L₂ = 2.7 Λ₁, L₃ = 0.66 Λ₁
    lengthScale: [8.1 * scale, 2.7 * scale, 0.66 * scale],
    // L_c = L₁
    coherenceScale: 8.1 * scale,
  };
}

/** One-sided power spectral density of a component at `frequency` (Hz), m²/s² per Hz. */
export function kaimalSpectrum(turbulence: KaimalTurbulence, component: Component, frequency: number): number {
  const passage = turbulence.lengthScale[component] / turbulence.meanWind;
  // S = 4 σ² (L/V) / (1 + 6 f L/V)^(5/3)
  return (4 * turbulence.deviation[component] ** 2 * passage) / (1 + 6 * frequency * passage) ** (5 / 3);
}

/**
 * How fast coherence dies with distance at `frequency` (Hz), 1/m: `Coh(r) = exp(−decay · r)`, the magnitude of the cross
 * spectrum of two points a distance `r` apart over their spectrum. The standard gives it for the longitudinal component;
 * here all three take it.
 */
export function coherenceDecay({ meanWind, coherenceScale }: KaimalTurbulence, frequency: number): number {
  // Coh = exp(−12 √((f r/V)² + (0.12 r/L_c)²))
  return 12 * Math.hypot(frequency / meanWind, 0.12 / coherenceScale);
}
