/** Gains of the rated-region speed loop in closed form, and the schedule that goes with them. */

export interface SpeedLoop {
  /** Inertia of rotor and generator on the low-speed shaft, kg m². */
  inertia: number;
  /** Rated rotor speed, rad/s. */
  rotorSpeed: number;
  gearRatio: number;
  /** Slope of aerodynamic power with pitch at zero pitch, W/rad: negative. */
  powerPerPitch: number;
}

export interface Gains {
  /** Pitch per generator speed error, s. */
  proportional: number;
  /** Pitch per generator speed error and second. */
  integral: number;
}

/**
 * The gains that give the speed error the dynamics of s² + 2ζω s + ω², aerodynamic damping and the generator's
 * constant power left out: K_P = 2IΩζω/(N(−∂P/∂θ)), K_I = IΩω²/(N(−∂P/∂θ)) (Hansen et al., Risø-R-1500, 2005;
 * Jonkman et al., NREL/TP-500-38060, 2009).
 * @param frequency ω, rad/s
 * @param damping ζ
 * @throws RangeError where power does not fall with pitch
 */
export function gainsByFormula(loop: SpeedLoop, frequency: number, damping: number): Gains {
  if (!(loop.powerPerPitch < 0)) throw new RangeError('power must fall as the blades turn towards feather');
  const scale = (loop.inertia * loop.rotorSpeed) / (loop.gearRatio * -loop.powerPerPitch);
  return { proportional: 2 * damping * frequency * scale, integral: frequency * frequency * scale };
}

/** Slope of aerodynamic power with pitch at trim points above rated. */
export interface PitchSensitivity {
  /** rad */
  pitch: number;
  /** W/rad */
  powerPerPitch: number;
}

export interface ScheduleFit {
  /** W/rad at zero pitch. */
  powerPerPitch: number;
  /** Pitch at which the slope has doubled, and the gain is halved, rad. */
  halvingPitch: number;
}

/** Least squares of ∂P/∂θ = ∂P/∂θ(0)·(1 + θ/θ_k) through the trim points (the same report's schedule). */
export function fitSchedule(points: readonly PitchSensitivity[]): ScheduleFit {
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const meanPitch = mean(points.map((p) => p.pitch));
  const meanSlope = mean(points.map((p) => p.powerPerPitch));
  const spread = mean(points.map((p) => (p.pitch - meanPitch) ** 2));
  const joint = mean(points.map((p) => (p.pitch - meanPitch) * (p.powerPerPitch - meanSlope)));
  const rise = joint / spread;
  const atZero = meanSlope - rise * meanPitch;
  return { powerPerPitch: atZero, halvingPitch: atZero / rise };
}

/**
 * The schedule as a table: the factor that keeps the loop's gain at `reference` the same at every `pitch`, by the
 * slopes at the trim points, linear between them and held beyond their ends.
 * @param reference pitch at which the factor is one, rad
 * @param pitch rad, rising
 */
export function scheduleTable(
  points: readonly PitchSensitivity[],
  reference: number,
  pitch: readonly number[],
): { pitch: number[]; factor: number[] } {
  const rising = points.toSorted((a, b) => a.pitch - b.pitch);
  const slopeAt = (angle: number): number => {
    const next = rising.findIndex((point) => point.pitch >= angle);
    if (next === 0) return rising[0].powerPerPitch;
    if (next < 0) return rising[rising.length - 1].powerPerPitch;
    const [from, to] = [rising[next - 1], rising[next]];
    const share = (angle - from.pitch) / (to.pitch - from.pitch);
    return from.powerPerPitch + share * (to.powerPerPitch - from.powerPerPitch);
  };
  const atReference = slopeAt(reference);
  return { pitch: [...pitch], factor: pitch.map((angle) => atReference / slopeAt(angle)) };
}
