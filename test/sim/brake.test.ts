import { describe, expect, it } from 'vitest';
import { channelIndex } from '../../sim/channels.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { eventsOf, RPM, TURBINE, testRun } from './test-turbine.ts';

const STOP = [{ trigger: { kind: 'time', at: 5 }, action: { kind: 'manual stop' } }] as const;

function record(clock: ReturnType<typeof testRun>, names: readonly string[]) {
  const indices = names.map(channelIndex);
  const rows: { time: number; values: number[] }[] = [];
  clock.frames.subscribe(({ time, values }) => rows.push({ time, values: indices.map((i) => values[i]) }));
  const events = eventsOf(clock);
  clock.run();
  return { rows, events };
}

describe('The brake', () => {
  it('gives no torque before its delay and full torque after its ramp', () => {
    const { rows, events } = record(testRun(14, { events: STOP }), ['brake_torque_kn_m']);
    const ordered = events.find((event) => event.text === 'brake ordered on')?.time ?? Number.NaN;
    const torqueAt = (time: number) => rows[Math.round(time / 0.01)].values[0];
    expect(torqueAt(ordered + 0.3)).toBe(0);
    expect(torqueAt(ordered + 0.3 + 0.4)).toBeCloseTo(0.5 * 32e3, 6);
    expect(torqueAt(ordered + 0.3 + 0.81)).toBeCloseTo(32e3, 6);
    expect(events.find((event) => event.text === 'brake begins to bite')?.time).toBeCloseTo(ordered + 0.3, 9);
  });

  it.each(['high-speed shaft', 'low-speed shaft'] as const)('on the %s holds at standstill against a gust', (side) => {
    const turbine: Turbine = {
      ...TURBINE,
      brake: { ...TURBINE.brake, side, torque: side === 'low-speed shaft' ? 3.2e6 : 32e3 },
    };
    const wind = sumWind([steadyWind({ speed: 14 }), cosineGust({ start: 40, duration: 10, amplitude: 8 })]);
    const { rows, events } = record(testRun(14, { turbine, wind, events: STOP }), [
      'generator_speed_rpm',
      'rotor_speed_rpm',
    ]);
    const standstill = events.find((event) => event.kind === 'standstill')?.time ?? Number.NaN;
    expect(standstill).toBeLessThan(40);
    const held = side === 'high-speed shaft' ? 0 : 1;
    for (const { time, values } of rows) if (time > standstill + 0.01) expect(Math.abs(values[held])).toBe(0);
  });

  it('slips again when the torque against it outgrows its capacity', () => {
    // Two blades stuck at their working angle drive against a brake that is too small for a strong gust.
    const turbine: Turbine = { ...TURBINE, brake: { ...TURBINE.brake, torque: 4e3 } };
    const clock = testRun(14, { turbine, events: STOP, duration: 10 });
    const { brake, layout, memoryLayout } = clock.plant;
    const x = new Float64Array(layout.size);
    const memory = new Float64Array(memoryLayout.size);
    x[brake.at] = turbine.brake.ambient;
    brake.start(true, memory);
    expect(brake.margin(1, 0, 3.9e3, x, memory)).toBeGreaterThan(0);
    expect(brake.margin(1, 0, -4.1e3, x, memory)).toBeLessThan(0);
    expect(brake.settle(1, 0, -4.1e3, x, memory)).toBe(false);
    expect(brake.slippingTorque(1, x, memory)).toBe(-4e3);
  });

  it('fades with heat down to its floor', () => {
    const { brake, layout, memoryLayout } = testRun(14).plant;
    const x = new Float64Array(layout.size);
    const memory = new Float64Array(memoryLayout.size);
    brake.start(true, memory);
    const capacityAt = (celsius: number) => {
      x[brake.at] = celsius + 273.15;
      return brake.capacity(10, x, memory);
    };
    expect(capacityAt(350)).toBe(32e3);
    expect(capacityAt(500)).toBeCloseTo(0.75 * 32e3, 6);
    expect(capacityAt(900)).toBeCloseTo(0.5 * 32e3, 6);
  });

  it('warms by the friction heat less what it loses to the air', () => {
    const names = ['brake_temperature_c', 'brake_torque_kn_m', 'generator_speed_rpm'];
    const { rows } = record(testRun(14, { events: STOP, integrator: { kind: 'runge-kutta', step: 0.01 } }), names);
    const { heatCapacity, cooling, ambient } = TURBINE.brake;
    let temperature = ambient;
    for (let i = 1; i < rows.length; i++) {
      const [, torque, speed] = rows[i].values;
      const [, lastTorque, lastSpeed] = rows[i - 1].values;
      const friction = speed === 0 && lastSpeed === 0 ? 0 : 0.5 * (torque * speed + lastTorque * lastSpeed);
      temperature += (0.01 * (friction - cooling * (temperature - ambient))) / heatCapacity;
    }
    expect(rows.at(-1)?.values[0]).toBeCloseTo(temperature, 1);
    expect(temperature).toBeGreaterThan(ambient + 2);
  });

  it('that is out of action never touches the shaft', () => {
    const events = [{ trigger: { kind: 'time', at: 1 }, action: { kind: 'brake absent' } }, ...STOP] as const;
    const { rows } = record(testRun(14, { events }), ['brake_torque_kn_m', 'rotor_speed_rpm']);
    expect(Math.max(...rows.map(({ values }) => Math.abs(values[0])))).toBe(0);
    expect(rows.at(-1)?.values[1]).toBeLessThan(2 * RPM);
  });
});
