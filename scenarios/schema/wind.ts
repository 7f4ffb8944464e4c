/** The wind of a scenario: parts that add. */
import { z } from 'zod';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { operatingGust } from '../../sim/wind/operating-gust.ts';
import { rampWind } from '../../sim/wind/ramp.ts';
import { sineWind } from '../../sim/wind/sine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { tableWind } from '../../sim/wind/table.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { addFault, camelKeys, choice, fraction, mapping, onceDecoded, quantity, tag } from './field.ts';
import { firstNotRising, table } from './table.ts';

/** What a wind condition may need to know of the turbine, m. */
export interface Site {
  rotorDiameter: number;
  hubHeight: number;
}

/** One part of the wind, made once the turbine is known. `lasts`: where a recorded part ends, s. */
export interface WindPart {
  lasts?: number;
  field(site: Site): WindField;
}

/** A mean wind beyond this is no weather that a turbine is built for, m/s. */
const HIGHEST_WIND = 100;

const steady = mapping({
  kind: tag('steady', 'steady', 'The same wind for ever.'),
  speed: quantity('speed', 'Wind speed', { atLeast: 0, atMost: HIGHEST_WIND }),
}).transform(({ speed }): WindPart => ({ field: () => steadyWind({ speed }) }));

const step = mapping({
  kind: tag('step', 'step', 'More wind (or, negative, less) from an instant on.'),
  at: quantity('time', 'The instant', { atLeast: 0 }),
  rise: quantity('speed', 'How much more'),
}).transform(({ at, rise }): WindPart => ({ field: () => stepWind({ at, rise }) }));

const ramp = mapping({
  kind: tag('ramp', 'ramp', 'Evenly more wind between two instants, then held.'),
  from: quantity('time', 'Where it starts', { atLeast: 0 }),
  to: quantity('time', 'Where it ends', { above: 0 }),
  rise: quantity('speed', 'How much more by then'),
}).transform(({ from, to, rise }): WindPart => ({ field: () => rampWind({ from, to, rise }) }));

const sine = mapping({
  kind: tag('sine', 'sine', 'Wind that swings.'),
  amplitude: quantity('speed', 'Amplitude', { above: 0 }),
  period: quantity('time', 'Period', { above: 0 }),
  from: quantity('time', 'Where it starts', { atLeast: 0 }).optional(),
  to: quantity('time', 'Where it stops', { above: 0 }).optional(),
}).transform(({ kind: _kind, ...swing }): WindPart => ({ field: () => sineWind(swing) }));

const gust = mapping({
  kind: tag('cosine_gust', 'cosine gust', 'A gust of the shape 1 − cos.'),
  start: quantity('time', 'Where it starts', { atLeast: 0 }),
  duration: quantity('time', 'How long it lasts', { above: 0 }),
  amplitude: quantity('speed', 'How much it adds at its peak; negative for a lull'),
}).transform(({ kind: _kind, ...shape }): WindPart => ({ field: () => cosineGust(shape) }));

const classes = { I: 'I', II: 'II', III: 'III', S: 'S' } as const;
const categories = { 'A+': 'A+', A: 'A', B: 'B', C: 'C', S: 'S' } as const;

const iecGust = mapping({
  kind: tag(
    'operating_gust',
    'operating gust',
    'The extreme operating gust (EOG) of IEC 61400-1, on top of a steady wind.',
  ),
  edition: z.literal([3, 4]).meta({ description: 'Edition of IEC 61400-1.' }),
  wind_class: choice(classes, 'Wind class.'),
  turbulence: choice(categories, 'Turbulence category.'),
  hub_wind: quantity('speed', 'Mean wind at the hub that the gust is computed for', { above: 0, atMost: HIGHEST_WIND }),
  start: quantity('time', 'Where it starts', { atLeast: 0 }),
  reference_wind: quantity('speed', 'Reference wind speed of class S', { above: 0 }).optional(),
  turbulence_intensity: fraction('Reference turbulence intensity of category S', { above: 0, below: 1 }).optional(),
}).transform(
  ({ kind: _kind, ...given }): WindPart => ({ field: (site) => operatingGust({ ...camelKeys(given), ...site }) }),
);

const recorded = mapping({
  kind: tag('table', 'table', 'A recorded or made-up series: linear between rows.'),
  series: table({ time: { kind: 'time' }, speed: { kind: 'speed' } }, 'Wind speed against time, rising', 2),
})
  .superRefine(
    onceDecoded(({ series: { time } }, context) => {
      const fault = (row: number, message: string) => addFault(context, message, ['series', 'rows', row]);
      const row = firstNotRising(time);
      if (row >= 0) fault(row, `time must rise from row to row, but ${time[row]} s follows ${time[row - 1]} s`);
      if ((time[0] ?? 0) > 0) fault(0, `the series starts at ${time[0]} s; it must start at 0 s or before`);
    }),
  )
  .transform(({ series }): WindPart => ({ lasts: series.time.at(-1) ?? 0, field: () => tableWind(series) }));

export const wind = z
  .array(z.discriminatedUnion('kind', [steady, step, ramp, sine, gust, iecGust, recorded]))
  .min(1)
  .meta({ description: 'Parts of the wind; they add.' });
