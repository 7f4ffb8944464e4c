/** The units that a reader may choose between, and numbers as text. */

/** Shown value = recorded value × factor + offset. */
interface Conversion {
  unit: string;
  factor: number;
  offset: number;
}

interface UnitChoice {
  label: string;
  /** By recorded unit; a unit that is not named stays as recorded. */
  conversions: Readonly<Record<string, Conversion>>;
}

export interface UnitGroup {
  label: string;
  /** The recorded units that the group is about. */
  recorded: readonly string[];
  /** The first leaves everything as recorded. */
  choices: readonly UnitChoice[];
}

const RADIANS = Math.PI / 180;

function to(unit: string, factor: number, offset = 0): Conversion {
  return { unit, factor, offset };
}

export const UNIT_GROUPS: readonly UnitGroup[] = [
  {
    label: 'Rotation',
    recorded: ['rpm'],
    choices: [
      { label: 'rpm', conversions: {} },
      { label: 'rad/s', conversions: { rpm: to('rad/s', Math.PI / 30) } },
      { label: 'Hz', conversions: { rpm: to('Hz', 1 / 60) } },
    ],
  },
  {
    label: 'Angles',
    recorded: ['deg', 'deg/s'],
    choices: [
      { label: 'degrees', conversions: {} },
      { label: 'radians', conversions: { deg: to('rad', RADIANS), 'deg/s': to('rad/s', RADIANS) } },
    ],
  },
  {
    label: 'Wind',
    recorded: ['m/s'],
    choices: [
      { label: 'm/s', conversions: {} },
      { label: 'km/h', conversions: { 'm/s': to('km/h', 3.6) } },
      { label: 'knots', conversions: { 'm/s': to('kn', 3600 / 1852) } },
    ],
  },
  {
    label: 'Torque',
    recorded: ['kN m'],
    choices: [
      { label: 'kN m', conversions: {} },
      { label: 'MN m', conversions: { 'kN m': to('MN m', 1e-3) } },
    ],
  },
  {
    label: 'Power',
    recorded: ['kW'],
    choices: [
      { label: 'kW', conversions: {} },
      { label: 'MW', conversions: { kW: to('MW', 1e-3) } },
    ],
  },
  {
    label: 'Temperature',
    recorded: ['°C'],
    choices: [
      { label: '°C', conversions: {} },
      { label: 'K', conversions: { '°C': to('K', 1, 273.15) } },
      { label: '°F', conversions: { '°C': to('°F', 1.8, 32) } },
    ],
  },
  {
    label: 'Deflection',
    recorded: ['m'],
    choices: [
      { label: 'm', conversions: {} },
      { label: 'mm', conversions: { m: to('mm', 1e3) } },
    ],
  },
];

/** The choice made in each group, as indices into its choices. */
export class DisplayUnits {
  readonly #chosen = new Map<UnitGroup, number>();

  choose(group: UnitGroup, choice: number): void {
    this.#chosen.set(group, choice);
  }

  /** The shown unit of a recorded one. */
  unit(recorded: string): string {
    return this.#conversion(recorded)?.unit ?? recorded;
  }

  value(value: number, recorded: string): number {
    const conversion = this.#conversion(recorded);
    return conversion ? value * conversion.factor + conversion.offset : value;
  }

  /** A distance between two values: no offset. */
  difference(value: number, recorded: string): number {
    return value * (this.#conversion(recorded)?.factor ?? 1);
  }

  /** A value with its unit, e.g. "13.62 rpm". */
  text(value: number, recorded: string): string {
    return withUnit(numberText(this.value(value, recorded)), this.unit(recorded));
  }

  differenceText(value: number, recorded: string): string {
    return withUnit(numberText(this.difference(value, recorded)), this.unit(recorded));
  }

  #conversion(recorded: string): Conversion | undefined {
    const group = UNIT_GROUPS.find((candidate) => candidate.recorded.includes(recorded));
    return group?.choices[this.#chosen.get(group) ?? 0]?.conversions[recorded];
  }
}

/** Four significant digits, whole numbers above a thousand, powers of ten below 0.0001, a true minus; a dash where there is no number. */
export function numberText(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '–';
  const size = Math.abs(value);
  if (size > 0 && size < 1e-4) return value.toExponential(2).replaceAll('-', '−');
  const decimals = size >= 1000 || size === 0 ? 0 : Math.min(6, 3 - Math.floor(Math.log10(size)));
  const text = value
    .toFixed(Math.max(0, decimals))
    .replace(/(\.\d*?)0+$/, '$1')
    .replace(/\.$/, '');
  return text.replace(/^-0$/, '0').replace(/^-/, '−');
}

/** A value with the decimals that four digits of `largest` have: what is small beside it reads as nought. */
export function numberTextBeside(value: number, largest: number): string {
  if (!Number.isFinite(value)) return '–';
  if (!(largest > 0)) return numberText(value);
  const decimals = Math.min(6, Math.max(0, 3 - Math.floor(Math.log10(largest))));
  return value
    .toFixed(decimals)
    .replace(/^-(?=0\.?0*$)/, '')
    .replace(/^-/, '−');
}

function withUnit(text: string, unit: string): string {
  return unit === '1' || unit === '' ? text : `${text}\u00a0${unit}`;
}
