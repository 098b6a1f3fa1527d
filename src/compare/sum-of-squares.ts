/** Sums of squares that neither overflow nor vanish: cgs numbers reach 1e200 and 1e-200 when squared. */
import { CompensatedSum } from './compensated-sum.ts';

/** Outside of these, squares of doubles lose digits or overflow. */
const TINY = 1e-140;
const HUGE = 1e140;
const SCALE = 2 ** 600;

/**
 * Adds blocks of squares, each scaled by a power of two chosen from the block's largest magnitude.
 * @source J. L. Blue, ACM Transactions on Mathematical Software 4 (1978) 15
 */
export class SumOfSquares {
  private readonly small = new CompensatedSum();
  private readonly middle = new CompensatedSum();
  private readonly large = new CompensatedSum();

  /**
   * @param squares  the block's plain sum of squares
   * @param largest  an upper bound of the magnitudes in the block
   * @param again    forms the block's sum of (scale * x)^2, for when the plain one is out of range
   */
  add(squares: number, largest: number, again: (scale: number) => number): void {
    if (largest > HUGE) this.large.add(again(1 / SCALE));
    else if (largest < TINY && largest > 0) this.small.add(again(SCALE));
    else this.middle.add(squares);
  }

  /** The root of the sum. */
  get root(): number {
    // The largest class that holds anything decides; what is 2^600 times smaller cannot change a digit of it.
    const large = Math.sqrt(this.large.value) * SCALE;
    const middle = Math.sqrt(this.middle.value);
    const small = Math.sqrt(this.small.value) / SCALE;
    return Math.hypot(large, middle, small);
  }
}
