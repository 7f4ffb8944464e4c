import { describe, expect, it } from 'vitest';
import { controllerOf } from '../../scenarios/control.ts';
import { Drivetrain } from '../../sim/drivetrain.ts';
import { Layout } from '../../sim/layout.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { linearPlant, PLANT_OUTPUTS, withPitchSlope } from '../../tuning/linear-plant.ts';
import { frequencyGrid, marginsOf } from '../../tuning/margins.ts';
import { interpolatedGain, measureLoop } from '../../tuning/measured-loop.ts';
import { modesOf, sampledModesOf } from '../../tuning/modes.ts';
import { rotorSlopes } from '../../tuning/rotor-slopes.ts';
import { sampledLaw } from '../../tuning/sampled-law.ts';
import { type LoopInputs, SampledLoop, spreadByNoise } from '../../tuning/sampled-loop.ts';
import { transmissionZeros } from '../../tuning/transmission-zeros.ts';
import { channelOf, controllerData, loopAt, MACHINE, ROTOR, runSetup, SURFACE, TRIM, TURBINE } from './demo-machine.ts';

describe('the plant’s linear model', () => {
  const point = TRIM.at(16);
  const plant = linearPlant(TURBINE, ROTOR, point);
  const state = (name: string) => plant.states.indexOf(name);

  it('holds the rotor’s slopes over its inertia, as the coefficient surface has them', () => {
    const slopes = rotorSlopes(SURFACE, point);
    const { rotorInertia, damping, viscousLoss } = TURBINE.drivetrain;
    const row = state('drivetrain: rotor speed');
    expect(plant.a.get(row, state('pitch: angle (collective)'))).toBeCloseTo(slopes.torquePerPitch / rotorInertia, 7);
    expect(plant.a.get(row, row)).toBeCloseTo((slopes.torquePerRotorSpeed - damping - viscousLoss) / rotorInertia, 6);
    expect(plant.b.get(row, 2)).toBeCloseTo(slopes.torquePerWind / rotorInertia, 7);
    expect(
      plant.c.get(PLANT_OUTPUTS.indexOf('thrust'), state('pitch: angle (collective)')) / slopes.thrustPerPitch,
    ).toBeCloseTo(1, 5);
  });

  it('twists, sways and turns its blades at the frequencies of the parts', () => {
    const modes = modesOf(plant.a);
    const nearest = (frequency: number) =>
      modes.reduce((a, b) => (Math.abs(b.frequency - frequency) < Math.abs(a.frequency - frequency) ? b : a));
    const shaft = 2 * Math.PI * new Drivetrain(TURBINE.drivetrain, new Layout()).freeFreeFrequency();
    // The gearbox's loss makes the generator heavier by 3 %.
    expect(nearest(shaft).frequency / shaft).toBeCloseTo(1, 1);
    expect(plant.states[indexOfLargest(nearest(shaft).participation)]).toBe('drivetrain: shaft twist');
    const drive = 2 * Math.PI * TURBINE.pitchDrive.naturalFrequency;
    expect(nearest(drive).frequency).toBeCloseTo(drive, 4);
    expect(nearest(drive).damping).toBeCloseTo(TURBINE.pitchDrive.dampingRatio, 4);
    const tower = modes.find(({ participation }) => participation[state('tower: velocity')] > 0.4);
    expect(tower?.frequency).toBeCloseTo(2 * Math.PI * TURBINE.tower.frequency, 1);
    expect(tower?.damping).toBeGreaterThan(5 * TURBINE.tower.dampingRatio);
    for (const { participation } of modes) expect(participation.reduce((a, b) => a + b)).toBeCloseTo(1, 9);
  });

  it('has the tower’s pair of zeros from pitch to speed in the right half plane above rated, which limits any pitch loop', () => {
    // Turning to feather lowers the thrust: the tower comes forward and the rotor meets more wind before it gets less torque.
    const n = plant.a.rows;
    const zeros = transmissionZeros(plant.a, plant.b.subMatrix(0, n - 1, 0, 0), plant.c.subMatrix(0, 0, 0, n - 1), 0);
    const tower = zeros.filter((z) => Math.abs(z.im - 2 * Math.PI * TURBINE.tower.frequency) < 0.05 && z.re > 0);
    expect(tower).toHaveLength(1);
  });

  it('says where the drive stands on its stop, and refuses a point that is not steady', () => {
    const onStop = { ...TURBINE, pitchDrive: { ...TURBINE.pitchDrive, minimum: TURBINE.ratings.finePitch } };
    expect(linearPlant(onStop, ROTOR, TRIM.at(6)).bends).toContain('pitch demand');
    expect(linearPlant(TURBINE, ROTOR, TRIM.at(6)).bends).toEqual([]);
    expect(() => linearPlant(TURBINE, ROTOR, { ...point, pitch: point.pitch + 0.01 })).toThrow(
      /not steady: "drivetrain: rotor speed"/,
    );
  });

  it('multiplies what aerodynamics make of pitch, not the drive, when the slope is uncertain', () => {
    const steeper = withPitchSlope(plant, 1.2);
    const pitch = state('pitch: angle (collective)');
    const speed = state('drivetrain: rotor speed');
    expect(steeper.a.get(speed, pitch) / plant.a.get(speed, pitch)).toBeCloseTo(1.2, 12);
    expect(steeper.a.get(state('pitch: rate (collective)'), pitch)).toBe(
      plant.a.get(state('pitch: rate (collective)'), pitch),
    );
  });
});

describe('the law’s linear model', () => {
  it('is its PI with the schedule’s factor, and has no bends inside the rated region', () => {
    const data = controllerData({ proportional: 0.01, integral: 0.003 }, { kind: 'reciprocal', halvingPitch: 0.1 });
    const point = TRIM.at(16);
    const law = sampledLaw(controllerOf(data, MACHINE), MACHINE, point);
    expect(law.bends).toEqual([]);
    const integral = law.memory.indexOf('scheduled PI pitch: integral');
    const last = law.memory.indexOf('scheduled PI pitch: last demand');
    const factor = 1 / (1 + point.pitch / 0.1);
    expect(law.a.get(integral, integral)).toBeCloseTo(1, 6);
    expect(law.b.get(integral, law.inputs.indexOf('speed set-point'))).toBeCloseTo(-0.003 * factor * 0.01, 8);
    expect(law.c.get(0, last)).toBeCloseTo(0, 6);
    expect(law.d.get(0, law.inputs.indexOf('speed set-point'))).toBeCloseTo(-factor * (0.01 + 0.003 * 0.01), 7);
  });

  it('tells that the torque curve bends at rated speed while the blades are close to fine pitch', () => {
    const closest = [10, 10.05, 10.1]
      .map((wind) => TRIM.at(wind))
      .find((point) => point.region === 'rated' && point.pitch < 0.017);
    if (!closest) throw new Error('no trim point near fine pitch');
    const law = sampledLaw(controllerOf(controllerData(), MACHINE), MACHINE, closest);
    expect(law.bends).toContain('generator speed');
  });
});

describe('linear steps', () => {
  /** Largest distance between two responses over the largest deviation. */
  function distance(linear: readonly number[], nonlinear: readonly number[]): number {
    const largest = Math.max(...nonlinear.map(Math.abs));
    return Math.max(...linear.map((value, k) => Math.abs(value - nonlinear[k]))) / largest;
  }

  function linearResponse(windSpeed: number, steps: number, inputs: LoopInputs): number[] {
    const loop = loopAt(TRIM.at(windSpeed), controllerData());
    const state = new Float64Array(loop.states.length);
    return Array.from({ length: steps }, () => loop.step(state, inputs)[0]);
  }

  it.each([13, 16, 22])(
    'lie on the simulated ones within two per cent for a small rise of a wind of %d m/s',
    (windSpeed) => {
      const rise = 0.05;
      const wind = sumWind([steadyWind({ speed: windSpeed }), stepWind({ at: 1, rise })]);
      const simulated = channelOf(runSetup(windSpeed, controllerData(), 31, wind), 'generator_speed_rpm').slice(100);
      const { generatorSpeed } = TRIM.at(windSpeed);
      const deviation = simulated.map((speed) => speed - generatorSpeed);
      const linear = linearResponse(windSpeed, deviation.length, { pitch: 0, wind: rise, setpoint: 0 });
      expect(distance(linear, deviation)).toBeLessThan(0.02);
    },
  );

  it('lie on the simulated ones within 2 % for a small push at the pitch demand', () => {
    const push = 2e-4;
    const setup = { ...runSetup(16, controllerData(), 31), pitchInjection: (t: number) => (t >= 1 ? push : 0) };
    const simulated = channelOf(setup, 'generator_speed_rpm').slice(100);
    const { generatorSpeed } = TRIM.at(16);
    const deviation = simulated.map((speed) => speed - generatorSpeed);
    const linear = linearResponse(16, deviation.length, { pitch: push, wind: 0, setpoint: 0 });
    expect(distance(linear, deviation)).toBeLessThan(0.02);
  });
});

describe('noise of the speed sensor', () => {
  it('spreads the pitch rate as the covariance says, and as the simulation does', () => {
    const noise = 0.05;
    const setup = runSetup(16, controllerData(), 400);
    const { controlSpeed } = TURBINE.sensors;
    const noisy = { ...TURBINE, sensors: { ...TURBINE.sensors, controlSpeed: { ...controlSpeed, noise } } };
    const rate = channelOf({ ...setup, turbine: noisy }, 'pitch_rate_1_deg_s').slice(5000);
    const mean = rate.reduce((sum, value) => sum + value, 0) / rate.length;
    const spread = Math.sqrt(rate.reduce((sum, value) => sum + (value - mean) ** 2, 0) / rate.length);
    const expected = spreadByNoise(loopAt(TRIM.at(16), controllerData()), 'pitch: rate (collective)', noise);
    expect(spread / expected).toBeGreaterThan(0.95);
    expect(spread / expected).toBeLessThan(1.05);
  });
});

describe('exact and measured loops', () => {
  it.each([12, 18, 24])('agree at %d m/s: gains line by line, margins to one per cent', (windSpeed) => {
    const data = controllerData();
    const loop = loopAt(TRIM.at(windSpeed), data);
    const measured = measureLoop(runSetup(windSpeed, data, 1));
    measured.frequencies.forEach((frequency, i) => {
      const exact = loop.gain(frequency);
      const { re, im } = measured.gain[i];
      if (frequency > 0.3 && frequency < 10) {
        expect(Math.hypot(re - exact.re, im - exact.im)).toBeLessThan(0.02 * Math.hypot(1 + exact.re, exact.im) + 0.01);
      }
    });
    const modes = [...sampledModesOf(loop.closedLoop(), loop.sampleTime), ...modesOf(loop.plant.a)];
    const exact = marginsOf((frequency) => loop.gain(frequency), frequencyGrid(0.05, 300, 500, modes));
    const { frequencies } = measured;
    const grid = frequencyGrid(frequencies[0], frequencies[frequencies.length - 1], 2000);
    const found = marginsOf(interpolatedGain(measured), grid);
    expect(found.gain.factor / exact.gain.factor).toBeCloseTo(1, 1.7);
    expect(found.phase.angle / exact.phase.angle).toBeCloseTo(1, 1.7);
    expect(found.delay.time / exact.delay.time).toBeCloseTo(1, 1.7);
    expect(found.modulus.distance / exact.modulus.distance).toBeCloseTo(1, 1.7);
    expect(found.bandwidth / exact.bandwidth).toBeCloseTo(1, 1.7);
  });

  it('agree for a drive whose delay is no whole number of samples', () => {
    const data = controllerData();
    const late = { ...TURBINE, pitchDrive: { ...TURBINE.pitchDrive, delay: 0.0473 } };
    const setup = runSetup(16, data, 1);
    const measured = measureLoop({ ...setup, turbine: late });
    const point = TRIM.at(16);
    const law = sampledLaw(controllerOf(data, MACHINE), MACHINE, point);
    const loop = new SampledLoop(late, linearPlant(late, ROTOR, point), law);
    measured.frequencies.forEach((frequency, i) => {
      if (frequency < 1.8 || frequency > 8) return;
      const exact = loop.gain(frequency);
      expect(Math.hypot(measured.gain[i].re - exact.re, measured.gain[i].im - exact.im)).toBeLessThan(0.004);
    });
  });
});

function indexOfLargest(values: readonly number[]): number {
  return values.indexOf(Math.max(...values));
}
