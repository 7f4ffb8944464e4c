import { describe, expect, it } from 'vitest';
import {
  BLADE_ELEMENT_DEFAULTS,
  type BladeElementOptions,
  BladeElementRotor,
} from '../../sim/aerodynamics/blade-element-rotor.ts';
import { gaussian } from '../../sim/noise.ts';
import { emptyLoads, stillMotion } from '../../sim/rotor.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { WHOLE } from './blade-element-run.ts';
import { driveAlone } from './rotor-alone.ts';

const DEGREE = Math.PI / 180;
const KINDS: Partial<BladeElementOptions>[] = [
  {},
  { wake: 'equilibrium' },
  { sectionLift: 'lagging' },
  { wake: 'equilibrium', sectionLift: 'lagging' },
];

/** A wind of any direction at the hub that changes over the rotor. */
function anyWind(u: number, v: number, w: number, shear: number): WindField {
  return {
    velocity(_t, y, z, out) {
      out[0] = u * (1 + (shear * z) / 65);
      out[1] = v + 0.01 * y;
      out[2] = w;
    },
    rotorMean: () => u,
    breakpoints: () => [],
    marks: () => [],
  };
}

describe.each(KINDS)('A rotor with options %o', (options) => {
  const rotor = new BladeElementRotor(WHOLE, { ...BLADE_ELEMENT_DEFAULTS, sections: 10, ...options });
  const own = rotor.stateNames.length;
  const pitchAt = [own, own + 1, own + 2];

  function lookAt(x: Float64Array, wind: WindField, speed: number, foreAft = 0) {
    const loads = emptyLoads(3);
    const dx = new Float64Array(own + 3);
    const motion = { ...stillMotion(), azimuth: 1, speed, foreAft };
    rotor.loads(0, wind, motion, x, 0, pitchAt, dx, loads);
    rotor.follow({ foreAft: 0.1, sideSide: 0.1, speed: 0.1 }, motion, x, 0, dx, loads);
    const { flapMoment, edgeMoment, ...single } = loads;
    return [...Object.values(single), ...flapMoment, ...edgeMoment, ...dx];
  }

  it('gives finite loads and rates in every corner: calm, storm, reverse flow, standstill, backwards, 90 degrees', () => {
    const corners: string[] = [];
    for (const u of [-25, -3, 0, 1e-9, 0.5, 3, 12, 60]) {
      for (const v of [0, -15]) {
        for (const speed of [-1.5, -0.01, 0, 1e-12, 0.01, 0.3, 1.26, 3]) {
          for (const degrees of [-10, 0, 15, 45, 88, 90, 95]) {
            for (const induced of [0, -10, 10]) {
              const x = new Float64Array(own + 3).fill(induced, 0, own).fill(degrees * DEGREE, own);
              const bad = lookAt(x, anyWind(u, v, 0.5, 0.2), speed).filter((value) => !Number.isFinite(value));
              if (bad.length > 0) corners.push(`${u} ${v} ${speed} ${degrees} ${induced}`);
            }
          }
        }
      }
    }
    expect(corners).toEqual([]);
  });

  it('changes its loads little where wind, speed, pitch and state change little', () => {
    for (let trial = 0; trial < 400; trial++) {
      const draw = (k: number) => gaussian(7, trial * 10 + k);
      const u = 20 * draw(0);
      const v = 5 * draw(1);
      const speed = draw(2);
      const degrees = 40 + 40 * draw(3);
      const at = (away: number) => {
        const x = new Float64Array(own + 3).fill(2 * draw(4) + away, 0, own).fill((degrees + away) * DEGREE, own);
        return lookAt(x, anyWind(u + away, v, 1, 0.1), speed + 0.1 * away);
      };
      const [here, near] = [at(0), at(1e-7)];
      // Rates of states are of the size of one, loads of that of the rotor's weight.
      const scale = (i: number) => (i < here.length - own - 3 ? 1e4 : 1);
      const jumps = here.filter((value, i) => Math.abs(near[i] - value) > 1e-3 * (scale(i) + Math.abs(value)));
      expect({ trial, jumps }).toEqual({ trial, jumps: [] });
    }
  });
});

describe('A rotor in time', () => {
  const rotor = new BladeElementRotor(WHOLE, { ...BLADE_ELEMENT_DEFAULTS, sections: 10 });

  it.each([
    ['stalls over its whole span', 25, 0.6, 0],
    ['brakes itself in a vortex ring at high thrust', 4, 2.2, -2],
    ['meets the wind from behind', -12, 1.2, 0],
    ['creeps backwards', 10, -0.02, 80],
    ['stands in 60 m/s at 90 degrees', 60, 0, 90],
    ['turns in still air', 0, 1.2, 5],
    ['stands in still air', 0, 0, 0],
  ])('comes to a bounded motion when it %s', (_, wind, speed, degrees) => {
    let largest = 0;
    const { loads, states } = driveAlone(rotor, {
      wind: steadyWind({ speed: wind }),
      speed,
      pitch: () => degrees * DEGREE,
      duration: 120,
      step: 0.02,
      watch: (_t, { thrust, torque }) => {
        largest = Math.max(largest, Math.abs(thrust), Math.abs(torque) / WHOLE.rotor.radius);
      },
    });
    expect(states.every(Number.isFinite)).toBe(true);
    expect(Number.isFinite(loads.thrust + loads.torque)).toBe(true);
    // Twice the push of the fastest air on the disc that solid blades would be; let go, blades flap at some metres a second.
    const fastest = Math.hypot(wind, speed * WHOLE.rotor.radius) + 3;
    expect(largest).toBeLessThanOrEqual(2 * 0.5 * WHOLE.airDensity * Math.PI * WHOLE.rotor.radius ** 2 * fastest ** 2);
    expect(Math.max(...states.map(Math.abs))).toBeLessThan(2 * fastest + 60);
  });
});
