/** The turbine file. */
import { z } from 'zod';
import type { BladeStructureData, DrivetrainData, Turbine } from '../../sim/turbine.ts';
import { machineOf } from '../machine.ts';
import { formatQuantity } from '../quantity.ts';
import { aerodynamics } from './blade.ts';
import {
  addFault,
  camelKeys,
  choice,
  count,
  fraction,
  mapping,
  number,
  onceDecoded,
  quantity,
  tag,
  text,
} from './field.ts';
import { preamble } from './preamble.ts';
import { firstNotRising, table } from './table.ts';

const positive = { above: 0 };
const notNegative = { atLeast: 0 };
const EFFICIENCY = { above: 0, atMost: 1 };

const ratings = mapping({
  power: quantity('power', 'Rated electrical power', positive),
  rotor_speed: quantity('rotational speed', 'Rated rotor speed', positive),
  never_exceed_speed: quantity('rotational speed', 'Rotor speed that must never be exceeded', positive),
  minimum_speed: quantity('rotational speed', 'Lowest rotor speed in power production', positive),
  cut_in_wind: quantity('speed', 'Wind at which power production starts', positive),
  cut_out_wind: quantity('speed', 'Wind at which power production ends', positive),
  fine_pitch: quantity('angle', 'Lowest pitch in power production', { above: -Math.PI / 2, below: Math.PI / 2 }),
})
  .superRefine(
    onceDecoded((r, context) => {
      const fault = (key: string, message: string) => addFault(context, message, [key]);
      if (r.minimum_speed >= r.rotor_speed) fault('minimum_speed', 'the minimum speed must lie below the rated speed');
      if (r.never_exceed_speed <= r.rotor_speed) {
        fault('never_exceed_speed', 'the never-exceed speed must lie above the rated speed');
      }
      if (r.cut_in_wind >= r.cut_out_wind) fault('cut_in_wind', 'the cut-in wind must lie below the cut-out wind');
    }),
  )
  .transform(camelKeys)
  .meta({ description: 'What the machine is built for.' });

/** The word that chooses the rotor, in a turbine or a scenario file. */
export const rotorModel = choice(
  { surface: 'surface', blade_element: 'blade element' },
  'How the rotor is computed: as a whole from its coefficient surface, or every section of every blade in time.',
).optional();

const structure = mapping({
  mass: table(
    { radius: { kind: 'length' }, mass: { kind: 'mass per length' } },
    'Mass per metre of a blade against radius from the rotor axis, linear between rows',
    2,
  ),
  flap: mapping({
    frequency: quantity('frequency', 'First flap frequency at standstill', positive),
    damping_ratio: fraction('Structural damping of that mode, fraction of critical', { atLeast: 0, below: 1 }),
    shape: z
      .array(z.number())
      .min(1)
      .max(8)
      .meta({ description: 'Mode shape: factors of s^2, s^3, ... of the relative span s; their sum counts as 1.' }),
  })
    .transform(camelKeys)
    .meta({ description: 'First mode out of the rotor plane.' }),
})
  .superRefine(
    onceDecoded(({ mass, flap }, context) => {
      const row = firstNotRising(mass.radius);
      if (row >= 0) addFault(context, 'radii must rise from row to row', ['mass', 'rows', row]);
      const weightless = mass.mass.findIndex((m) => !(m > 0));
      if (weightless >= 0) addFault(context, 'a mass must be above zero', ['mass', 'rows', weightless]);
      const sum = flap.shape.reduce((a, b) => a + b, 0);
      if (!(sum > 0)) addFault(context, 'the factors of the shape must add up to more than zero', ['flap', 'shape']);
    }),
  )
  .transform(({ mass, flap }): BladeStructureData => ({ radius: mass.radius, massPerLength: mass.mass, flap }))
  .meta({ description: 'Mass of a blade and its first flap mode; without it blades are rigid and weigh nothing.' });

/** Tilts and cones beyond this are slips of the pen. */
const STEEPEST = Math.PI / 6;

const rotor = mapping({
  blade_count: count('Number of blades', 1, 3),
  radius: quantity('length', 'Tip radius from the rotor axis', positive),
  hub_radius: quantity('length', 'Radius at which the blades start', positive),
  hub_height: quantity('length', 'Height of the rotor axis above ground', positive),
  tilt: quantity('angle', 'Of the rotor axis, nose up', { atLeast: 0, below: STEEPEST }).optional(),
  cone: quantity('angle', 'Of the blades, leaning upwind', { above: -STEEPEST, below: STEEPEST }).optional(),
  overhang: quantity('length', 'From the tower axis to the hub', notNegative).optional(),
  structure: structure.optional(),
  aerodynamics,
})
  .superRefine(
    onceDecoded((r, context) => {
      const fault = (path: (string | number)[], message: string) => addFault(context, message, path);
      const metres = (value: number) => formatQuantity(value, 'length');
      if (r.hub_radius >= r.radius) {
        fault(['hub_radius'], 'the hub radius must be smaller than the tip radius');
        return;
      }
      if (r.radius >= r.hub_height)
        fault(['hub_height'], 'the blades would reach the ground: the hub is not higher than the tip radius');
      if (r.aerodynamics.kind !== 'blade') return;
      const { blade } = r.aerodynamics;
      const at = ['aerodynamics', 'blade'];
      if (blade.kind === 'optimum layout') {
        if (blade.rootEnd < r.hub_radius || blade.rootEnd >= r.radius) {
          fault(
            [...at, 'root_end'],
            `the root must end between the hub radius ${metres(r.hub_radius)} and the tip radius ${metres(r.radius)}`,
          );
        }
        return;
      }
      blade.stations.forEach(({ radius }, row) => {
        if (radius >= r.hub_radius - 1e-9 && radius <= r.radius + 1e-9) return;
        const message = `the station at ${metres(radius)} lies outside the blade, ${metres(r.hub_radius)} to ${metres(r.radius)}`;
        fault([...at, 'stations', 'rows', row], message);
      });
    }),
  )
  .transform(camelKeys)
  .meta({ description: 'Size and aerodynamics of the rotor.' });

const shafts = {
  rotor_inertia: quantity('inertia', 'Blades, hub and main shaft', positive),
  generator_inertia: quantity('inertia', 'Generator and high-speed shaft, on the high-speed side', positive),
  gear_ratio: number('Generator speed over rotor speed', positive),
  gear_efficiency: fraction('Mechanical efficiency of the gearbox', EFFICIENCY),
  constant_loss: quantity('torque', 'Constant part of bearing and windage loss, low-speed shaft', notNegative),
  viscous_loss: quantity(
    'torsional damping',
    'Part of the loss that grows with rotor speed, low-speed shaft',
    notNegative,
  ),
};
const stiffness = quantity('torsional stiffness', 'Torsional stiffness referred to the low-speed shaft', positive);
const damping = quantity('torsional damping', 'Torsional damping referred to the low-speed shaft', notNegative);

const drivetrain = z
  .discriminatedUnion('kind', [
    mapping({
      kind: tag('two_masses', 'two masses', 'Rotor and generator joined by a flexible shaft.'),
      ...shafts,
      stiffness,
      damping,
    }).transform((d): DrivetrainData => camelKeys(d)),
    mapping({
      kind: tag('rigid', 'rigid', 'Rotor and generator turn as one; stiffness and damping are ignored.'),
      ...shafts,
      stiffness: stiffness.optional(),
      damping: damping.optional(),
    }).transform((d): DrivetrainData => ({ ...camelKeys(d), stiffness: d.stiffness ?? 0, damping: d.damping ?? 0 })),
  ])
  .meta({ description: 'Shafts, gearbox and losses.' });

const tower = mapping({
  modal_mass: quantity('mass', 'Generalised mass of the first fore-aft mode at the tower top', positive),
  frequency: quantity('frequency', 'Frequency of that mode', positive),
  damping_ratio: fraction('Damping of that mode, fraction of critical', { atLeast: 0, below: 1 }),
  side_side: mapping({
    modal_mass: quantity('mass', 'Generalised mass of the first side-side mode at the tower top', positive),
    frequency: quantity('frequency', 'Frequency of that mode', positive),
    damping_ratio: fraction('Damping of that mode, fraction of critical', { atLeast: 0, below: 1 }),
  })
    .transform(camelKeys)
    .meta({ description: 'First side-side mode; without it the tower does not move sideways.' })
    .optional(),
  top_diameter: quantity(
    'length',
    'Outer diameter at the top; without it the tower throws no shadow',
    positive,
  ).optional(),
  base_diameter: quantity('length', 'Outer diameter at the base; that of the top when absent', positive).optional(),
})
  .transform(camelKeys)
  .meta({ description: 'First modes of the tower, and its shape.' });

const yawDrive = mapping({
  rate: quantity('pitch rate', 'Rate at which it turns the nacelle', positive),
  dead_band: quantity('angle', 'Off the filtered wind direction by more than this it starts', {
    above: 0,
    below: Math.PI,
  }),
  vane_time_constant: quantity('time', 'Time constant of that filter', positive),
})
  .transform(camelKeys)
  .meta({ description: 'The drive that turns the nacelle into the wind; without one the nacelle keeps its heading.' })
  .optional();

const pitchDrive = mapping({
  natural_frequency: quantity('frequency', 'Natural frequency from demand to angle', positive),
  damping_ratio: fraction('Damping from demand to angle, fraction of critical', { above: 0, atMost: 5 }),
  delay: quantity('time', 'Transport delay from demand to drive', notNegative),
  rate_limit: quantity('pitch rate', 'Fastest rate on grid supply', positive),
  acceleration_limit: quantity('pitch acceleration', 'Largest acceleration', positive),
  minimum: quantity('angle', 'Lower end of travel', { atLeast: -Math.PI }),
  maximum: quantity('angle', 'Upper end of travel', { atMost: Math.PI }),
  feather: quantity('angle', 'Feathered position'),
  backup: table(
    { travel: { kind: 'angle' }, rate: { kind: 'pitch rate' } },
    'What turns the blades without the grid: rate against the travel already spent, linear between rows',
    1,
  ),
})
  .superRefine(
    onceDecoded((p, context) => {
      const fault = (path: (string | number)[], message: string) => addFault(context, message, path);
      if (p.minimum >= p.maximum) fault(['minimum'], 'the minimum must be smaller than the maximum');
      else if (p.feather < p.minimum || p.feather > p.maximum) {
        fault(['feather'], 'the feathered position must lie between minimum and maximum');
      }
      const { travel, rate } = p.backup;
      const row = firstNotRising(travel);
      if (row >= 0) fault(['backup', 'rows', row], 'travel must rise from row to row');
      if ((travel[0] ?? 0) !== 0) fault(['backup', 'rows', 0], 'the first row must be for zero travel');
      const negative = rate.findIndex((r) => r < 0);
      if (negative >= 0) fault(['backup', 'rows', negative], 'a rate must not be negative');
    }),
  )
  .transform(camelKeys)
  .meta({ description: 'The drives that turn the blades about their own axes, one a blade.' });

const generator = mapping({
  efficiency: fraction('Electrical over mechanical power', EFFICIENCY),
  time_constant: quantity('time', 'First-order lag of the torque', positive),
  maximum_torque: quantity('torque', 'Largest torque, high-speed shaft', positive),
  torque_rate_limit: quantity('torque rate', 'Fastest change of torque', positive),
  grid_loss_time_constant: quantity('time', 'Time constant with which torque vanishes when the grid is lost', positive),
})
  .transform(camelKeys)
  .meta({ description: 'Generator and converter.' });

const brake = mapping({
  side: choice(
    { low_speed_shaft: 'low-speed shaft', high_speed_shaft: 'high-speed shaft' },
    'The shaft that the brake sits on.',
  ),
  torque: quantity('torque', 'Full torque on its own shaft', positive),
  delay: quantity('time', 'From order to first torque', notNegative),
  ramp: quantity('time', 'From first to full torque', notNegative),
  heat_capacity: quantity('heat capacity', 'Heat capacity of the disc', positive),
  cooling: quantity('heat loss', 'Loss to the surroundings', notNegative),
  ambient: quantity('temperature', 'Surroundings, and disc at the start', positive),
  fade_start: quantity('temperature', 'Disc temperature up to which torque is full', positive),
  fade_end: quantity('temperature', 'Disc temperature at which torque has fallen to its floor', positive),
  fade_floor: fraction('Torque left at that temperature', { above: 0, atMost: 1 }),
})
  .superRefine(
    onceDecoded((b, context) => {
      const fault = (key: string, message: string) => addFault(context, message, [key]);
      if (b.fade_end <= b.fade_start) fault('fade_end', 'the fade must end at a higher temperature than it starts at');
      if (b.ambient >= b.fade_start) fault('ambient', 'the surroundings must be cooler than the start of the fade');
    }),
  )
  .transform(camelKeys)
  .meta({ description: 'The shaft brake.' });

const speedSensor = (description: string) =>
  mapping({
    time_constant: quantity('time', 'Low-pass time constant, "0 s" for none', notNegative),
    resolution: quantity('rotational speed', 'Smallest step it reports, "0 rpm" for none', notNegative),
    noise: quantity('rotational speed', 'Standard deviation of its noise', notNegative),
    range: quantity('rotational speed', 'Largest speed it reports', positive),
  })
    .transform(camelKeys)
    .meta({ description });

const sensors = mapping({
  control_speed: speedSensor('Encoder on the generator shaft, read by the control law.'),
  protection_speed: speedSensor('Pulse wheel on the rotor shaft, read by the protection.'),
  wind_time_constant: quantity('time', 'Time constant of the nacelle anemometer', positive),
})
  .transform(camelKeys)
  .meta({ description: 'What the controls see.' });

/** Checks that span the parts of the file: where the fault stands, and what it is. */
function faultsBetweenParts(turbine: Turbine): { path: string[]; message: string }[] {
  const { ratings, pitchDrive, generator, sensors, drivetrain } = turbine;
  const faults: { path: string[]; message: string }[] = [];
  if (ratings.finePitch < pitchDrive.minimum || ratings.finePitch >= pitchDrive.feather) {
    faults.push({
      path: ['ratings', 'fine_pitch'],
      message: 'the fine pitch must lie between the lower end of travel and the feathered position',
    });
  }
  const { ratedTorque } = machineOf(turbine);
  if (generator.maximumTorque < ratedTorque) {
    const needed = formatQuantity(ratedTorque, 'torque');
    faults.push({
      path: ['generator', 'maximum_torque'],
      message: `rated power at rated speed takes ${needed}, more than this maximum`,
    });
  }
  const ranges = [
    { key: 'protection_speed', range: sensors.protectionSpeed.range, highest: ratings.neverExceedSpeed },
    { key: 'control_speed', range: sensors.controlSpeed.range, highest: ratings.rotorSpeed * drivetrain.gearRatio },
  ];
  for (const { key, range, highest } of ranges) {
    if (range > highest) continue;
    const speed = formatQuantity(highest, 'rotational speed');
    faults.push({ path: ['sensors', key, 'range'], message: `the sensor must reach beyond ${speed}` });
  }
  return faults;
}

export const turbineFile = mapping({
  ...preamble('turbine'),
  name: text('What reports call the machine.'),
  rotor_model: rotorModel,
  ratings,
  air_density: quantity('density', 'Density of the air', positive),
  rotor,
  drivetrain,
  tower,
  yaw_drive: yawDrive,
  pitch_drive: pitchDrive,
  generator,
  brake,
  sensors,
})
  .transform(({ galehold: _tag, extends: _base, ...parts }): Turbine => camelKeys(parts))
  .superRefine(
    onceDecoded((turbine, context) => {
      for (const { path, message } of faultsBetweenParts(turbine)) addFault(context, message, path);
    }),
  )
  .meta({ title: 'galehold turbine', description: 'A wind turbine as galehold simulates it.' });
