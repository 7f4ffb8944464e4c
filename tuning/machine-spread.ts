import { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
import { Trim, type TrimPoint } from '../sim/trim.ts';
import type { Turbine } from '../sim/turbine.ts';
import { type LinearPlant, linearPlant } from './linear-plant.ts';

/** Fractions by which air density, inertia and slope on pitch may stray, either way. */
export interface Spread {
  density: number;
  inertia: number;
  slope: number;
}

export const COMMON_SPREAD: Spread = { density: 0.1, inertia: 0.1, slope: 0.2 };

/** One machine of the spread, trimmed at a wind speed. */
export interface SpreadPlant {
  /** In words, e.g. "density -10 %, inertia +10 %". */
  machine: string;
  nominal: boolean;
  turbine: Turbine;
  plant: LinearPlant;
}

/**
 * The machine and its relatives with other air and other inertias, each trimmed anew: thin air moves the trim pitch.
 * The slope on pitch is not spread here: it multiplies the loop as a whole.
 */
export function machineSpread(turbine: Turbine, surface: CoefficientSurface, spread: Spread) {
  const relatives = factors(spread.density).flatMap((density) => {
    const airDensity = turbine.airDensity * density;
    const rotor = surfaceRotor(new CoefficientSurface(surface.data, turbine.rotor, airDensity));
    const inAir = { ...turbine, airDensity };
    const trim = new Trim(inAir, rotor);
    return factors(spread.inertia).map((inertia) => ({
      machine: inWords(density, inertia),
      nominal: density === 1 && inertia === 1,
      turbine: withInertia(inAir, inertia),
      rotor,
      trim,
    }));
  });
  return {
    /** Those that run at rated power at `windSpeed` (m/s); none below the rated wind of the last. */
    at(windSpeed: number): SpreadPlant[] {
      return relatives.flatMap(({ machine, nominal, turbine: relative, rotor, trim }) => {
        const point = ratedPoint(trim, windSpeed);
        return point ? [{ machine, nominal, turbine: relative, plant: linearPlant(relative, rotor, point) }] : [];
      });
    },
  };
}

function ratedPoint(trim: Trim, windSpeed: number): TrimPoint | undefined {
  const point = trim.at(windSpeed);
  return point.region === 'rated' ? point : undefined;
}

function factors(fraction: number): number[] {
  return fraction > 0 ? [1 - fraction, 1, 1 + fraction] : [1];
}

function withInertia(turbine: Turbine, factor: number): Turbine {
  const { rotorInertia, generatorInertia } = turbine.drivetrain;
  const drivetrain = {
    ...turbine.drivetrain,
    rotorInertia: factor * rotorInertia,
    generatorInertia: factor * generatorInertia,
  };
  return { ...turbine, drivetrain };
}

function inWords(density: number, inertia: number): string {
  const percent = (factor: number) => `${factor < 1 ? '-' : '+'}${Math.abs(Math.round(100 * (factor - 1)))} %`;
  const parts = [
    ...(density === 1 ? [] : [`density ${percent(density)}`]),
    ...(inertia === 1 ? [] : [`inertia ${percent(inertia)}`]),
  ];
  return parts.length === 0 ? 'as given' : parts.join(', ');
}
