/** Quantities at the edge: texts such as "12.0 rpm" become SI numbers, and back. */
import Qty from 'js-quantities';

interface Kind {
  readonly article: 'a' | 'an';
  /** What to write in a file. */
  readonly example: string;
  /** SI, in the spelling of js-quantities. */
  readonly si: string;
  /** What messages show. */
  readonly shown: string;
  /** Tells kinds of equal dimension apart by the unit's own words: 1 N m is no energy, 1 J no torque. */
  readonly spelling?: RegExp;
}

const JOULE_OR_WATT = /J|W/;
const NEWTON = /N/;

const KINDS = {
  length: { article: 'a', example: '65 m', si: 'm', shown: 'm' },
  speed: { article: 'a', example: '12 m/s', si: 'm/s', shown: 'm/s' },
  acceleration: { article: 'an', example: '0.5 m/s^2', si: 'm/s^2', shown: 'm/s^2' },
  time: { article: 'a', example: '10 s', si: 's', shown: 's' },
  frequency: { article: 'a', example: '0.25 Hz', si: 'Hz', shown: 'Hz' },
  angle: { article: 'an', example: '5 deg', si: 'rad', shown: 'deg' },
  'rotational speed': { article: 'a', example: '12 rpm', si: 'rad/s', shown: 'rpm' },
  'pitch rate': { article: 'a', example: '8 deg/s', si: 'rad/s', shown: 'deg/s' },
  'rotational acceleration': { article: 'a', example: '0.2 rpm/s', si: 'rad/s^2', shown: 'rpm/s' },
  'pitch acceleration': { article: 'a', example: '15 deg/s^2', si: 'rad/s^2', shown: 'deg/s^2' },
  mass: { article: 'a', example: '290 t', si: 'kg', shown: 'kg' },
  'mass per length': { article: 'a', example: '300 kg/m', si: 'kg/m', shown: 'kg/m' },
  density: { article: 'a', example: '1.225 kg/m^3', si: 'kg/m^3', shown: 'kg/m^3' },
  inertia: { article: 'an', example: '3.2e7 kg m^2', si: 'kg*m^2', shown: 'kg m^2' },
  force: { article: 'a', example: '500 kN', si: 'N', shown: 'kN' },
  torque: { article: 'a', example: '34 kN m', si: 'N*m', shown: 'kN m', spelling: NEWTON },
  energy: { article: 'an', example: '3 MJ', si: 'J', shown: 'kJ', spelling: JOULE_OR_WATT },
  power: { article: 'a', example: '3.6 MW', si: 'W', shown: 'kW', spelling: JOULE_OR_WATT },
  'torque rate': { article: 'a', example: '100 kN m/s', si: 'N*m/s', shown: 'kN m/s', spelling: NEWTON },
  'torsional stiffness': { article: 'a', example: '390 MN m/rad', si: 'N*m/rad', shown: 'MN m/rad' },
  'torsional damping': { article: 'a', example: '1.3 MN m s/rad', si: 'N*m*s/rad', shown: 'kN m s/rad' },
  'torque per speed squared': {
    article: 'a',
    example: '1.6 N m s^2/rad^2',
    si: 'N*m*s^2/rad^2',
    shown: 'N m s^2/rad^2',
  },
  'slope per angle': { article: 'a', example: '6.2 1/rad', si: '1/rad', shown: '1/rad' },
  temperature: { article: 'a', example: '15 degC', si: 'tempK', shown: 'degC' },
  'temperature difference': { article: 'a', example: '200 K', si: 'degK', shown: 'K' },
  'heat capacity': { article: 'a', example: '115 kJ/K', si: 'J/degK', shown: 'kJ/K' },
  'heat loss': { article: 'a', example: '0.3 kW/K', si: 'W/degK', shown: 'kW/K' },
} as const satisfies Record<string, Kind>;

/** What a number can measure, in plain words. */
export type QuantityKind = keyof typeof KINDS;

/** How files write a quantity: a number, then a unit. */
export const QUANTITY_PATTERN = '^\\s*[+-]?(\\d+\\.?\\d*|\\.\\d+)([eE][+-]?\\d+)?\\s*\\S.*$';

const NUMBER_THEN_UNIT = /^\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*?)\s*$/;

/** Spellings that js-quantities does not know. A `K` alone is a difference; `readingOf` lifts it to a reading. */
const SPELLINGS: readonly (readonly [RegExp, string])[] = [
  [/·/g, '*'],
  [/²/g, '^2'],
  [/³/g, '^3'],
  [/°C\b/g, 'degC'],
  [/°/g, 'deg'],
  [/\bK\b/g, 'degK'],
  [/^\//, '1/'],
];

export function exampleOf(kind: QuantityKind): string {
  return KINDS[kind].example;
}

/** "a speed", "an angle". */
export function withArticle(kind: QuantityKind): string {
  return `${KINDS[kind].article} ${kind}`;
}

function due(kind: QuantityKind): string {
  return `${withArticle(kind)} is due, for example "${KINDS[kind].example}"`;
}

/** "12 needs a unit, for example "12 m/s"". */
export function needsUnit(bare: string, kind: QuantityKind): string {
  const unit = KINDS[kind].example.replace(/^\S+ /, '');
  return `${bare} needs a unit, for example "${bare} ${unit}"`;
}

/** Readings of a thermometer have an offset that differences of temperature do not. */
function readingOf(unit: string): string {
  return unit.replace(/^deg([KCF])$/, 'temp$1');
}

function isThermometer(kind: QuantityKind): boolean {
  return kind === 'temperature';
}

function parseUnit(unit: string, kind: QuantityKind): Qty | undefined {
  const spelled = SPELLINGS.reduce((text, [from, to]) => text.replace(from, to), unit);
  if (/^\d/.test(spelled) && !spelled.startsWith('1/')) return undefined;
  try {
    return Qty(1, isThermometer(kind) ? readingOf(spelled) : spelled);
  } catch {
    return undefined;
  }
}

function fits(quantity: Qty, unit: string, kind: Kind): boolean {
  return quantity.isCompatible(Qty(1, kind.si)) && (kind.spelling?.test(unit) ?? true);
}

function kindInWords(quantity: Qty, unit: string): string {
  const known = quantity.kind();
  if (known === 'unitless') return 'a plain number';
  for (const [name, kind] of Object.entries<Kind>(KINDS)) {
    if (fits(quantity, unit, kind)) return `${kind.article} ${name}`;
  }
  return known ? `a measure of ${known.replaceAll('_', ' ')}` : 'a measure of something else';
}

interface KnownUnit {
  readonly quantity: Qty;
  readonly fits: boolean;
  /** Size in SI; unused for readings of temperature. */
  readonly factor: number;
}

const knownUnits = new Map<string, KnownUnit | undefined>();

function knownUnit(unit: string, kind: QuantityKind): KnownUnit | undefined {
  const key = `${kind}|${unit}`;
  if (!knownUnits.has(key)) {
    const quantity = parseUnit(unit, kind);
    knownUnits.set(
      key,
      quantity && { quantity, fits: fits(quantity, unit, KINDS[kind]), factor: quantity.toBase().scalar },
    );
  }
  return knownUnits.get(key);
}

/**
 * Reads a number with a unit.
 * @param text for example "12.0 rpm", "34 kN m" or "350 degC"
 * @param kind what it must measure
 * @returns the SI value (angles in rad, temperatures in K, frequencies in Hz)
 * @throws Error whose message says what is wrong and what would be right
 */
export function parseQuantity(text: string, kind: QuantityKind): number {
  const parts = NUMBER_THEN_UNIT.exec(text);
  if (!parts) throw new Error(`"${text}" is not a number with a unit; ${due(kind)}`);
  const [, digits = '', unit = ''] = parts;
  if (unit === '') throw new Error(needsUnit(digits, kind));
  const known = knownUnit(unit, kind);
  if (!known) throw new Error(`"${text}" has the unknown unit "${unit}"; ${due(kind)}`);
  if (!known.fits) throw new Error(`"${text}" is ${kindInWords(known.quantity, unit)}; ${due(kind)}`);
  const value = isThermometer(kind)
    ? Qty(Number(digits), known.quantity.units()).to('tempK').scalar
    : Number(digits) * known.factor;
  if (!Number.isFinite(value)) throw new Error(`"${text}" is too large a number`);
  return value;
}

/**
 * Reads a text as whatever quantity its unit says it is.
 * @returns the SI value, or undefined where the text is no quantity
 */
export function parseAnyQuantity(text: string): number | undefined {
  const unit = NUMBER_THEN_UNIT.exec(text)?.[2];
  if (!unit) return undefined;
  for (const kind of Object.keys(KINDS) as QuantityKind[]) {
    if (knownUnit(unit, kind)?.fits) return parseQuantity(text, kind);
  }
  return undefined;
}

/** The SI value as messages show it: six significant digits and the kind's usual unit. */
export function formatQuantity(value: number, kind: QuantityKind): string {
  const { shown } = KINDS[kind];
  const offset = isThermometer(kind) ? parseQuantity(`0 ${shown}`, kind) : 0;
  const size = parseQuantity(`1 ${shown}`, kind) - offset;
  return `${Number(((value - offset) / size).toPrecision(6))} ${shown}`;
}
