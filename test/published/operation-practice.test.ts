/** Check 15: how a pitch-regulated machine behaves over the wind range. *Common practice*; the demo turbine is invented. */
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { torqueCurveOf } from '../../scenarios/control.ts';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { machineOf } from '../../scenarios/machine.ts';
import { runScenario } from '../../scenarios/run.ts';
import { surfaceOf, surfaceRotor } from '../../sim/aerodynamics/surface-rotor.ts';
import { Trim } from '../../sim/trim.ts';

const scenario = await loadScenario(join(shippedFolder(), '14-storm-stop.yaml'));
const { turbine } = scenario;
const surface = surfaceOf(turbine);

describe('The demo turbine', () => {
  const trim = new Trim(turbine, surfaceRotor(surface));
  const curve = torqueCurveOf(scenario.controller, machineOf(turbine));
  const winds = Array.from({ length: 42 }, (_, i) => 4 + 0.5 * i);
  const points = winds.map((wind) => trim.at(wind, curve));
  const partial = points.filter((point) => point.region === 'partial');
  const rated = points.filter((point) => point.region === 'rated');

  it('keeps its blades at fine pitch from near cut-in to rated', () => {
    expect(partial[0].windSpeed).toBe(4);
    for (const point of partial) expect(point.pitch).toBe(turbine.ratings.finePitch);
  });

  it('turns them further towards feather the stronger the wind above rated', () => {
    expect(rated.at(-1)?.windSpeed).toBe(24.5);
    for (let i = 1; i < rated.length; i++) expect(rated[i].pitch).toBeGreaterThan(rated[i - 1].pitch);
  });

  it('gains speed and power with wind below rated, and keeps both above', () => {
    for (let i = 1; i < partial.length; i++) {
      expect(partial[i].rotorSpeed).toBeGreaterThan(partial[i - 1].rotorSpeed);
      expect(partial[i].power).toBeGreaterThan(partial[i - 1].power);
    }
    for (const point of rated) {
      expect(point.rotorSpeed).toBe(turbine.ratings.rotorSpeed);
      expect(point.power / turbine.ratings.power).toBeCloseTo(1, 6);
    }
  });

  it('feels its largest thrust around rated wind', () => {
    const largest = points.reduce((a, b) => (b.thrust > a.thrust ? b : a));
    const firstRated = rated[0].windSpeed;
    expect(Math.abs(largest.windSpeed - firstRated)).toBeLessThanOrEqual(1);
  });

  it('stands with its blades feathered and its brake on once the storm is past cut-out', () => {
    const { summary, recording } = runScenario(scenario, surface);
    const last = (name: string) => recording.columns.find((column) => column.name === name)?.values.at(-1);
    expect(summary.states.at(-1)?.state).toBe('parked');
    expect(last('pitch_1_deg')).toBeGreaterThan(85);
    expect(Math.abs(last('rotor_speed_rpm') ?? Number.NaN)).toBeLessThan(0.05);
    expect(summary.events.some((event) => event.kind === 'standstill')).toBe(true);
    expect(summary.events.some((event) => event.text === 'brake released')).toBe(false);
  });
});
