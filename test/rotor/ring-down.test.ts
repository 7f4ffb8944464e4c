import { describe, expect, it } from 'vitest';
import { BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { BladeFlap } from '../../sim/blade-flap.ts';
import { rungeKutta } from '../../sim/integrators/runge-kutta.ts';

import { Plant } from '../../sim/plant.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { STRAIGHT } from './blade-element-run.ts';

const RPM = Math.PI / 30;
const STRUCTURE = STRAIGHT.rotor.structure ?? {
  radius: [],
  massPerLength: [],
  flap: { frequency: 0, dampingRatio: 0, shape: [] },
};

/** The turbine without air, and its structure as given. */
function inVacuum(changes: Partial<Turbine['rotor']> = {}, tower: Partial<Turbine['tower']> = {}): Turbine {
  return {
    ...STRAIGHT,
    airDensity: 0,
    rotor: { ...STRAIGHT.rotor, ...changes },
    tower: { ...STRAIGHT.tower, ...tower },
    drivetrain: { ...STRAIGHT.drivetrain, constantLoss: 0, viscousLoss: 0 },
  };
}

/** Frequency (Hz) of a state that rings freely after being pulled out of its rest, from its upward crossings. */
function ringing(turbine: Turbine, speed: number, pulled: string, amount: number, duration: number): number {
  const plant = new Plant(turbine, new BladeElementRotor(turbine), steadyWind({ speed: 0 }), 0.01);
  const x = new Float64Array(plant.layout.size);
  const memory = new Float64Array(plant.memoryLayout.size);
  const steady = { rotorSpeed: speed, pitch: 0, generatorTorque: 0, shaftTorque: 0, thrust: 0 };
  plant.start(steady, false, x, memory);
  plant.pitch.supply(true, x, memory);
  const slots = plant.layout.names.flatMap((name, i) => (name.includes(pulled) ? [i] : []));
  expect(slots.length).toBeGreaterThan(0);
  for (const slot of slots) x[slot] = amount;
  const step = 0.005;
  const integrator = rungeKutta((t, at, dx) => plant.derivative(t, at, memory, dx), x.length, step);
  const crossings: number[] = [];
  for (let k = 0; k < duration / step; k++) {
    const last = x[slots[0]];
    integrator.advance(k * step, (k + 1) * step, x);
    if (last < 0 && x[slots[0]] >= 0) crossings.push((k + 1 - x[slots[0]] / (x[slots[0]] - last)) * step);
  }
  expect(crossings.length).toBeGreaterThan(5);
  return (crossings.length - 1) / (crossings[crossings.length - 1] - crossings[0]);
}

describe('A blade that rings after being bent', () => {
  const heavyTower = { modalMass: 1e9 };

  it('has the file’s flap frequency at standstill', () => {
    // Less what the weight of the upright blade takes.
    const { weightStiffness, modalMass } = new BladeFlap(STRAIGHT.rotor);
    const upright = Math.sqrt(STRUCTURE.flap.frequency ** 2 - weightStiffness / modalMass / (2 * Math.PI) ** 2);
    const f = ringing(inVacuum({}, heavyTower), 0, 'blade 1: flap deflection', 1, 30);
    expect(Math.abs(upright / STRUCTURE.flap.frequency - 1)).toBeLessThan(0.01);
    expect(Math.abs(f / upright - 1)).toBeLessThan(1e-4);
  });

  it.each([6, 12, 15])('rings at √(f₀² + κΩ²) at %s rpm', (rpm) => {
    const { kappa } = new BladeFlap(STRAIGHT.rotor);
    const f = ringing(inVacuum({}, heavyTower), rpm * RPM, 'flap deflection', 1, 30);
    expect(f).toBeGreaterThan(STRUCTURE.flap.frequency * (1 + 1e-3 * rpm));
    expect(Math.abs(f / Math.sqrt(STRUCTURE.flap.frequency ** 2 + kappa * (rpm / 60) ** 2) - 1)).toBeLessThan(0.003);
  });

  it('stiffens by the closed form of a uniform beam bent as s²: κ = 4/3 from the axis on', () => {
    // ∫ ½m(1 − s²)(2s)² ds / ∫ m s⁴ ds = (4/15)/(1/5).
    const uniform = new BladeFlap({
      ...STRAIGHT.rotor,
      hubRadius: 1e-9,
      structure: { radius: [0, 65], massPerLength: [100, 100], flap: { ...STRUCTURE.flap, shape: [3] } },
    });
    expect(uniform.kappa).toBeCloseTo(4 / 3, 4);
    expect(uniform.modalMass / (100 * 65)).toBeCloseTo(1 / 5, 4);
    expect(uniform.massMoment / (100 * 65 ** 2)).toBeCloseTo(1 / 2, 4);
    expect(uniform.inertiaMoment / (100 * 65 ** 3)).toBeCloseTo(1 / 3, 4);
  });
});

describe('A tower that rings after being pulled', () => {
  const rigid = { structure: undefined };

  it('has the file’s frequencies both ways', () => {
    expect(ringing(inVacuum(rigid), 0, 'tower: deflection', 0.3, 60)).toBeCloseTo(STRAIGHT.tower.frequency, 4);
    expect(ringing(inVacuum(rigid), 0, 'tower sideways: deflection', 0.3, 60)).toBeCloseTo(0.26, 4);
  });

  it('rings slower with blades that bend along, as coupled masses do', () => {
    // Below its own frequency the blade follows the tower and adds inertia: the coupled mode is slower than the file's.
    const flap = new BladeFlap(STRAIGHT.rotor);
    const { modalMass, frequency } = STRAIGHT.tower;
    const k = modalMass * (2 * Math.PI * frequency) ** 2;
    const kf = flap.modalMass * flap.frequency ** 2;
    // (k − ω²M)(k_f − ω²m_f) = 3 (ω² m_c)²: the lower root.
    const a = modalMass * flap.modalMass - 3 * flap.towerCoupling ** 2;
    const b = k * flap.modalMass + kf * modalMass;
    const omega = Math.sqrt((b - Math.sqrt(b * b - 4 * a * k * kf)) / (2 * a));
    const f = ringing(inVacuum(), 0, 'tower: deflection', 0.3, 120);
    expect(omega / (2 * Math.PI)).toBeLessThan(frequency * 0.999);
    expect(Math.abs(f / (omega / (2 * Math.PI)) - 1)).toBeLessThan(0.001);
  });
});

it('A plant without a side-side mode has no such states', () => {
  const plant = new Plant(
    { ...STRAIGHT, tower: { modalMass: 1, frequency: 1, dampingRatio: 0 } },
    new BladeElementRotor(STRAIGHT),
    steadyWind({ speed: 1 }),
    0.01,
  );
  expect(plant.layout.names.some((name) => name.startsWith('tower sideways'))).toBe(false);
});
