import { describe, expect, it } from 'vitest';
import { lowPass } from '../../controllers/filters/low-pass.ts';
import { type GainScheduleSettings, gainSchedule } from '../../controllers/gain-schedule.ts';
import type { Law } from '../../controllers/law.ts';
import { type PitchLawSettings, scheduledPiPitch } from '../../controllers/scheduled-pi-pitch.ts';
import { steadyTorque, type TorqueLawSettings, torqueCurve } from '../../controllers/torque-curve.ts';
import { DEGREE, demands, MACHINE, measured, RPM } from './signals.ts';

const DT = 0.01;

const PITCH: PitchLawSettings = {
  proportional: 0.02,
  integral: 0.006,
  schedule: { kind: 'constant' },
  scheduled: 'after integral',
  antiWindup: { kind: 'clamping' },
  minimum: 0,
  maximum: 88 * DEGREE,
  rateLimit: 1000,
};

const POINT = { generatorSpeed: 1200 * RPM, pitch: 10 * DEGREE, generatorTorque: 30e3, windSpeed: 14 };

/** Steps a law by itself with a speed error (rad/s) and returns its pitch demands (rad). */
function pitchDemands(law: Law, errors: readonly number[]): number[] {
  const memory = new Float64Array(law.memory.length);
  law.start(POINT, memory, 0);
  const asked = demands();
  return errors.map((error) => {
    law.step(measured({ generatorSpeed: 1200 * RPM + error }), memory, 0, asked);
    return asked.pitch[0];
  });
}

describe('The scheduled PI pitch law', () => {
  const schedules: GainScheduleSettings[] = [
    { kind: 'constant' },
    { kind: 'reciprocal', halvingPitch: 6 * DEGREE },
    { kind: 'quadratic', linearPitch: 8 * DEGREE, quadraticPitch: 20 * DEGREE },
    { kind: 'table', pitch: [0, 20 * DEGREE], factor: [1, 0.3] },
  ];

  it.each(
    schedules.flatMap((schedule) =>
      (['before integral', 'after integral'] as const).map((s) => [schedule, s] as const),
    ),
  )('starts where the blades are and stays there at set-point, with %o scheduled %s', (schedule, scheduled) => {
    for (const pitch of pitchDemands(scheduledPiPitch({ ...PITCH, schedule, scheduled }, DT), [0, 0, 0])) {
      expect(pitch).toBeCloseTo(10 * DEGREE, 14);
    }
  });

  it('asks for K_P e + K_I ∫e dt', () => {
    const [first, , third] = pitchDemands(scheduledPiPitch(PITCH, DT), [2, 2, 2]);
    expect(first).toBeCloseTo(10 * DEGREE + 0.02 * 2 + 0.006 * 2 * DT, 12);
    expect(third).toBeCloseTo(10 * DEGREE + 0.02 * 2 + 0.006 * 2 * 3 * DT, 12);
  });

  it('weakens both gains by the schedule, and differs by where it multiplies once pitch moves', () => {
    const schedule: GainScheduleSettings = { kind: 'reciprocal', halvingPitch: 10 * DEGREE };
    const before = pitchDemands(scheduledPiPitch({ ...PITCH, schedule, scheduled: 'before integral' }, DT), [1]);
    expect(before[0]).toBeCloseTo(10 * DEGREE + 0.5 * (0.02 + 0.006 * DT), 12);
    const errors = new Array<number>(400).fill(1);
    const late = (scheduled: PitchLawSettings['scheduled']) =>
      pitchDemands(scheduledPiPitch({ ...PITCH, schedule, scheduled }, DT), errors).at(-1) ?? Number.NaN;
    expect(Math.abs(late('before integral') - late('after integral'))).toBeGreaterThan(0.1 * DEGREE);
  });

  it.each<PitchLawSettings['antiWindup']>([{ kind: 'clamping' }, { kind: 'back-calculation', trackingTime: 1 }])(
    'leaves its limit soon after the error turns, with %o',
    (antiWindup) => {
      // A minute of underspeed at fine pitch, then overspeed: an integral that had wound up would hold the blades back.
      const errors = [...new Array<number>(6000).fill(-5), ...new Array<number>(100).fill(3)];
      const asked = pitchDemands(scheduledPiPitch({ ...PITCH, antiWindup }, DT), errors);
      expect(asked[5999]).toBe(0);
      expect(asked[6020]).toBeGreaterThan(0);
      const unlimited = 0.006 * 5 * 60;
      expect(asked.at(-1)).toBeGreaterThan(0.02);
      expect(unlimited).toBeGreaterThan(1);
    },
  );

  it('keeps to its limits and its rate', () => {
    const asked = pitchDemands(
      scheduledPiPitch({ ...PITCH, rateLimit: 5 * DEGREE }, DT),
      new Array<number>(3000).fill(50),
    );
    expect(Math.max(...asked)).toBeCloseTo(88 * DEGREE, 12);
    const steps = asked.map((pitch, i) => pitch - (asked[i - 1] ?? 10 * DEGREE));
    expect(Math.max(...steps)).toBeLessThanOrEqual(5 * DEGREE * DT + 1e-12);
  });
});

describe('The gain schedule', () => {
  it('is one at zero pitch and never grows below it', () => {
    const quadratic = gainSchedule({ kind: 'quadratic', linearPitch: 0.1, quadraticPitch: 0.2 });
    expect(quadratic(0)).toBe(1);
    expect(quadratic(-0.1)).toBe(1);
    expect(quadratic(0.2)).toBeCloseTo(1 / (1 + 2 + 1), 12);
  });

  it('by table is linear between points and held beyond them', () => {
    const table = gainSchedule({ kind: 'table', pitch: [0.1, 0.2, 0.4], factor: [1, 0.6, 0.2] });
    expect([0, 0.1, 0.15, 0.3, 0.4, 2].map(table).map((f) => Number(f.toFixed(12)))).toEqual([
      1, 1, 0.8, 0.4, 0.2, 0.2,
    ]);
  });
});

describe('The low-pass filter', () => {
  it('has the gain and phase of its continuous form at the corner, and passes a constant', () => {
    const corner = 2;
    const filter = lowPass(corner, DT);
    const memory = new Float64Array(2);
    filter.start(0, memory, 0);
    let cosine = 0;
    let sine = 0;
    const settled = 500;
    const period = 50;
    for (let k = 0; k < settled + period; k++) {
      const phase = 2 * Math.PI * corner * k * DT;
      const out = filter.step(Math.sin(phase), memory, 0);
      if (k < settled) continue;
      cosine += (2 / period) * out * Math.cos(phase);
      sine += (2 / period) * out * Math.sin(phase);
    }
    expect(Math.hypot(cosine, sine)).toBeCloseTo(Math.SQRT1_2, 9);
    expect(Math.atan2(cosine, sine)).toBeCloseTo(-Math.PI / 4, 9);
    filter.start(3, memory, 0);
    expect(filter.step(3, memory, 0)).toBeCloseTo(3, 12);
  });
});

describe('The torque curve', () => {
  const TORQUE: TorqueLawSettings = {
    optimalGain: 2,
    aboveRated: 'constant power',
    cutInSpeed: 650 * RPM,
    optimalFrom: 720 * RPM,
    optimalTo: 1140 * RPM,
    handoverPitch: 1 * DEGREE,
    maximumTorque: 1.1 * MACHINE.ratedTorque,
    rateLimit: 1e9,
  };

  function torqueAt(speed: number, changes: Partial<TorqueLawSettings> = {}, pitch = 0, powerSetpoint = 3.6e6): number {
    const law = torqueCurve({ ...TORQUE, ...changes }, MACHINE, DT);
    const asked = demands();
    const signal = measured({ generatorSpeed: speed, pitch: new Float64Array(3).fill(pitch), powerSetpoint });
    law.step(signal, new Float64Array(law.memory.length), 0, asked);
    return asked.generator;
  }

  it('has no jump from standstill to rated speed, and is k ω² in the middle', () => {
    const curve = steadyTorque(TORQUE, MACHINE);
    expect(curve(600 * RPM)).toBe(0);
    expect(curve(1000 * RPM)).toBeCloseTo(2 * (1000 * RPM) ** 2, 9);
    expect(curve(1200 * RPM)).toBeCloseTo(MACHINE.ratedTorque, 9);
    for (let speed = 0; speed < 1300 * RPM; speed += 0.05) {
      expect(Math.abs(curve(speed + 0.05) - curve(speed))).toBeLessThan(200);
      expect(torqueAt(Math.min(speed, 1199 * RPM))).toBeCloseTo(curve(Math.min(speed, 1199 * RPM)), 6);
    }
  });

  it('gives constant power or constant torque above rated', () => {
    const fast = 1260 * RPM;
    expect(torqueAt(fast) * fast * 0.95).toBeCloseTo(3.6e6, 3);
    expect(torqueAt(fast, { aboveRated: 'constant torque' })).toBeCloseTo(MACHINE.ratedTorque, 6);
  });

  it('keeps to the rated branch a little below rated speed while the blades are turned, not when the rotor is slow', () => {
    const justBelow = 1180 * RPM;
    expect(torqueAt(justBelow, {}, 5 * DEGREE) * justBelow * 0.95).toBeCloseTo(3.6e6, 3);
    expect(torqueAt(justBelow, {}, 0)).toBeCloseTo(steadyTorque(TORQUE, MACHINE)(justBelow), 9);
    expect(torqueAt(800 * RPM, {}, 12 * DEGREE)).toBeCloseTo(2 * (800 * RPM) ** 2, 9);
  });

  it('follows a lowered power set-point', () => {
    const speed = 1200 * RPM;
    expect(torqueAt(speed, {}, 5 * DEGREE, 1.8e6) * speed * 0.95).toBeCloseTo(1.8e6, 3);
    expect(torqueAt(speed, { aboveRated: 'constant torque' }, 5 * DEGREE, 1.8e6)).toBeCloseTo(
      MACHINE.ratedTorque / 2,
      6,
    );
  });

  it('changes no faster than its rate limit', () => {
    const law = torqueCurve({ ...TORQUE, rateLimit: 50e3 }, MACHINE, DT);
    const memory = new Float64Array(law.memory.length);
    const asked = demands();
    law.start({ ...POINT, generatorTorque: 0 }, memory, 0);
    law.step(measured(), memory, 0, asked);
    expect(asked.generator).toBeCloseTo(500, 9);
  });
});
