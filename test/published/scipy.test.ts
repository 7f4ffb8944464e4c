/** Check 11: poles, zeros, responses, discretisation, Lyapunov and Riccati equations against SciPy (scipy-values.py). */
import { readFileSync } from 'node:fs';
import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import type { Complex } from '../../tuning/complex.ts';
import { delayedStep, heldStep } from '../../tuning/discretisation.ts';
import { continuousLyapunov, discreteLyapunov } from '../../tuning/lyapunov.ts';
import { matrixExponential } from '../../tuning/matrix-exponential.ts';
import { continuousRiccati, discreteRiccati } from '../../tuning/riccati.ts';
import { responseAt } from '../../tuning/state-space.ts';
import { eigenvalues, transmissionZeros } from '../../tuning/transmission-zeros.ts';

interface Case {
  a: number[][];
  b: number[][];
  c: number[][];
  d: number;
  wide: number[][];
  q: number[][];
  r: number[][];
  sample: number;
  frequencies: number[];
  poles: number[][];
  zeros: number[][];
  exponential: number[][];
  heldTransition: number[][];
  heldInput: number[][];
  response: number[][];
  sampledResponse: number[][];
  continuousLyapunov: number[][];
  discreteLyapunov: number[][];
  continuousRiccati: number[][];
  discreteRiccati: number[][];
}

const { cases, stiff }: { cases: Case[]; stiff: { a: number[][]; exponential: number[][] } } = JSON.parse(
  readFileSync(new URL('scipy-values.json', import.meta.url), 'utf8'),
);

/** Largest difference, relative to the largest entry. */
function distance(found: Matrix, expected: number[][]): number {
  const due = new Matrix(expected);
  const largest = Math.max(...due.to1DArray().map(Math.abs));
  return Math.max(...Matrix.sub(found, due).to1DArray().map(Math.abs)) / largest;
}

/** Distance of each expected point to the nearest found one, at most; infinite where the counts differ. */
function farthest(found: readonly Complex[], expected: number[][]): number {
  if (found.length !== expected.length) return Number.POSITIVE_INFINITY;
  return Math.max(
    0,
    ...expected.map(([re, im]) => Math.min(...found.map((z) => Math.hypot(z.re - re, z.im - im))) / Math.hypot(re, im)),
  );
}

describe.each(cases.map((values) => ({ order: values.a.length, values })))('a system of order $order', ({ values }) => {
  const a = new Matrix(values.a);
  const b = new Matrix(values.b);
  const c = new Matrix(values.c);
  const d = new Matrix([[values.d]]);
  const wide = new Matrix(values.wide);
  const q = new Matrix(values.q);
  const r = new Matrix(values.r);
  const held = heldStep(a, b, values.sample);

  it('has SciPy’s poles and zeros', () => {
    expect(farthest(eigenvalues(a), values.poles)).toBeLessThan(1e-9);
    expect(farthest(transmissionZeros(a, b, c, values.d), values.zeros)).toBeLessThan(1e-7);
  });

  it('has SciPy’s exponential and its sampled form', () => {
    expect(distance(matrixExponential(a), values.exponential)).toBeLessThan(1e-13);
    expect(distance(held.transition, values.heldTransition)).toBeLessThan(1e-13);
    expect(distance(held.input, values.heldInput)).toBeLessThan(1e-13);
  });

  it('answers sines as in SciPy, in continuous time and sampled', () => {
    const sampled = { a: held.transition, b: held.input, c, d };
    values.frequencies.forEach((frequency, i) => {
      const [[continuous]] = responseAt({ a, b, c, d }, { re: 0, im: frequency });
      const angle = frequency * values.sample;
      const [[discrete]] = responseAt(sampled, { re: Math.cos(angle), im: Math.sin(angle) });
      expect(continuous.re).toBeCloseTo(values.response[i][0], 9);
      expect(continuous.im).toBeCloseTo(values.response[i][1], 9);
      expect(discrete.re).toBeCloseTo(values.sampledResponse[i][0], 9);
      expect(discrete.im).toBeCloseTo(values.sampledResponse[i][1], 9);
    });
  });

  it('has SciPy’s covariances', () => {
    expect(distance(continuousLyapunov(a, q), values.continuousLyapunov)).toBeLessThan(1e-10);
    expect(distance(discreteLyapunov(held.transition, q), values.discreteLyapunov)).toBeLessThan(1e-10);
  });

  it('has SciPy’s solutions of the Riccati equations', () => {
    expect(distance(continuousRiccati(a, wide, q, r), values.continuousRiccati)).toBeLessThan(1e-9);
    expect(distance(discreteRiccati(held.transition, wide, q, r), values.discreteRiccati)).toBeLessThan(1e-9);
  });

  it('adds up two parts of a sample to the whole when its input comes late', () => {
    const late = delayedStep(a, b, values.sample, 2.3 * values.sample);
    expect(late.samples).toBe(2);
    expect(distance(Matrix.add(late.fresh, late.stale), values.heldInput)).toBeLessThan(1e-12);
    expect(distance(late.fresh, heldStep(a, b, 0.7 * values.sample).input.to2DArray())).toBeLessThan(1e-12);
  });
});

describe('a stiff matrix', () => {
  it('has SciPy’s exponential', () => {
    expect(distance(matrixExponential(new Matrix(stiff.a)), stiff.exponential)).toBeLessThan(1e-10);
  });
});

describe('equations without a solution', () => {
  it('are refused in words', () => {
    const growing = new Matrix([[1.1]]);
    const one = new Matrix([[1]]);
    expect(() => discreteLyapunov(growing, one)).toThrow('does not settle');
    expect(() => discreteRiccati(growing, new Matrix([[0]]), one, one)).toThrow('no stabilising solution');
    expect(() => matrixExponential(new Matrix([[Number.NaN]]))).toThrow('not a finite number');
  });
});
