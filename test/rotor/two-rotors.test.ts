import { expect, it } from 'vitest';
import { surfaceOf, surfaceRotor } from '../../sim/aerodynamics/surface-rotor.ts';
import { channelIndex } from '../../sim/channels.ts';
import type { Clock } from '../../sim/clock.ts';
import { Trim } from '../../sim/trim.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { RPM, testRun, testTorqueCurve } from '../sim/test-turbine.ts';
import { bladeElementRun, STRAIGHT } from './blade-element-run.ts';

const RIGID: Turbine = { ...STRAIGHT, rotor: { ...STRAIGHT.rotor, structure: undefined } };
const wind = sumWind([steadyWind({ speed: 14 }), cosineGust({ start: 3, duration: 6, amplitude: 5 })]);
const same = { wind, duration: 14, integrator: { kind: 'runge-kutta', step: 0.01 } } as const;

function course(clock: Clock): { speed: number; thrust: number; deflection: number }[] {
  const kept: ReturnType<typeof course> = [];
  const [speed, thrust, deflection] = ['rotor_speed_rpm', 'thrust_kn', 'tower_deflection_m'].map(channelIndex);
  clock.frames.subscribe(({ tick, values }) => {
    if (tick % 50 !== 0) return;
    kept.push({ speed: values[speed] / RPM, thrust: values[thrust] / 1e3, deflection: values[deflection] });
  });
  clock.run();
  return kept;
}

it('Rigid straight blades with the wake in equilibrium are the surface rotor, through a gust, a trip and feathering', () => {
  const rotor = surfaceRotor(surfaceOf(RIGID));
  const steady = new Trim(RIGID, rotor).at(14, testTorqueCurve);
  const whole = course(
    testRun(14, {
      ...same,
      turbine: RIGID,
      rotor,
      initial: { steady, state: 'power production', brakeApplied: false },
    }),
  );
  const options = { wake: 'equilibrium', sections: 40 } as const;
  const resolved = course(bladeElementRun({ ...same, windSpeed: 14, turbine: RIGID, options }));
  expect(Math.max(...whole.map(({ speed }) => speed))).toBeGreaterThan(13.5);
  expect(whole[whole.length - 1].speed).toBeLessThan(5);
  whole.forEach(({ speed, thrust, deflection }, i) => {
    expect(resolved[i].speed).toBeCloseTo(speed, 3);
    expect(Math.abs(resolved[i].thrust - thrust)).toBeLessThan(0.05);
    expect(resolved[i].deflection).toBeCloseTo(deflection, 3);
  });
});
