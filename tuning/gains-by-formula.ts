/** Gains of the rated-region speed loop in closed form, and the schedule that goes with them. */

export interface SpeedLoop {
  /** Inertia of rotor and generator on the low-speed shaft, kg m². */
  inertia: number;
  /** Rated rotor speed, rad/s. */
  rotorSpeed: number;
  gearRatio: number;
  /** Slope of aerodynamic power with pitch, W/rad: negative. */
  powerPerPitch: number;
  /** Slope of aerodynamic torque with rotor speed, N m s/rad; left out: no aerodynamic damping. */
  torquePerRotorSpeed?: number;
  /** Slope with rotor speed of generator torque and losses on the low-speed shaft, N m s/rad; left out: they stand still. */
  loadPerRotorSpeed?: number;
  /** Lags of drive, filters, sensors and sampling added up, s; left out: none. */
  lag?: number;
}

export interface Gains {
  /** Pitch per generator speed error, s. */
  proportional: number;
  /** Pitch per generator speed error and second. */
  integral: number;
}

/**
 * The gains that give the speed error the dynamics of s² + 2ζω s + ω². With nothing else given:
 * K_P = 2IΩζω/(N(−∂P/∂θ)), K_I = IΩω²/(N(−∂P/∂θ)) (Hansen et al., Risø-R-1500, 2005; Jonkman et al.,
 * NREL/TP-500-38060, 2009). With slopes D = ∂Q/∂ω − ∂Q_load/∂ω and a lag T taken as 1 − Ts, the characteristic equation
 * I s² − D s + c(K_P s + K_I)(1 − Ts) = 0 with c = N(−∂P/∂θ)/Ω gives, by its coefficients,
 * c K_I = M ω², c K_P = M(2ζω + Tω²) + D, M = (I − TD)/(1 + 2ζωT + ω²T²).
 * @param frequency ω, rad/s
 * @param damping ζ
 * @throws RangeError where power does not fall with pitch, or the lag leaves no positive gains
 */
export function gainsByFormula(loop: SpeedLoop, frequency: number, damping: number): Gains {
  const { inertia, rotorSpeed, gearRatio, powerPerPitch, torquePerRotorSpeed = 0, loadPerRotorSpeed = 0 } = loop;
  const { lag = 0 } = loop;
  if (!(powerPerPitch < 0)) throw new RangeError('power must fall as the blades turn towards feather');
  const scale = rotorSpeed / (gearRatio * -powerPerPitch);
  const slope = torquePerRotorSpeed - loadPerRotorSpeed;
  const mass = (inertia - lag * slope) / (1 + 2 * damping * frequency * lag + frequency ** 2 * lag ** 2);
  const proportional = scale * (mass * (2 * damping * frequency + lag * frequency ** 2) + slope);
  if (!(mass > 0 && proportional > 0)) {
    throw new RangeError(
      `a loop of ${frequency} rad/s and damping ${damping} needs no positive gain: the rotor is faster or better damped by itself`,
    );
  }
  return { proportional, integral: scale * mass * frequency ** 2 };
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
