import type { AirfoilData, RotorData } from '../../sim/turbine.ts';

const DEGREE = Math.PI / 180;

function airfoil(
  name: string,
  thickness: number,
  zeroLiftAngle: number,
  maximumLift: number,
  minimumDrag: number,
): AirfoilData {
  return {
    kind: 'formula',
    name,
    thickness,
    liftSlope: thickness === 1 ? 0 : 6.2,
    zeroLiftAngle: zeroLiftAngle * DEGREE,
    maximumLift,
    minimumDrag,
    aspectRatio: 17,
  };
}

/** Invented airfoils, from the round root to the tip. */
export const AIRFOILS: readonly AirfoilData[] = [
  airfoil('round', 1, 0, 0, 0.6),
  airfoil('40 % thick', 0.4, -3.0, 1.2, 0.016),
  airfoil('30 % thick', 0.3, -3.5, 1.35, 0.0105),
  airfoil('24 % thick', 0.24, -4.0, 1.42, 0.0085),
  airfoil('18 % thick', 0.18, -4.0, 1.45, 0.0072),
];

/** An invented rotor of 130 m diameter. */
export const ROTOR: RotorData = {
  bladeCount: 3,
  radius: 65,
  hubRadius: 1.6,
  hubHeight: 110,
  aerodynamics: {
    kind: 'blade',
    airfoils: AIRFOILS,
    blade: {
      kind: 'optimum layout',
      designTipSpeedRatio: 8.2,
      designAngleOfAttack: 6 * DEGREE,
      chordLimit: 4.2,
      twistLimit: 14 * DEGREE,
      rootDiameter: 2.6,
      rootEnd: 3.5,
      stations: 30,
      sections: [
        { relativeRadius: 0.055, airfoil: 'round' },
        { relativeRadius: 0.22, airfoil: '40 % thick' },
        { relativeRadius: 0.4, airfoil: '30 % thick' },
        { relativeRadius: 0.65, airfoil: '24 % thick' },
        { relativeRadius: 0.9, airfoil: '18 % thick' },
      ],
    },
  },
};

export const AIR_DENSITY = 1.225;
