/** What a scenario does to the machine, and when. */
import { z } from 'zod';
import type { Machine } from '../../controllers/contract.ts';
import { channelIndex } from '../../sim/channels.ts';
import type { Action, Trigger } from '../../sim/scripted-event.ts';
import type { WindMark } from '../../sim/wind/wind.ts';
import { addFault, choice, mapping, quantity, tag } from './field.ts';
import { channelName, decodeLevel, level } from './limit.ts';
import { blades } from './protection.ts';

/** A trigger as a file gives it: a gust's instant is known once the wind is. */
export type WrittenTrigger = Trigger | { kind: 'gust'; mark: WindMark['kind'] };

export interface WrittenEvent {
  trigger: WrittenTrigger;
  action: Action;
}

const gustCondition = mapping({
  gust: choice(
    { start: 'gust start', peak: 'gust peak', end: 'gust end' },
    'An instant of the first gust in the wind.',
  ),
}).transform(({ gust: mark }): WrittenTrigger => ({ kind: 'gust', mark }));

function channelCondition(machine: Machine) {
  return mapping({
    channel: channelName('The channel to watch.'),
    above: level('Act the first time that it rises past this').optional(),
    below: level('Act the first time that it falls past this').optional(),
  }).transform(({ channel, above, below }, context): WrittenTrigger => {
    if ((above === undefined) === (below === undefined)) {
      addFault(context, 'a level is due: either above or below');
      return z.NEVER;
    }
    const direction = above === undefined ? 'below' : 'above';
    try {
      const si = decodeLevel(above ?? below ?? Number.NaN, channel, machine);
      return { kind: 'crossing', channel: channelIndex(channel), direction, level: si };
    } catch (error) {
      addFault(context, error instanceof Error ? error.message : String(error), [direction]);
      return z.NEVER;
    }
  });
}

export function event(machine: Machine) {
  const timing = {
    at: quantity('time', 'The instant', { atLeast: 0 }).optional(),
    when: z
      .union([channelCondition(machine), gustCondition], {
        error: ({ input }) =>
          input === undefined
            ? undefined
            : 'a condition is due: a channel with above or below, or gust: start, peak or end',
      })
      .meta({ description: 'The condition, in place of an instant.' })
      .optional(),
  };
  const action = <const Written extends string, const Meant extends string>(
    written: Written,
    meant: Meant,
    what: string,
  ) => mapping({ do: tag(written, meant, what), ...timing });

  return z
    .discriminatedUnion('do', [
      action('grid_loss', 'grid loss', 'The grid is lost.'),
      action('grid_return', 'grid return', 'The grid comes back.'),
      action('manual_stop', 'manual stop', 'The stop button is pressed.'),
      action('normal_stop', 'normal stop', 'The operator asks for a normal stop.'),
      action('start', 'start', 'The operator asks for a start.'),
      action('brake_absent', 'brake absent', 'The brake is out of action from then on.'),
      mapping({
        do: tag('pitch_stuck', 'pitch stuck', 'Pitch drives stick where they are.'),
        ...timing,
        blades: blades(machine, 'Which blades; all when absent').optional(),
      }),
      mapping({
        do: tag('speed_sensor_frozen', 'speed sensor frozen', 'A speed sensor keeps its last reading.'),
        ...timing,
        sensor: choice({ control: 'control', protection: 'protection' }, 'Which sensor.'),
      }),
    ])
    .transform((given, context): WrittenEvent => {
      const { at, when } = given;
      if ((at === undefined) === (when === undefined)) {
        addFault(context, 'a time is due: either "at" or "when"');
        return z.NEVER;
      }
      const trigger: WrittenTrigger = when ?? { kind: 'time', at: at ?? Number.NaN };
      switch (given.do) {
        case 'pitch stuck': {
          const every = Array.from({ length: machine.bladeCount || 0 }, (_, blade) => blade);
          return { trigger, action: { kind: given.do, blades: given.blades ?? every } };
        }
        case 'speed sensor frozen':
          return { trigger, action: { kind: given.do, sensor: given.sensor } };
        default:
          return { trigger, action: { kind: given.do } };
      }
    });
}
