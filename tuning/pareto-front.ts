/** A trade: what is to be small, all finite. */
export interface Trade {
  objectives: readonly number[];
}

/** Whether `a` is nowhere worse than `b` and somewhere better. */
export function dominates(a: Trade, b: Trade): boolean {
  let better = false;
  for (let i = 0; i < a.objectives.length; i++) {
    if (a.objectives[i] > b.objectives[i]) return false;
    better = better || a.objectives[i] < b.objectives[i];
  }
  return better;
}

/** The trades that no other dominates, by the first objective; of equal ones the first. */
export function paretoFront<T extends Trade>(trades: readonly T[]): T[] {
  const equal = (a: Trade, b: Trade) => a.objectives.every((value, i) => value === b.objectives[i]);
  return trades
    .filter((trade, i) => !trades.some((other, j) => dominates(other, trade) || (j < i && equal(other, trade))))
    .toSorted((a, b) => a.objectives[0] - b.objectives[0]);
}
