/**
 * Random numbers without a generator's state: the value depends on seed and index only, so a run can be forked,
 * resumed or replayed at any sample and draws the same numbers.
 */

/** A well-mixed 32-bit integer from two (the finaliser of MurmurHash3, public domain, applied to each in turn). */
function mix(seed: number, index: number): number {
  let h = Math.imul(seed ^ 0x9e3779b9, 0x85ebca6b);
  h = scramble(h ^ Math.imul(index, 0xc2b2ae35));
  return scramble(h + 0x6d2b79f5);
}

function scramble(value: number): number {
  let h = value;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}

/** Uniform in (0, 1). */
export function uniform(seed: number, index: number): number {
  return ((mix(seed, index) >>> 0) + 0.5) / 4294967296;
}

/** Standard normal, by Box and Muller (1958). */
export function gaussian(seed: number, index: number): number {
  const radius = Math.sqrt(-2 * Math.log(uniform(seed, 2 * index)));
  return radius * Math.cos(2 * Math.PI * uniform(seed, 2 * index + 1));
}
