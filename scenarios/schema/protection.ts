/** The protection file: the safety chain's guards and the stop sequences they start. */
import { z } from 'zod';
import type { Machine } from '../../controllers/contract.ts';
import type { GuardSettings, ProtectionSettings } from '../../controllers/protection.ts';
import type { StopSequence, StopStep } from '../../controllers/stop-sequence.ts';
import { suggestion } from '../nearest.ts';
import { formatQuantity } from '../quantity.ts';
import { addFault, camelKeys, choice, mapping, onceDecoded, quantity, tag, text } from './field.ts';
import { preamble } from './preamble.ts';

/** Blades as files count them, from 1; decoded to counting from 0. */
export function blades(machine: Machine, description: string) {
  return z
    .array(
      z.int().superRefine(
        onceDecoded((blade, context) => {
          if (blade >= 1 && !(blade > machine.bladeCount)) return;
          addFault(context, `there is no blade ${blade}; blades are counted 1 to ${machine.bladeCount}`);
        }),
      ),
    )
    .min(1)
    .transform((list) => list.map((blade) => blade - 1))
    .meta({ description: `${description} (numbers, counted from 1)` });
}

function stopStep(machine: Machine) {
  const isWithinHalfTurn = { above: -Math.PI, below: Math.PI };
  const feather = mapping({
    do: tag('feather', 'feather', 'Turn blades.'),
    rate: quantity('pitch rate', 'How fast', { above: 0 }),
    to: quantity('angle', 'Target; the feathered position when absent', isWithinHalfTurn).optional(),
    blades: blades(machine, 'Which blades; all when absent').optional(),
  }).transform(
    (s): StopStep => ({
      kind: s.do,
      rate: s.rate,
      to: s.to ?? machine.featherPitch,
      ...(s.blades && { blades: s.blades }),
    }),
  );

  const torqueOff = mapping({
    do: tag('torque_off', 'torque off', 'Take the generator torque to zero.'),
    over: quantity('time', 'How long that takes', { atLeast: 0 }),
  }).transform((s): StopStep => ({ kind: s.do, over: s.over }));

  const wait = mapping({
    do: tag('wait', 'wait', 'Hold the next step up until every condition given holds.'),
    for_time: quantity('time', 'Time to wait', { atLeast: 0 }).optional(),
    rotor_speed_below: quantity('rotational speed', 'Until the rotor is slower than this', {
      above: 0,
      rated: machine.ratedRotorSpeed,
    }).optional(),
    pitch_above: quantity('angle', 'Until every blade has passed this angle', isWithinHalfTurn).optional(),
    at_most: quantity('time', 'Go on after this time, whatever the conditions', { above: 0 }).optional(),
  })
    .superRefine(
      onceDecoded((s, context) => {
        if (s.for_time !== undefined || s.rotor_speed_below !== undefined || s.pitch_above !== undefined) return;
        addFault(context, 'a condition is due: for_time, rotor_speed_below or pitch_above');
      }),
    )
    .transform((s): StopStep => {
      const { do: kind, ...conditions } = s;
      return { kind, ...camelKeys(conditions) };
    });

  const applyBrake = mapping({ do: tag('apply_brake', 'apply brake', 'Apply the shaft brake.') });
  const releaseBrake = mapping({ do: tag('release_brake', 'release brake', 'Release the shaft brake.') });
  const park = mapping({ do: tag('park', 'park', 'The stop is complete: the machine counts as parked.') });

  return z.discriminatedUnion('do', [
    feather,
    torqueOff,
    wait,
    applyBrake.transform((): StopStep => ({ kind: 'brake', apply: true })),
    releaseBrake.transform((): StopStep => ({ kind: 'brake', apply: false })),
    park.transform((): StopStep => ({ kind: 'park' })),
  ]);
}

function stops(machine: Machine) {
  return z
    .record(z.string(), z.array(stopStep(machine)).min(1))
    .superRefine(
      onceDecoded((sequences, context) => {
        if ('normal' in sequences) return;
        addFault(context, 'a stop called "normal" is due; the supervisor uses it');
      }),
    )
    .meta({
      description:
        'Stop sequences by name: orders in turn, where only "wait" holds the next one up. One must be called "normal".',
    });
}

/** What every guard has besides its watch. */
const guardKeys = {
  name: text('What reports call it; the watch itself when absent.').optional(),
  hold: quantity('time', 'How long the condition must last', { atLeast: 0 }).prefault('0 s'),
  reset: choice(
    { manual: 'manual', automatic: 'automatic' },
    'manual: latched to the end of the run; automatic: released when the machine is parked and the condition has gone.',
  ).prefault('manual'),
  stop: text('Name of the stop sequence that it starts.'),
};

/** A trip level must leave the rated speed room. */
function aboveRated(rated: number) {
  return (level: number, context: z.RefinementCtx<number>) => {
    if (!(level <= rated)) return;
    const message = `the trip level ${formatQuantity(level, 'rotational speed')} must lie above rated speed, ${formatQuantity(rated, 'rotational speed')}`;
    addFault(context, message);
  };
}

function guards(machine: Machine) {
  const { ratedRotorSpeed, ratedGeneratorSpeed } = machine;
  const speed = (description: string, rated: number) =>
    quantity('rotational speed', description, { above: 0, rated }).superRefine(onceDecoded(aboveRated(rated)));
  const guard = z.discriminatedUnion('watch', [
    mapping({
      watch: tag('rotor_overspeed', 'rotor overspeed', 'Rotor speed by the protection’s own sensor.'),
      above: speed('Trip level of the rotor speed', ratedRotorSpeed),
      ...guardKeys,
    }),
    mapping({
      watch: tag('generator_overspeed', 'generator overspeed', 'Generator speed.'),
      above: speed('Trip level of the generator speed', ratedGeneratorSpeed),
      ...guardKeys,
    }),
    mapping({
      watch: tag('pitch_deviation', 'pitch deviation', 'Largest difference between a blade’s demanded and true angle.'),
      above: quantity('angle', 'Trip level of the difference', { above: 0, below: Math.PI }),
      ...guardKeys,
    }),
    mapping({ watch: tag('grid_loss', 'grid loss', 'The grid is gone.'), ...guardKeys }),
    mapping({ watch: tag('manual_button', 'manual button', 'The stop button is pressed.'), ...guardKeys }),
  ]);
  return z
    .array(guard.transform((g): GuardSettings => ({ ...g, name: g.name ?? g.watch })))
    .superRefine(
      onceDecoded((list, context) => {
        list.forEach(({ name }, index) => {
          if (list.findIndex((other) => other.name === name) === index) return;
          addFault(context, `a second guard is called "${name}"; give one of them another name`, [index]);
        });
      }),
    )
    .meta({ description: 'The guards in order of precedence.' });
}

export interface ProtectionData {
  name: string;
  settings: ProtectionSettings;
  /** The stop that the supervisor uses. */
  normalStop: StopSequence;
}

/** The schema of a protection for a machine (`UNKNOWN_MACHINE` where it is not known). */
export function protectionFile(machine: Machine) {
  return mapping({
    ...preamble('protection'),
    name: text('What reports call it.'),
    sample_time: quantity('time', 'How often the chain looks at its signals', { above: 0 }),
    guards: guards(machine),
    stops: stops(machine),
  })
    .superRefine(
      onceDecoded(({ guards, stops }, context) => {
        const known = Object.keys(stops);
        guards.forEach(({ stop }, index) => {
          if (known.includes(stop)) return;
          addFault(context, `unknown stop "${stop}"${suggestion(stop, known)}`, ['guards', index, 'stop']);
        });
      }),
    )
    .transform(
      ({ name, sample_time: sampleTime, guards, stops }): ProtectionData => ({
        name,
        settings: { sampleTime, guards, stops },
        normalStop: stops.normal ?? [],
      }),
    )
    .meta({ title: 'galehold protection', description: 'The safety chain: guards, and the stops that they start.' });
}
