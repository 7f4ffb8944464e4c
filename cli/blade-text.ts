import type { VelocityTriangle } from '../sim/aerodynamics/velocity-triangles.ts';
import type { BladeView } from './blade-view.ts';

const DEGREE = Math.PI / 180;
const RPM = Math.PI / 30;

interface Column {
  head: string;
  unit: string;
  cell(station: VelocityTriangle, view: BladeView): string;
}

/** A number, or a dash where there is none. */
function fixed(value: number | undefined, digits: number): string {
  return value === undefined || !Number.isFinite(value) ? '-' : value.toFixed(digits);
}

const degrees = (angle: number | undefined): string => fixed(angle === undefined ? undefined : angle / DEGREE, 1);

const COLUMNS: readonly Column[] = [
  { head: 'radius', unit: 'm', cell: (s) => fixed(s.radius, 1) },
  { head: 'r/R', unit: '%', cell: (s, { blade }) => fixed((100 * s.radius) / blade.radius, 0) },
  { head: 'chord', unit: 'm', cell: (s) => fixed(s.chord, 2) },
  { head: 'twist', unit: 'deg', cell: (s) => degrees(s.twist) },
  { head: 'inflow', unit: 'deg', cell: (s) => degrees(s.inflowAngle) },
  { head: 'attack', unit: 'deg', cell: (s) => degrees(s.angleOfAttack) },
  { head: 'to +stall', unit: 'deg', cell: (s) => degrees(s.stall && s.stall.positive - s.angleOfAttack) },
  { head: 'to -stall', unit: 'deg', cell: (s) => degrees(s.stall && s.angleOfAttack - s.stall.negative) },
  { head: 'v_n', unit: 'm/s', cell: (s) => fixed(s.normalSpeed, 2) },
  { head: 'v_t', unit: 'm/s', cell: (s) => fixed(s.tangentialSpeed, 2) },
  { head: 'W', unit: 'm/s', cell: (s) => fixed(s.relativeSpeed, 2) },
  { head: 'a', unit: '', cell: (s) => fixed(s.axialInduction, 3) },
  { head: "a'", unit: '', cell: (s) => fixed(s.swirlInduction, 3) },
  { head: 'C_l', unit: '', cell: (s) => fixed(s.lift, 2) },
  { head: 'C_d', unit: '', cell: (s) => fixed(s.drag, 4) },
  { head: 'normal', unit: 'N/m', cell: (s) => fixed(s.normalForce, 0) },
  { head: 'tangential', unit: 'N/m', cell: (s) => fixed(s.tangentialForce, 0) },
];

const NOTES = [
  'inflow: angle of the relative wind to the rotor plane; attack = inflow - twist - pitch.',
  'to +stall, to -stall: distance to the angles of largest and most negative lift; negative when past them.',
  'v_n, v_t: speeds of the air normal to and in the rotor plane, induced speeds included; W: both together.',
  "a, a': axial induced speed over the wind, tangential induced speed over the section's own.",
  'normal, tangential: force per metre of one blade, downwind and in the direction of turning.',
];

/** The operating point in one line. */
export function pointText({ point, blade }: BladeView): string {
  const tipSpeedRatio = (point.rotorSpeed * blade.radius) / point.windSpeed;
  return (
    `wind ${fixed(point.windSpeed, 2)} m/s, rotor speed ${fixed(point.rotorSpeed / RPM, 2)} rpm, ` +
    `pitch ${fixed(point.pitch / DEGREE, 2)} deg, tip-speed ratio ${fixed(tipSpeedRatio, 2)}`
  );
}

/** The rotor's totals in one line. */
export function totalsText({ totals }: BladeView): string {
  return (
    `thrust ${fixed(totals.thrust / 1e3, 0)} kN, torque ${fixed(totals.torque / 1e3, 0)} kN m, ` +
    `power ${fixed(totals.power / 1e3, 0)} kW, C_p ${fixed(totals.powerCoefficient, 3)}, ` +
    `C_t ${fixed(totals.thrustCoefficient, 3)}`
  );
}

/** The blade at its operating point as a text table. */
export function bladeText(view: BladeView): string {
  const columns = COLUMNS.map(({ head, unit, cell }) => [head, unit, ...view.stations.map((s) => cell(s, view))]);
  const widths = columns.map((column) => Math.max(...column.map((cell) => cell.length)));
  const rows = columns[0].map((_, row) => columns.map((column, i) => column[row].padStart(widths[i])).join('  '));
  return [
    view.turbine.name,
    `${pointText(view)} (${view.origin})`,
    `rotor: ${totalsText(view)}`,
    '',
    ...rows,
    '',
    ...NOTES,
  ].join('\n');
}
