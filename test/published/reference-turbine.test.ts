/** Checks 3, 4 and 5: speed-loop gains, free-free mode and rated torque of the 5-MW reference turbine (see the data file). */
import { describe, expect, it } from 'vitest';
import { gainSchedule } from '../../controllers/gain-schedule.ts';
import { machineOf } from '../../scenarios/machine.ts';
import { Drivetrain, idleTorques } from '../../sim/drivetrain.ts';
import { rungeKutta } from '../../sim/integrators/runge-kutta.ts';
import { Layout } from '../../sim/layout.ts';
import type { DrivetrainData } from '../../sim/turbine.ts';
import { fitSchedule, gainsByFormula } from '../../tuning/gains-by-formula.ts';
import { TURBINE } from '../sim/test-turbine.ts';
import { FIVE_MEGAWATT as M } from './five-megawatt.ts';

const RPM = Math.PI / 30;

describe('check 3: the speed loop of the reference turbine', () => {
  const gains = gainsByFormula(
    {
      inertia: M.drivetrainInertia,
      rotorSpeed: M.ratedRotorSpeed * RPM,
      gearRatio: M.gearRatio,
      powerPerPitch: M.powerPerPitch,
    },
    M.loopFrequency,
    M.loopDamping,
  );

  it('has the report’s gains at zero pitch', () => {
    // The report prints K_P = 0.01882681 s and K_I = 0.008068634 (memory).
    expect(gains.proportional).toBeCloseTo(0.018827, 5);
    expect(gains.integral).toBeCloseTo(0.0080686, 6);
  });

  it('has half those gains at the report’s pitch of 6.302336 deg', () => {
    const factor = gainSchedule({ kind: 'reciprocal', halvingPitch: M.halvingPitch });
    expect(factor(M.halvingPitch)).toBeCloseTo(0.5, 12);
    expect(factor(0)).toBe(1);
    expect(factor(3 * M.halvingPitch)).toBeCloseTo(0.25, 12);
  });

  it('gets its schedule back from slopes that double at that pitch', () => {
    const points = [0, 5, 10, 15, 20].map((degrees) => {
      const pitch = (degrees * Math.PI) / 180;
      return { pitch, powerPerPitch: M.powerPerPitch * (1 + pitch / M.halvingPitch) };
    });
    const fit = fitSchedule(points);
    expect(fit.powerPerPitch / M.powerPerPitch).toBeCloseTo(1, 9);
    expect(fit.halvingPitch / M.halvingPitch).toBeCloseTo(1, 9);
  });
});

describe('check 4: the drivetrain of the reference turbine', () => {
  const data: DrivetrainData = {
    ...TURBINE.drivetrain,
    kind: 'two masses',
    rotorInertia: M.drivetrainInertia - M.gearRatio ** 2 * M.generatorInertia,
    generatorInertia: M.generatorInertia,
    gearRatio: M.gearRatio,
    stiffness: M.shaftStiffness,
    damping: 0,
    gearEfficiency: 1,
    constantLoss: 0,
    viscousLoss: 0,
  };

  it('twists freely at 2.22 Hz by the two-mass formula', () => {
    expect(new Drivetrain(data, new Layout()).freeFreeFrequency()).toBeCloseTo(2.22, 2);
  });

  it('rings at that frequency when it is let go wound up', () => {
    const drivetrain = new Drivetrain(data, new Layout());
    const q = idleTorques();
    const integrator = rungeKutta(
      (_t, x, dx) => {
        drivetrain.balance(x, q);
        dx[0] = x[1];
        dx[1] = q.rotorAcceleration;
        dx[2] = q.generatorAcceleration;
        dx[3] = x[1] - x[2] / data.gearRatio;
      },
      4,
      0.001,
    );
    const x = Float64Array.from([0, 0, 0, 0.005]);
    const upward: number[] = [];
    for (let k = 0, last = x[3]; k < 10_000; k++, last = x[3]) {
      integrator.advance(k * 0.001, (k + 1) * 0.001, x);
      if (last < 0 && x[3] >= 0) upward.push((k + 1 - x[3] / (x[3] - last)) * 0.001);
    }
    const period = (upward[upward.length - 1] - upward[0]) / (upward.length - 1);
    expect(upward.length).toBeGreaterThan(20);
    expect(1 / period).toBeCloseTo(2.22, 2);
  });
});

describe('check 5: the rated torque of the reference turbine', () => {
  it('is 43 093.55 N m for 5.29661 MW at 1173.7 rpm', () => {
    const machine = machineOf({
      ...TURBINE,
      ratings: { ...TURBINE.ratings, power: M.ratedPower, rotorSpeed: M.ratedRotorSpeed * RPM },
      drivetrain: { ...TURBINE.drivetrain, gearRatio: M.gearRatio },
      generator: { ...TURBINE.generator, efficiency: M.generatorEfficiency },
    });
    expect(machine.ratedGeneratorSpeed / RPM).toBeCloseTo(M.ratedGeneratorSpeed, 6);
    expect(machine.ratedPower / machine.generatorEfficiency / 1e6).toBeCloseTo(5.29661, 5);
    expect(machine.ratedTorque).toBeCloseTo(43_093.55, 1);
  });
});
