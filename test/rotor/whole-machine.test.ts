import { describe, expect, it } from 'vitest';
import type { Controller } from '../../controllers/contract.ts';
import { CHANNELS, channelIndex } from '../../sim/channels.ts';
import type { Clock, IntegratorChoice } from '../../sim/clock.ts';
import type { ScriptedEvent } from '../../sim/scripted-event.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { profileWind } from '../../sim/wind/profile.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { eventsOf, RPM, testController } from '../sim/test-turbine.ts';
import { bladeElementRun, STRAIGHT, WHOLE } from './blade-element-run.ts';

const STEPS: IntegratorChoice = { kind: 'runge-kutta', step: 0.01 };
const ODEX: IntegratorChoice = { kind: 'odex', relativeTolerance: 1e-6 };

function sheared(speed: number): WindField {
  const { hubHeight, radius } = WHOLE.rotor;
  return profileWind({ speed, profile: { kind: 'power law', exponent: 0.2 }, hubHeight, rotorRadius: radius });
}

const STUCK_BLADE: readonly ScriptedEvent[] = [
  { trigger: { kind: 'time', at: 9 }, action: { kind: 'pitch stuck', blades: [1] } },
  { trigger: { kind: 'time', at: 10 }, action: { kind: 'grid loss' } },
];

/** Values of some channels at every tick, SI. */
function series(clock: Clock, names: readonly string[]): Record<string, number[]> {
  const kept = Object.fromEntries(names.map((name) => [name, [] as number[]]));
  clock.frames.subscribe(({ values }) => {
    for (const name of names) kept[name].push(values[channelIndex(name)]);
  });
  clock.run();
  return kept;
}

describe('An emergency stop with one blade stuck, in sheared wind before the tower', () => {
  const run = (integrator: IntegratorChoice, events = STUCK_BLADE) =>
    bladeElementRun({ windSpeed: 18, wind: sheared(18), turbine: WHOLE, duration: 60, events, integrator });
  const names = [
    'rotor_speed_rpm',
    'flap_moment_1_mn_m',
    'flap_moment_2_mn_m',
    'thrust_kn',
    'energy_error_kj',
    'azimuth_deg',
    'tower_top_tilt_moment_mn_m',
    'tower_top_yaw_moment_mn_m',
    'pitch_2_deg',
  ];
  const clock = run(ODEX);
  const said = eventsOf(clock);
  const stuck = series(clock, names);
  const free = series(run(ODEX, STUCK_BLADE.slice(1)), names);

  it('the two other blades bring the rotor down, with a higher peak and later than all three', () => {
    expect(said.some(({ kind }) => kind === 'standstill')).toBe(true);
    const peak = Math.max(...stuck.rotor_speed_rpm) / RPM;
    const peakOfAll = Math.max(...free.rotor_speed_rpm) / RPM;
    expect(peak).toBeGreaterThan(peakOfAll);
    expect(peak).toBeGreaterThan(12.2);
    expect(peak).toBeLessThan(15.6);
    const below = (speeds: number[]) => speeds.findIndex((speed, i) => i > 1000 && speed < 6 * RPM);
    expect(below(stuck.rotor_speed_rpm)).toBeGreaterThan(below(free.rotor_speed_rpm));
    expect(new Set(stuck.pitch_2_deg.slice(1000)).size).toBe(1);
  });

  it('the odd blade’s thrust goes round with it: the tilting and the yawing moment swing once a turn', () => {
    /** Largest less smallest over the first turn that begins four seconds after the grid is lost. */
    const swing = (run: Record<string, number[]>, name: string) => {
      const from = 1400;
      let turned = 0;
      let to = from;
      while (turned < 2 * Math.PI) {
        const d = run.azimuth_deg[to + 1] - run.azimuth_deg[to];
        turned += d < 0 ? d + 2 * Math.PI : d;
        to++;
      }
      const values = run[name].slice(from, to);
      return Math.max(...values) - Math.min(...values);
    };
    for (const name of ['tower_top_tilt_moment_mn_m', 'tower_top_yaw_moment_mn_m']) {
      expect(swing(stuck, name)).toBeGreaterThan(2 * swing(free, name));
    }
  });

  it('keeps the energy account', () => {
    const turnedOver =
      new Map(clock.state().map(({ name, value }) => [name, value])).get('account: work of the wind') ?? 0;
    expect(turnedOver).toBeGreaterThan(15e6);
    expect(Math.max(...stuck.energy_error_kj.map(Math.abs))).toBeLessThan(1e-4 * turnedOver);
  });

  it('is the same with fixed steps', () => {
    const fixed = series(run(STEPS), names);
    for (const k of [500, 1000, 1500, 2000, 2500]) {
      expect(fixed.rotor_speed_rpm[k]).toBeCloseTo(stuck.rotor_speed_rpm[k], 4);
      expect(fixed.flap_moment_2_mn_m[k] / 1e6).toBeCloseTo(stuck.flap_moment_2_mn_m[k] / 1e6, 2);
    }
  });
});

describe('A gust on the whole machine', () => {
  const wind = sumWind([sheared(14), cosineGust({ start: 5, duration: 6, amplitude: 6 })]);
  const gust = (integrator: IntegratorChoice) =>
    bladeElementRun({
      windSpeed: 14,
      wind,
      turbine: WHOLE,
      duration: 30,
      integrator,
      options: { sectionLift: 'lagging' },
    });

  it('leaves every channel finite and the energy account closed', () => {
    const clock = gust(STEPS);
    const error = channelIndex('energy_error_kj');
    let worst = 0;
    clock.frames.subscribe(({ values, time }) => {
      const bad = CHANNELS.filter((_, i) => !Number.isFinite(values[i])).map(({ name }) => name);
      expect({ time, bad }).toEqual({ time, bad: [] });
      worst = Math.max(worst, Math.abs(values[error]));
    });
    clock.run();
    expect(worst).toBeLessThan(1e3);
  });

  it('goes on from a snapshot bit for bit', () => {
    const unbroken = gust(STEPS);
    unbroken.run(700);
    const snapshot = unbroken.snapshot();
    unbroken.run(1500);
    const fork = gust(STEPS);
    fork.restore(snapshot);
    fork.run(1500);
    expect(fork.snapshot().data).toEqual(unbroken.snapshot().data);
  });
});

describe('A control law on the whole machine', () => {
  it('is told each blade’s flap moment, the sway both ways and the vane, as the channels have them', () => {
    const told: number[][] = [];
    const law = testController();
    const controller: Controller = {
      ...law,
      needs: [...law.needs, 'flapMoment', 'towerAccelerationSideSide', 'windDirection'],
      step(t, measured, memory, demands) {
        const { flapMoment, towerAccelerationForeAft, towerAccelerationSideSide, windDirection } = measured;
        told.push([...flapMoment, towerAccelerationForeAft, towerAccelerationSideSide, windDirection]);
        law.step(t, measured, memory, demands);
      },
    };
    const clock = bladeElementRun({
      windSpeed: 14,
      wind: sheared(14),
      turbine: WHOLE,
      yawError: 0.1,
      duration: 2,
      integrator: STEPS,
      controller,
    });
    const names = [1, 2, 3].map((b) => `flap_moment_${b}_mn_m`);
    const kept = series(clock, [...names, 'tower_acceleration_m_s2', 'tower_side_acceleration_m_s2', 'yaw_error_deg']);
    expect(told).toHaveLength(201);
    for (const k of [0, 77, 200]) expect(told[k]).toEqual(Object.values(kept).map((values) => values[k]));
    expect(new Set(told[77]).size).toBe(6);
  });
});

describe('A nacelle with a yaw drive', () => {
  const yawDrive = { rate: 0.02, deadBand: 0.14, vaneTimeConstant: 10 };
  /** Turns from 0 to 30 degrees between 10 and 30 s. */
  const angle = (t: number) => 0.524 * Math.min(Math.max((t - 10) / 20, 0), 1);
  const turning: WindField = {
    velocity(t, _y, _z, out) {
      out[0] = 14 * Math.cos(angle(t));
      out[1] = 14 * Math.sin(angle(t));
      out[2] = 0;
    },
    direction: angle,
    uniform: true,
    rotorMean: (t) => 14 * Math.cos(angle(t)),
    breakpoints: () => [10, 30],
    marks: () => [],
  };
  const run = (turbine = { ...STRAIGHT, yawDrive }) =>
    series(bladeElementRun({ windSpeed: 14, wind: turning, turbine, duration: 120, integrator: STEPS }), [
      'yaw_error_deg',
      'nacelle_heading_deg',
    ]);

  it('waits inside the dead band, follows a change of direction at its one rate, and comes to rest near the wind', () => {
    const { yaw_error_deg: error, nacelle_heading_deg: heading } = run();
    expect(heading.slice(0, 1300).every((h) => h === 0)).toBe(true);
    const rates = heading.slice(1).map((h, i) => (h - heading[i]) / 0.01);
    expect(rates.every((r) => Math.abs(r) < 1e-9 || Math.abs(Math.abs(r) - yawDrive.rate) < 1e-9)).toBe(true);
    expect(Math.max(...error)).toBeGreaterThan(yawDrive.deadBand);
    expect(Math.abs(error[error.length - 1])).toBeLessThan(yawDrive.deadBand);
    expect(heading[heading.length - 1]).toBeCloseTo(heading[heading.length - 500], 12);
  });

  it('keeps its heading without one', () => {
    const { yaw_error_deg: error, nacelle_heading_deg: heading } = run({ ...STRAIGHT, yawDrive: undefined } as never);
    expect(heading.every((h) => h === 0)).toBe(true);
    expect(error[error.length - 1]).toBeCloseTo(0.524, 9);
  });

  it('starts as far off the wind as it is told', () => {
    const clock = bladeElementRun({ windSpeed: 14, yawError: 0.1, duration: 5, integrator: STEPS });
    const { yaw_error_deg: error, rotor_speed_rpm: speed } = series(clock, ['yaw_error_deg', 'rotor_speed_rpm']);
    expect(error.every((e) => Math.abs(e - 0.1) < 1e-12)).toBe(true);
    expect(speed[speed.length - 1] / RPM).toBeCloseTo(12, 2);
  });
});
