import { clamp } from './contract.ts';
import { lowPass } from './filters/low-pass.ts';
import { type GainScheduleSettings, gainSchedule } from './gain-schedule.ts';
import type { Law } from './law.ts';

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

const FILTER = 0;
const INTEGRAL = 2;
const LAST = 3;

/**
 * PI on generator speed error, its gains scheduled on the last pitch demand, one demand for all blades.
 *
 * Scheduled after the integral, θ = s(θ)·(K_P e + K_I ∫e dt); before it, θ = s(θ) K_P e + ∫ s(θ) K_I e dt. The two
 * agree for a constant schedule only.
 * @param sampleTime s
 */
export function scheduledPiPitch(settings: PitchLawSettings, sampleTime: number): Law {
  const { proportional, integral, scheduled, antiWindup, minimum, maximum } = settings;
  const factorAt = gainSchedule(settings.schedule);
  const filter = settings.speedFilter && lowPass(settings.speedFilter.frequency, sampleTime);
  const scheduledAfter = scheduled === 'after integral';
  const largestStep = settings.rateLimit * sampleTime;

  return {
    name: 'scheduled PI pitch',
    memory: ['filter input', 'filtered speed', 'integral', 'last demand'],
    needs: ['generatorSpeed'],
    start(point, memory, at) {
      filter?.start(point.generatorSpeed, memory, at + FILTER);
      const pitch = clamp(point.pitch, minimum, maximum);
      memory[at + INTEGRAL] = scheduledAfter ? pitch / factorAt(pitch) : pitch;
      memory[at + LAST] = pitch;
    },
    step(measured, memory, at, demands) {
      const speed = filter ? filter.step(measured.generatorSpeed, memory, at + FILTER) : measured.generatorSpeed;
      const error = speed - measured.speedSetpoint;
      const last = memory[at + LAST];
      const factor = factorAt(last);
      // The factor that turns the integral into pitch, and the one that its input has had already.
      const outer = scheduledAfter ? factor : 1;
      const inner = scheduledAfter ? 1 : factor;

      let sum = memory[at + INTEGRAL] + inner * integral * error * sampleTime;
      if (antiWindup.kind === 'clamping') sum = clamp(sum, minimum / outer, maximum / outer);
      const wanted = factor * proportional * error + outer * sum;
      const limited = clamp(clamp(wanted, minimum, maximum), last - largestStep, last + largestStep);
      if (antiWindup.kind === 'back-calculation') {
        sum += (((limited - wanted) / outer) * sampleTime) / antiWindup.trackingTime;
      }
      memory[at + INTEGRAL] = sum;
      memory[at + LAST] = limited;
      for (let b = 0; b < demands.pitch.length; b++) demands.pitch[b] = limited;
      demands.pitchAs = 'angle';
    },
  };
}
