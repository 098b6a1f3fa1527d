/** A sum whose rounding error does not grow with its length. */

/** Neumaier's compensated summation: numbers added in order, the rounding error of every step kept and added at the end. */
export class CompensatedSum {
  private sum = 0;
  private lost = 0;

  add(value: number): void {
    const next = this.sum + value;
    // An infinite sum has no rounding error to keep; Infinity - Infinity would make a NaN of it.
    if (Number.isFinite(next)) {
      this.lost += Math.abs(this.sum) >= Math.abs(value) ? this.sum - next + value : value - next + this.sum;
    }
    this.sum = next;
  }

  /** @source A. Neumaier, Zeitschrift fuer Angewandte Mathematik und Mechanik 54 (1974) 39 */
  get value(): number {
    return Number.isFinite(this.sum) ? this.sum + this.lost : this.sum;
  }
}

export function compensatedSum(values: Iterable<number>): number {
  const sum = new CompensatedSum();
  for (const value of values) sum.add(value);
  return sum.value;
}
