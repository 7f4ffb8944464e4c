import { describe, expect, test } from 'vitest';
import type { Summary } from '../../scenarios/summary.ts';
import { DisplayUnits, numberText, numberTextBeside, UNIT_GROUPS } from '../../web-viewer/display-unit.ts';
import { story } from '../../web-viewer/story.ts';
import { inventRun } from './invented-run.ts';

const STOP = inventRun().summary;
const units = new DisplayUnits();
/** As a reader sees it. */
const told = (summary: Summary) => story(summary, units).join(' ').replaceAll('\u00a0', ' ');

function withMetrics(values: Readonly<Record<string, number | null>>): Summary {
  return {
    ...STOP,
    metrics: STOP.metrics.map((metric) =>
      metric.name in values ? { ...metric, value: values[metric.name] ?? null } : metric,
    ),
  };
}

describe('the story of a run', () => {
  test('names the limit that broke and what it came to', () => {
    const [limit] = STOP.limits;
    const value = numberText(limit?.value);
    expect(told(STOP)).toContain(
      `1 of 2 limits is broken: max of rotor speed below 14.9 rpm, but it was ${value} rpm.`,
    );
  });

  test('says which guard fired first, and when', () => {
    const guard = STOP.events.find(({ kind }) => kind === 'guard');
    expect(told(STOP)).toContain(`At ${numberText(guard?.time)} s the safety chain acted: ${guard?.text}.`);
  });

  test('tells a rotor below its never-exceed speed from one above it', () => {
    const below = withMetrics({
      rotor_speed_peak_rpm: 13.8,
      margin_to_never_exceed_rpm: 1.2,
      margin_to_never_exceed_pct: 8,
    });
    const above = withMetrics({
      rotor_speed_peak_rpm: 15.3,
      margin_to_never_exceed_rpm: -0.3,
      margin_to_never_exceed_pct: -2,
    });
    expect(told(below)).toContain(
      'reached 13.8 rpm, 115.0 % of rated: 1.2 rpm (8.0 %) below the speed that it must never exceed',
    );
    expect(told(above)).toContain('0.3 rpm (2.0 %) ABOVE the speed that it must never exceed');
  });

  test('does not claim feather or standstill that never came', () => {
    const text = told(
      withMetrics({ stop_to_feather_s: null, stop_to_feather_moving_s: 11.5, stop_to_standstill_s: null }),
    );
    expect(text).toContain('those not stuck were feathered 11.5 s after');
    expect(text).toContain('The rotor was not held at standstill within the run.');
  });

  test('does not speak of a stop where there was none', () => {
    const text = told({
      ...withMetrics({ stop_to_feather_s: null, stop_to_feather_moving_s: null, stop_to_standstill_s: null }),
      events: [],
    });
    expect(text).toContain('No guard of the safety chain fired.');
    expect(text).not.toMatch(/standstill|brake was|feather/i);
  });

  test('says that a failure was meant, and why', () => {
    const meant: Summary = {
      ...STOP,
      asExpected: true,
      expected: { verdict: 'broken', because: 'the feathering is too slow.' },
    };
    expect(told(meant)).toContain('The author meant it to fail: the feathering is too slow.');
  });
});

describe('numbers on the page', () => {
  test.each([
    [13.5052, 15, '13.51'],
    [0.002914, 15, '0.00'],
    [-0.000303, 15, '0.00'],
    [-4.5, 6, '−4.500'],
    [3600.2, 3600.2, '3600'],
    [Number.NaN, 15, '–'],
    [0, 0, '0'],
  ])('%s in a plot that reaches %s reads %s', (value, largest, text) => {
    expect(numberTextBeside(value, largest)).toBe(text);
  });

  test.each([
    [13.6249, '13.62'],
    [0, '0'],
    [-0.00001, '−1.00e−5'],
    [3.21e-7, '3.21e−7'],
    [0.00012, '0.00012'],
    [1234.5, '1235'],
    [999.96, '1000'],
    [0.012345, '0.01235'],
    [12, '12'],
    [Number.NaN, '–'],
    [null, '–'],
  ])('%s reads %s', (value, text) => {
    expect(numberText(value)).toBe(text);
  });

  test('a temperature takes its offset, a difference of temperatures does not', () => {
    const kelvin = new DisplayUnits();
    const group = UNIT_GROUPS.find(({ label }) => label === 'Temperature');
    if (!group) throw new Error('no temperature group');
    kelvin.choose(group, 1);
    expect(kelvin.value(20, '°C')).toBeCloseTo(293.15, 9);
    expect(kelvin.difference(20, '°C')).toBe(20);
    kelvin.choose(group, 2);
    expect(kelvin.value(20, '°C')).toBeCloseTo(68, 9);
    expect(kelvin.difference(20, '°C')).toBeCloseTo(36, 9);
  });
});
