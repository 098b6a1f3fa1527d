/** Measures of two arrays of any length, block by block: numbers come in piece by piece, the measures go out at the end. */
import type { Measures, WorstElement } from '../model/deviation.ts';
import { BlockSums, RunningLedger, type SumLedger, type Totals } from './block-sums.ts';
import { BLOCK, freshTotals, type MeasureKernel, type Weighing } from './measure-block.ts';
import { scaleOf } from './sum-of-squares.ts';

/** Measures with what classes are decided from. */
export interface Measured {
  readonly measures: Measures;
  /** What the worst element was told by. */
  readonly weighing: Weighing;
  /** Largest |result - reference| / (absolute + relative * |reference|) of that weighing; Infinity across NaN. */
  readonly worstRatio: number;
  /** Elements with a NaN on either side, or an infinity that the other side has not. */
  readonly unlike: number;
  /** Exact, over elements that are finite on both sides. */
  readonly ulp: bigint;
  readonly maxReference: number;
  /** Norms of the reference and of the difference, not divided: sums of magnitudes, roots of sums of squares. */
  readonly norms: Totals;
  /** Sum of the weights, where the norms are weighted; otherwise every element counts 1. */
  readonly weightTotal?: number;
}

/** What one thread has found besides the sums; merges with another's in any order. */
export interface Part {
  readonly count: number;
  readonly identical: number;
  readonly nanInReference: number;
  readonly nanInResult: number;
  readonly infInReference: number;
  readonly infInResult: number;
  readonly unlike: number;
  readonly maxAbsolute: number;
  readonly maxRelative: number;
  readonly maxReference: number;
  readonly maxUlp: bigint;
  readonly worstRatio: number;
  readonly worst: WorstElement | null;
}

/** One comparison under way. Stage numbers in `kernel.reference` and `kernel.result`, then call `take`. */
export class Measuring {
  readonly kernel: MeasureKernel;
  private readonly weighing: Weighing;
  private readonly ledger: SumLedger;
  private readonly totals = freshTotals();
  private readonly counts = {
    count: 0,
    identical: 0,
    nanInReference: 0,
    nanInResult: 0,
    infInReference: 0,
    infInResult: 0,
    unlike: 0,
  };
  private worst: WorstElement | null = null;
  private next = 0;

  constructor(kernel: MeasureKernel, weighing: Weighing, ledger: SumLedger) {
    this.kernel = kernel;
    this.weighing = weighing;
    this.ledger = ledger;
  }

  /** The next numbers are those from `element` on: a multiple of BLOCK, and larger than any before. */
  goTo(element: number): void {
    this.next = element;
  }

  /** Measures the first `staged` numbers of both sides; a multiple of BLOCK unless they are the last. */
  take(staged: number): void {
    const { kernel, totals, counts } = this;
    for (let start = 0; start < staged; start += BLOCK) {
      const count = Math.min(BLOCK, staged - start);
      const [maxAbsolute, maxReference] = [totals.maxAbsolute, totals.maxReference];
      // Maxima of this block alone decide how its squares are scaled.
      totals.maxAbsolute = 0;
      totals.maxReference = 0;
      kernel.measure(start, count, this.weighing, totals);
      this.ledger.add(this.next / BLOCK, this.sumsOf(start, count));
      totals.maxAbsolute = Math.max(maxAbsolute, totals.maxAbsolute);
      totals.maxReference = Math.max(maxReference, totals.maxReference);
      if (totals.worstIndex >= 0) {
        const at = start + totals.worstIndex;
        this.worst = {
          index: this.next + totals.worstIndex,
          reference: kernel.reference[at]!,
          result: kernel.result[at]!,
        };
      }
      this.next += count;
      counts.count += count;
      counts.identical += totals.identical;
      counts.nanInReference += totals.nanInReference;
      counts.nanInResult += totals.nanInResult;
      counts.infInReference += totals.infInReference;
      counts.infInResult += totals.infInResult;
      counts.unlike += totals.unlike;
    }
  }

  part(): Part {
    const { maxAbsolute, maxRelative, maxReference, maxUlp, worstRatio } = this.totals;
    return { ...this.counts, maxAbsolute, maxRelative, maxReference, maxUlp, worstRatio, worst: this.worst };
  }

  private sumsOf(start: number, count: number): BlockSums {
    const { kernel, totals } = this;
    const [scale, referenceScale] = [scaleOf(totals.maxAbsolute), scaleOf(totals.maxReference)];
    const part = (side: Float64Array) => side.subarray(start, start + count);
    const squares = scale === 1 ? totals.sumSquares : scaledSquares(part(kernel.reference), part(kernel.result), scale);
    const referenceSquares =
      referenceScale === 1 ? totals.sumReferenceSquares : scaledSquares(part(kernel.reference), null, referenceScale);
    return new BlockSums(totals.sumAbsolute, totals.sumReference, scale, squares, referenceScale, referenceSquares);
  }
}

/** The measures of everything that the parts saw; `norms` are of the same blocks, added in order. */
export function conclude(parts: readonly Part[], norms: Totals, weighing: Weighing): Measured {
  const all = parts.reduce(mergeParts);
  const { unlike, maxUlp, maxReference, worstRatio, maxAbsolute, maxRelative, worst, ...counts } = all;
  const bounded = (value: number) => (unlike > 0 ? Number.POSITIVE_INFINITY : value);
  return {
    measures: {
      ...counts,
      maxAbsolute,
      maxRelative: maxAbsolute === Number.POSITIVE_INFINITY ? Number.POSITIVE_INFINITY : maxRelative,
      maxUlp: bounded(Number(maxUlp)),
      l1: bounded(share(norms.l1, norms.l1Reference)),
      l2: bounded(share(norms.l2, norms.l2Reference)),
      linf: bounded(share(maxAbsolute, maxReference)),
      worst,
    },
    weighing,
    worstRatio,
    unlike,
    ulp: maxUlp,
    maxReference,
    norms,
  };
}

function mergeParts(a: Part, b: Part): Part {
  // Of two equally bad elements the first counts, whichever thread found it.
  const first = a.worst === null || (b.worst !== null && b.worst.index < a.worst.index) ? b : a;
  const worse = a.worstRatio === b.worstRatio ? first : a.worstRatio > b.worstRatio ? a : b;
  return {
    count: a.count + b.count,
    identical: a.identical + b.identical,
    nanInReference: a.nanInReference + b.nanInReference,
    nanInResult: a.nanInResult + b.nanInResult,
    infInReference: a.infInReference + b.infInReference,
    infInResult: a.infInResult + b.infInResult,
    unlike: a.unlike + b.unlike,
    maxAbsolute: Math.max(a.maxAbsolute, b.maxAbsolute),
    maxRelative: Math.max(a.maxRelative, b.maxRelative),
    maxReference: Math.max(a.maxReference, b.maxReference),
    // biome-ignore lint/complexity/useMathMinMax: Math.max does not take 64-bit integers
    maxUlp: a.maxUlp > b.maxUlp ? a.maxUlp : b.maxUlp,
    worstRatio: worse.worstRatio,
    worst: worse.worst,
  };
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
  const ledger = new RunningLedger();
  const measuring = new Measuring(kernel, weighing, ledger);
  const room = kernel.reference.length;
  for (let at = 0; at < reference.length; at += room) {
    const part = reference.subarray(at, at + room);
    kernel.reference.set(part);
    kernel.result.set(result.subarray(at, at + room));
    measuring.take(part.length);
  }
  return conclude([measuring.part()], ledger.totals(), weighing);
}
