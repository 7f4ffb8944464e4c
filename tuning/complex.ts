/** Complex numbers, for frequency responses. */
export interface Complex {
  re: number;
  im: number;
}

export const ONE: Complex = { re: 1, im: 0 };

export function sum(a: Complex, b: Complex): Complex {
  return { re: a.re + b.re, im: a.im + b.im };
}

export function product(a: Complex, b: Complex): Complex {
  return { re: a.re * b.re - a.im * b.im, im: a.re * b.im + a.im * b.re };
}

export function quotient(a: Complex, b: Complex): Complex {
  const square = b.re * b.re + b.im * b.im;
  return { re: (a.re * b.re + a.im * b.im) / square, im: (a.im * b.re - a.re * b.im) / square };
}

export function scaled(a: Complex, factor: number): Complex {
  return { re: factor * a.re, im: factor * a.im };
}

export function modulus(a: Complex): number {
  return Math.hypot(a.re, a.im);
}

/** e^a */
export function exponential(a: Complex): Complex {
  const size = Math.exp(a.re);
  return { re: size * Math.cos(a.im), im: size * Math.sin(a.im) };
}

/** The branch with an imaginary part in (−π, π]. */
export function logarithm(a: Complex): Complex {
  return { re: Math.log(modulus(a)), im: Math.atan2(a.im, a.re) };
}

/** a^n for a whole n. */
export function power(a: Complex, n: number): Complex {
  const size = modulus(a) ** n;
  const angle = n * Math.atan2(a.im, a.re);
  return { re: size * Math.cos(angle), im: size * Math.sin(angle) };
}
