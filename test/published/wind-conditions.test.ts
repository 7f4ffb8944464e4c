/**
 * Check 7: the conditions of IEC 61400-1, editions 3 and 4, against values worked by hand from the standard's formulas.
 * The formulas were written down from memory of the standard (*memory*); each working starts from them.
 *
 * Two machines: class I, category A (V_ref 50 m/s, I_ref 0.16), rotor 42 m, and class III, category B (37.5 m/s, 0.14),
 * rotor 84 m; hubs above 60 m, so Λ₁ = 42 m, D/Λ₁ = 1 and 2.
 */
import { describe, expect, it } from 'vitest';
import { airDensity } from '../../sim/air-density.ts';
import { coherentGust, coherentGustTurn } from '../../sim/wind/coherent-gust.ts';
import { directionChange, directionChangeSize } from '../../sim/wind/direction-change.ts';
import { extremeShear, extremeShearSize } from '../../sim/wind/extreme-shear.ts';
import {
  EXTREME_EXPONENT,
  extremeWindDeviation,
  steadyExtremeWind,
  turbulentExtremeWind,
} from '../../sim/wind/extreme-wind.ts';
import {
  averageWindOf,
  extremeDeviation,
  type IecClass,
  normalDeviation,
  requireMeanWind,
  turbulenceScaleOf,
} from '../../sim/wind/iec-class.ts';
import { profileFactor } from '../../sim/wind/profile.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { sumWind } from '../../sim/wind/sum.ts';

const FIRST = { edition: 3, windClass: 'I', turbulence: 'A', rotorDiameter: 42, hubHeight: 80, start: 0 } as const;
const THIRD = { edition: 4, windClass: 'III', turbulence: 'B', rotorDiameter: 84, hubHeight: 80, start: 0 } as const;
const DEGREE = Math.PI / 180;

describe('the normal turbulence model (NTM)', () => {
  // σ₁ = I_ref (0.75 V_hub + 5.6)
  it.each([
    { machine: FIRST, wind: 10, due: 2.096 }, // 0.16 (7.5 + 5.6) = 0.16 · 13.1
    { machine: FIRST, wind: 20, due: 3.296 }, // 0.16 (15 + 5.6) = 0.16 · 20.6
    { machine: THIRD, wind: 12, due: 2.044 }, // 0.14 (9 + 5.6) = 0.14 · 14.6
    { machine: THIRD, wind: 24, due: 3.304 }, // 0.14 (18 + 5.6) = 0.14 · 23.6
  ])(
    'has σ₁ = $due m/s at $wind m/s in class $machine.windClass, category $machine.turbulence',
    ({ machine, wind, due }) => {
      expect(normalDeviation(machine, wind)).toBeCloseTo(due, 9);
    },
  );

  it('knows category A+ (I_ref 0.18) from edition 4 on', () => {
    // 0.18 (9 + 5.6) = 0.18 · 14.6 = 2.628
    expect(normalDeviation({ ...THIRD, turbulence: 'A+' }, 12)).toBeCloseTo(2.628, 9);
    expect(() => normalDeviation({ ...FIRST, turbulence: 'A+' }, 12)).toThrow(/edition 4/);
  });

  it('has Λ₁ = 0.7 z up to 60 m and 42 m above', () => {
    expect([30, 60, 61, 120].map(turbulenceScaleOf)).toEqual([21, 42, 42, 42]);
  });
});

describe('the extreme turbulence model (ETM)', () => {
  // σ₁ = 2 I_ref (0.072 (V_ave/2 + 3)(V_hub/2 − 4) + 10), V_ave = 0.2 V_ref
  it.each([
    // V_ave = 10: 0.32 (0.072 · 8 · 1 + 10) = 0.32 · 10.576
    { machine: FIRST, wind: 10, due: 3.38432 },
    // 0.32 (0.072 · 8 · 6 + 10) = 0.32 · 13.456
    { machine: FIRST, wind: 20, due: 4.30592 },
    // V_ave = 7.5: 0.28 (0.072 · 6.75 · 2 + 10) = 0.28 · 10.972
    { machine: THIRD, wind: 12, due: 3.07216 },
    // 0.28 (0.072 · 6.75 · 8 + 10) = 0.28 · 13.888
    { machine: THIRD, wind: 24, due: 3.88864 },
  ])(
    'has σ₁ = $due m/s at $wind m/s in class $machine.windClass, category $machine.turbulence',
    ({ machine, wind, due }) => {
      expect(extremeDeviation(machine, wind)).toBeCloseTo(due, 9);
    },
  );

  it('starts from an annual mean of 10, 8.5 and 7.5 m/s', () => {
    const means = (['I', 'II', 'III'] as const).map((windClass) => averageWindOf({ ...FIRST, windClass }));
    expect(means).toEqual([10, 8.5, 7.5]);
  });
});

describe('the extreme wind speed model (EWM)', () => {
  // Steady: V_e50 = 1.4 V_ref, V_e1 = 0.8 V_e50. Turbulent: V_50 = V_ref, V_1 = 0.8 V_ref, σ₁ = 0.11 V.
  it.each([
    { machine: FIRST, fifty: 70, one: 56, mean: 50 }, // 1.4 · 50; 0.8 · 70
    { machine: THIRD, fifty: 52.5, one: 42, mean: 37.5 }, // 1.4 · 37.5; 0.8 · 52.5
  ])(
    'blows $fifty m/s in 50 years and $one m/s in one in class $machine.windClass',
    ({ machine, fifty, one, mean }) => {
      expect(steadyExtremeWind(machine, 50)).toBeCloseTo(fifty, 9);
      expect(steadyExtremeWind(machine, 1)).toBeCloseTo(one, 9);
      expect(turbulentExtremeWind(machine, 50)).toBeCloseTo(mean, 9);
      expect(turbulentExtremeWind(machine, 1)).toBeCloseTo(0.8 * mean, 9);
    },
  );

  it('has 11 % of turbulence: 5.5 m/s in class I, 4.125 m/s in class III', () => {
    expect(extremeWindDeviation(50)).toBeCloseTo(5.5, 12);
    expect(extremeWindDeviation(37.5)).toBeCloseTo(4.125, 12);
  });

  it('takes 57 m/s where tropical cyclones come, in edition 4 only (memory)', () => {
    // 1.4 · 57 = 79.8
    expect(steadyExtremeWind({ ...THIRD, tropical: true }, 50)).toBeCloseTo(79.8, 9);
    expect(() => steadyExtremeWind({ ...FIRST, tropical: true }, 50)).toThrow(/edition 4/);
  });

  it('grows with height to the power 0.11, ordinary wind to the power 0.2', () => {
    // 1.5^0.11 = e^(0.11 · 0.405465) = e^0.0446012 = 1.045611; 1.5^0.2 = e^0.0810930 = 1.084472
    expect(profileFactor({ kind: 'power law', exponent: EXTREME_EXPONENT }, 80)(120)).toBeCloseTo(1.045611, 6);
    expect(profileFactor({ kind: 'power law', exponent: 0.2 }, 80)(120)).toBeCloseTo(1.084472, 6);
  });
});

describe('the extreme direction change (EDC)', () => {
  // θ_e = 4 arctan(σ₁/(V_hub (1 + 0.1 D/Λ₁)))
  it.each([
    // 2.096/(10 · 1.1) = 0.190545; arctan = 10.7881°; × 4
    { machine: FIRST, wind: 10, due: 43.1525 },
    // 3.296/(20 · 1.1) = 0.149818; arctan = 8.52058°
    { machine: FIRST, wind: 20, due: 34.0823 },
    // 2.044/(12 · 1.2) = 0.141944; arctan = 8.07885°
    { machine: THIRD, wind: 12, due: 32.3154 },
    // 3.304/(24 · 1.2) = 0.114722; arctan = 6.54447°
    { machine: THIRD, wind: 24, due: 26.1779 },
  ])(
    'turns by $due° at $wind m/s in class $machine.windClass, category $machine.turbulence',
    ({ machine, wind, due }) => {
      expect(directionChangeSize({ ...machine, hubWind: wind, sense: 1 }) / DEGREE).toBeCloseTo(due, 3);
    },
  );

  it('turns the whole wind within 6 s, by half at 3 s, to either side, and lets it stay', () => {
    const left = directionChange({ ...FIRST, hubWind: 10, sense: 1, start: 20 });
    const right = directionChange({ ...FIRST, hubWind: 10, sense: -1, start: 20 });
    const turned = (t: number) => (left.direction?.(t) ?? Number.NaN) / DEGREE;
    // 43.1525°/2; at 1.5 s ½ (1 − cos 45°) = 0.1464466 of it
    expect([20, 21.5, 23, 26, 99].map((t) => Number(turned(t).toFixed(3)))).toEqual([0, 6.32, 21.576, 43.153, 43.153]);
    expect(right.direction?.(99)).toBe(-(left.direction?.(99) ?? 0));
    const velocity = new Float64Array(3);
    sumWind([steadyWind({ speed: 10 }), left]).velocity(99, 5, 5, velocity);
    // 10 cos 43.1525° = 7.2953, 10 sin 43.1525° = 6.8394
    expect(velocity[0]).toBeCloseTo(7.2953, 3);
    expect(velocity[1]).toBeCloseTo(6.8394, 3);
  });

  it('never turns by more than half a circle', () => {
    const calm = directionChangeSize({ ...FIRST, turbulence: 'S', turbulenceIntensity: 0.9, hubWind: 1, sense: 1 });
    expect(calm).toBe(Math.PI);
  });
});

describe('the extreme coherent gust with direction change (ECD)', () => {
  // θ_cg = 180° below 4 m/s, 720°/V_hub above
  it.each([
    { wind: 3, due: 180 },
    { wind: 4, due: 180 },
    { wind: 10, due: 72 },
    { wind: 25, due: 28.8 },
  ])('turns by $due° at $wind m/s', ({ wind, due }) => {
    expect(coherentGustTurn(wind) / DEGREE).toBeCloseTo(due, 9);
  });

  it.each([FIRST, THIRD])('rises by 15 m/s in 10 s and stays, in class $windClass', (machine) => {
    const gust = coherentGust({ ...machine, hubWind: 10, sense: -1 });
    // ½ · 15 (1 − cos 36°) at 2 s = 7.5 · 0.1909830 = 1.432373
    expect([0, 2, 5, 10, 60].map((t) => Number(gust.rotorMean(t).toFixed(6)))).toEqual([0, 1.432373, 7.5, 15, 15]);
    expect((gust.direction?.(5) ?? 0) / DEGREE).toBeCloseTo(-36, 9);
    expect((gust.direction?.(60) ?? 0) / DEGREE).toBeCloseTo(-72, 9);
  });
});

describe('the extreme wind shear (EWS)', () => {
  // At the rotor's edge (z/D = ½) and at the crest (1 − cos = 2): 2.5 + 0.2 · 6.4 σ₁ (D/Λ₁)^¼
  it.each([
    { machine: FIRST, wind: 10, due: 5.18288 }, // 2.5 + 1.28 · 2.096
    { machine: FIRST, wind: 20, due: 6.71888 }, // 2.5 + 1.28 · 3.296
    { machine: THIRD, wind: 12, due: 5.611346 }, // 2^¼ = 1.189207: 2.5 + 1.28 · 2.044 · 1.189207 = 2.5 + 2.61632 · 1.189207
    { machine: THIRD, wind: 24, due: 7.5293 }, // 2.5 + 4.22912 · 1.189207
  ])('adds $due m/s at the edge at $wind m/s in class $machine.windClass', ({ machine, wind, due }) => {
    const shear = { ...machine, hubWind: wind, plane: 'vertical', sense: 1 } as const;
    expect(extremeShearSize(shear)).toBeCloseTo(due, 5);
  });

  it('is vertical or horizontal, of either sign, crests at 6 s and is over at 12 s', () => {
    const velocity = new Float64Array(3);
    const at = (plane: 'vertical' | 'horizontal', sense: 1 | -1, t: number, y: number, z: number) => {
      extremeShear({ ...FIRST, hubWind: 10, plane, sense }).velocity(t, y, z, velocity);
      return velocity[0];
    };
    expect(at('vertical', 1, 6, 9, 21)).toBeCloseTo(5.18288, 9);
    expect(at('vertical', 1, 6, 9, -21)).toBeCloseTo(-5.18288, 9);
    expect(at('vertical', -1, 6, 9, 21)).toBeCloseTo(-5.18288, 9);
    expect(at('horizontal', 1, 6, 21, 9)).toBeCloseTo(5.18288, 9);
    expect(at('horizontal', -1, 6, 10.5, 9)).toBeCloseTo(-2.59144, 9);
    // ½ (1 − cos 90°) = ½ of it at 3 s
    expect(at('vertical', 1, 3, 0, 21)).toBeCloseTo(2.59144, 9);
    expect([0, 12, 50].map((t) => at('vertical', 1, t, 0, 21))).toEqual([0, 0, 0]);
  });
});

describe('the classes', () => {
  it('refuse a mean wind that they do not know', () => {
    const shear = { plane: 'vertical', sense: 1, hubWind: 40 } as const;
    expect(() => extremeShear({ ...THIRD, ...shear })).toThrow(/40 m\/s lies outside wind class III.*37\.5 m\/s/);
    expect(() => requireMeanWind(FIRST, 0)).toThrow(/outside wind class I/);
    expect(() => requireMeanWind(FIRST, 49.9)).not.toThrow();
  });

  it('S needs its own values', () => {
    const own: IecClass = { edition: 4, windClass: 'S', turbulence: 'S' };
    expect(() => extremeDeviation(own, 10)).toThrow(/turbulence intensity/);
    expect(() => steadyExtremeWind(own, 50)).toThrow(/reference wind/);
    // 1.4 · 40 = 56; 0.1 (7.5 + 5.6) = 1.31
    expect(steadyExtremeWind({ ...own, referenceWind: 40 }, 50)).toBeCloseTo(56, 9);
    expect(normalDeviation({ ...own, turbulenceIntensity: 0.1 }, 10)).toBeCloseTo(1.31, 9);
  });
});

describe('the density of air', () => {
  // ISO 2533:1975, tables of the standard atmosphere (memory).
  it.each([
    { altitude: 0, due: 1.225 },
    { altitude: 1000, due: 1.1117 },
    { altitude: 2000, due: 1.0066 },
  ])('is $due kg/m³ at $altitude m in the standard atmosphere', ({ altitude, due }) => {
    expect(airDensity(altitude)).toBeCloseTo(due, 3);
  });

  it('is higher in the cold: 1.3944 kg/m³ at sea level at −20 °C', () => {
    // 101325/(287.053 · 253.15) = 101325/72667.5
    expect(airDensity(0, 253.15)).toBeCloseTo(1.39437, 5);
  });
});
