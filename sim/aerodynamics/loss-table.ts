/**
 * Prandtl's factor 2/π · acos(e^(−s²)) as a table over s, smooth from s = 0 on: the same as `momentum.ts` computes, for
 * the loop that needs it some hundred thousand times a second. Within 1e-8.
 */
const STEPS_PER_UNIT = 64;
const END = 4.75;
const COUNT = Math.round(END * STEPS_PER_UNIT);

/** Value and change per step at each knot. */
const knots = new Float64Array(2 * (COUNT + 1));
for (let i = 0; i <= COUNT; i++) {
  const s = i / STEPS_PER_UNIT;
  const e = Math.exp(-s * s);
  knots[2 * i] = (2 / Math.PI) * Math.acos(e);
  const slope = s === 0 ? (2 / Math.PI) * Math.SQRT2 : ((2 / Math.PI) * 2 * s * e) / Math.sqrt(1 - e * e);
  knots[2 * i + 1] = slope / STEPS_PER_UNIT;
}

/** Prandtl's factor where its exponent is s². */
export function lossAt(s: number): number {
  const position = s * STEPS_PER_UNIT;
  if (!(position < COUNT)) return 1;
  const i = Math.floor(position);
  const t = position - i;
  const u = 1 - t;
  const at = 2 * i;
  return (
    u * u * ((1 + 2 * t) * knots[at] + t * knots[at + 1]) + t * t * ((1 + 2 * u) * knots[at + 2] - u * knots[at + 3])
  );
}
