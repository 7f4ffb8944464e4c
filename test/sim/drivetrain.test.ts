import { describe, expect, it } from 'vitest';
import { Drivetrain, idleTorques, type ShaftTorques } from '../../sim/drivetrain.ts';
import { Layout } from '../../sim/layout.ts';
import type { DrivetrainData } from '../../sim/turbine.ts';
import { TURBINE } from './test-turbine.ts';

function drivetrain(changes: Partial<DrivetrainData> = {}): Drivetrain {
  return new Drivetrain({ ...TURBINE.drivetrain, ...changes }, new Layout());
}

function torques(changes: Partial<ShaftTorques> = {}): ShaftTorques {
  return { ...idleTorques(), ...changes };
}

describe('The gearbox', () => {
  it('takes its share of the power whichever way it flows', () => {
    expect(drivetrain().throughGearbox(1e6)).toBeCloseTo(1e6 * (0.97 / 100), 9);
    expect(drivetrain().throughGearbox(-1e6)).toBeCloseTo(-1e6 / (0.97 * 100), 9);
  });

  it('makes the train lose power, never gain it, driving or driven', () => {
    for (const twist of [0.008, -0.008]) {
      const q = torques({ aerodynamic: 3e6, generator: 29e3 });
      const x = [0, 1.25, 124.9, twist];
      const train = drivetrain();
      train.balance(x, q);
      expect(train.lostPower(x, q)).toBeGreaterThan(0);
    }
  });
});

describe('The rigid train', () => {
  it('turns as one mass J_r + N² J_g when nothing is lost', () => {
    const q = torques({ aerodynamic: 3e6, generator: 20e3 });
    const train = drivetrain({ kind: 'rigid', gearEfficiency: 1, constantLoss: 0, viscousLoss: 0 });
    train.balance([0, 1.2, 120, 0], q);
    expect(q.rotorAcceleration).toBeCloseTo((3e6 - 100 * 20e3) / (3.2e7 + 100 ** 2 * 300), 12);
    expect(q.generatorAcceleration).toBeCloseTo(100 * q.rotorAcceleration, 12);
  });

  it('carries in its shaft what the generator side needs, with the gearbox’s share, both ways', () => {
    for (const generator of [20e3, -20e3]) {
      const q = torques({ aerodynamic: 50 * generator, generator });
      const train = drivetrain({ kind: 'rigid' });
      train.balance([0, 1.2, 120, 0], q);
      expect(q.geared).toBeCloseTo(train.throughGearbox(q.shaft), 6);
      expect(q.shaft).toBeCloseTo(q.aerodynamic - q.loss - 3.2e7 * q.rotorAcceleration, 3);
    }
  });
});

describe('The bearings', () => {
  it('drag against the turning, constant plus viscous', () => {
    expect(drivetrain().lossTorque(1.2)).toBeCloseTo(6e3 + 4e3 * 1.2, 6);
    expect(drivetrain().lossTorque(-1.2)).toBeCloseTo(-6e3 - 4e3 * 1.2, 6);
    expect(drivetrain().lossTorque(0)).toBe(0);
  });
});
