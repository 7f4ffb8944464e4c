/**
 * First-order low-pass ω_c/(s + ω_c) by Tustin's rule, prewarped so that the corner stays at its frequency.
 *
 * Two numbers of memory from `at`: last input and last output.
 * @param frequency corner, Hz
 * @param sampleTime s
 */
export function lowPass(frequency: number, sampleTime: number) {
  const warped = Math.tan(Math.PI * frequency * sampleTime);
  const gain = warped / (1 + warped);
  const pole = (1 - warped) / (1 + warped);
  return {
    start(value: number, memory: Float64Array, at: number): void {
      memory[at] = value;
      memory[at + 1] = value;
    },
    step(input: number, memory: Float64Array, at: number): number {
      const output = pole * memory[at + 1] + gain * (input + memory[at]);
      memory[at] = input;
      memory[at + 1] = output;
      return output;
    },
  };
}
