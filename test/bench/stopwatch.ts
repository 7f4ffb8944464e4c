/** Median seconds of `runs` calls after one that is not counted. */
export function seconds(work: () => void, runs = 5): number {
  const times: number[] = [];
  for (let i = 0; i <= runs; i++) {
    const start = performance.now();
    work();
    if (i > 0) times.push((performance.now() - start) / 1000);
  }
  return times.toSorted((a, b) => a - b)[Math.floor(times.length / 2)];
}
