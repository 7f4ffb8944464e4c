/** Where each part keeps its numbers in a flat array, with a name for every slot. */
export class Layout {
  readonly names: string[] = [];

  /** Reserves one slot per name for `part` and returns the index of the first. */
  place(part: string, names: readonly string[]): number {
    const at = this.names.length;
    for (const name of names) this.names.push(`${part}: ${name}`);
    return at;
  }

  get size(): number {
    return this.names.length;
  }
}

/** `name 1`, `name 2`, … for each blade. */
export function perBlade(name: string, bladeCount: number): string[] {
  return Array.from({ length: bladeCount }, (_, b) => `${name} ${b + 1}`);
}
