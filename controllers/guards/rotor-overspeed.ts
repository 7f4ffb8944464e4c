import { type Guard, speedReading } from './guard.ts';

/** @param above rotor speed, rad/s */
export function rotorOverspeed(above: number): Guard {
  return {
    speaks: (signals) => signals.rotorSpeed > above,
    reading: (signals) => signals.rotorSpeed,
    describe: (reading) => speedReading(reading, above),
  };
}
