/** Gathers a repeatable option's values. */
export function collectSets(value: string, earlier: string[]): string[] {
  return [...earlier, value];
}
