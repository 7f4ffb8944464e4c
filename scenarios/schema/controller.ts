/** The controller file: control laws or the user's own module, and the supervisor. */
import { z } from 'zod';
import type { Machine } from '../../controllers/contract.ts';
import type { GainScheduleSettings } from '../../controllers/gain-schedule.ts';
import type { SupervisorSettings } from '../../controllers/supervisor.ts';
import { formatQuantity } from '../quantity.ts';
import type { LawSettings } from '../scenario.ts';
import { addFault, camelKeys, choice, mapping, number, onceDecoded, quantity, tag, text } from './field.ts';
import { preamble } from './preamble.ts';
import { firstNotRising } from './table.ts';

const HALF_TURN = { atLeast: -Math.PI, atMost: Math.PI };

const schedule = z
  .discriminatedUnion('kind', [
    mapping({ kind: tag('constant', 'constant', 'The same gain at every pitch.') }),
    mapping({
      kind: tag('reciprocal', 'reciprocal', 'Gain times 1/(1 + pitch/halving pitch).'),
      halving_pitch: quantity('angle', 'Pitch at which the gain is halved', { above: 0 }),
    }).transform(camelKeys),
    mapping({
      kind: tag('quadratic', 'quadratic', 'Gain times 1/(1 + pitch/linear pitch + pitch²/quadratic pitch²).'),
      linear_pitch: quantity('angle', 'Pitch of the linear term', { above: 0 }),
      quadratic_pitch: quantity('angle', 'Pitch of the quadratic term', { above: 0 }),
    }).transform(camelKeys),
    mapping({
      kind: tag('table', 'table', 'Gain times a factor, linear between points and held beyond the ends.'),
      pitch: z
        .array(quantity('angle', 'Pitch', HALF_TURN))
        .min(2)
        .meta({ description: 'Pitch angles, rising.' }),
      factor: z
        .array(number('Factor on the gain', { above: 0 }))
        .min(2)
        .meta({ description: 'One factor a pitch angle.' }),
    }).superRefine(
      onceDecoded(({ pitch, factor }, context) => {
        const index = firstNotRising(pitch);
        if (index >= 0) addFault(context, 'pitch angles must rise', ['pitch', index]);
        if (pitch.length === factor.length) return;
        addFault(context, `${pitch.length} pitch angles but ${factor.length} factors are given`, ['factor']);
      }),
    ),
  ])
  .transform((s): GainScheduleSettings => s)
  .meta({ description: 'How the gain is lowered as the blades turn.' });

const antiWindup = z
  .discriminatedUnion('kind', [
    mapping({ kind: tag('clamping', 'clamping', 'The integral stands still while the demand is at a limit.') }),
    mapping({
      kind: tag('back_calculation', 'back-calculation', 'The integral is led back while the demand is at a limit.'),
      tracking_time: quantity('time', 'Time constant of that', { above: 0 }),
    }).transform(camelKeys),
  ])
  .meta({ description: 'What keeps the integral from running away at a limit.' });

function pitchLaw(machine: Machine) {
  return mapping({
    law: tag('scheduled_pi_pitch', 'scheduled PI pitch', 'PI on generator speed, scheduled on pitch.'),
    proportional: quantity('time', 'Pitch per generator speed error, rad/(rad/s), at zero pitch', { atLeast: 0 }),
    integral: number('Pitch per generator speed error and second, rad/rad, at zero pitch', { atLeast: 0 }),
    schedule,
    scheduled: choice(
      { before_integral: 'before integral', after_integral: 'after integral' },
      'Whether the schedule multiplies the error that is integrated, or the integral.',
    ),
    anti_windup: antiWindup,
    speed_filter: mapping({ frequency: quantity('frequency', 'Corner frequency', { above: 0 }) })
      .meta({ description: 'Low-pass on the measured speed; none when absent.' })
      .optional(),
    minimum: quantity('angle', 'Lowest pitch demand', HALF_TURN),
    maximum: quantity('angle', 'Highest pitch demand', HALF_TURN),
    rate_limit: quantity('pitch rate', 'Fastest change of the demand', { above: 0 }),
  })
    .superRefine(
      onceDecoded((law, context) => {
        const fault = (key: string, message: string) => addFault(context, message, [key]);
        if (law.minimum >= law.maximum) fault('minimum', 'the minimum must be smaller than the maximum');
        if (law.maximum < machine.finePitch)
          fault('maximum', 'the maximum must not lie below the turbine’s fine pitch');
      }),
    )
    .transform((law): LawSettings => camelKeys(law));
}

function torqueLaw(machine: Machine) {
  const rated = machine.ratedGeneratorSpeed;
  const speed = (description: string) =>
    quantity('rotational speed', `Generator speed ${description}`, { above: 0, rated });
  return mapping({
    law: tag('torque_curve', 'torque curve', 'Generator torque from generator speed.'),
    optimal_gain: quantity('torque per speed squared', 'k of torque = k speed², high-speed shaft', { above: 0 }),
    above_rated: choice(
      { constant_power: 'constant power', constant_torque: 'constant torque' },
      'What is kept above rated speed.',
    ),
    cut_in_speed: speed('below which the torque is zero'),
    optimal_from: speed('from which torque = k speed² holds, after a straight line from the cut-in speed'),
    optimal_to: speed('up to which it holds, before a straight line to rated torque at rated speed'),
    handover_pitch: quantity(
      'angle',
      'Pitch above fine pitch at which rated torque or power is kept down to optimal_to',
      {
        above: 0,
      },
    ),
    maximum_torque: quantity('torque', 'Largest torque demand', { above: 0, rated: machine.ratedTorque }),
    rate_limit: quantity('torque rate', 'Fastest change of the demand', { above: 0 }),
  })
    .superRefine(
      onceDecoded((law, context) => {
        const fault = (key: string, message: string) => addFault(context, message, [key]);
        const show = (torque: number) => formatQuantity(torque, 'torque');
        if (law.cut_in_speed >= law.optimal_from) fault('optimal_from', 'optimal_from must lie above cut_in_speed');
        if (law.optimal_from >= law.optimal_to) fault('optimal_to', 'optimal_to must lie above optimal_from');
        if (law.optimal_to >= rated) fault('optimal_to', 'optimal_to must lie below rated generator speed');
        if (law.maximum_torque < machine.ratedTorque) {
          fault('maximum_torque', `the maximum must reach rated torque, ${show(machine.ratedTorque)}`);
        }
        const torque = law.optimal_gain * law.optimal_to ** 2;
        if (torque > machine.ratedTorque) {
          fault(
            'optimal_gain',
            `k speed² reaches ${show(torque)} at optimal_to, more than rated torque, ${show(machine.ratedTorque)}`,
          );
        }
      }),
    )
    .transform((law): LawSettings => camelKeys(law));
}

/** What a pitch-regulated machine needs, each from one law. */
const DUTIES = [
  { law: 'scheduled PI pitch', written: 'scheduled_pi_pitch', sets: 'pitch' },
  { law: 'torque curve', written: 'torque_curve', sets: 'generator torque' },
] as const;

function laws(machine: Machine) {
  return z
    .array(z.discriminatedUnion('law', [pitchLaw(machine), torqueLaw(machine)]))
    .superRefine(
      onceDecoded((list, context) => {
        for (const { law, written, sets } of DUTIES) {
          const [first, second] = list.flatMap((l, index) => (l.law === law ? [index] : []));
          if (first === undefined) addFault(context, `no law sets the ${sets}; add "law: ${written}"`);
          if (second !== undefined) {
            addFault(context, `a second law sets the ${sets}`, [second, 'law']);
          }
        }
      }),
    )
    .meta({ description: 'The control laws: one for the pitch, one for the generator torque.' });
}

function supervisor(machine: Machine) {
  return mapping({
    sample_time: quantity('time', 'How often it looks', { above: 0 }),
    start_up: mapping({
      pitch: quantity('angle', 'Pitch at which the rotor is run up', HALF_TURN),
      pitch_rate: quantity('pitch rate', 'How fast the blades turn there', { above: 0 }),
      connect_speed: quantity('rotational speed', 'Rotor speed at which the generator takes over', {
        above: 0,
        rated: machine.ratedRotorSpeed,
      }),
      setpoint_rate: quantity('rotational acceleration', 'How fast the rotor-speed set-point then rises to rated', {
        above: 0,
      }),
    })
      .transform(camelKeys)
      .meta({ description: 'How the rotor is run up.' }),
    high_wind: mapping({
      above: quantity('speed', 'Averaged nacelle wind at which a normal stop starts', { above: 0 }),
      averaging: quantity('time', 'Averaging time', { above: 0 }),
    }).meta({ description: 'When the wind is too high.' }),
  })
    .transform((s): Omit<SupervisorSettings, 'normalStop'> => camelKeys(s))
    .meta({ description: 'Moves the machine between its states. Its normal stop is the protection’s stop "normal".' });
}

export type ControllerFileData = {
  name: string;
  supervisor: Omit<SupervisorSettings, 'normalStop'>;
} & (
  | { kind: 'laws'; sampleTime: number; laws: readonly LawSettings[] }
  /** The module's path as written; `settings` as written, still with units. */
  | { kind: 'module'; module: string; settings: unknown }
);

/** The schema of a controller for a machine (`UNKNOWN_MACHINE` where it is not known). */
export function controllerFile(machine: Machine) {
  return mapping({
    ...preamble('controller'),
    name: text('What reports call it.'),
    sample_time: quantity('time', 'How often the laws act; a module states its own', { above: 0 }).optional(),
    laws: laws(machine).optional(),
    module: text(
      'The user’s own control law: path of an ES module whose default export makes the controller.',
    ).optional(),
    settings: z
      .record(z.string(), z.unknown())
      .meta({ description: 'What the module’s factory is called with; quantities with a unit arrive there in SI.' })
      .optional(),
    supervisor: supervisor(machine),
  })
    .transform((file, context): ControllerFileData => {
      const { name, supervisor } = file;
      const fault = (key: string, message: string) => {
        addFault(context, message, [key]);
        return z.NEVER;
      };
      if (file.module !== undefined) {
        if (file.laws) return fault('module', 'laws or a module is due, not both');
        if (file.sample_time !== undefined) return fault('sample_time', 'a module states its own sample time');
        return { kind: 'module', name, supervisor, module: file.module, settings: file.settings ?? {} };
      }
      if (file.settings) return fault('settings', 'settings belong to a module, and there is none');
      if (!file.laws) return fault('laws', 'laws, or a module, are due');
      if (file.sample_time === undefined) return fault('sample_time', 'laws need a sample_time, for example "10 ms"');
      return { kind: 'laws', name, supervisor, sampleTime: file.sample_time, laws: file.laws };
    })
    .meta({ title: 'galehold controller', description: 'How the machine is controlled.' });
}
