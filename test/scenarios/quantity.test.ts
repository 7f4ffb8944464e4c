import { describe, expect, it } from 'vitest';
import { formatQuantity, parseAnyQuantity, parseQuantity, type QuantityKind } from '../../scenarios/quantity.ts';

describe('A quantity in a file', () => {
  const cases: [string, QuantityKind, number][] = [
    ['12.0 rpm', 'rotational speed', (12 * 2 * Math.PI) / 60],
    ['8 deg/s', 'pitch rate', (8 * Math.PI) / 180],
    ['3.6 MW', 'power', 3.6e6],
    ['0.25 Hz', 'frequency', 0.25],
    ['36 km/h', 'speed', 10],
    ['34 kN m', 'torque', 34e3],
    ['34 kN*m', 'torque', 34e3],
    ['34 kN·m', 'torque', 34e3],
    ['100 kN m/s', 'torque rate', 1e5],
    ['390 MN m/rad', 'torsional stiffness', 390e6],
    ['1.3 MN m s/rad', 'torsional damping', 1.3e6],
    ['3.2e7 kg m^2', 'inertia', 3.2e7],
    ['3.2e7 kg m²', 'inertia', 3.2e7],
    ['290 t', 'mass', 290e3],
    ['1.8 N*m*s^2/rad^2', 'torque per speed squared', 1.8],
    ['0.11/deg', 'slope per angle', (0.11 * 180) / Math.PI],
    ['0.009 s', 'time', 0.009],
    ['115 kJ/K', 'heat capacity', 115e3],
    ['0.3 kW/K', 'heat loss', 300],
    ['-2 deg', 'angle', -Math.PI / 90],
    ['15 deg/s^2', 'pitch acceleration', Math.PI / 12],
  ];
  it.each(cases)('%s is read as a %s', (text, kind, si) => {
    expect(parseQuantity(text, kind)).toBeCloseTo(si, 12 - Math.ceil(Math.log10(Math.abs(si) + 1)));
  });

  it('has its zero where the thermometer has it', () => {
    expect(parseQuantity('0 degC', 'temperature')).toBeCloseTo(273.15, 10);
    expect(parseQuantity('350 °C', 'temperature')).toBeCloseTo(623.15, 10);
    expect(parseQuantity('300 K', 'temperature')).toBe(300);
    expect(parseQuantity('32 degF', 'temperature')).toBeCloseTo(273.15, 10);
  });

  it('counts no zero in a difference of temperature', () => {
    expect(parseQuantity('20 K', 'temperature difference')).toBe(20);
    expect(parseQuantity('20 degC', 'temperature difference')).toBe(20);
  });

  const wrong: [string, QuantityKind, string][] = [
    ['12', 'speed', '12 needs a unit, for example "12 m/s"'],
    ['12 kg', 'speed', '"12 kg" is a mass; a speed is due, for example "12 m/s"'],
    ['0.2 Hz', 'rotational speed', '"0.2 Hz" is a frequency; a rotational speed is due, for example "12 rpm"'],
    ['2 rad/s', 'frequency', '"2 rad/s" is a rotational speed; a frequency is due, for example "0.25 Hz"'],
    ['34 kJ', 'torque', '"34 kJ" is an energy; a torque is due, for example "34 kN m"'],
    ['34 kN m', 'energy', '"34 kN m" is a torque; an energy is due, for example "3 MJ"'],
    ['12 foo', 'speed', '"12 foo" has the unknown unit "foo"; a speed is due, for example "12 m/s"'],
    ['fast', 'speed', '"fast" is not a number with a unit; a speed is due, for example "12 m/s"'],
    ['NaN m', 'length', '"NaN m" is not a number with a unit; a length is due, for example "65 m"'],
    ['1e999 m', 'length', '"1e999 m" is too large a number'],
    ['5 %', 'length', '"5 %" is a plain number; a length is due, for example "65 m"'],
    ['1 2 m', 'length', '"1 2 m" has the unknown unit "2 m"; a length is due, for example "65 m"'],
  ];
  it.each(wrong)('%s where a %s is due is an error that says what would be right', (text, kind, message) => {
    expect(() => parseQuantity(text, kind)).toThrow(new Error(message));
  });

  it('is shown in the usual unit of its kind', () => {
    expect(formatQuantity(1.2566370614359172, 'rotational speed')).toBe('12 rpm');
    expect(formatQuantity(623.15, 'temperature')).toBe('350 degC');
    expect(formatQuantity(-Math.PI / 90, 'angle')).toBe('-2 deg');
  });

  it('in a module’s settings is known by its unit alone', () => {
    expect(parseAnyQuantity('30 rpm')).toBeCloseTo(Math.PI, 12);
    expect(parseAnyQuantity('2 kN m')).toBe(2000);
    expect(parseAnyQuantity('after integral')).toBeUndefined();
    expect(parseAnyQuantity('3 stages')).toBeUndefined();
  });
});
