export interface TorqueLawSettings {
  /** k of Q = k ω² on the high-speed shaft, N m s²/rad². */
  optimalGain: number;
  aboveRated: 'constant power' | 'constant torque';
  /** Generator speed below which the torque is zero, and where kω² is reached, rad/s: a straight line between. */
  cutInSpeed: number;
  optimalFrom: number;
  /** Generator speed at which kω² is left for the straight line to rated torque at rated speed, rad/s. */
  optimalTo: number;
  /** Pitch above fine pitch at which the law keeps to rated torque or power whatever the speed, rad. */
  handoverPitch: number;
  /** N m and N m/s. */
  maximumTorque: number;
  rateLimit: number;
}
