import type { GainScheduleSettings } from '../controllers/gain-schedule.ts';

const DEGREE = Math.PI / 180;

function degrees(angle: number): string {
  return `${(angle / DEGREE).toFixed(2)} deg`;
}

/** A schedule in words, e.g. "1/(1 + pitch/6.30 deg)". */
export function scheduleText(schedule: GainScheduleSettings): string {
  switch (schedule.kind) {
    case 'constant':
      return 'the same gain at every pitch';
    case 'reciprocal':
      return `1/(1 + pitch/${degrees(schedule.halvingPitch)})`;
    case 'quadratic':
      return `1/(1 + pitch/${degrees(schedule.linearPitch)} + (pitch/${degrees(schedule.quadraticPitch)})^2)`;
    case 'table':
      return `a table of ${schedule.pitch.length} points`;
  }
}
