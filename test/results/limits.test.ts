import { describe, expect, it } from 'vitest';
import { createLimits } from '../../scenarios/limits.ts';
import type { LimitData } from '../../scenarios/scenario.ts';
import type { Metric } from '../../scenarios/summary.ts';
import { type ChannelValues, frames, inventedScenario } from './invented-scenario.ts';

const RPM = Math.PI / 30;
const SPEED = 'rotor_speed_rpm';

type Limit = Partial<LimitData> & Pick<LimitData, 'channel'>;

/** The verdicts on a run of 100 s. */
function judge(limits: readonly Limit[], channels: (time: number) => ChannelValues, metrics: readonly Metric[] = []) {
  const wholeRun = { from: 0, to: 100, relation: 'below', bound: 0 } as const;
  const limitsOfRun = createLimits(inventedScenario({ limits: limits.map((limit) => ({ ...wholeRun, ...limit })) }));
  for (const frame of frames(100, 0.1, channels)) limitsOfRun.frame(frame);
  return limitsOfRun.finish(metrics);
}

function measured(limit: Limit, channels: (time: number) => ChannelValues) {
  const [{ value, unit }] = judge([limit], channels);
  return { value, unit };
}

/** 8 rpm to 13 rpm over 100 s. */
const climb = (t: number): ChannelValues => ({ [SPEED]: 8 + t / 20 });
/** 10 rpm with a swing of 2 rpm every 10 s. */
const swing = (t: number): ChannelValues => ({ [SPEED]: 10 + 2 * Math.sin((2 * Math.PI * t) / 10) });

describe('a limit on a channel', () => {
  it('holds strictly below its bound, with the margin that is left', () => {
    const [holds, atBound, broken] = judge(
      [13.5, 13, 12.5].map((bound) => ({ channel: 'tower_deflection_m', statistic: 'max', bound })),
      (t) => ({ tower_deflection_m: t === 50 ? 13 : 1 }),
    );
    expect([holds.holds, holds.value, holds.margin]).toEqual([true, 13, 0.5]);
    expect([atBound.holds, atBound.margin]).toEqual([false, 0]);
    expect([broken.holds, broken.margin]).toEqual([false, -0.5]);
  });

  it('holds strictly above its bound where that is asked', () => {
    const limits = [7.9, 8.1].map((bound) => ({ channel: SPEED, statistic: 'min', relation: 'above', bound }) as const);
    const [holds, broken] = judge(limits, climb);
    expect(holds.holds).toBe(true);
    expect(holds.margin).toBeCloseTo(0.1, 9);
    expect(broken.holds).toBe(false);
    expect(broken.margin).toBeCloseTo(-0.1, 9);
  });

  it('knows every statistic in the unit that files show', () => {
    const level = 12 * RPM;
    const cases: [Limit, (t: number) => ChannelValues, number, string][] = [
      [{ channel: SPEED, statistic: 'max' }, climb, 13, 'rpm'],
      [{ channel: SPEED, statistic: 'min' }, climb, 8, 'rpm'],
      [{ channel: SPEED, statistic: 'mean' }, climb, 10.5, 'rpm'],
      [{ channel: SPEED, statistic: 'final' }, climb, 13, 'rpm'],
      // 12 rpm is passed at 80 s.
      [{ channel: SPEED, statistic: 'time above', level }, climb, 20, 's'],
      [{ channel: SPEED, statistic: 'time below', level }, climb, 80, 's'],
      // 10 swings of four times 2 rpm.
      [{ channel: SPEED, statistic: 'travel' }, swing, 80, 'rpm'],
      [{ channel: SPEED, statistic: 'count', level: 11 * RPM }, swing, 10, '1'],
      [{ channel: SPEED, statistic: 'count', level: 12.5 * RPM }, swing, 0, '1'],
      // 9½ cycles of range 4 rpm and half cycles of 2 rpm at the ends, over 100 s.
      [{ channel: SPEED, statistic: 'rainflow', exponent: 1 }, swing, (9.5 * 4 + 2 * 0.5 * 2) / 100, 'rpm'],
    ];
    for (const [limit, channels, expected, unit] of cases) {
      const result = measured(limit, channels);
      expect([limit.statistic, result.unit]).toEqual([limit.statistic, unit]);
      expect(result.value, limit.statistic).toBeCloseTo(expected, 1);
    }
  });

  it('takes spread, travel and rainflow of a temperature as differences, its mean as a temperature', () => {
    const warm = (t: number): ChannelValues => ({ brake_temperature_c: 100 + 10 * Math.sin((2 * Math.PI * t) / 10) });
    expect(measured({ channel: 'brake_temperature_c', statistic: 'mean' }, warm).value).toBeCloseTo(100, 6);
    expect(measured({ channel: 'brake_temperature_c', statistic: 'spread' }, warm).value).toBeCloseTo(7.07, 1);
    expect(measured({ channel: 'brake_temperature_c', statistic: 'travel' }, warm).value).toBeCloseTo(400, 0);
  });

  it('looks at its window only, both ends included', () => {
    const window = { channel: SPEED, from: 20, to: 60 } as const;
    expect(measured({ ...window, statistic: 'max' }, climb).value).toBeCloseTo(11, 9);
    expect(measured({ ...window, statistic: 'min' }, climb).value).toBeCloseTo(9, 9);
    expect(measured({ ...window, statistic: 'final' }, climb).value).toBeCloseTo(11, 9);
    expect(measured({ ...window, statistic: 'time below', level: 10 * RPM }, climb).value).toBeCloseTo(20, 9);
  });

  it('is broken, without a value, where the run never reaches its window', () => {
    const window = { channel: SPEED, from: 200, to: 300, bound: 99 };
    const limits = judge(
      [
        { ...window, statistic: 'max' },
        { ...window, statistic: 'time above', level: 1 },
      ],
      climb,
    );
    expect(limits.map(({ value, margin, holds, unit }) => [value, margin, holds, unit])).toEqual([
      [null, null, false, 'rpm'],
      [null, null, false, 's'],
    ]);
  });

  it('reads as a sentence', () => {
    const texts = judge(
      [
        { channel: SPEED, statistic: 'max', bound: 13.8 },
        { channel: SPEED, statistic: 'max', bound: 13.8, from: 10, to: 60 },
        { channel: SPEED, statistic: 'time above', level: 12.6 * RPM, bound: 2 },
        { channel: SPEED, statistic: 'count', level: 12.6 * RPM, bound: 3 },
        { channel: 'electrical_power_kw', statistic: 'final', relation: 'above', bound: 3500 },
      ],
      climb,
    ).map(({ text }) => text);
    expect(texts).toEqual([
      'max of rotor speed below 13.8 rpm',
      'max of rotor speed between 10 s and 60 s below 13.8 rpm',
      'time with rotor speed above 12.6 rpm below 2 s',
      'times that rotor speed rises past 12.6 rpm below 3',
      'final electrical power above 3500 kW',
    ]);
  });

  it('is refused where it names no channel or lacks its level', () => {
    expect(() => judge([{ channel: 'rotor_rpm', statistic: 'max' }], climb)).toThrow(/no such channel/);
    expect(() => judge([{ channel: SPEED, statistic: 'time above' }], climb)).toThrow(/needs its level/);
    expect(() => judge([{ channel: SPEED, statistic: 'rainflow' }], climb)).toThrow(/needs its exponent/);
  });
});

describe('a limit on a metric', () => {
  const metric = (value: number | null): Metric => ({
    name: 'stop_to_standstill_s',
    label: 'From trip to standstill',
    group: 'stop',
    value,
    unit: 's',
  });
  const limit = { channel: 'stop_to_standstill_s', bound: 40 };

  it('compares the metric’s value', () => {
    const [result] = judge([limit], climb, [metric(31)]);
    expect(result).toMatchObject({ holds: true, value: 31, margin: 9, unit: 's', statistic: 'metric' });
    expect(result.text).toBe('from trip to standstill below 40 s');
  });

  it('is broken when the machine never got there', () => {
    const [result] = judge([limit], climb, [metric(null)]);
    expect(result).toMatchObject({ holds: false, value: null, margin: null });
  });

  it('is refused when there is no such metric', () => {
    expect(() => judge([{ channel: 'stop_to_nowhere_s' }], climb, [metric(1)])).toThrow(/no such metric/);
  });

  it('keeps its place among limits on channels', () => {
    const results = judge([{ channel: SPEED, statistic: 'max' }, limit, { channel: SPEED, statistic: 'min' }], climb, [
      metric(1),
    ]);
    expect(results.map(({ statistic }) => statistic)).toEqual(['max', 'metric', 'min']);
  });
});
