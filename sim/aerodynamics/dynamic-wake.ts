/**
 * Øye's two-stage filter of the induced velocity, as in Hansen, *Aerodynamics of Wind Turbines*:
 *
 *     W_i + τ₁ Ẇ_i = W_qs + k τ₁ Ẇ_qs,   W + τ₂ Ẇ = W_i,   k = 0.6,
 *     τ₁ = 1.1/(1 − 1.3 a) · R/U with a ≤ 0.5,   τ₂ = (0.39 − 0.26 (r/R)²) τ₁
 *
 * The derivative on the right goes away with W_i = Y + k W_qs: τ₁ Ẏ = (1 − k) W_qs − Y.
 */
export const WAKE_SHARE = 0.6;
const LARGEST_INDUCTION = 0.5;
/** Below this wind the filter gets no slower: R/U would grow without bound in still air, m/s. */
const SLOWEST_WIND = 1;

/**
 * 1/τ₁, 1/s.
 * @param radius R, m; `wind` free stream U through the rotor, `induced` axial induced velocity, m/s
 */
export function wakeRate(radius: number, wind: number, induced: number): number {
  const speed = Math.max(Math.abs(wind), SLOWEST_WIND);
  const slowed = Math.min(Math.max(induced, 0), LARGEST_INDUCTION * speed);
  return (speed - 1.3 * slowed) / (1.1 * radius);
}

/** τ₁/τ₂ at a relative radius r/R. */
export function lateRateRatio(relativeRadius: number): number {
  return 1 / (0.39 - 0.26 * relativeRadius * relativeRadius);
}
