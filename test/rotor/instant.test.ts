import { appendFile, mkdtemp, readdir, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { bladeInstant, instantText } from '../../cli/blade-instant.ts';
import { instantPage, instantPicture } from '../../cli/blade-instant-picture.ts';
import { loadScenario, shippedFolder } from '../../scenarios/disk.ts';
import { writeResult } from '../../scenarios/results.ts';
import { runScenario } from '../../scenarios/run.ts';
import { readStoredResult } from '../../scenarios/stored-result.ts';
import { cachedSurface } from '../../scenarios/surface-cache.ts';

const DEGREE = Math.PI / 180;
const RPM = Math.PI / 30;
let around = '';
const whole = () => join(around, 'whole');
const surface = () => join(around, 'surface');

beforeAll(async () => {
  around = await mkdtemp(join(tmpdir(), 'galehold-blades-'));
  const asked = await loadScenario(join(shippedFolder(), '16-stuck-blade-in-shear.yaml'));
  const short = { ...asked, duration: 6, events: [], limits: [] };
  for (const [folder, model] of [
    [whole(), 'blade element'],
    [surface(), 'surface'],
  ] as const) {
    const scenario = { ...short, rotor: { ...short.rotor, model } };
    const { summary, recording, sections } = runScenario(scenario, cachedSurface(scenario.turbine));
    writeResult(folder, { summary, columns: recording.columns, sections });
  }
});
afterAll(() => rm(around, { recursive: true }));

describe('The summary of a run', () => {
  it('says which rotor ran', async () => {
    const modelOf = async (folder: string) => (await readStoredResult(folder)).summary.provenance.rotorModel;
    expect(await modelOf(whole())).toBe('blade element');
    expect(await modelOf(surface())).toBe('surface');
  });
});

describe('The air at the blades at an instant of a run', () => {
  it('is told at five or more stations of each blade, with triangles that close', async () => {
    const { blades, time, tipRadius } = await bladeInstant(whole(), '3.02 s');
    expect(time).toBe(3);
    expect(tipRadius).toBeCloseTo(65, 3);
    expect(blades).toHaveLength(3);
    for (const { stations, pitch } of blades) {
      expect(stations.length).toBeGreaterThanOrEqual(5);
      for (const s of stations) {
        expect(s.angleOfAttack).toBeCloseTo(s.inflowAngle - s.twist - pitch, 4);
        // The section's own speed at rated, and the wind less what the rotor takes; cone, tilt and flapping change little.
        const turning = s.tangentialSpeed - s.tangentialInduced;
        expect(Math.abs(turning - 12 * RPM * s.radius)).toBeLessThan(3);
        expect(Math.abs(s.normalSpeed + s.axialInduced - 20)).toBeLessThan(4);
      }
    }
  });

  it('differs from blade to blade in sheared wind: the upright one meets more wind', async () => {
    const { blades } = await bladeInstant(whole(), '3 s');
    const upright = [...blades].sort((a, b) => Math.cos(b.azimuth) - Math.cos(a.azimuth));
    const tipWind = upright.map(({ stations }) => {
      const tip = stations[stations.length - 1];
      return tip.normalSpeed + tip.axialInduced;
    });
    expect(tipWind[0]).toBeGreaterThan(tipWind[2] + 1);
    const azimuths = blades.map(({ azimuth }) => azimuth / DEGREE);
    expect((azimuths[1] - azimuths[0] + 360) % 360).toBeCloseTo(120, 3);
  });

  it('is drawn and listed', async () => {
    const instant = await bladeInstant(whole(), '3 s');
    const text = instantText(instant);
    expect(text).toContain('blade 3: azimuth');
    expect(text.split('\n').filter((line) => /^[123] {2}/.test(line))).toHaveLength(21);
    expect(instantPicture(instant).match(/% of the tip radius/g)).toHaveLength(15);
    expect(instantPage(instant)).toMatch(/<!doctype html>[\s\S]*angles of stall[\s\S]*blade 3: azimuth/);
    expect(`${text}${instantPage(instant)}`).not.toMatch(/NaN|undefined|Infinity/);
  });
});

describe('The air at the blades is refused', () => {
  it.each([
    ['90 s', /lies outside the run, which was recorded from 0 s to 6 s/],
    ['3', /3 needs a unit, for example "3 s"/],
    ['soon', /time/],
  ])('at %s', async (time, message) => {
    await expect(bladeInstant(whole(), time)).rejects.toThrow(message);
  });

  it('of a run with the surface rotor, which leaves no such files', async () => {
    expect(await readdir(surface())).not.toContain('sections.csv');
    await expect(bladeInstant(surface(), '3 s')).rejects.toThrow(/only a run with the blade-element rotor/);
    await expect(bladeInstant(join(around, 'none'), '3 s')).rejects.toThrow(/holds no sections.csv/);
  });

  it('from a file that was cut, with its line', async () => {
    await appendFile(join(whole(), 'sections.csv'), '6.05,1,2');
    await expect(bladeInstant(whole(), '3 s')).rejects.toThrow(/sections.csv:123:1: 3 values against/);
  });
});
