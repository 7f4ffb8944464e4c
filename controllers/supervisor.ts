import type { StopSequence } from './stop-sequence.ts';

export interface SupervisorSettings {
  /** s */
  sampleTime: number;
  startUp: {
    /** Pitch at which the rotor is run up, rad, the rate to it, rad/s, and the rotor speed at which the generator takes over, rad/s. */
    pitch: number;
    pitchRate: number;
    connectSpeed: number;
  };
  /** Normal stop when the averaged nacelle wind passes `above` (m/s); averaging time in s. */
  highWind: { above: number; averaging: number };
  normalStop: StopSequence;
}
