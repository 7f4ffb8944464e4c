import { describe, expect, it } from 'vitest';
import { createMetrics, METRIC_NAMES } from '../../scenarios/metrics.ts';
import type { ScenarioData } from '../../scenarios/scenario.ts';
import type { RunEvent } from '../../sim/frame.ts';
import { type ChannelValues, frames, inventedScenario, TURBINE } from './invented-scenario.ts';

const PRODUCTION = 2;
const EMERGENCY_STOP = 4;

interface Run {
  end: number;
  interval?: number;
  channels: (time: number) => ChannelValues;
  events?: readonly RunEvent[];
  scenario?: ScenarioData;
}

/** Every metric's value by name. Events are told before the frame of their instant, as the clock does. */
function metricsOf({ end, interval = 0.01, channels, events = [], scenario = inventedScenario() }: Run) {
  const metrics = createMetrics(scenario);
  const waiting = [...events];
  for (const frame of frames(end, interval, channels)) {
    for (let next = waiting[0]; next !== undefined && next.time <= frame.time; next = waiting[0]) {
      metrics.event(next);
      waiting.shift();
    }
    metrics.frame(frame);
  }
  return Object.fromEntries(metrics.finish().map(({ name, value }) => [name, value]));
}

describe('the metrics of a run', () => {
  it('are the named ones, in order, each with its unit and in plain words', () => {
    const metrics = createMetrics(inventedScenario()).finish();
    expect(metrics.map(({ name }) => name)).toEqual(METRIC_NAMES);
    expect(new Set(METRIC_NAMES).size).toBe(METRIC_NAMES.length);
    for (const { name, label, unit } of metrics) {
      expect(name).toMatch(/^[a-z0-9]+(_[a-z0-9]+)*$/);
      const suffix = { '%': '_pct', 'deg/s': '_deg_s', 'MN m': '_mn_m', 'kN m': '_kn_m', '°C': '_c', '1': '' }[unit];
      expect(name.endsWith(suffix ?? `_${unit.toLowerCase()}`)).toBe(true);
      expect(label).not.toContain('_');
    }
  });

  it('are null where a run never got there', () => {
    const values = metricsOf({ end: 10, channels: () => ({ rotor_speed_rpm: 0 }) });
    for (const name of [
      'first_guard_time_s',
      'first_guard_number',
      'stop_to_feather_s',
      'stop_to_standstill_s',
      'rotor_speed_peak_after_stop_rpm',
      'rotor_speed_settled_at_s',
      'energy_unexplained_pct',
    ]) {
      expect([name, values[name]]).toEqual([name, null]);
    }
    expect(values.trips).toBe(0);
  });
});

describe('the speed metrics', () => {
  it('give mean, spread and peak of a speed that swings by 2 rpm about 10 rpm', () => {
    const values = metricsOf({
      end: 39.99,
      channels: (t) => ({ rotor_speed_rpm: 10 + 2 * Math.sin((2 * Math.PI * t) / 8) }),
    });
    expect(values.rotor_speed_mean_rpm).toBeCloseTo(10, 9);
    // Standard deviation of a sine: amplitude/√2.
    expect(values.rotor_speed_spread_rpm).toBeCloseTo(Math.SQRT2, 9);
    expect(values.rotor_speed_peak_rpm).toBeCloseTo(12, 9);
    expect(values.rotor_speed_overshoot_pct).toBeCloseTo(20, 9);
    // Not settled: it leaves the band to the very end.
    expect(values.rotor_speed_settled_at_s).toBeNull();
  });

  it('give margins to the lowest trip level and to the speed never to be exceeded', () => {
    const values = metricsOf({ end: 10, channels: (t) => ({ rotor_speed_rpm: t === 5 ? 11.4 : 10 }) });
    expect(values.margin_to_trip_rpm).toBeCloseTo(0.6, 9);
    expect(values.margin_to_trip_pct).toBeCloseTo(5, 9);
    expect(values.margin_to_never_exceed_rpm).toBeCloseTo(3.6, 9);
    expect(values.margin_to_never_exceed_pct).toBeCloseTo(24, 9);
  });

  it('refer a generator guard to the rotor where it is the lowest', () => {
    const scenario = inventedScenario();
    const guards = scenario.protection.guards.filter(({ watch }) => watch !== 'rotor overspeed');
    const channels = () => ({ rotor_speed_rpm: 10 });
    const values = metricsOf({
      end: 1,
      channels,
      scenario: { ...scenario, protection: { ...scenario.protection, guards } },
    });
    expect(values.margin_to_trip_rpm).toBeCloseTo(2.5, 9);
    const unguarded = { ...scenario, protection: { ...scenario.protection, guards: [] } };
    const without = metricsOf({ end: 1, channels, scenario: unguarded });
    expect([without.margin_to_trip_rpm, without.rotor_speed_above_trip_s]).toEqual([null, null]);
  });

  it('time the speed above 105 % of rated and above the trip level between frames too', () => {
    // A triangle from 10 rpm at 0 s to 14 rpm at 4 s and back: above 10.5 rpm for 7 s, above 12 rpm for 4 s.
    const values = metricsOf({
      end: 8,
      interval: 0.8,
      channels: (t) => ({ rotor_speed_rpm: 14 - Math.abs(t - 4) }),
    });
    expect(values.rotor_speed_above_105_pct_s).toBeCloseTo(7, 9);
    expect(values.rotor_speed_above_trip_s).toBeCloseTo(4, 9);
  });

  it('find when a dying swing last left 2 % of the final speed', () => {
    // 1 + e^(−t/5): 2 % of 10 rpm is left when 2 e^(−t/5) = 0.2, at 5 ln 10 = 11.51 s.
    const values = metricsOf({ end: 100, channels: (t) => ({ rotor_speed_rpm: 10 + 2 * Math.exp(-t / 5) }) });
    expect(values.rotor_speed_settled_at_s).toBeCloseTo(5 * Math.log(10), 1);
    const steady = metricsOf({ end: 100, channels: () => ({ rotor_speed_rpm: 10 }) });
    expect(steady.rotor_speed_settled_at_s).toBe(0);
    const idling = metricsOf({ end: 100, channels: (t) => ({ rotor_speed_rpm: t < 50 ? 10 : 0.5 }) });
    expect(idling.rotor_speed_settled_at_s).toBeNull();
  });
});

describe('the pitch metrics', () => {
  it('give travel and reversals as the mean of the blades, a stuck blade counted in', () => {
    // Two blades swing by ±3 deg for 4 periods: 4 · 12 deg of travel, 8 reversals each. The third is stuck.
    const swing = (t: number) => 10 + 3 * Math.sin((2 * Math.PI * t) / 4);
    const values = metricsOf({
      end: 16,
      channels: (t) => ({ pitch_1_deg: swing(t), pitch_2_deg: swing(t), pitch_3_deg: 10 }),
    });
    expect(values.pitch_travel_deg).toBeCloseTo(32, 6);
    expect(values.pitch_reversals).toBeCloseTo(16 / 3, 9);
  });

  it('count no reversal in a shiver of less than 0.1 deg', () => {
    const values = metricsOf({ end: 16, channels: (t) => ({ pitch_1_deg: 10 + t + 0.045 * Math.sin(40 * t) }) });
    expect(values.pitch_reversals).toBe(0);
  });

  it('give the fastest rate either way, the 95 % rate and the share of time in motion', () => {
    // Blade 1 turns at 0 to −8 deg/s evenly for half the time, the others rest.
    const values = metricsOf({
      end: 20,
      channels: (t) => ({ pitch_rate_1_deg_s: t < 10 ? 0 : -0.8 * (t - 10) }),
    });
    expect(values.pitch_rate_max_deg_s).toBeCloseTo(8, 9);
    // Of all blade-seconds 5 % are the upper 30 % of blade 1's moving half (0.5/3 · 0.3 = 0.05): above 0.7 · 8 deg/s.
    expect(values.pitch_rate_p95_deg_s).toBeCloseTo(5.6, 1);
    // Above 0.1 deg/s from 10.125 s to 20 s, on one of three blades.
    expect(values.pitch_duty_pct).toBeCloseTo((100 * 9.875) / 20 / 3, 6);
  });

  it('give a rate of zero to blades that never move', () => {
    const values = metricsOf({ end: 5, channels: () => ({ pitch_1_deg: 4 }) });
    expect([values.pitch_rate_max_deg_s, values.pitch_rate_p95_deg_s, values.pitch_duty_pct]).toEqual([0, 0, 0]);
  });
});

describe('the power metrics', () => {
  it('give mean and energy: 1800 kW for an hour is 1800 kWh', () => {
    const values = metricsOf({ end: 3600, interval: 1, channels: () => ({ electrical_power_kw: 1800 }) });
    expect(values.power_mean_kw).toBeCloseTo(1800, 9);
    expect(values.power_spread_kw).toBeCloseTo(0, 9);
    expect(values.energy_kwh).toBeCloseTo(1800, 6);
  });

  it('count a fall below 90 % of rated once, and only in power production', () => {
    const power = (t: number) => (t % 20 < 10 ? 2000 : t % 1 < 0.5 ? 1790 : 1850);
    const dips = metricsOf({ end: 60, channels: (t) => ({ electrical_power_kw: power(t), state: PRODUCTION }) });
    expect(dips.power_dips).toBe(3);
    const stopped = metricsOf({
      end: 60,
      channels: (t) => ({ electrical_power_kw: power(t), state: t < 25 ? PRODUCTION : EMERGENCY_STOP }),
    });
    expect(stopped.power_dips).toBe(1);
  });
});

describe('the load metrics', () => {
  it('give a load that swings once a second its own range', () => {
    // 1 Hz equivalent of one cycle of range 6 MN m (and 100 kN m) a second, whatever the exponent; the ends cost half a
    // cycle, hence the tolerance of 0.1 %.
    const values = metricsOf({
      end: 600,
      channels: (t) => ({
        tower_base_moment_mn_m: 40 + 3 * Math.sin(2 * Math.PI * t),
        shaft_torque_kn_m: 50 * Math.sin(2 * Math.PI * t),
      }),
    });
    expect(Number(values.tower_base_moment_equivalent_mn_m) / 6).toBeCloseTo(1, 3);
    expect(Number(values.shaft_torque_equivalent_kn_m) / 100).toBeCloseTo(1, 3);
  });

  it('weigh ranges by the fourth power', () => {
    // Every 16 s one half-swing out and back of 8: range 8 once in 16 s is (8⁴/16)^¼ = 4.
    const values = metricsOf({
      end: 16 * 100,
      interval: 8,
      channels: (t) => ({ shaft_torque_kn_m: t % 16 === 8 ? 8 : 0 }),
    });
    expect(values.shaft_torque_equivalent_kn_m).toBeCloseTo(4, 9);
  });

  it('give the largest deflection either way', () => {
    const values = metricsOf({ end: 3, channels: (t) => ({ tower_deflection_m: t === 2 ? -0.7 : 0.5 }) });
    expect(values.tower_deflection_max_m).toBe(0.7);
  });
});

describe('the stop metrics', () => {
  // A trip at 20 s; the blades go from 10 deg at 8 deg/s to feather, the rotor still gains 1 rpm, then stops at 45 s.
  const pitch = (t: number) => Math.min(90, 10 + 8 * Math.max(0, t - 20));
  const speed = (t: number) => (t < 20 ? 12 : t < 22 ? 12 + 0.5 * (t - 20) : Math.max(0, 13 * (1 - (t - 22) / 23)));
  const blades = (t: number) => ({ pitch_1_deg: pitch(t), pitch_2_deg: pitch(t), pitch_3_deg: pitch(t) });
  const channels = (t: number): ChannelValues => ({
    ...blades(t),
    rotor_speed_rpm: speed(t),
    generator_speed_rpm: 100 * speed(t),
    state: t < 20 ? PRODUCTION : EMERGENCY_STOP,
    active_guard: t < 20 ? 0 : 2,
    brake_temperature_c: 20 + Math.max(0, t - 30),
  });
  const events: RunEvent[] = [
    { time: 20, kind: 'guard', text: 'rotor: 12.01 rpm above 12 rpm' },
    { time: 20, kind: 'stop', text: 'stop sequence "stop" begins' },
    { time: 45, kind: 'standstill', text: 'brake holds the shaft at standstill' },
  ];

  it('time a trip from the guard to feather and standstill, with the peak speed on the way', () => {
    const values = metricsOf({ end: 60, channels, events });
    expect(values.trips).toBe(1);
    expect(values.first_guard_number).toBe(2);
    expect(values.first_guard_time_s).toBe(20);
    // 88 deg is reached after 78/8 = 9.75 s.
    expect(values.stop_to_feather_s).toBeCloseTo(9.75, 2);
    expect(values.stop_to_feather_moving_s).toBeCloseTo(9.75, 2);
    expect(values.stop_to_standstill_s).toBe(25);
    expect(values.rotor_speed_peak_after_stop_rpm).toBeCloseTo(13, 9);
    expect(values.brake_temperature_peak_c).toBeCloseTo(50, 9);
  });

  it('tell when the first guard fired, and how many did in all', () => {
    const again: RunEvent = { time: 50, kind: 'guard', text: 'grid: lost' };
    const values = metricsOf({ end: 60, channels, events: [...events, again] });
    expect([values.trips, values.first_guard_time_s]).toEqual([2, 20]);
  });

  it('forget a higher speed before the trip', () => {
    const values = metricsOf({
      end: 60,
      channels: (t) => ({ ...channels(t), rotor_speed_rpm: t < 10 ? 14 : speed(t) }),
      events,
    });
    expect(values.rotor_speed_peak_rpm).toBeCloseTo(14, 9);
    expect(values.rotor_speed_peak_after_stop_rpm).toBeCloseTo(13, 9);
  });

  it('tell the blades that move from the one that the scenario makes stick', () => {
    const scenario = inventedScenario({
      events: [{ trigger: { kind: 'time', at: 5 }, action: { kind: 'pitch stuck', blades: [1] } }],
    });
    const values = metricsOf({ end: 60, channels: (t) => ({ ...channels(t), pitch_2_deg: 10 }), events, scenario });
    expect(values.stop_to_feather_s).toBeNull();
    expect(values.stop_to_feather_moving_s).toBeCloseTo(9.75, 2);
  });

  it('time a normal stop from its state, without a trip', () => {
    const NORMAL_STOP = 3;
    const values = metricsOf({
      end: 60,
      channels: (t) => ({ ...channels(t), active_guard: 0, state: t < 20 ? PRODUCTION : NORMAL_STOP }),
    });
    expect([values.trips, values.first_guard_time_s]).toEqual([0, null]);
    expect(values.stop_to_feather_s).toBeCloseTo(9.75, 2);
  });

  it('give the energy that the brake takes from the shaft it sits on', () => {
    // 10 kN m on the high-speed shaft while it slows evenly from 1200 rpm to rest in 10 s: 10 kN m · 62.83 rad/s · 10 s.
    const braked = (t: number) => ({ brake_torque_kn_m: 10, generator_speed_rpm: 1200 - 120 * t });
    const fast = metricsOf({ end: 10, channels: braked });
    expect(fast.brake_energy_kj).toBeCloseTo(10 * 20 * Math.PI * 10, 6);
    // On the low-speed shaft the same torque meets a hundredth of the speed.
    const turbine = { ...TURBINE, brake: { ...TURBINE.brake, side: 'low-speed shaft' as const } };
    const slow = metricsOf({
      end: 10,
      channels: (t) => ({ brake_torque_kn_m: 10, rotor_speed_rpm: 12 - 1.2 * t }),
      scenario: inventedScenario({ turbine }),
    });
    expect(slow.brake_energy_kj).toBeCloseTo(0.2 * Math.PI * 100, 6);
  });
});

describe('the energy account', () => {
  it('sets the worst unexplained energy against what the wind turned over', () => {
    // 1000 kN m at 60/2π rpm (1 rad/s) for 10 s are 10 000 kJ; −5 kJ of them is 0.05 %.
    const values = metricsOf({
      end: 10,
      channels: (t) => ({
        aerodynamic_torque_kn_m: t < 5 ? 1000 : -1000,
        rotor_speed_rpm: 30 / Math.PI,
        energy_error_kj: t === 7 ? -5 : 1,
      }),
    });
    expect(values.energy_unexplained_pct).toBeCloseTo(0.05, 4);
  });
});
