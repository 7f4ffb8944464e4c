import { describe, expect, it } from 'vitest';
import { BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import type { CoefficientSurface } from '../../sim/aerodynamics/coefficient-surface.ts';
import { surfaceRotor } from '../../sim/aerodynamics/surface-rotor.ts';
import { emptyLoads, type RotorMotion, stillMotion } from '../../sim/rotor.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { STRAIGHT, WHOLE } from './blade-element-run.ts';

/** A wind that grows to the left and upwards, each at its own rate. */
function slanting(left: number, up: number): WindField {
  return {
    velocity(_t, y, z, out) {
      out[0] = 10 + left * y + up * z;
      out[1] = 0;
      out[2] = 0;
    },
    rotorMean: () => 10,
    breakpoints: () => [],
    marks: () => [],
  };
}

/** Wind at the tip of each blade, m/s: what it meets with nothing induced and nothing moving. */
function tipWinds(wind: WindField, motion: Partial<RotorMotion>): number[] {
  const rotor = new BladeElementRotor(STRAIGHT);
  const own = rotor.stateNames.length;
  const x = new Float64Array(own + 3);
  rotor.loads(
    0,
    wind,
    { ...stillMotion(), ...motion },
    x,
    0,
    [own, own + 1, own + 2],
    new Float64Array(own),
    emptyLoads(3),
  );
  const { sectionCount, normalSpeed } = rotor.flows;
  return [0, 1, 2].map((b) => normalSpeed[b * sectionCount + sectionCount - 1]);
}

describe('Each section meets the wind where it is', () => {
  const { sections } = new BladeElementRotor(STRAIGHT).blade;
  const tip = sections[sections.length - 1].radius;

  it('blade 1 up at azimuth 0, then to the right, down and to the left, looking downwind', () => {
    // (y, z) = (−r sin ψ, r cos ψ).
    for (const psi of [0, 0.7, Math.PI / 2, 2, Math.PI, 4.5]) {
      for (const [left, up] of [
        [0.03, 0],
        [0, 0.03],
        [0.02, 0.01],
      ]) {
        const winds = tipWinds(slanting(left, up), { azimuth: psi });
        winds.forEach((wind, b) => {
          const at = psi + (2 * Math.PI * b) / 3;
          expect(wind).toBeCloseTo(10 - left * tip * Math.sin(at) + up * tip * Math.cos(at), 9);
        });
      }
    }
  });

  it('less the tower top’s motion', () => {
    for (const wind of tipWinds(steadyWind({ speed: 10 }), { foreAft: 1.5 })) expect(wind).toBeCloseTo(8.5, 12);
  });

  it('and only what blows along its axis when the nacelle heads elsewhere', () => {
    for (const wind of tipWinds(steadyWind({ speed: 10 }), { heading: 0.3 })) {
      expect(wind).toBeCloseTo(10 * Math.cos(0.3), 12);
    }
  });
});

describe('The surface rotor', () => {
  const area = Math.PI * 65 ** 2;
  /** Thrust that grows with the square of the wind along the axis. */
  const surface = {
    torqueAndThrust(wind: number, _speed: number, _pitch: number, out: { torque: number; thrust: number }) {
      out.torque = 0;
      out.thrust = area * wind ** 2;
    },
  } as CoefficientSurface;
  const thrust = (wind: WindField, heading: number) => {
    const loads = emptyLoads(3);
    surfaceRotor(surface).loads(0, wind, { ...stillMotion(), heading }, [0, 0, 0], 0, [0, 1, 2], [], loads);
    return loads.thrust / area;
  };

  it('feels what blows along the axis of the nacelle, wherever wind and nacelle head', () => {
    const wind = steadyWind({ speed: 10 });
    expect(thrust(wind, 0)).toBeCloseTo(100, 9);
    expect(thrust(wind, 0.3)).toBeCloseTo((10 * Math.cos(0.3)) ** 2, 9);
    const turned: WindField = { ...wind, direction: () => 0.3, rotorMean: () => 10 * Math.cos(0.3) };
    expect(thrust(turned, 0)).toBeCloseTo((10 * Math.cos(0.3)) ** 2, 9);
    expect(thrust(turned, 0.3)).toBeCloseTo(100, 9);
    expect(thrust(turned, -0.2)).toBeCloseTo((10 * Math.cos(0.5)) ** 2, 9);
  });
});

it('A rotor answers each question as if it were the first', () => {
  const asked = new BladeElementRotor(WHOLE);
  const own = asked.stateNames.length;
  const pitchAt = [own, own + 1, own + 2];
  const start = {
    t: 1,
    wind: slanting(0.01, 0.02),
    motion: { ...stillMotion(), speed: 1.2 },
    x: new Float64Array(own + 3),
  };
  start.x.set(asked.settledStates(10, 1.2, 0.05));
  start.x.fill(0.05, own);
  const withState = (at: number) => start.x.map((value, i) => (i === at ? value + 0.1 : value));
  const questions = [
    start,
    { ...start, wind: slanting(0.02, 0.02) },
    ...(['azimuth', 'speed', 'foreAft', 'sideSide', 'heading'] as const).map((name) => ({
      ...start,
      motion: { ...start.motion, [name]: 0.7 },
    })),
    { ...start, x: withState(own + 1) },
    { ...start, x: withState(own - 1) },
    { ...start, x: withState(70) },
  ];
  const answer = (rotor: BladeElementRotor, { t, wind, motion, x }: typeof start) => {
    const loads = emptyLoads(3);
    const dx = new Float64Array(own);
    rotor.loads(t, wind, motion, x, 0, pitchAt, dx, loads);
    rotor.follow({ foreAft: 0.3, sideSide: 0.2, speed: 0.1 }, motion, x, 0, dx, loads);
    return { loads, dx };
  };
  const first = answer(new BladeElementRotor(WHOLE), start);
  for (const question of questions) {
    answer(asked, start);
    const once = answer(asked, question);
    expect(answer(asked, question)).toEqual(once);
    expect(once).toEqual(answer(new BladeElementRotor(WHOLE), question));
    if (question !== start) expect(once).not.toEqual(first);
  }
});
