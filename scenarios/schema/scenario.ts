/** The scenario file. */
import { z } from 'zod';
import type { Machine } from '../../controllers/contract.ts';
import { BLADE_ELEMENT_DEFAULTS } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { airDensity } from '../../sim/air-density.ts';
import type { LimitData, RotorChoice, ScenarioData, StartData } from '../scenario.ts';
import { event, type WrittenEvent } from './event.ts';
import { addFault, camelKeys, choice, count, mapping, number, onceDecoded, quantity, tag, text } from './field.ts';
import { channelName, limit } from './limit.ts';
import { preamble } from './preamble.ts';
import { rotorModel } from './turbine.ts';
import { type WindPart, wind } from './wind.ts';

/** Another file, with values of it overridden where it is used. `load.ts` follows it. */
function reference(description: string) {
  return z
    .union([
      z.string().min(1),
      mapping({
        file: text('Path of the file, relative to this one.'),
        set: z
          .record(z.string(), z.unknown())
          .meta({
            description:
              'Values to override, by path: keys, list indices from 0 or names of list items, joined by dots.',
          })
          .optional(),
      }),
    ])
    .meta({ description: `${description}: a path relative to this file, or a mapping of file and set.` });
}

const start = z
  .discriminatedUnion('kind', [
    mapping({
      kind: tag('trim', 'trim', 'Steady at a wind speed.'),
      wind: quantity('speed', 'That wind speed', { above: 0, atMost: 100 }),
    }),
    mapping({
      kind: tag('parked', 'parked', 'Standing still with feathered blades.'),
      brake: choice({ applied: 'applied', released: 'released' }, 'The shaft brake.'),
    }),
  ])
  .transform((s): StartData => (s.kind === 'trim' ? s : { kind: s.kind, brake: s.brake === 'applied' }))
  .meta({ description: 'The state at the start.' });

const record = mapping({
  rate: quantity('frequency', 'Recorded frames per second', { above: 0 }).prefault('20 Hz'),
  channels: z
    .array(channelName('A channel.'))
    .min(1)
    .meta({ description: 'Channels to record; all when absent.' })
    .optional(),
})
  .prefault({})
  .meta({ description: 'What is written to the results.' });

const expected = mapping({
  verdict: z.enum(['holds', 'broken']).meta({ description: 'What the author expects of the limits.' }),
  because: text('Why, where they are expected to break.').optional(),
})
  .superRefine(
    onceDecoded(({ verdict, because }, context) => {
      if (verdict !== 'broken' || because !== undefined) return;
      addFault(context, 'an expected failure needs a reason: add "because"', ['because']);
    }),
  )
  .prefault({ verdict: 'holds' })
  .meta({ description: 'What the author expects.' });

const integrator = z
  .discriminatedUnion('kind', [
    mapping({
      kind: tag('odex', 'odex', 'Extrapolation with error control.'),
      relative_tolerance: number('Relative tolerance', { above: 0, below: 0.1 }).prefault(1e-6),
    }).transform(camelKeys),
    mapping({
      kind: tag('runge_kutta', 'runge-kutta', 'Classical Runge–Kutta of order 4 with fixed steps.'),
      step: quantity('time', 'Step', { above: 0 }),
    }),
  ])
  .prefault({ kind: 'odex' })
  .meta({ description: 'How the plant is integrated.' });

/** Highest site that the barometric formula serves, m, and the coldest and hottest air, K. */
const HIGHEST_SITE = 6000;
const COLDEST_AIR = 213.15;
const HOTTEST_AIR = 333.15;

const air = mapping({
  altitude: quantity('length', 'Of the hub above sea level', { atLeast: -500, atMost: HIGHEST_SITE }),
  temperature: quantity('temperature', 'Of the air there; that of the standard atmosphere when absent', {
    atLeast: COLDEST_AIR,
    atMost: HOTTEST_AIR,
  }).optional(),
})
  .transform(({ altitude, temperature }) => ({ density: airDensity(altitude, temperature) }))
  .meta({ description: "The air at the site; its density takes the place of the turbine file's." })
  .optional();

const bladeElement = mapping({
  sections: count('Strips per blade', 5, 200).prefault(BLADE_ELEMENT_DEFAULTS.sections),
  wake: choice(
    { dynamic: 'dynamic', equilibrium: 'equilibrium' },
    "The wake: Øye's filter of the induced velocity, or in balance with the loads at every instant.",
  ).prefault('dynamic'),
  section_lift: choice(
    { steady: 'steady', lagging: 'lagging' },
    "Lift of a section: that of its polar at once, or with Øye's lag of the separation.",
  ).prefault('steady'),
})
  .prefault({})
  .transform(camelKeys)
  .meta({ description: 'Options of the blade-element rotor; the surface rotor ignores them.' });

const nacelle = mapping({
  yaw_error: quantity(
    'angle',
    'How far the wind comes off the axis at the start, positive from the right, looking downwind',
    {
      atLeast: -Math.PI,
      atMost: Math.PI,
    },
  ).prefault('0 deg'),
  yaw: choice({ held: 'held', follows_wind: 'follows wind' }, 'Whether the yaw drive works.').prefault('held'),
})
  .prefault({})
  .transform(({ yaw, yaw_error }): RotorChoice['nacelle'] => ({
    yawError: yaw_error,
    followsWind: yaw === 'follows wind',
  }))
  .meta({ description: 'How the nacelle stands to the wind.' });

const upflow = quantity('angle', 'How much the wind rises, over sloping ground', {
  above: -Math.PI / 4,
  below: Math.PI / 4,
}).prefault('0 deg');

/** A scenario without the files it refers to. */
export type ScenarioFileData = Pick<
  ScenarioData,
  'title' | 'story' | 'rotor' | 'start' | 'duration' | 'record' | 'expected' | 'seed' | 'integrator'
> & { airDensity?: number; wind: readonly WindPart[]; events: readonly WrittenEvent[]; limits: readonly LimitData[] };

interface Timed {
  duration: number;
  wind: readonly WindPart[];
  events: readonly WrittenEvent[];
  limits: readonly LimitData[];
}

/** What falls outside the run. */
function faultsOfTime({ duration, wind, events, limits }: Timed): { path: (string | number)[]; message: string }[] {
  const late = `after the end of the run (${duration} s)`;
  return [
    ...wind.flatMap(({ lasts = duration }, i) =>
      lasts < duration
        ? [{ path: ['wind', i], message: `this wind ends at ${lasts} s, before the run does (${duration} s)` }]
        : [],
    ),
    ...events.flatMap(({ trigger }, i) =>
      trigger.kind === 'time' && trigger.at > duration
        ? [{ path: ['events', i, 'at'], message: `this event falls ${late}` }]
        : [],
    ),
    ...limits.flatMap(({ from }, i) =>
      from >= duration ? [{ path: ['limits', i, 'from'], message: `this window starts at or ${late}` }] : [],
    ),
  ];
}

/** The schema of a scenario for a machine (`UNKNOWN_MACHINE` where it is not known). */
export function scenarioFile(machine: Machine) {
  return mapping({
    ...preamble('scenario'),
    title: text('One line for tables and pictures.'),
    story: text('What happens and why it matters.').optional(),
    turbine: reference('The turbine'),
    controller: reference('The controller'),
    protection: reference('The protection'),
    air,
    wind,
    upflow,
    nacelle,
    rotor_model: rotorModel,
    blade_element: bladeElement,
    start,
    duration: quantity('time', 'How long the run lasts', { above: 0 }),
    events: z.array(event(machine)).prefault([]).meta({ description: 'What happens to the machine.' }),
    record,
    limits: z.array(limit(machine)).prefault([]).meta({ description: 'What makes the scenario pass or fail.' }),
    expect: expected,
    seed: count('Seed of every random number', 0).prefault(1),
    integrator,
  })
    .superRefine(
      onceDecoded((file, context) => {
        for (const { path, message } of faultsOfTime(file)) addFault(context, message, path);
      }),
    )
    .transform(
      ({ title, story = '', expect, ...file }): ScenarioFileData => ({
        title,
        story,
        airDensity: file.air?.density,
        wind: file.wind,
        rotor: {
          model: file.rotor_model,
          bladeElement: file.blade_element,
          nacelle: file.nacelle,
          upflow: file.upflow,
        },
        start: file.start,
        duration: file.duration,
        events: file.events,
        record: file.record,
        limits: file.limits.map((l) => ({ ...l, to: Math.min(l.to, file.duration) })),
        expected: expect,
        seed: file.seed,
        integrator: file.integrator,
      }),
    )
    .meta({ title: 'galehold scenario', description: 'A turbine, its controls, a wind, and what happens.' });
}
