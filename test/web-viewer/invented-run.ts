/** Invented results for the viewer's tests: a gust from 20 s, the grid lost at its crest, a trip, feathering, the brake. */
import type { ViewedRun } from '../../scenarios/page.ts';
import type { Result } from '../../scenarios/results.ts';
import { CAUTION, type RunEventRecord, SUMMARY_FORMAT, type Summary } from '../../scenarios/summary.ts';

export interface Invention {
  name: string;
  title: string;
  /** deg/s */
  featherRate: number;
  /** Whether blade 3 stays where it is. */
  stuckBlade: boolean;
  /** s */
  duration: number;
}

const RATE = 20;
const RATED_RPM = 12;
const TRIP_RPM = 13.2;
const NEVER_EXCEED_RPM = 15;
const RATED_TORQUE = 3.1e6;
const INERTIA = 1.15e7;
const GRID_LOSS = 24;
const FEATHER = 90;

/** A run whose channels, events and metrics agree with each other; the physics are only plausible. */
export function inventRun(choice: Partial<Invention> = {}): ViewedRun & Result {
  const { name, title, featherRate, stuckBlade, duration } = {
    name: 'grid-loss-at-crest',
    title: 'Grid lost at the crest of a gust',
    featherRate: 6,
    stuckBlade: false,
    duration: 60,
    ...choice,
  };
  const count = Math.round(duration * RATE) + 1;
  const values = (make: () => number) => Float64Array.from({ length: count }, make);
  const channel = Object.fromEntries(CHANNELS.map(({ name: key }) => [key, values(() => 0)]));
  const events: RunEventRecord[] = [
    { time: 20, kind: 'wind', text: 'gust starts' },
    { time: 24, kind: 'wind', text: 'gust at its peak (+8.2 m/s)' },
    { time: GRID_LOSS, kind: 'fault', text: 'grid is lost' },
    { time: 28, kind: 'wind', text: 'gust ends' },
  ];
  const step = 1 / RATE;
  let speed = RATED_RPM;
  const pitch = [9, 9, 9];
  let trip = Number.NaN;
  let braked = Number.NaN;
  let still = Number.NaN;
  let temperature = 15;
  let deflection = 0.45;
  const feathered = [Number.NaN, Number.NaN, Number.NaN];
  for (let index = 0; index < count; index += 1) {
    const time = index * step;
    const wind = 14 + (time > 20 && time < 28 ? 4.1 * (1 - Math.cos((2 * Math.PI * (time - 20)) / 8)) : 0);
    const torque = time < GRID_LOSS ? RATED_TORQUE : RATED_TORQUE * Math.exp(-(time - GRID_LOSS) / 0.12);
    const braking = time - braked > 0.3 && speed > 0 ? 1.4e6 * Math.min(1, (time - braked - 0.3) / 0.6) : 0;
    const heldBy = 9 + 1.25 * (wind - 14);
    const bite = pitch.reduce((sum, angle) => sum + Math.max(-0.35, 1 + (heldBy - angle) / 11), 0) / 3;
    const aerodynamic = RATED_TORQUE * bite * Math.min(1, speed / 8);
    const rates = pitch.map((angle, blade) => {
      if (stuckBlade && blade === 2) return 0;
      if (Number.isNaN(trip)) return Math.max(-5, Math.min(5, 3 * (speed - RATED_RPM) + 1.6 * (heldBy - angle)));
      if (time < trip + 0.2) return 0;
      return angle < FEATHER ? Math.min(featherRate, (time - trip - 0.2) * 15, (FEATHER - angle) * 4) : 0;
    });
    const row = {
      time_s: time,
      wind_hub_m_s: wind,
      rotor_speed_rpm: speed,
      pitch_1_deg: pitch[0],
      pitch_2_deg: pitch[1],
      pitch_3_deg: pitch[2],
      pitch_rate_1_deg_s: rates[0],
      pitch_rate_2_deg_s: rates[1],
      pitch_rate_3_deg_s: rates[2],
      generator_torque_kn_m: torque / 1e3 / 100,
      brake_torque_kn_m: braking / 1e3 / 100,
      brake_temperature_c: temperature,
      electrical_power_kw: (torque * speed * Math.PI * 0.93) / 30e3,
      tower_deflection_m: deflection,
      thrust_kn: 400 * Math.max(0, bite),
    };
    for (const [key, value] of Object.entries(row)) {
      const column = channel[key];
      if (column) column[index] = Number((value ?? Number.NaN).toPrecision(7));
    }
    speed = Math.max(0, speed + (step * 30 * (aerodynamic - torque - braking - 2e4)) / (Math.PI * INERTIA));
    if (braking > 0 && speed < 0.02) speed = 0;
    temperature += step * ((braking * speed * Math.PI) / 30 / 2.2e5 - (temperature - 15) * 0.004);
    deflection += step * (0.45 * Math.max(-0.3, bite) * Math.cos(1.9 * Math.max(0, time - 24)) - deflection) * 2;
    pitch.forEach((angle, blade) => {
      pitch[blade] = Math.min(FEATHER, angle + step * (rates[blade] ?? 0));
      if (Number.isNaN(feathered[blade]) && angle > FEATHER - 2) feathered[blade] = time - trip;
    });
    if (Number.isNaN(trip) && speed > TRIP_RPM) {
      trip = time;
      events.push({ time, kind: 'guard', text: 'rotor overspeed: rotor speed above 13.2 rpm' });
      events.push({ time, kind: 'stop', text: 'stop sequence "emergency" begins' });
      events.push({ time, kind: 'state', text: 'emergency stop' });
    }
    if (Number.isNaN(braked) && time > trip + 2 && speed < 3) {
      braked = time;
      events.push({ time, kind: 'brake', text: 'brake ordered on' });
      events.push({ time: time + 0.3, kind: 'brake', text: 'brake begins to bite' });
    }
    if (Number.isNaN(still) && braked > 0 && speed === 0) {
      still = time;
      events.push({ time, kind: 'standstill', text: 'brake holds the shaft at standstill' });
      events.push({ time: time + step, kind: 'state', text: 'parked' });
    }
  }
  const columns = Object.entries(channel).map(([key, column]) => ({ name: key, values: column }));
  const peak = Math.max(...(channel.rotor_speed_rpm ?? []));
  const hottest = Math.max(...(channel.brake_temperature_c ?? []));
  const reached = (value: number) => (Number.isNaN(value) ? null : value);
  const holds = peak < 14.9;
  const summary: Summary = {
    format: SUMMARY_FORMAT,
    scenario: {
      name,
      title,
      story: 'A gust of 8 m/s in 8 s on 14 m/s; the grid goes at its crest and the safety chain must stop the rotor.',
      turbine: 'Invented 3.6-130',
      controller: 'scheduled PI',
      protection: 'two-level overspeed',
      duration,
    },
    verdict: holds ? 'holds' : 'broken',
    expected: { verdict: 'holds' },
    asExpected: holds,
    limits: [
      limit('max of rotor speed below 14.9 rpm', 'rotor_speed_rpm', 14.9, peak, 'rpm'),
      limit('max of brake temperature below 400 °C', 'brake_temperature_c', 400, hottest, '°C'),
    ],
    metrics: [
      metric('rotor_speed_peak_rpm', 'Highest rotor speed', 'speed', peak, 'rpm'),
      metric(
        'margin_to_never_exceed_rpm',
        'Highest rotor speed below the never-exceed speed by',
        'speed',
        NEVER_EXCEED_RPM - peak,
        'rpm',
      ),
      metric(
        'margin_to_never_exceed_pct',
        'Highest rotor speed below the never-exceed speed by',
        'speed',
        100 - (100 * peak) / NEVER_EXCEED_RPM,
        '%',
      ),
      metric(
        'pitch_rate_max_deg_s',
        'Fastest pitch rate of any blade',
        'pitch',
        Math.max(...(channel.pitch_rate_1_deg_s ?? [])),
        'deg/s',
      ),
      metric('first_guard_time_s', 'First guard fired at', 'stop', reached(trip), 's'),
      metric(
        'stop_to_feather_s',
        'From trip or stop order to all blades within 2 deg of feather',
        'stop',
        reached(Math.max(...feathered)),
        's',
      ),
      metric(
        'stop_to_feather_moving_s',
        'From trip or stop order to the blades that are not stuck within 2 deg of feather',
        'stop',
        reached(feathered[0] ?? Number.NaN),
        's',
      ),
      metric('stop_to_standstill_s', 'From trip or stop order to standstill', 'stop', reached(still - trip), 's'),
      metric('brake_temperature_peak_c', 'Highest brake disc temperature', 'stop', hottest, '°C'),
    ],
    events: events.sort((one, other) => one.time - other.time),
    states: [
      { state: 'power production' as const, from: 0, to: trip },
      { state: 'emergency stop' as const, from: trip, to: Number.isNaN(still) ? duration : still },
      { state: 'parked' as const, from: Number.isNaN(still) ? duration : still, to: duration },
    ].filter(({ from, to }) => to > from),
    levels: [
      { kind: 'rated', text: 'rated', rpm: RATED_RPM },
      { kind: 'trip', text: 'rotor overspeed', rpm: TRIP_RPM },
      { kind: 'trip', text: 'rotor overspeed, second level', rpm: 13.8 },
      { kind: 'never exceed', text: 'never exceed', rpm: NEVER_EXCEED_RPM },
    ],
    channels: CHANNELS,
    recordRate: RATE,
    provenance: {
      version: '0.0.0-invented',
      inputs: [{ path: `${name}.yaml`, sha256: '0'.repeat(64) }],
      overrides: [],
      seed: 1,
      rotorModel: 'surface',
      integrator: 'invented',
      relativeTolerance: null,
      steps: count,
      evaluations: count,
    },
    caution: CAUTION,
  };
  return { name, summary, columns };
}

const CHANNELS = [
  { name: 'time_s', label: 'Time', unit: 's' },
  { name: 'wind_hub_m_s', label: 'Wind speed at the hub', unit: 'm/s' },
  { name: 'rotor_speed_rpm', label: 'Rotor speed', unit: 'rpm' },
  ...[1, 2, 3].map((blade) => ({ name: `pitch_${blade}_deg`, label: `Pitch, blade ${blade}`, unit: 'deg' })),
  ...[1, 2, 3].map((blade) => ({
    name: `pitch_rate_${blade}_deg_s`,
    label: `Pitch rate, blade ${blade}`,
    unit: 'deg/s',
  })),
  { name: 'generator_torque_kn_m', label: 'Generator torque', unit: 'kN m' },
  { name: 'brake_torque_kn_m', label: 'Brake torque on its own shaft', unit: 'kN m' },
  { name: 'brake_temperature_c', label: 'Brake disc temperature', unit: '°C' },
  { name: 'electrical_power_kw', label: 'Electrical power', unit: 'kW' },
  { name: 'tower_deflection_m', label: 'Tower-top deflection', unit: 'm' },
  { name: 'thrust_kn', label: 'Rotor thrust', unit: 'kN' },
];

function metric(name: string, label: string, group: 'speed' | 'pitch' | 'stop', value: number | null, unit: string) {
  return { name, label, group, value, unit };
}

function limit(text: string, channel: string, bound: number, value: number, unit: string) {
  return {
    text,
    channel,
    statistic: 'max',
    relation: 'below' as const,
    bound,
    value,
    unit,
    holds: value < bound,
    margin: bound - value,
  };
}
