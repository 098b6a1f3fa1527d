/** Measures of two arrays of any length, block by block: numbers come in piece by piece, the measures go out at the end. */
import type { Measures, WorstElement } from '../model/deviation.ts';
import { CompensatedSum } from './compensated-sum.ts';
import { BLOCK, freshTotals, type MeasureKernel, type Weighing } from './measure-block.ts';
import { SumOfSquares } from './sum-of-squares.ts';

/** Measures with what classes are decided from. */
export interface Measured {
  readonly measures: Measures;
  /** Largest |result - reference| / (absolute + relative * |reference|); Infinity across NaN. */
  readonly worstRatio: number;
  /** Elements beyond absolute + relative * |reference|. */
  readonly beyond: number;
  /** Elements with a NaN on either side, or an infinity that the other side has not. */
  readonly unlike: number;
  /** Exact, over elements that are finite on both sides. */
  readonly ulp: bigint;
  readonly maxReference: number;
  /** Norms of the reference and of the difference, not divided: sums of magnitudes, roots of sums of squares. */
  readonly norms: {
    readonly l1: number;
    readonly l1Reference: number;
    readonly l2: number;
    readonly l2Reference: number;
  };
}

/** One comparison under way. Stage numbers in `kernel.reference` and `kernel.result`, then call `take`. */
export class Measuring {
  readonly kernel: MeasureKernel;
  private readonly weighing: Weighing;
  private readonly totals = freshTotals();
  private readonly sums = {
    absolute: new CompensatedSum(),
    squares: new SumOfSquares(),
    reference: new CompensatedSum(),
    referenceSquares: new SumOfSquares(),
  };
  private readonly counts = {
    count: 0,
    identical: 0,
    nanInReference: 0,
    nanInResult: 0,
    infInReference: 0,
    infInResult: 0,
    unlike: 0,
    beyond: 0,
  };
  private worst: WorstElement | null = null;

  constructor(kernel: MeasureKernel, weighing: Weighing) {
    this.kernel = kernel;
    this.weighing = weighing;
  }

  /** Measures the first `staged` numbers of both sides; a multiple of BLOCK unless they are the last. */
  take(staged: number): void {
    const { kernel, totals, counts, sums } = this;
    for (let start = 0; start < staged; start += BLOCK) {
      const count = Math.min(BLOCK, staged - start);
      const before = { absolute: totals.maxAbsolute, reference: totals.maxReference };
      // Maxima of this block alone decide how its squares are scaled.
      totals.maxAbsolute = 0;
      totals.maxReference = 0;
      kernel.measure(start, count, this.weighing, totals);
      const again = (of: 'difference' | 'reference') => (scale: number) =>
        scaledSquares(
          kernel.reference.subarray(start, start + count),
          of === 'difference' ? kernel.result.subarray(start, start + count) : null,
          scale,
        );
      sums.absolute.add(totals.sumAbsolute);
      sums.squares.add(totals.sumSquares, totals.maxAbsolute, again('difference'));
      sums.reference.add(totals.sumReference);
      sums.referenceSquares.add(totals.sumReferenceSquares, totals.maxReference, again('reference'));
      totals.maxAbsolute = Math.max(before.absolute, totals.maxAbsolute);
      totals.maxReference = Math.max(before.reference, totals.maxReference);
      if (totals.worstIndex >= 0) {
        const at = start + totals.worstIndex;
        this.worst = {
          index: counts.count + totals.worstIndex,
          reference: kernel.reference[at]!,
          result: kernel.result[at]!,
        };
      }
      counts.count += count;
      counts.identical += totals.identical;
      counts.nanInReference += totals.nanInReference;
      counts.nanInResult += totals.nanInResult;
      counts.infInReference += totals.infInReference;
      counts.infInResult += totals.infInResult;
      counts.unlike += totals.unlike;
      counts.beyond += totals.beyond;
    }
  }

  finish(): Measured {
    const { totals, counts, sums, worst } = this;
    const { unlike, beyond, ...rest } = counts;
    const norms = {
      l1: sums.absolute.value,
      l1Reference: sums.reference.value,
      l2: sums.squares.root,
      l2Reference: sums.referenceSquares.root,
    };
    return {
      measures: {
        ...rest,
        maxAbsolute: totals.maxAbsolute,
        maxRelative: totals.maxAbsolute === Number.POSITIVE_INFINITY ? Number.POSITIVE_INFINITY : totals.maxRelative,
        maxUlp: unlike > 0 ? Number.POSITIVE_INFINITY : Number(totals.maxUlp),
        l1: unlike > 0 ? Number.POSITIVE_INFINITY : share(norms.l1, norms.l1Reference),
        l2: unlike > 0 ? Number.POSITIVE_INFINITY : share(norms.l2, norms.l2Reference),
        linf: unlike > 0 ? Number.POSITIVE_INFINITY : share(totals.maxAbsolute, totals.maxReference),
        worst,
      },
      worstRatio: totals.worstRatio,
      beyond,
      unlike,
      ulp: totals.maxUlp,
      maxReference: totals.maxReference,
      norms,
    };
  }
}

/** No difference at all is no deviation, even from a reference that is zero everywhere. */
function share(difference: number, reference: number): number {
  return difference === 0 ? 0 : difference / reference;
}

/** Sum of (scale * x)^2 over the finite elements; x is the difference, or the reference when there is no result. */
function scaledSquares(reference: Float64Array, result: Float64Array | null, scale: number): number {
  let sum = 0;
  for (let i = 0; i < reference.length; i++) {
    const r = reference[i]!;
    const s = result?.[i] ?? 0;
    // Scaled before subtracting, so that the difference of two huge numbers does not overflow.
    const x = (result === null ? 0 : s * scale) - r * scale;
    if (Number.isFinite(r) && Number.isFinite(s)) sum += x * x;
  }
  return sum;
}

/** Measures two arrays that are in memory and equally long. */
export function measureArrays(
  reference: Float64Array,
  result: Float64Array,
  weighing: Weighing,
  kernel: MeasureKernel,
): Measured {
  const measuring = new Measuring(kernel, weighing);
  const room = kernel.reference.length;
  for (let at = 0; at < reference.length; at += room) {
    const part = reference.subarray(at, at + room);
    kernel.reference.set(part);
    kernel.result.set(result.subarray(at, at + room));
    measuring.take(part.length);
  }
  return measuring.finish();
}
