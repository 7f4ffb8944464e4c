import { type PolarSeries, polarReader, requireFineGrid } from './polar-grid.ts';
import {
  type BladePassage,
  type HubAndRotorSeries,
  hubAndRotorSeries,
  requireTurbulence,
  type Turbulence,
  turbulenceField,
} from './turbulence.ts';
import type { WindField } from './wind.ts';

/**
 * Turbulence as a part of the wind: adds its three components, with a mean of 0.
 *
 * Nothing is drawn before it is asked for: a rotor that feels only its mean wind never makes the whole field. The field
 * is linear between samples and the rotor's mean smooth; the kinks at the field's samples are no `breakpoints`, since
 * they come faster than any control sample and are far below what the samples themselves leave out of the wind.
 * @param makeField where the field comes from, such as a cache
 * @throws RangeError as `requireTurbulence` and `requireFineGrid`
 */
export function turbulentWind(
  turbulence: Turbulence,
  passage: BladePassage,
  makeField: (turbulence: Turbulence) => PolarSeries = turbulenceField,
): WindField {
  requireTurbulence(turbulence);
  requireFineGrid(turbulence.grid, passage.bladeCount);
  let read: ReturnType<typeof polarReader> | undefined;
  let series: HubAndRotorSeries | undefined;
  const seriesOnce = () => {
    series ??= hubAndRotorSeries(turbulence, passage);
    return series;
  };

  return {
    velocity(t, y, z, out) {
      if (y === 0 && z === 0) return hubAt(seriesOnce(), t, out);
      read ??= polarReader(makeField(turbulence));
      read(t, y, z, out);
    },
    rotorMean: (t) => rotorAt(seriesOnce(), t),
    breakpoints: () => [],
    marks: () => [],
  };
}

/** Linear between samples, as the field is. */
function hubAt({ hub, period, samples }: HubAndRotorSeries, t: number, out: Float64Array): void {
  const instant = (t / period) * samples;
  const floor = Math.floor(instant);
  const share = instant - floor;
  const early = 3 * wrapped(floor, samples);
  const late = 3 * wrapped(floor + 1, samples);
  for (let i = 0; i < 3; i++) out[i] = hub[early + i] + share * (hub[late + i] - hub[early + i]);
}

/** Catmull and Rom's cubic between samples (1974): a smooth wind keeps a step-controlled integrator's steps long. */
function rotorAt({ rotor, period, samples }: HubAndRotorSeries, t: number): number {
  const instant = (t / period) * samples;
  const floor = Math.floor(instant);
  const s = instant - floor;
  const a = rotor[wrapped(floor - 1, samples)];
  const b = rotor[wrapped(floor, samples)];
  const c = rotor[wrapped(floor + 1, samples)];
  const d = rotor[wrapped(floor + 2, samples)];
  return b + 0.5 * s * (c - a + s * (2 * a - 5 * b + 4 * c - d + s * (3 * (b - c) + d - a)));
}

function wrapped(index: number, samples: number): number {
  return ((index % samples) + samples) % samples;
}
