/**
 * Check 1. The ideal rotor with wake rotation, no drag, no tip loss.
 * Source: Glauert, in Durand, *Aerodynamic Theory* IV, 1935, as tabulated in Manwell, McGowan, Rogers, *Wind Energy
 * Explained*: best C_p 0.416, 0.511, 0.570, 0.581, 0.585 at tip-speed ratios 1, 2, 5, 7.5, 10.
 */
import { describe, expect, it } from 'vitest';
import { bladeOf } from '../../sim/aerodynamics/blade.ts';
import { FULL_MOMENTUM } from '../../sim/aerodynamics/momentum.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import type { RotorData } from '../../sim/turbine.ts';

const PUBLISHED = [
  [1, 0.416],
  [2, 0.511],
  [5, 0.57],
  [7.5, 0.581],
  [10, 0.585],
];
const BETZ = 16 / 27;
const IDEAL = { ...FULL_MOMENTUM, tipLoss: false, hubLoss: false };

/** A rotor of unit radius laid out by the optimum angles and nothing else: no limits, no root, no drag. */
function idealRotor(designTipSpeedRatio: number): RotorData {
  return {
    bladeCount: 3,
    radius: 1,
    hubRadius: 0.005,
    hubHeight: 2,
    aerodynamics: {
      kind: 'blade',
      airfoils: [
        {
          kind: 'table',
          name: 'dragless',
          angle: [-0.3, -0.1, 0.1, 0.3],
          lift: [-1.8, -0.6, 0.6, 1.8],
          drag: [1e-12, 1e-12, 1e-12, 1e-12],
          aspectRatio: 10,
        },
      ],
      blade: {
        kind: 'optimum layout',
        designTipSpeedRatio,
        designAngleOfAttack: 0.1,
        chordLimit: 100,
        twistLimit: Math.PI,
        rootDiameter: 0.01,
        rootEnd: 0.005,
        stations: 400,
        sections: [{ relativeRadius: 0, airfoil: 'dragless' }],
      },
    },
  };
}

describe('the ideal rotor', () => {
  for (const [ratio, published] of PUBLISHED) {
    const blade = bladeOf(idealRotor(ratio), 200);
    const powerCoefficient = (tipSpeedRatio: number, pitch: number): number =>
      steadyRotor(blade, 1, tipSpeedRatio, pitch, 1, IDEAL).powerCoefficient;

    it(`turns ${published} of the wind's power into shaft power at a tip-speed ratio of ${ratio}`, () => {
      expect(Math.abs(powerCoefficient(ratio, 0) - published)).toBeLessThanOrEqual(0.002);
      expect(powerCoefficient(ratio, 0)).toBeLessThan(BETZ);
    });

    it(`is at its best there: turning the blades either way loses power at ${ratio}`, () => {
      for (const pitch of [-0.03, -0.01, 0.01, 0.03]) {
        expect(powerCoefficient(ratio, pitch)).toBeLessThan(powerCoefficient(ratio, 0));
      }
    });
  }
});
