import { describe, expect, it } from 'vitest';
import { bladeOf } from '../../sim/aerodynamics/blade.ts';
import {
  CoefficientSurface,
  type LoadSlopes,
  type SurfaceData,
  SurfaceRangeError,
  surfaceOfBlade,
  surfaceOfTables,
} from '../../sim/aerodynamics/coefficient-surface.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import { surfaceRotor } from '../../sim/aerodynamics/surface-rotor.ts';
import { emptyLoads, stillMotion } from '../../sim/rotor.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { AIR_DENSITY, ROTOR } from './demo-rotor.ts';

const DEGREE = Math.PI / 180;
const blade = bladeOf(ROTOR);
const data = surfaceOfBlade(blade);
const surface = new CoefficientSurface(data, ROTOR, AIR_DENSITY);
const loads = emptyLoads(3);
const slopes: LoadSlopes = {
  torque: 0,
  thrust: 0,
  torquePerWind: 0,
  torquePerRotorSpeed: 0,
  torquePerPitch: 0,
  thrustPerWind: 0,
  thrustPerRotorSpeed: 0,
  thrustPerPitch: 0,
};

/** Even spread over the unit square: the additive recurrence of Roberts' R₂ sequence. */
function spread(count: number): [number, number][] {
  return Array.from({ length: count }, (_, i) => [
    (0.5 + i * 0.7548776662466927) % 1,
    (0.5 + i * 0.5698402909980532) % 1,
  ]);
}

describe('the coefficient surface of a blade', () => {
  it('is the solved rotor: C_p to 0.001 and C_t to 0.001 at tip-speed ratios 4–12 and pitch −2° to 25°', () => {
    for (const [x, y] of spread(800)) {
      const ratio = 4 + 8 * x;
      const pitch = (-2 + 27 * y) * DEGREE;
      const direct = steadyRotor(blade, 1, ratio / 65, pitch, AIR_DENSITY);
      const { power, thrust, torque } = surface.coefficients(ratio, pitch);
      expect(Math.abs(power - direct.powerCoefficient)).toBeLessThan(1e-3);
      expect(Math.abs(thrust - direct.thrustCoefficient)).toBeLessThan(1e-3);
      expect(power).toBeCloseTo(torque * ratio, 12);
    }
  });

  it('is the solved rotor from backing up, parked and starting to still air: 0.05 % of ½ρA(V² + (ωR)²)', () => {
    for (const [x, y] of spread(800)) {
      // Directions from tip-speed ratio −2 through parked (90°) to still air (0°).
      const direction = x * (Math.PI - Math.atan2(1, 2));
      const wind = 12 * Math.sin(direction);
      const rotorSpeed = (12 * Math.cos(direction)) / 65;
      const pitch = (-10 + 105 * y) * DEGREE;
      const direct = steadyRotor(blade, wind, rotorSpeed, pitch, AIR_DENSITY);
      surface.torqueAndThrust(wind, rotorSpeed, pitch, loads);
      const scale = 0.5 * AIR_DENSITY * Math.PI * 65 ** 2 * 144;
      expect(Math.abs(loads.thrust - direct.thrust) / scale).toBeLessThan(5e-4);
      expect(Math.abs(loads.torque - direct.torque) / (scale * 65)).toBeLessThan(5e-4);
    }
  });

  it('gives slopes that its own differences confirm, in operation, parked, backing up and with wind from behind', () => {
    const points = [
      [10, 1.26, 0.02],
      [18, 1.257, 0.27],
      [25, 0.05, 1.5],
      [25, -0.1, 1.5],
      [3, 1.3, 0.4],
      [-2, 0.4, 0.9],
    ];
    const h = 1e-5;
    const difference = (of: 'torque' | 'thrust', point: number[], along: number): number => {
      const value = (step: number): number => {
        const [wind, rotorSpeed, pitch] = point.map((v, i) => (i === along ? v + step : v));
        surface.torqueAndThrust(wind, rotorSpeed, pitch, loads);
        return loads[of];
      };
      return (value(h) - value(-h)) / (2 * h);
    };
    for (const point of points) {
      surface.slopes(point[0], point[1], point[2], slopes);
      const pairs = [
        [slopes.torquePerWind, difference('torque', point, 0)],
        [slopes.torquePerRotorSpeed, difference('torque', point, 1)],
        [slopes.torquePerPitch, difference('torque', point, 2)],
        [slopes.thrustPerWind, difference('thrust', point, 0)],
        [slopes.thrustPerRotorSpeed, difference('thrust', point, 1)],
        [slopes.thrustPerPitch, difference('thrust', point, 2)],
      ];
      for (const [slope, differenced] of pairs) expect(Math.abs(slope / differenced - 1)).toBeLessThan(1e-4);
      surface.torqueAndThrust(point[0], point[1], point[2], loads);
      expect(slopes.torque / loads.torque).toBeCloseTo(1, 12);
      expect(slopes.thrust / loads.thrust).toBeCloseTo(1, 12);
    }
  });

  it('has slopes that do not jump where the rotor stops, where the wind dies, or at a knot', () => {
    const tiny = 1e-9;
    const crossings: [number[], number[]][] = [
      [
        [tiny, -1, 0.3],
        [-tiny, -1, 0.3],
      ],
      [
        [12, -tiny, 1.2],
        [12, tiny, 1.2],
      ],
      [
        [tiny, 1, 0.3],
        [-tiny, 1, 0.3],
      ],
      [
        [10, 1.2, 5 * DEGREE - tiny],
        [10, 1.2, 5 * DEGREE + tiny],
      ],
      [
        [10, (80 - tiny) / 65, 0.1],
        [10, (80 + tiny) / 65, 0.1],
      ],
    ];
    for (const [before, after] of crossings) {
      surface.slopes(before[0], before[1], before[2], slopes);
      const first = { ...slopes };
      surface.slopes(after[0], after[1], after[2], slopes);
      for (const name of Object.keys(first) as (keyof LoadSlopes)[]) {
        expect(Math.abs(slopes[name] - first[name])).toBeLessThan(1e-5 * (1 + Math.abs(first[name])));
      }
    }
  });

  it('has no load without wind and speed', () => {
    surface.slopes(0, 0, 0.5, slopes);
    for (const value of Object.values(slopes)) expect(value === 0).toBe(true);
  });

  it('says so when pitch leaves it, and names the point and the range', () => {
    const ask = () => surface.torqueAndThrust(12, 1.2, 97 * DEGREE, loads);
    expect(ask).toThrow(SurfaceRangeError);
    expect(ask).toThrow(/pitch -10.0° to 95.0°.*tip-speed ratio 6.50.*at pitch 97.0°/);
    expect(() => surface.torqueAndThrust(Number.NaN, 1.2, 0, loads)).toThrow(SurfaceRangeError);
  });

  it('is the same after a trip through JSON', () => {
    const again = new CoefficientSurface(JSON.parse(JSON.stringify(data)) as SurfaceData, ROTOR, AIR_DENSITY);
    const other = { torque: 0, thrust: 0 };
    surface.torqueAndThrust(13.7, 1.234, 0.111, loads);
    again.torqueAndThrust(13.7, 1.234, 0.111, other);
    expect(loads).toMatchObject(other);
  });

  it('is not built from data of the wrong size', () => {
    const wrong = { ...data, thrust: data.thrust.slice(1) };
    expect(() => new CoefficientSurface(wrong, ROTOR, AIR_DENSITY)).toThrow(/needs 21306 values/);
  });
});

describe('the coefficient surface of given tables', () => {
  const torqueAt = (ratio: number, pitch: number): number =>
    0.06 * Math.exp(-(((ratio - 7 + 9 * pitch) / 4) ** 2)) - 0.01 * pitch;
  const thrustAt = (ratio: number, pitch: number): number => 0.1 * ratio * Math.exp(-2 * pitch);
  const tipSpeedRatio = Array.from({ length: 31 }, (_, i) => i / 2);
  const pitch = Array.from({ length: 21 }, (_, i) => (-5 + 2 * i) * DEGREE);
  const tables = {
    tipSpeedRatio,
    pitch,
    torqueCoefficient: tipSpeedRatio.map((r) => pitch.map((p) => torqueAt(r, p))),
    thrustCoefficient: tipSpeedRatio.map((r) => pitch.map((p) => thrustAt(r, p))),
  };
  const tabled = new CoefficientSurface(surfaceOfTables(tables), ROTOR, AIR_DENSITY);

  it('passes through the tables’ entries, and near the function behind them between', () => {
    for (const ratio of tipSpeedRatio.slice(0, -1)) {
      for (const angle of pitch) {
        expect(Math.abs(tabled.coefficients(ratio, angle).torque - torqueAt(ratio, angle))).toBeLessThan(2e-5);
        expect(Math.abs(tabled.coefficients(ratio, angle).thrust - thrustAt(ratio, angle))).toBeLessThan(2e-4);
        expect(Math.abs(tabled.coefficients(ratio + 0.25, angle).torque - torqueAt(ratio + 0.25, angle))).toBeLessThan(
          1e-4,
        );
      }
    }
  });

  it('scales to loads: Q = ½ρAR V² C_q, T = ½ρA V² C_t', () => {
    tabled.torqueAndThrust(10, (8 * 10) / 65, pitch[4], loads);
    const push = 0.5 * AIR_DENSITY * Math.PI * 65 ** 2 * 100;
    expect(loads.torque / (push * 65 * torqueAt(8, pitch[4]))).toBeCloseTo(1, 3);
    expect(loads.thrust / (push * thrustAt(8, pitch[4]))).toBeCloseTo(1, 3);
  });

  it('covers the tables and no more', () => {
    expect(tabled.range().tipSpeedRatio[0]).toBeCloseTo(0, 12);
    expect(tabled.range().tipSpeedRatio[1]).toBeCloseTo(15, 9);
    tabled.torqueAndThrust(10, 0, pitch[3], loads);
    expect(() => tabled.torqueAndThrust(10, (15.1 * 10) / 65, pitch[3], loads)).toThrow(
      /cover tip-speed ratios 0.00 to 15.00/,
    );
    expect(() => tabled.torqueAndThrust(10, -0.01, pitch[3], loads)).toThrow(SurfaceRangeError);
    expect(() => tabled.torqueAndThrust(0, 1, pitch[3], loads)).toThrow(SurfaceRangeError);
  });
});

describe('the surface rotor', () => {
  const rotor = surfaceRotor(surface);
  const wind: WindField = {
    velocity: () => {
      throw new Error('the surface rotor feels the rotor average only');
    },
    rotorMean: (t) => 10 + t,
    breakpoints: () => [],
    marks: () => [],
  };

  it('feels the rotor-effective wind less the tower’s motion, each blade with its share at its own angle', () => {
    const state = [99, 0.1, 0.2, 0.6];
    rotor.loads(3, wind, { ...stillMotion(), speed: 1.2, foreAft: 0.5 }, state, 0, [1, 2, 3], [], loads);
    const single = { torque: 0, thrust: 0 };
    const expected = { torque: 0, thrust: 0 };
    for (const pitch of [0.1, 0.2, 0.6]) {
      surface.torqueAndThrust(12.5, 1.2, pitch, single);
      expected.torque += single.torque / 3;
      expected.thrust += single.thrust / 3;
    }
    expect(loads.torque).toBeCloseTo(expected.torque, 3);
    expect(loads.thrust).toBeCloseTo(expected.thrust, 3);
  });

  it('answers every new question anew: wind, speed or pitch alone may have changed since the last', () => {
    const expected = { torque: 0, thrust: 0 };
    for (const [t, speed, pitch] of [
      [2, 1.2, 0.1],
      [2, 1.2, 0.2],
      [2, 1.1, 0.2],
      [3, 1.1, 0.2],
      [3, 1.1, 0.2],
    ]) {
      rotor.loads(t, wind, { ...stillMotion(), speed }, [pitch], 0, [0], [], loads);
      surface.torqueAndThrust(wind.rotorMean(t), speed, pitch, expected);
      expect([loads.torque, loads.thrust]).toEqual([expected.torque, expected.thrust]);
    }
  });

  it('settles on the same loads in uniform wind', () => {
    const settled = { torque: 0, thrust: 0 };
    rotor.loads(2, wind, { ...stillMotion(), speed: 1.2 }, [0.1], 0, [0], [], loads);
    rotor.steadyLoads(12, 1.2, 0.1, settled);
    expect(loads).toMatchObject(settled);
  });
});
