import type { GainScheduleSettings } from './gain-schedule.ts';

export interface PitchLawSettings {
  /** Pitch per generator speed error, rad/(rad/s) = s, at zero pitch. */
  proportional: number;
  /** Pitch per generator speed error and second, rad/rad, at zero pitch. */
  integral: number;
  schedule: GainScheduleSettings;
  /** Whether the schedule multiplies the error that is integrated, or the integral. */
  scheduled: 'before integral' | 'after integral';
  antiWindup: { kind: 'clamping' } | { kind: 'back-calculation'; trackingTime: number };
  /** Corner frequency of the low-pass on measured speed, Hz; absent for none. */
  speedFilter?: { frequency: number };
  /** Pitch limits, rad, and rate limit of the demand, rad/s. */
  minimum: number;
  maximum: number;
  rateLimit: number;
}
