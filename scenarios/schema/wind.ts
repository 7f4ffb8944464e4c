/** The wind of a scenario: parts that add. */
import { z } from 'zod';
import { coherentGust } from '../../sim/wind/coherent-gust.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { directionChange } from '../../sim/wind/direction-change.ts';
import { extremeShear } from '../../sim/wind/extreme-shear.ts';
import {
  EXTREME_EXPONENT,
  extremeWindDeviation,
  type ReturnPeriod,
  steadyExtremeWind,
  turbulentExtremeWind,
} from '../../sim/wind/extreme-wind.ts';
import { extremeDeviation, normalDeviation, requireMeanWind, turbulenceScaleOf } from '../../sim/wind/iec-class.ts';
import { standardTurbulence } from '../../sim/wind/kaimal.ts';
import { operatingGust } from '../../sim/wind/operating-gust.ts';
import { type Placement, placedWind } from '../../sim/wind/placed.ts';
import { type PolarSeries, usualGrid } from '../../sim/wind/polar-grid.ts';
import { type Profile, profiledWind } from '../../sim/wind/profile.ts';
import { rampWind } from '../../sim/wind/ramp.ts';
import { recordedWind } from '../../sim/wind/recorded.ts';
import { sineWind } from '../../sim/wind/sine.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { addedWind } from '../../sim/wind/sum.ts';
import { tableWind } from '../../sim/wind/table.ts';
import type { Turbulence } from '../../sim/wind/turbulence.ts';
import { turbulentWind } from '../../sim/wind/turbulent.ts';
import { turnedWind } from '../../sim/wind/turned.ts';
import type { WindField } from '../../sim/wind/wind.ts';
import { addFault, camelKeys, choice, count, fraction, mapping, number, onceDecoded, quantity, tag } from './field.ts';
import { firstNotRising, table } from './table.ts';

/** What a part of the wind may need to know of the turbine and of the run. */
export interface Site {
  /** m */
  rotorDiameter: number;
  hubHeight: number;
  bladeCount: number;
  /** Rated, rad/s. */
  rotorSpeed: number;
  /** Of the run, s. */
  duration: number;
  seed: number;
  /** Makes a turbulent field, or has it at hand. */
  turbulence?(turbulence: Turbulence): PolarSeries;
}

/**
 * One part of the wind, made once the turbine is known. `lasts`: where a part that ends does so, s. `turbulence`: what
 * a turbulent part is made of, for those who look at it.
 */
export interface WindPart {
  lasts?: number;
  field(site: Site): WindField;
  turbulence?(site: Site): Turbulence;
}

/** A mean wind beyond this is no weather that a turbine is built for, m/s. */
const HIGHEST_WIND = 100;

/** Keys that every part has. */
const placement = {
  delay: quantity('time', 'How much later than by itself').optional(),
  scale: number("What the part's speeds and its turning are multiplied by").optional(),
  window: mapping({
    from: quantity('time', 'Where the part starts to be let through; from the start when absent').optional(),
    to: quantity('time', 'Where it is gone; never when absent').optional(),
    fade: quantity('time', 'How long it takes to come and to go, inside the window; 0 s for hard edges', {
      atLeast: 0,
    }).prefault('0 s'),
  })
    .meta({ description: 'When the part is let through, in the time of the run.' })
    .optional(),
};

/** The part, delayed, scaled and windowed as its keys say. */
function placed({ delay, scale, window }: Placement, part: WindPart): WindPart {
  const lasts = part.lasts === undefined ? undefined : part.lasts + (delay ?? 0);
  const isOverByThen = lasts !== undefined && window?.to !== undefined && window.to <= lasts;
  return {
    ...part,
    lasts: isOverByThen ? undefined : lasts,
    field: (site) => placedWind(part.field(site), { delay, scale, window }),
  };
}

const profile = z
  .discriminatedUnion('kind', [
    mapping({
      kind: tag('power_law', 'power law', 'V(z) = V_hub (z/z_hub)^α.'),
      exponent: number('The exponent α', { atLeast: 0, atMost: 1 }),
    }),
    mapping({
      kind: tag('logarithmic', 'logarithmic', 'V(z) = V_hub ln(z/z0)/ln(z_hub/z0).'),
      roughness: quantity('length', 'Roughness length z0 of the ground', { above: 0 }),
    }),
  ])
  .meta({ description: 'How the wind grows with height; alike all over the rotor when absent.' })
  .optional();

function withProfile(hub: WindField, given: Profile | undefined, site: Site): WindField {
  return given ? profiledWind(hub, given, { hubHeight: site.hubHeight, rotorRadius: site.rotorDiameter / 2 }) : hub;
}

const steady = mapping({
  kind: tag('steady', 'steady', 'The same wind for ever.'),
  speed: quantity('speed', 'Wind speed at the hub', { atLeast: 0, atMost: HIGHEST_WIND }),
  profile,
  ...placement,
}).transform((given) =>
  placed(given, { field: (site) => withProfile(steadyWind({ speed: given.speed }), given.profile, site) }),
);

/** Exponent of the normal wind profile of IEC 61400-1. */
const NORMAL_EXPONENT = 0.2;

const normalProfile = mapping({
  kind: tag(
    'normal_profile',
    'normal profile',
    'The normal wind profile (NWP) of IEC 61400-1: steady, by the power law.',
  ),
  speed: quantity('speed', 'Wind speed at the hub', { atLeast: 0, atMost: HIGHEST_WIND }),
  ...placement,
}).transform((given) =>
  placed(given, {
    field: (site) =>
      withProfile(steadyWind({ speed: given.speed }), { kind: 'power law', exponent: NORMAL_EXPONENT }, site),
  }),
);

const step = mapping({
  kind: tag('step', 'step', 'More wind (or, negative, less) from an instant on.'),
  at: quantity('time', 'The instant', { atLeast: 0 }),
  rise: quantity('speed', 'How much more'),
  ...placement,
}).transform((given) => placed(given, { field: () => stepWind(given) }));

const ramp = mapping({
  kind: tag('ramp', 'ramp', 'Evenly more wind between two instants, then held.'),
  from: quantity('time', 'Where it starts', { atLeast: 0 }),
  to: quantity('time', 'Where it ends', { above: 0 }),
  rise: quantity('speed', 'How much more by then'),
  ...placement,
}).transform((given) => placed(given, { field: () => rampWind(given) }));

const sine = mapping({
  kind: tag('sine', 'sine', 'Wind that swings.'),
  amplitude: quantity('speed', 'Amplitude', { above: 0 }),
  period: quantity('time', 'Period', { above: 0 }),
  from: quantity('time', 'Where it starts', { atLeast: 0 }).optional(),
  to: quantity('time', 'Where it stops', { above: 0 }).optional(),
  ...placement,
}).transform((given) => placed(given, { field: () => sineWind(given) }));

const gust = mapping({
  kind: tag('cosine_gust', 'cosine gust', 'A gust of the shape 1 − cos.'),
  start: quantity('time', 'Where it starts', { atLeast: 0 }),
  duration: quantity('time', 'How long it lasts', { above: 0 }),
  amplitude: quantity('speed', 'How much it adds at its peak; negative for a lull'),
  ...placement,
}).transform((given) => placed(given, { field: () => cosineGust(given) }));

const classes = { I: 'I', II: 'II', III: 'III', S: 'S' } as const;
const categories = { 'A+': 'A+', A: 'A', B: 'B', C: 'C', S: 'S' } as const;

/** Keys of every condition of the standard. */
const iecClass = {
  edition: z.literal([3, 4]).meta({ description: 'Edition of IEC 61400-1.' }),
  wind_class: choice(classes, 'Wind class.'),
  turbulence: choice(categories, 'Turbulence category.'),
  tropical: z
    .boolean()
    .meta({ description: 'Whether tropical cyclones come to the site, which raises the extreme winds (edition 4).' })
    .optional(),
  reference_wind: quantity('speed', 'Reference wind speed of class S', { above: 0 }).optional(),
  turbulence_intensity: fraction('Reference turbulence intensity of category S', { above: 0, below: 1 }).optional(),
};

const hubWind = quantity('speed', 'Mean wind at the hub that the condition is computed for', {
  above: 0,
  atMost: HIGHEST_WIND,
});

/** Keys of a condition of the standard that happens once, on top of a mean wind. */
const iecEvent = {
  ...iecClass,
  hub_wind: hubWind,
  start: quantity('time', 'Where it starts', { atLeast: 0 }),
  ...placement,
};

const towards = choice({ left: 'left', right: 'right' }, 'Which way the flow turns, looking downwind.').prefault(
  'left',
);

const iecGust = mapping({
  kind: tag(
    'operating_gust',
    'operating gust',
    'The extreme operating gust (EOG) of IEC 61400-1, on top of a steady wind.',
  ),
  ...iecEvent,
}).transform((given) => placed(given, { field: (site) => operatingGust({ ...camelKeys(given), ...machineOf(site) }) }));

const iecDirectionChange = mapping({
  kind: tag(
    'direction_change',
    'direction change',
    'The extreme direction change (EDC) of IEC 61400-1: the whole wind turns and stays turned.',
  ),
  towards,
  ...iecEvent,
}).transform((given) =>
  placed(given, {
    field: (site) =>
      directionChange({ ...camelKeys(given), ...machineOf(site), sense: given.towards === 'left' ? 1 : -1 }),
  }),
);

const iecCoherentGust = mapping({
  kind: tag(
    'coherent_gust',
    'coherent gust',
    'The extreme coherent gust with direction change (ECD) of IEC 61400-1, on top of a steady wind.',
  ),
  towards,
  ...iecEvent,
}).transform((given) =>
  placed(given, { field: () => coherentGust({ ...camelKeys(given), sense: given.towards === 'left' ? 1 : -1 }) }),
);

const SIDES = {
  above: { plane: 'vertical', sense: 1 },
  below: { plane: 'vertical', sense: -1 },
  left: { plane: 'horizontal', sense: 1 },
  right: { plane: 'horizontal', sense: -1 },
} as const;

const iecShear = mapping({
  kind: tag(
    'extreme_shear',
    'extreme shear',
    'The extreme wind shear (EWS) of IEC 61400-1, vertical or horizontal, on top of a mean wind.',
  ),
  faster: choice(
    { above: 'above', below: 'below', left: 'left', right: 'right' },
    'The side on which the wind is faster, looking downwind.',
  ),
  ...iecEvent,
}).transform((given) =>
  placed(given, {
    field: (site) => extremeShear({ ...camelKeys(given), ...machineOf(site), ...SIDES[given.faster] }),
  }),
);

function machineOf({ rotorDiameter, hubHeight }: Site) {
  return { rotorDiameter, hubHeight };
}

/** Keys of every turbulent part. */
const turbulent = {
  seed: count('Seed of the turbulence; that of the scenario when absent', 0).optional(),
  duration: quantity('time', 'After which the turbulence repeats; the duration of the run when absent', {
    above: 0,
  }).optional(),
  rate: quantity('frequency', 'Twice the highest frequency in the turbulence', { atLeast: 1 }).prefault('20 Hz'),
  variance: choice(
    { exact: 'exact', random: 'random' },
    'Whether the turbulence is scaled to exactly its deviation at the hub, or left as drawn.',
  ).prefault('exact'),
  rings: count('Rings of the grid of points on the rotor', 1, 200).optional(),
  spokes: count('Points on each ring', 2, 360).optional(),
  ...placement,
};

interface GivenTurbulence extends Placement {
  seed?: number;
  duration?: number;
  rate: number;
  variance: 'exact' | 'random';
  rings?: number;
  spokes?: number;
}

/**
 * A turbulent part.
 * @param level its mean wind, deviation and scale, m/s and m
 * @param mean the mean wind that the part itself brings, where it does
 */
function turbulentPart(
  given: GivenTurbulence,
  level: (site: Site) => { hubWind: number; deviation: number; scale?: number },
  mean?: (site: Site) => WindField,
): WindPart {
  function turbulence(site: Site): Turbulence {
    const { hubWind, deviation, scale = turbulenceScaleOf(site.hubHeight) } = level(site);
    const grid = usualGrid(site.rotorDiameter / 2);
    return {
      ...standardTurbulence(hubWind, deviation, scale),
      grid: { ...grid, rings: given.rings ?? grid.rings, spokes: given.spokes ?? grid.spokes },
      duration: given.duration ?? site.duration,
      rate: given.rate,
      seed: given.seed ?? site.seed,
      variance: given.variance,
    };
  }
  return placed(given, {
    lasts: given.duration,
    turbulence,
    field(site) {
      const gusts = turbulentWind(turbulence(site), site, site.turbulence);
      return mean ? addedWind([mean(site), gusts]) : gusts;
    },
  });
}

const ownTurbulence = mapping({
  kind: tag('turbulence', 'turbulence', 'Kaimal turbulence of any intensity, on top of a mean wind.'),
  hub_wind: hubWind,
  intensity: fraction('Standard deviation along the wind over the mean wind', { above: 0, below: 1 }),
  turbulence_scale: quantity('length', 'Scale parameter Λ1; by IEC 61400-1 from the hub height when absent', {
    above: 0,
  }).optional(),
  ...turbulent,
}).transform((given) =>
  turbulentPart(given, () => ({
    hubWind: given.hub_wind,
    deviation: given.intensity * given.hub_wind,
    scale: given.turbulence_scale,
  })),
);

const normalTurbulence = mapping({
  kind: tag(
    'normal_turbulence',
    'normal turbulence',
    'The normal turbulence model (NTM) of IEC 61400-1 with Kaimal spectra, on top of a mean wind.',
  ),
  ...iecClass,
  hub_wind: hubWind,
  ...turbulent,
}).transform((given) =>
  turbulentPart(given, () => {
    requireMeanWind(camelKeys(given), given.hub_wind);
    return { hubWind: given.hub_wind, deviation: normalDeviation(camelKeys(given), given.hub_wind) };
  }),
);

const extremeTurbulence = mapping({
  kind: tag(
    'extreme_turbulence',
    'extreme turbulence',
    'The extreme turbulence model (ETM) of IEC 61400-1 with Kaimal spectra, on top of a mean wind.',
  ),
  ...iecClass,
  hub_wind: hubWind,
  ...turbulent,
}).transform((given) =>
  turbulentPart(given, () => {
    requireMeanWind(camelKeys(given), given.hub_wind);
    return { hubWind: given.hub_wind, deviation: extremeDeviation(camelKeys(given), given.hub_wind) };
  }),
);

const years = z
  .literal([1, 50])
  .transform((given): ReturnPeriod => given)
  .meta({ description: 'Once in so many years: 1 or 50.' });

const misalignment = quantity(
  'angle',
  "How far the flow is turned out of the rotor's axis, to the left looking downwind",
  {
    atLeast: -Math.PI,
    atMost: Math.PI,
  },
).prefault('0 deg');

const extremeProfile: Profile = { kind: 'power law', exponent: EXTREME_EXPONENT };

const extremeWind = mapping({
  kind: tag(
    'extreme_wind',
    'extreme wind',
    'The steady extreme wind speed model (EWM) of IEC 61400-1 with its profile; brings its own mean wind.',
  ),
  ...iecClass,
  years,
  misalignment,
  ...placement,
}).transform((given) =>
  placed(given, {
    field: (site) =>
      turnedWind(
        withProfile(steadyWind({ speed: steadyExtremeWind(camelKeys(given), given.years) }), extremeProfile, site),
        given.misalignment,
      ),
  }),
);

const turbulentExtreme = mapping({
  kind: tag(
    'turbulent_extreme_wind',
    'turbulent extreme wind',
    'The turbulent extreme wind speed model (EWM) of IEC 61400-1 with its profile; brings its own mean wind.',
  ),
  ...iecClass,
  years,
  misalignment,
  ...turbulent,
}).transform((given) => {
  const speed = () => turbulentExtremeWind(camelKeys(given), given.years);
  return turbulentPart(
    given,
    () => ({ hubWind: speed(), deviation: extremeWindDeviation(speed()) }),
    (site) => turnedWind(withProfile(steadyWind({ speed: speed() }), extremeProfile, site), given.misalignment),
  );
});

const madeUp = mapping({
  kind: tag('table', 'table', 'A made-up series: linear between rows, held before the first and after the last.'),
  series: table({ time: { kind: 'time' }, speed: { kind: 'speed' } }, 'Wind speed against time, rising', 2),
  profile,
  ...placement,
})
  .superRefine(
    onceDecoded(({ series: { time }, delay = 0 }, context) => {
      const fault = (row: number, message: string) => addFault(context, message, ['series', 'rows', row]);
      faultOfOrder(time, fault);
      if ((time[0] ?? 0) + delay > 0) fault(0, `the series starts at ${time[0]} s; it must start at 0 s or before`);
    }),
  )
  .transform((given) =>
    placed(given, {
      lasts: given.series.time.at(-1) ?? 0,
      field: (site) => withProfile(tableWind(given.series), given.profile, site),
    }),
  );

type Fault = (row: number, message: string) => void;

function faultOfOrder(time: readonly number[], fault: Fault): boolean {
  const row = firstNotRising(time);
  if (row >= 0) fault(row, `time must rise from row to row, but ${time[row]} s follows ${time[row - 1]} s`);
  return row >= 0;
}

/** How far a step of a record may stray from its usual one, as a share of it. */
const STEP_TOLERANCE = 0.05;

/** The usual step of a record, s: the middle one of all. */
function usualStep(time: readonly number[]): number {
  const steps = time.slice(1).map((t, i) => t - (time[i] ?? t));
  return steps.sort((a, b) => a - b)[Math.floor(steps.length / 2)] ?? 0;
}

function faultOfSteps(time: readonly number[], fault: Fault): void {
  const usual = usualStep(time);
  const row = time.findIndex((t, i) => i > 0 && Math.abs(t - (time[i - 1] ?? t) - usual) > STEP_TOLERANCE * usual);
  if (row < 0) return;
  const [before = 0, after = 0] = [time[row - 1], time[row]];
  const step = Number((after - before).toPrecision(6));
  const shown = Number(usual.toPrecision(6));
  fault(
    row,
    step > usual
      ? `a gap: ${after} s follows ${before} s, where the record's step is ${shown} s; what is missing is not invented`
      : `uneven steps: ${after} s follows ${before} s, where the record's step is ${shown} s`,
  );
}

const recorded = mapping({
  kind: tag('recorded', 'recorded', 'A record at even steps of time, such as that of a met mast.'),
  series: table(
    {
      time: { kind: 'time' },
      speed: { kind: 'speed', optional: true },
      'speed at # m': { kind: 'speed', optional: true },
      direction: { kind: 'angle', optional: true },
    },
    'What was recorded: time at even steps, the wind speed at the hub or at heights above ground, and the direction that the wind comes from',
    4,
  ),
  heading: quantity('angle', 'Compass direction that the rotor faces, for a record with directions').optional(),
  profile,
  ...placement,
})
  .superRefine(
    onceDecoded(({ series, heading, profile: given, delay = 0 }, context) => {
      const { time, speed, direction } = series;
      const heights = series['speed at # m'];
      const fault = (row: number, message: string) => addFault(context, message, ['series', 'rows', row]);
      if (!faultOfOrder(time, fault)) faultOfSteps(time, fault);
      if ((time[0] ?? 0) + delay > 0) {
        fault(
          0,
          `the record starts at ${(time[0] ?? 0) + delay} s; it must start at 0 s or before (delay: "-${time[0]} s" shifts it)`,
        );
      }
      if (!speed && heights.length === 0) {
        addFault(context, 'a column "speed (m/s)", or one or more such as "speed at 80 m (m/s)", is due', [
          'series',
          'columns',
        ]);
      }
      if (direction && heading === undefined) {
        addFault(context, 'a record with directions needs the direction that the rotor faces: add "heading"', [
          'series',
          'columns',
        ]);
      }
      if (given && heights.length > 0) {
        addFault(context, 'a record of several heights has its own profile', ['profile']);
      }
    }),
  )
  .transform((given) =>
    placed(given, {
      lasts: given.series.time.at(-1) ?? 0,
      field(site) {
        const { time, speed, direction } = given.series;
        const mast = given.series['speed at # m'].map(({ number: height, values }) => ({ height, values }));
        const atHub = speed ? [{ height: site.hubHeight, values: speed }] : [];
        const record = {
          start: time[0] ?? 0,
          step: ((time.at(-1) ?? 0) - (time[0] ?? 0)) / (time.length - 1),
          speeds: [...mast.filter(({ height }) => !speed || height !== site.hubHeight), ...atHub].sort(
            (a, b) => a.height - b.height,
          ),
          direction: direction && turning(direction, given.heading ?? 0),
        };
        const hub = recordedWind(record, { hubHeight: site.hubHeight, rotorRadius: site.rotorDiameter / 2 });
        return withProfile(hub, given.profile, site);
      },
    }),
  );

/** Compass directions that the wind comes from as turning of the flow to the left, unwrapped, rad. */
function turning(direction: readonly number[], heading: number): number[] {
  const full = 2 * Math.PI;
  let last = 0;
  return direction.map((from) => {
    const turned = heading - from;
    last = turned + full * Math.round((last - turned) / full);
    return last;
  });
}

export const wind = z
  .array(
    z.discriminatedUnion('kind', [
      steady,
      normalProfile,
      step,
      ramp,
      sine,
      gust,
      iecGust,
      iecDirectionChange,
      iecCoherentGust,
      iecShear,
      extremeWind,
      turbulentExtreme,
      normalTurbulence,
      extremeTurbulence,
      ownTurbulence,
      madeUp,
      recorded,
    ]),
  )
  .min(1)
  .meta({ description: 'Parts of the wind; they add.' });
