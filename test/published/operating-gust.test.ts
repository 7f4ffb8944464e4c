/**
 * Check 6: the extreme operating gust of IEC 61400-1, edition 3, class I, turbulence A, at 25 m/s for a 42 m rotor.
 *
 * Working, from the standard's formulas:
 *   σ₁ = 0.16 (0.75 · 25 + 5.6) = 0.16 · 24.35 = 3.896 m/s
 *   V_e1 = 0.8 · 1.4 · 50 = 56 m/s, so 1.35 (56 − 25) = 41.85 m/s
 *   Λ₁ = 42 m (hub above 60 m), so 3.3 · 3.896/(1 + 0.1 · 42/42) = 12.8568/1.1 = 11.688 m/s: the smaller, V_gust
 *   peak, t = 10.5/2 = 5.25 s: sin(3π/2) = −1, 1 − cos π = 2, so 25 + 2 · 0.37 · 11.688 = 33.649 m/s
 *   dip: with u = πt/T, d/du [sin 3u (1 − cos 2u)] = d/du [2 sin 3u sin²u] = 0 gives 3 cos 3u sin u + 2 sin 3u cos u = 0,
 *   u = 0.73542, t = 10.5 · 0.73542/π = 2.458 s: 25 − 0.37 · 11.688 · sin(2.20626)(1 − cos 1.47084) = 21.87 m/s
 */
import { describe, expect, it } from 'vitest';
import { type OperatingGust, operatingGust, operatingGustSize } from '../../sim/wind/operating-gust.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';

const GUST: OperatingGust = {
  edition: 3,
  windClass: 'I',
  turbulence: 'A',
  hubWind: 25,
  rotorDiameter: 42,
  hubHeight: 80,
  start: 0,
};

/** Lowest or highest wind of a field on a fine grid of instants. */
function extreme(speed: (t: number) => number, from: number, to: number, sign: 1 | -1) {
  let best = { time: from, speed: speed(from) };
  for (let t = from; t <= to; t += 1e-3) {
    if (sign * speed(t) > sign * best.speed) best = { time: t, speed: speed(t) };
  }
  return best;
}

describe('the extreme operating gust of IEC 61400-1 edition 3 (class I, turbulence A, 25 m/s, rotor 42 m)', () => {
  const wind = sumWind([steadyWind({ speed: 25 }), operatingGust(GUST)]);

  it('has σ₁ = 3.896 m/s and a gust of 11.688 m/s', () => {
    const size = operatingGustSize(GUST);
    expect(size.turbulenceDeviation).toBeCloseTo(3.896, 6);
    expect(size.gust).toBeCloseTo(11.688, 6);
  });

  it('peaks at 33.65 m/s, 5.25 s after it starts', () => {
    const peak = extreme(wind.rotorMean, 0, 10.5, 1);
    expect(peak.speed).toBeCloseTo(33.65, 2);
    expect(peak.time).toBeCloseTo(5.25, 2);
  });

  it('dips to 21.87 m/s at 2.46 s, and again as long before its end', () => {
    const first = extreme(wind.rotorMean, 0, 5, -1);
    expect(first.speed).toBeCloseTo(21.87, 2);
    expect(first.time).toBeCloseTo(2.46, 2);
    const second = extreme(wind.rotorMean, 5.5, 10.5, -1);
    expect(second.speed).toBeCloseTo(first.speed, 5);
    expect(second.time).toBeCloseTo(10.5 - first.time, 2);
  });

  it('is held down to 1.35 times the room below the one-year extreme where the wind is close to it', () => {
    // Class III: V_e1 = 0.8 · 1.4 · 37.5 = 42 m/s; at 40 m/s, 1.35 (42 − 40) = 2.7 m/s, far below 3.3 σ₁/1.1 = 17.1 m/s.
    expect(operatingGustSize({ ...GUST, windClass: 'III', hubWind: 40 }).gust).toBeCloseTo(2.7, 6);
  });

  it('grows with hub height up to 60 m, since Λ₁ does', () => {
    // Λ₁ = 0.7 · 30 = 21 m: 12.8568/(1 + 0.1 · 42/21) = 12.8568/1.2 = 10.714 m/s
    expect(operatingGustSize({ ...GUST, hubHeight: 30 }).gust).toBeCloseTo(10.714, 6);
    // Λ₁ = 0.7 · 55 = 38.5 m: 12.8568/(1 + 4.2/38.5) = 12.8568/1.109091 = 11.592 m/s
    expect(operatingGustSize({ ...GUST, hubHeight: 55 }).gust).toBeCloseTo(11.592, 3);
    expect(operatingGustSize({ ...GUST, hubHeight: 60 }).gust).toBeCloseTo(11.688, 6);
  });
});

describe('the extreme operating gust of IEC 61400-1 edition 4', () => {
  it('is the gust of edition 3 in the categories that both know', () => {
    for (const turbulence of ['A', 'B', 'C'] as const) {
      expect(operatingGustSize({ ...GUST, edition: 4, turbulence })).toEqual(
        operatingGustSize({ ...GUST, turbulence }),
      );
    }
  });

  it('knows category A+ with a reference intensity of 0.18', () => {
    // σ₁ = 0.18 · 24.35 = 4.383 m/s, V_gust = 3.3 · 4.383/1.1 = 13.149 m/s
    const size = operatingGustSize({ ...GUST, edition: 4, turbulence: 'A+' });
    expect(size.turbulenceDeviation).toBeCloseTo(4.383, 6);
    expect(size.gust).toBeCloseTo(13.149, 6);
    expect(() => operatingGust({ ...GUST, edition: 3, turbulence: 'A+' })).toThrow(/A\+ came with edition 4/);
  });

  it('takes the site’s own values in class S', () => {
    // σ₁ = 0.2 · 24.35 = 4.87; 3.3 · 4.87/1.1 = 14.61; 1.35 (0.8 · 1.4 · 30 − 25) = 1.35 · 8.6 = 11.61 is the smaller.
    const site = { ...GUST, windClass: 'S', turbulence: 'S', referenceWind: 30, turbulenceIntensity: 0.2 } as const;
    expect(operatingGustSize(site).gust).toBeCloseTo(11.61, 6);
    expect(() => operatingGust({ ...site, referenceWind: undefined })).toThrow(/class S needs its own reference wind/);
    expect(() => operatingGust({ ...site, turbulenceIntensity: undefined })).toThrow(/needs its own turbulence/);
  });

  it('is refused where the mean wind is at or above the one-year extreme of the class', () => {
    expect(() => operatingGust({ ...GUST, windClass: 'III', hubWind: 42 })).toThrow(/one-year extreme.*42\.0 m\/s/);
  });
});
