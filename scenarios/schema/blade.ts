/** Blades, airfoils and coefficient tables in a turbine file. */
import { z } from 'zod';
import type { AirfoilData, BladeData, CoefficientTables, RotorAerodynamics } from '../../sim/turbine.ts';
import { suggestion } from '../nearest.ts';
import { addFault, camelKeys, count, mapping, number, onceDecoded, quantity, tag, text } from './field.ts';
import { firstNotRising, table } from './table.ts';

const DEGREE = Math.PI / 180;

/** Angles of attack that a working rotor passes through; a measured polar must reach them, rad. */
const WORKING_ANGLES = { from: -10 * DEGREE, to: 20 * DEGREE };

const polar = table(
  { angle: { kind: 'angle' }, lift: { kind: 'number' }, drag: { kind: 'number' } },
  'Lift and drag coefficients against angle of attack, rising; beyond its ends it is carried on to the full circle',
  3,
);

const airfoilTable = mapping({
  kind: tag('table', 'table', 'A measured or computed polar.'),
  name: text('What blade sections call this airfoil.'),
  polar,
  aspect_ratio: number('Length over mean chord of the blade, for the flat-plate extension', { above: 0 }).prefault(15),
})
  .superRefine(
    onceDecoded(({ polar }, context) => {
      const fault = (path: (string | number)[], message: string) => addFault(context, message, ['polar', ...path]);
      const falling = firstNotRising(polar.angle);
      if (falling >= 0) fault(['rows', falling], 'the angle of attack must rise from row to row');
      const first = polar.angle[0] ?? Number.NaN;
      const last = polar.angle.at(-1) ?? Number.NaN;
      const isShort = first > WORKING_ANGLES.from + 1e-9 || last < WORKING_ANGLES.to - 1e-9;
      if (falling < 0 && isShort) {
        const degrees = (angle: number) => Number((angle / DEGREE).toPrecision(4));
        fault([], `the polar covers ${degrees(first)} to ${degrees(last)} deg; it must cover at least -10 to 20 deg`);
      }
      const negative = polar.drag.findIndex((drag) => drag < 0);
      if (negative >= 0) fault(['rows', negative], 'the drag coefficient must not be negative');
    }),
  )
  .transform(({ polar, ...rest }): AirfoilData => ({ ...camelKeys(rest), ...polar }));

const airfoilFormula = mapping({
  kind: tag('formula', 'formula', 'A polar computed from a few figures.'),
  name: text('What blade sections call this airfoil.'),
  thickness: number('Thickness over chord; 1 is a cylinder', { above: 0, atMost: 1 }),
  lift_slope: quantity('slope per angle', 'Lift slope of the attached flow', { atLeast: 0 }),
  zero_lift_angle: quantity('angle', 'Angle of attack without lift', { above: -0.5, below: 0.5 }),
  maximum_lift: number('Largest lift coefficient', { atLeast: 0 }),
  minimum_drag: number('Lowest drag coefficient', { above: 0 }),
  aspect_ratio: number('Length over mean chord of the blade, for the flat-plate extension', { above: 0 }).prefault(15),
}).transform((airfoil): AirfoilData => camelKeys(airfoil));

const airfoils = z
  .array(z.discriminatedUnion('kind', [airfoilFormula, airfoilTable]))
  .min(1)
  .superRefine(
    onceDecoded((list, context) => {
      list.forEach(({ name }, index) => {
        if (list.findIndex((other) => other.name === name) < index) {
          addFault(context, `a second airfoil is called "${name}"`, [index, 'name']);
        }
      });
    }),
  )
  .meta({ description: 'The airfoils that blade sections refer to by name.' });

const optimumLayout = mapping({
  kind: tag('optimum_layout', 'optimum layout', 'Chord and twist by the optimum-rotor rule, limited at the root.'),
  design_tip_speed_ratio: number('Tip speed over wind speed that the blade is laid out for', { above: 1, atMost: 20 }),
  design_angle_of_attack: quantity('angle', 'Angle of attack of every working section', { above: 0, below: 0.35 }),
  chord_limit: quantity('length', 'Largest chord', { above: 0 }),
  twist_limit: quantity('angle', 'Largest twist', { above: 0, below: Math.PI / 2 }),
  root_diameter: quantity('length', 'Diameter of the cylindrical root', { above: 0 }),
  root_end: quantity('length', 'Radius where the cylinder ends', { above: 0 }),
  stations: count('How many stations are laid out', 5, 500),
  sections: z
    .array(
      mapping({
        relative_radius: number('Radius over tip radius', { atLeast: 0, atMost: 1 }),
        airfoil: text('Name of an airfoil.'),
      }).transform(camelKeys),
    )
    .min(1)
    .superRefine(
      onceDecoded((sections, context) => {
        const index = firstNotRising(sections.map((s) => s.relativeRadius));
        if (index < 0) return;
        addFault(context, 'relative radii must rise', [index, 'relative_radius']);
      }),
    )
    .meta({ description: 'Airfoils along the blade; sections between blend.' }),
}).transform((blade): BladeData => camelKeys(blade));

const stations = table(
  { radius: { kind: 'length' }, chord: { kind: 'length' }, twist: { kind: 'angle' }, airfoil: { kind: 'word' } },
  'The blade from root to tip',
  3,
);

const stationBlade = mapping({
  kind: tag('stations', 'stations', 'A blade given station by station.'),
  stations,
})
  .superRefine(
    onceDecoded(({ stations: { radius, chord } }, context) => {
      const fault = (row: number, message: string) => addFault(context, message, ['stations', 'rows', row]);
      radius.forEach((r, row) => {
        const before = radius[row - 1] ?? Number.NEGATIVE_INFINITY;
        if (r === before) fault(row, `a second station stands at radius ${r} m`);
        if (r < before) fault(row, `radii must rise from root to tip, but ${r} m follows ${before} m`);
        if (r < 0) fault(row, `a radius must not be negative, but is ${r} m`);
        if ((chord[row] ?? Number.NaN) <= 0) fault(row, `a chord must be above 0 m, but is ${chord[row]} m`);
      });
    }),
  )
  .transform(
    ({ kind, stations: { radius, chord, twist, airfoil } }): BladeData => ({
      kind,
      stations: radius.map((r, i) => ({
        radius: r,
        chord: chord[i] ?? Number.NaN,
        twist: twist[i] ?? Number.NaN,
        airfoil: airfoil[i] ?? '',
      })),
    }),
  );

/** The names of airfoils that a blade uses, each with where it uses them. */
function airfoilsUsed(blade: BladeData): { name: string; path: (string | number)[] }[] {
  return blade.kind === 'stations'
    ? blade.stations.map(({ airfoil }, i) => ({ name: airfoil, path: ['stations', 'rows', i] }))
    : blade.sections.map(({ airfoil }, i) => ({ name: airfoil, path: ['sections', i, 'airfoil'] }));
}

const blade = mapping({
  kind: tag('blade', 'blade', 'Coefficients are computed from the blade.'),
  blade: z.discriminatedUnion('kind', [optimumLayout, stationBlade]).meta({ description: 'The blade.' }),
  airfoils,
}).superRefine(
  onceDecoded(({ blade, airfoils }, context) => {
    const known = airfoils.map((a) => a.name);
    for (const { name, path } of airfoilsUsed(blade)) {
      if (known.includes(name)) continue;
      addFault(context, `unknown airfoil "${name}"${suggestion(name, known)}`, ['blade', ...path]);
    }
  }),
);

const coefficients = table(
  {
    tip_speed_ratio: { kind: 'number' },
    pitch: { kind: 'angle' },
    thrust: { kind: 'number' },
    torque: { kind: 'number', optional: true },
    power: { kind: 'number', optional: true },
  },
  'One row for every pair of tip-speed ratio and pitch, with the torque coefficient or, above zero tip-speed ratio, ' +
    'the power coefficient',
  4,
);

type CoefficientRows = z.output<typeof coefficients>;

function rising(values: readonly number[]): number[] {
  return [...new Set(values)].toSorted((a, b) => a - b);
}

/** What keeps the rows from filling a grid, each with the row at fault (none: the table as a whole). */
function gridFaults(rows: CoefficientRows): { row?: number; message: string }[] {
  const { tip_speed_ratio: ratio, pitch, torque, power } = rows;
  if ((torque === undefined) === (power === undefined)) {
    return [{ message: 'a column "torque" or a column "power" is due, and not both' }];
  }
  const faults: { row?: number; message: string }[] = [];
  const seen = new Set<string>();
  ratio.forEach((value, row) => {
    const pair = `${value}|${pitch[row]}`;
    if (value < 0) faults.push({ row, message: 'the tip-speed ratio must not be negative' });
    if (value === 0 && power)
      faults.push({ row, message: 'at zero tip-speed ratio the torque coefficient is due, not the power' });
    if (seen.has(pair)) faults.push({ row, message: 'a second row has this tip-speed ratio and pitch' });
    seen.add(pair);
  });
  for (const value of rising(ratio)) {
    for (const angle of rising(pitch)) {
      if (seen.has(`${value}|${angle}`)) continue;
      const degrees = Number((angle / DEGREE).toPrecision(6));
      faults.push({ message: `no row for tip-speed ratio ${value} and pitch ${degrees} deg` });
    }
  }
  if (rising(ratio).length < 2 || rising(pitch).length < 2) {
    faults.push({ message: 'at least two tip-speed ratios and two pitch angles are due' });
  }
  return faults;
}

/** The rows as a grid. C_q = C_p / λ. */
function grid({ tip_speed_ratio: ratio, pitch, thrust, torque, power }: CoefficientRows): CoefficientTables {
  const torqueOf = (row: number) => torque?.[row] ?? (power?.[row] ?? Number.NaN) / (ratio[row] ?? Number.NaN);
  const rowOf = new Map(ratio.map((value, row) => [`${value}|${pitch[row]}`, row]));
  const ratios = rising(ratio);
  const angles = rising(pitch);
  const surface = (valueAt: (row: number) => number) =>
    ratios.map((value) => angles.map((angle) => valueAt(rowOf.get(`${value}|${angle}`) ?? -1)));
  return {
    tipSpeedRatio: ratios,
    pitch: angles,
    torqueCoefficient: surface(torqueOf),
    thrustCoefficient: surface((row) => thrust[row] ?? Number.NaN),
  };
}

const tables = mapping({
  kind: tag('tables', 'tables', 'Coefficients are given.'),
  coefficients,
})
  .superRefine(
    onceDecoded(({ coefficients }, context) => {
      for (const { row, message } of gridFaults(coefficients)) {
        const path = row === undefined ? ['coefficients'] : ['coefficients', 'rows', row];
        addFault(context, message, path);
      }
    }),
  )
  .transform(({ kind, coefficients }) => ({ kind, tables: grid(coefficients) }));

export const aerodynamics: z.ZodType<RotorAerodynamics> = z
  .discriminatedUnion('kind', [blade, tables])
  .meta({ description: 'Where the rotor’s torque and thrust come from.' });
