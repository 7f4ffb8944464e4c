/** How loop gain is lowered as the blades turn and the rotor answers more strongly. Angles in rad. */
export type GainScheduleSettings =
  | { kind: 'constant' }
  /** 1/(1 + θ/θ_k): the gain is halved at θ_k (Jonkman et al., NREL/TP-500-38060, 2009). */
  | { kind: 'reciprocal'; halvingPitch: number }
  /** 1/(1 + θ/θ₁ + θ²/θ₂²), the quadratic form (after Hansen et al., Risø-R-1500, 2005). */
  | { kind: 'quadratic'; linearPitch: number; quadraticPitch: number }
  /** Linear between points, held beyond the ends. */
  | { kind: 'table'; pitch: readonly number[]; factor: readonly number[] };

/** Returns the factor on the gains at a pitch angle (rad). */
export function gainSchedule(settings: GainScheduleSettings): (pitch: number) => number {
  switch (settings.kind) {
    case 'constant':
      return () => 1;
    case 'reciprocal': {
      const { halvingPitch } = settings;
      return (pitch) => 1 / (1 + Math.max(pitch, 0) / halvingPitch);
    }
    case 'quadratic': {
      const { linearPitch, quadraticPitch } = settings;
      return (pitch) => {
        const angle = Math.max(pitch, 0);
        return 1 / (1 + angle / linearPitch + (angle / quadraticPitch) ** 2);
      };
    }
    case 'table':
      return tableFactor(settings.pitch, settings.factor);
  }
}

function tableFactor(pitch: readonly number[], factor: readonly number[]): (pitch: number) => number {
  const last = pitch.length - 1;
  return (angle) => {
    if (angle <= pitch[0]) return factor[0];
    if (angle >= pitch[last]) return factor[last];
    let i = 1;
    while (pitch[i] < angle) i++;
    return factor[i - 1] + ((factor[i] - factor[i - 1]) * (angle - pitch[i - 1])) / (pitch[i] - pitch[i - 1]);
  };
}
