/**
 * Check 17: after a pitch step torque and thrust overshoot and settle in a time of the order of R/U (Øye; Hansen,
 * *Aerodynamics of Wind Turbines*; order of magnitude only). Without the dynamic wake there is no overshoot.
 */
import { describe, expect, it } from 'vitest';
import { BLADE_ELEMENT_DEFAULTS, BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { STRAIGHT } from '../rotor/blade-element-run.ts';
import { driveAlone } from '../rotor/rotor-alone.ts';

const DEGREE = Math.PI / 180;
const WIND = 10;
const SPEED = 1.15;
const STEP_AT = 5;
const STEP_LENGTH = 0.5;
const { radius } = STRAIGHT.rotor;
const RIGID: Turbine = { ...STRAIGHT, rotor: { ...STRAIGHT.rotor, structure: undefined } };

/** Torque or thrust after a fast pitch step, as a share of the way from the old steady value to the new one. */
function response(wake: 'dynamic' | 'equilibrium', of: 'torque' | 'thrust', from: number, to: number) {
  const rotor = new BladeElementRotor(RIGID, { ...BLADE_ELEMENT_DEFAULTS, wake });
  const before = steadyRotor(rotor.blade, WIND, SPEED, from * DEGREE, STRAIGHT.airDensity)[of];
  const after = steadyRotor(rotor.blade, WIND, SPEED, to * DEGREE, STRAIGHT.airDensity)[of];
  const series: { t: number; share: number }[] = [];
  driveAlone(rotor, {
    wind: steadyWind({ speed: WIND }),
    speed: SPEED,
    pitch: (t) => (from + (to - from) * Math.min(Math.max((t - STEP_AT) / STEP_LENGTH, 0), 1)) * DEGREE,
    duration: 65,
    step: wake === 'dynamic' ? 0.05 : 0.25,
    states: rotor.settledStates(WIND, SPEED, from * DEGREE),
    watch: (t, loads) => series.push({ t: t - STEP_AT, share: (loads[of] - before) / (after - before) }),
  });
  return series;
}

describe.each([
  ['thrust', 0, 3],
  ['thrust', 3, 0],
  ['torque', 2, 5],
  ['torque', 5, 2],
] as const)('The %s after a pitch step from %s to %s degrees', (of, from, to) => {
  const dynamic = response('dynamic', of, from, to);
  const peak = Math.max(...dynamic.map(({ share }) => share));

  it('overshoots with the dynamic wake', () => {
    expect(dynamic.filter(({ t }) => t < 0).every(({ share }) => Math.abs(share) < 1e-6)).toBe(true);
    expect(peak).toBeGreaterThan(1.15);
  });

  it('does not overshoot where the wake is in equilibrium', () => {
    const peakInEquilibrium = Math.max(...response('equilibrium', of, from, to).map(({ share }) => share));
    expect(peakInEquilibrium).toBeLessThan(1.001);
    expect(peakInEquilibrium).toBeGreaterThan(0.999);
  });

  it('decays in a time of the order of R/U', () => {
    const peakAt = dynamic.find(({ share }) => share === peak)?.t ?? Number.NaN;
    const faded = dynamic.find(({ t, share }) => t > peakAt && share - 1 < (peak - 1) / Math.E)?.t ?? Number.NaN;
    const decay = (faded - peakAt) / (radius / WIND);
    expect(decay).toBeGreaterThan(0.1);
    expect(decay).toBeLessThan(3);
    expect(Math.abs(dynamic[dynamic.length - 1].share - 1)).toBeLessThan(0.01);
  });

  it('leaves the slow stage’s part, 1 − k = 0.4 of the change, when the fast stage is over', () => {
    // Without the slow stage (k = 1) less than a sixth would be left after R/U.
    const left = dynamic.find(({ t }) => t >= radius / WIND)?.share ?? Number.NaN;
    expect((left - 1) / (peak - 1)).toBeGreaterThan(0.25);
    expect((left - 1) / (peak - 1)).toBeLessThan(0.5);
  });
});
