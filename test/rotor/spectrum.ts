/** Amplitude of the part of evenly sampled `values` that swings `turns` times over the whole series. */
export function amplitudeAt(values: readonly number[], turns: number): number {
  let [re, im] = [0, 0];
  for (const [i, value] of values.entries()) {
    const angle = (2 * Math.PI * turns * i) / values.length;
    re += value * Math.cos(angle);
    im -= value * Math.sin(angle);
  }
  return (2 * Math.hypot(re, im)) / values.length;
}
