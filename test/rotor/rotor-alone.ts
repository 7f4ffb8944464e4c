/** A blade-element rotor on a rigid tower, driven at a given speed and pitch. */
import type { BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { rungeKutta } from '../../sim/integrators/runge-kutta.ts';
import { emptyLoads, type RotorLoads, type RotorMotion, stillMotion } from '../../sim/rotor.ts';
import type { WindField } from '../../sim/wind/wind.ts';

export interface Drive {
  wind: WindField;
  /** rad/s and rad of each blade, as functions of time, s */
  speed: number;
  pitch: (t: number, blade: number) => number;
  duration: number;
  step: number;
  /** The rotor's own states at the start; all zero when absent. */
  states?: ArrayLike<number>;
  motion?: Partial<RotorMotion>;
  /** Told the loads at each step. */
  watch?: (t: number, loads: Readonly<RotorLoads>, states: Float64Array) => void;
}

/** Drives `rotor` and returns its loads and states at the end. */
export function driveAlone(rotor: BladeElementRotor, drive: Drive): { loads: RotorLoads; states: Float64Array } {
  const { wind, speed, pitch, duration, step, watch } = drive;
  const own = rotor.stateNames.length;
  const { bladeCount } = rotor.blade;
  const motion = { ...stillMotion(), ...drive.motion, speed };
  const start = motion.azimuth;
  const loads = emptyLoads(bladeCount);
  const x = new Float64Array(own + bladeCount);
  const pitchAt = Int32Array.from({ length: bladeCount }, (_, b) => own + b);
  x.set(Array.from(drive.states ?? []));
  const still = { foreAft: 0, sideSide: 0, speed: 0 };
  const pitched = new Float64Array(own + bladeCount);
  const derivative = (t: number, at: ArrayLike<number>, dx: { [i: number]: number }) => {
    pitched.set(at as Float64Array);
    for (let b = 0; b < bladeCount; b++) pitched[own + b] = pitch(t, b);
    motion.azimuth = start + speed * t;
    rotor.loads(t, wind, motion, pitched, 0, pitchAt, dx, loads);
    rotor.follow(still, motion, pitched, 0, dx, loads);
  };
  const integrator = rungeKutta(derivative, own + bladeCount, step);
  const slope = new Float64Array(own + bladeCount);
  const steps = Math.round(duration / step);
  for (let k = 0; k < steps; k++) {
    derivative(k * step, x, slope);
    watch?.(k * step, loads, x);
    integrator.advance(k * step, (k + 1) * step, x);
  }
  derivative(duration, x, slope);
  return { loads, states: x.slice(0, own) };
}
