/** What a wind is like, for a terminal. */
import { textTable } from './text-table.ts';
import { type WindStudy, withinBand } from './wind-study.ts';

export function windText(study: WindStudy): string {
  return [
    headline(study),
    '',
    textTable(
      ['m/s', 'mean', 'deviation', 'due', 'lowest', 'highest'],
      study.statistics.map(({ what, mean, deviation, due, lowest, highest }) => [
        what,
        ...[mean, deviation].map(speed),
        due === undefined ? '' : speed(due),
        ...[lowest, highest].map(speed),
      ]),
    ),
    ...marks(study),
    ...study.turbulence.flatMap(turbulence),
    '',
  ].join('\n');
}

/** "Wind: 600 s over a rotor of 130 m, hub at 110 m (turbine)". */
export function headline({ title, duration, rotorDiameter, hubHeight, turbine }: WindStudy): string {
  return `${title}: ${Number(duration.toFixed(2))} s over a rotor of ${rotorDiameter} m, hub at ${hubHeight} m (${turbine})`;
}

function speed(value: number): string {
  return value.toFixed(3).replace(/^-(0\.0+)$/, '$1');
}

function marks({ marks: all }: WindStudy): string[] {
  return all.length === 0 ? [] : ['', ...all.map(({ time, text }) => `${time.toFixed(2).padStart(9)} s  ${text}`)];
}

/** What the exact variance cost: the targets have it too. */
export function scaling(spectra: WindStudy['turbulence'][number]['spectra']): string {
  const gains = spectra.map(({ gain }) => gain.toFixed(3)).join(', ');
  return `To have its exact variance, the draw was scaled: its spectra, and what is due, by ${gains}.`;
}

function turbulence({ turbulence: made, spectra, coherence }: WindStudy['turbulence'][number]): string[] {
  const { grid, rate, seed, variance, meanWind } = made;
  const share = (values: Float64Array, low: Float64Array, high: Float64Array) => {
    const { inside, of } = withinBand(values, low, high);
    return [`${inside} of ${of}`];
  };
  return [
    '',
    `Turbulence at ${meanWind} m/s: ${grid.rings} rings of ${grid.spokes} points, up to ${rate / 2} Hz, seed ${seed}, variance ${variance}.`,
    ...(variance === 'exact' ? [scaling(spectra)] : []),
    'Estimates within the 95 % band about what is due (19 of 20 on average):',
    textTable(
      ['', 'within'],
      [
        ...spectra.map((s) => [`spectrum ${s.what}`, ...share(s.density, s.low, s.high)]),
        ...coherence.map((c) => [
          `coherence at ${Number(c.distance.toFixed(1))} m`,
          ...share(c.coherence, c.low, c.high),
        ]),
      ],
    ),
  ];
}
