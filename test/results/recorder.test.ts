import { describe, expect, it } from 'vitest';
import { createRecorder } from '../../scenarios/recorder.ts';
import { CHANNELS } from '../../sim/channels.ts';
import { type ChannelValues, frames, inventedScenario } from './invented-scenario.ts';

function record(
  end: number,
  interval: number,
  wanted: { rate: number; channels?: readonly string[] },
  channels: (time: number) => ChannelValues = (t) => ({ rotor_speed_rpm: 10 + t }),
) {
  const recorder = createRecorder(inventedScenario({ record: wanted, duration: end }));
  for (const frame of frames(end, interval, channels)) recorder.frame(frame);
  const { columns, rate } = recorder.finish();
  return { rate, names: columns.map(({ name }) => name), of: (name: string) => columns.find((c) => c.name === name) };
}

describe('the recorder', () => {
  it('keeps every n-th frame for the rate asked for, the first and the last among them', () => {
    const run = record(1, 0.01, { rate: 20 });
    const time = [...(run.of('time_s')?.values ?? [])];
    expect(time).toHaveLength(21);
    expect(time.slice(0, 3)).toEqual([0, 0.05, 0.1]);
    expect(time.at(-1)).toBe(1);
    expect(run.rate).toBeCloseTo(20, 9);
  });

  it('adds the last frame where it falls between', () => {
    const run = record(0.13, 0.01, { rate: 20 });
    expect([...(run.of('time_s')?.values ?? [])]).toEqual([0, 0.05, 0.1, 0.13]);
    expect(run.of('rotor_speed_rpm')?.values.at(-1)).toBeCloseTo(10.13, 9);
  });

  it('tells the true rate where whole frames allow no better, and never records more often than frames come', () => {
    expect(record(1, 0.01, { rate: 30 }).rate).toBeCloseTo(100 / 3, 9);
    const fast = record(1, 0.01, { rate: 1000 });
    expect(fast.rate).toBeCloseTo(100, 9);
    expect(fast.of('time_s')?.values).toHaveLength(101);
  });

  it('makes room for a run that lasts longer than the scenario says', () => {
    const recorder = createRecorder(inventedScenario({ record: { rate: 100 }, duration: 0.1 }));
    for (const frame of frames(3, 0.01, (t) => ({ rotor_speed_rpm: t }))) recorder.frame(frame);
    const { columns } = recorder.finish();
    expect(columns[0].values).toHaveLength(301);
    expect(columns[0].values.at(-1)).toBe(3);
    expect(columns.find(({ name }) => name === 'rotor_speed_rpm')?.values.at(-1)).toBeCloseTo(3, 9);
  });

  it('records values in the units that files show', () => {
    const values = { rotor_speed_rpm: 12.5, pitch_2_deg: -1.5, electrical_power_kw: 1950, brake_temperature_c: 21.5 };
    const run = record(1, 0.1, { rate: 10 }, () => values);
    for (const [name, value] of Object.entries(values)) expect(run.of(name)?.values[3]).toBeCloseTo(value, 9);
    expect(run.of('pitch_2_deg')).toMatchObject({ label: 'Pitch, blade 2', unit: 'deg' });
  });

  it('records all channels, or the chosen ones in their stable order', () => {
    expect(record(1, 0.1, { rate: 10 }).names).toEqual(['time_s', ...CHANNELS.map(({ name }) => name)]);
    const chosen = ['electrical_power_kw', 'wind_hub_m_s', 'electrical_power_kw'];
    expect(record(1, 0.1, { rate: 10, channels: chosen }).names).toEqual([
      'time_s',
      'wind_hub_m_s',
      'electrical_power_kw',
    ]);
  });

  it('refuses a channel that frames do not hold', () => {
    expect(() => record(1, 0.1, { rate: 10, channels: ['rotor_rpm'] })).toThrow(/records rotor_rpm/);
  });
});
