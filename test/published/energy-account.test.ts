/** Check 14: the energy account closes over a gust, a trip and a braked stop, by the first law. */
import { describe, expect, it } from 'vitest';
import { channelIndex } from '../../sim/channels.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { eventsOf, TURBINE, testRun } from '../sim/test-turbine.ts';

const wind = sumWind([steadyWind({ speed: 14 }), cosineGust({ start: 10, duration: 6, amplitude: 7 })]);
const error = channelIndex('energy_error_kj');

describe.each([
  ['odex', { kind: 'odex', relativeTolerance: 1e-6 }],
  ['Runge–Kutta', { kind: 'runge-kutta', step: 0.005 }],
] as const)('With %s the energy account', (_, integrator) => {
  it.each<[Turbine['drivetrain']['kind'], Turbine['brake']['side']]>([
    ['two masses', 'high-speed shaft'],
    ['two masses', 'low-speed shaft'],
    ['rigid', 'high-speed shaft'],
    ['rigid', 'low-speed shaft'],
  ])('closes within 0.01 percent for %s and a brake on the %s', (kind, side) => {
    const turbine: Turbine = {
      ...TURBINE,
      drivetrain: { ...TURBINE.drivetrain, kind },
      brake: { ...TURBINE.brake, side, torque: side === 'low-speed shaft' ? 3.2e6 : 32e3 },
    };
    const clock = testRun(14, { turbine, wind, integrator });
    const events = eventsOf(clock);
    let worst = 0;
    clock.frames.subscribe(({ values }) => {
      worst = Math.max(worst, Math.abs(values[error]));
    });
    clock.run();
    expect(events.some((event) => event.kind === 'guard')).toBe(true);
    expect(events.some((event) => event.kind === 'standstill')).toBe(true);
    const state = new Map(clock.state().map(({ name, value }) => [name, value]));
    const turnedOver = state.get('account: work of the wind') ?? 0;
    expect(turnedOver).toBeGreaterThan(20e6);
    expect(state.get('account: heat in the brake')).toBeGreaterThan(1e5);
    expect(worst).toBeLessThan(1e-4 * turnedOver);
  });
});
