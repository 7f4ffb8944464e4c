import { type Guard, speedReading } from './guard.ts';

/** @param above generator speed, rad/s */
export function generatorOverspeed(above: number): Guard {
  return {
    speaks: (signals) => signals.generatorSpeed > above,
    reading: (signals) => signals.generatorSpeed,
    describe: (reading) => speedReading(reading, above),
  };
}
