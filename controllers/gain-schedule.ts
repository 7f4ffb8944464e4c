/** How loop gain is lowered as the blades turn and the rotor answers more strongly. Angles in rad. */
export type GainScheduleSettings =
  | { kind: 'constant' }
  /** 1/(1 + θ/θ_k): the gain is halved at θ_k (Jonkman et al., NREL/TP-500-38060, 2009). */
  | { kind: 'reciprocal'; halvingPitch: number }
  /** 1/(1 + θ/θ₁ + θ²/θ₂²), the quadratic form (after Hansen et al., Risø-R-1500, 2005). */
  | { kind: 'quadratic'; linearPitch: number; quadraticPitch: number }
  /** Linear between points, held beyond the ends. */
  | { kind: 'table'; pitch: readonly number[]; factor: readonly number[] };
