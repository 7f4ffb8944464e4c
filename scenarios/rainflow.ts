/**
 * Rainflow counting after ASTM E1049-85, §5.4.4, one value at a time. It remembers the reversals that no cycle has
 * closed yet; those span ever smaller ranges, so few are kept however long the history is.
 */
export class Rainflow {
  private readonly count: (range: number, cycles: number) => void;
  private reversals = new Float64Array(64);
  private kept = 0;
  private started = false;
  private last = 0;
  private direction = 0;

  /** @param count is told the range (unit of the values) and cycles (½ or 1) of each piece as it is counted. */
  constructor(count: (range: number, cycles: number) => void) {
    this.count = count;
  }

  /** Takes the next value of the history. */
  add(value: number): void {
    if (!this.started) {
      this.started = true;
      this.last = value;
      return;
    }
    const direction = Math.sign(value - this.last);
    if (direction === 0) return;
    // The first move makes the first value a reversal too: the standard's starting point.
    if (direction !== this.direction) this.turn(this.last);
    this.direction = direction;
    this.last = value;
  }

  /** Ends the history: its last value is a reversal, and each range not counted yet is half a cycle. */
  finish(): void {
    if (this.direction !== 0) this.turn(this.last);
    for (let i = 1; i < this.kept; i++) this.count(Math.abs(this.reversals[i] - this.reversals[i - 1]), 0.5);
    this.kept = 0;
  }

  /** Takes a peak or valley and counts the ranges that it closes. */
  private turn(value: number): void {
    if (this.kept === this.reversals.length) {
      const longer = new Float64Array(2 * this.kept);
      longer.set(this.reversals);
      this.reversals = longer;
    }
    const reversals = this.reversals;
    reversals[this.kept++] = value;
    while (this.kept >= 3) {
      const top = this.kept - 1;
      const latest = Math.abs(reversals[top] - reversals[top - 1]);
      const previous = Math.abs(reversals[top - 1] - reversals[top - 2]);
      if (latest < previous) return;
      if (this.kept === 3) {
        // The previous range holds the starting point: half a cycle, and the start moves on.
        this.count(previous, 0.5);
        reversals[0] = reversals[1];
        reversals[1] = reversals[2];
        this.kept = 2;
      } else {
        this.count(previous, 1);
        reversals[top - 2] = value;
        this.kept = top - 1;
      }
    }
  }
}
