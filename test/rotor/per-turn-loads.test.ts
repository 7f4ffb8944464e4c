import { describe, expect, it } from 'vitest';
import { BLADE_ELEMENT_DEFAULTS, BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { profileWind } from '../../sim/wind/profile.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { STRAIGHT, WHOLE } from './blade-element-run.ts';
import { driveAlone } from './rotor-alone.ts';
import { amplitudeAt } from './spectrum.ts';

const SPEED = 1.2;
const PITCH = 0.15;
const TURN = (2 * Math.PI) / SPEED;
const STEPS = 144;
const TURNS = 8;
const shear = profileWind({
  speed: 14,
  profile: { kind: 'power law', exponent: 0.2 },
  hubHeight: STRAIGHT.rotor.hubHeight,
  rotorRadius: STRAIGHT.rotor.radius,
});

/** Amplitudes per turn (0 the mean doubled) of loads over the last turns, once the first have settled. */
function harmonics(turbine: Turbine, wind = shear, motion = {}) {
  const rotor = new BladeElementRotor(turbine, BLADE_ELEMENT_DEFAULTS);
  const flap: number[] = [];
  const edge: number[] = [];
  const thrust: number[] = [];
  const side: number[] = [];
  const settling = 20 * TURN;
  driveAlone(rotor, {
    wind,
    speed: SPEED,
    pitch: () => PITCH,
    duration: settling + TURNS * TURN,
    step: TURN / STEPS,
    states: rotor.settledStates(14, SPEED, PITCH),
    motion,
    watch: (t, loads) => {
      if (t < settling - 1e-6) return;
      flap.push(loads.flapMoment[0]);
      edge.push(loads.edgeMoment[0]);
      thrust.push(loads.thrust);
      side.push(loads.sideForce);
    },
  });
  const perTurn = (values: number[]) => Array.from({ length: 10 }, (_, k) => amplitudeAt(values, k * TURNS));
  return { flap: perTurn(flap), edge: perTurn(edge), thrust: perTurn(thrust), side: perTurn(side) };
}

describe('In sheared wind', () => {
  const { flap, thrust } = harmonics(STRAIGHT);

  it('a blade’s flap moment swings once a turn, and far less at every other frequency', () => {
    expect(flap[1]).toBeGreaterThan(0.05 * (flap[0] / 2));
    for (const k of [2, 3, 4, 5]) expect(flap[k]).toBeLessThan(0.2 * flap[1]);
  });

  it('the tower feels three times a turn and its multiples only: of all other orders nothing is left', () => {
    expect(thrust[3]).toBeGreaterThan(100);
    for (const k of [1, 2, 4, 5, 7, 8]) expect(thrust[k]).toBeLessThan(1e-3 * thrust[3]);
  });
});

describe('Before the tower', () => {
  const upwind: Turbine = { ...STRAIGHT, rotor: { ...STRAIGHT.rotor, overhang: 4.5 }, tower: WHOLE.tower };
  const open = harmonics(STRAIGHT, steadyWind({ speed: 14 }));
  const { thrust, flap } = harmonics(upwind, steadyWind({ speed: 14 }));

  it('thrust dips three times a turn and at multiples of it, which it does not in the open', () => {
    expect(Math.max(...open.thrust.slice(1))).toBeLessThan(1);
    for (const k of [3, 6, 9]) expect(thrust[k]).toBeGreaterThan(500);
    for (const k of [1, 2, 4, 5, 7, 8]) expect(thrust[k]).toBeLessThan(1e-3 * thrust[3]);
  });

  it('a blade’s flap moment dips once a turn, sharply: many orders', () => {
    for (const k of [2, 3, 4, 5]) expect(flap[k]).toBeGreaterThan(5 * open.flap[k] + 5e3);
  });
});

describe('The weight of a blade', () => {
  it('swings its edge moment once a turn by weight times arm', () => {
    const { edge } = harmonics(STRAIGHT, steadyWind({ speed: 14 }));
    const rotor = new BladeElementRotor(STRAIGHT);
    // The air adds a little, since the blade's weight makes it nod as well.
    expect(edge[1] / (rotor.flap?.weightMoment ?? Number.NaN)).toBeCloseTo(1, 2);
  });
});

describe('Wind from the side', () => {
  it('swings the flap moment once a turn and takes from the thrust', () => {
    const straight = harmonics(STRAIGHT, steadyWind({ speed: 14 }));
    const yawed = harmonics(STRAIGHT, steadyWind({ speed: 14 }), { heading: -0.2 });
    expect(yawed.flap[1]).toBeGreaterThan(2 * straight.flap[1]);
    expect(yawed.thrust[0]).toBeLessThan(straight.thrust[0]);
    // Blowing along the axis is V cos χ: the loss of torque and thrust goes with χ².
    expect(yawed.thrust[0] / straight.thrust[0]).toBeGreaterThan(0.9);
  });
});
