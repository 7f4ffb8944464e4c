import type { Guard } from './guard.ts';

/** Largest distance of any blade from where it was sent. @param above rad */
export function pitchDeviation(above: number): Guard {
  return {
    speaks(signals) {
      for (let b = 0; b < signals.pitch.length; b++) {
        if (Math.abs(signals.pitchDemand[b] - signals.pitch[b]) > above) return true;
      }
      return false;
    },
    reading(signals) {
      let largest = 0;
      for (let b = 0; b < signals.pitch.length; b++) {
        largest = Math.max(largest, Math.abs(signals.pitchDemand[b] - signals.pitch[b]));
      }
      return largest;
    },
    describe: (reading) => `a blade is ${degrees(reading)} from its demand, more than ${degrees(above)}`,
  };
}

function degrees(angle: number): string {
  return `${((angle * 180) / Math.PI).toFixed(1)} deg`;
}
