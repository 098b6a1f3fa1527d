/** Sums of squares that neither overflow nor vanish: cgs numbers reach 1e200 and 1e-200 when squared. */
import { CompensatedSum } from './compensated-sum.ts';

/** Outside of these, squares of doubles lose digits or overflow. */
const TINY = 1e-140;
const HUGE = 1e140;
const SCALE = 2 ** 600;

/** The power of two that numbers of up to this magnitude are multiplied by before they are squared; 1 for nearly all. */
export function scaleOf(largest: number): number {
  if (largest > HUGE) return 1 / SCALE;
  return largest < TINY && largest > 0 ? SCALE : 1;
}

/**
 * Adds sums of (scale * x)^2, those of one scale apart from those of another.
 * @source J. L. Blue, ACM Transactions on Mathematical Software 4 (1978) 15
 */
export class SumOfSquares {
  private readonly small = new CompensatedSum();
  private readonly middle = new CompensatedSum();
  private readonly large = new CompensatedSum();

  add(squares: number, scale: number): void {
    if (scale === 1) this.middle.add(squares);
    else if (scale < 1) this.large.add(squares);
    else this.small.add(squares);
  }

  /** The root of the sum of x^2. */
  get root(): number {
    const large = Math.sqrt(this.large.value) * SCALE;
    const middle = Math.sqrt(this.middle.value);
    const small = Math.sqrt(this.small.value) / SCALE;
    return Math.hypot(large, middle, small);
  }
}
