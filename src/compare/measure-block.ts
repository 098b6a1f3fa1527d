/**
 * All measures of one block of numbers in one pass, in plain TypeScript. It judges the WebAssembly kernel of
 * measure-block.as.ts, which gives the same values to the last bit, and stands in for it where it was not built.
 */

/** Elements a block. Sums are formed block by block and the blocks added in order, so they depend on neither pieces nor threads. */
export const BLOCK = 8192;
/** Partial sums a block: element i goes into sum i modulo 4, as the vector registers of the kernel have it. */
export const LANES = 4;

/** What makes one element worse than another: |result - reference| / (absolute + relative * |reference|). */
export interface Weighing {
  readonly absolute: number;
  readonly relative: number;
}

/** Totals of a block, or of all blocks so far for the maxima. */
export interface BlockTotals {
  identical: number;
  nanInReference: number;
  nanInResult: number;
  infInReference: number;
  infInResult: number;
  /** Elements with a NaN on either side, or an infinity that the other side has not. */
  unlike: number;
  maxAbsolute: number;
  maxRelative: number;
  maxUlp: bigint;
  maxReference: number;
  sumAbsolute: number;
  sumSquares: number;
  sumReference: number;
  sumReferenceSquares: number;
  worstRatio: number;
  /** Index in the block; -1 when nothing in it is worse than what came before. */
  worstIndex: number;
}

export interface MeasureKernel {
  /** Where the caller puts the numbers: STAGED_BLOCKS blocks of either side. */
  readonly reference: Float64Array;
  readonly result: Float64Array;
  /**
   * Measures `count` elements from `start` of both sides. The maxima of `totals` go on from what they are; its sums and
   * counts are of this block alone.
   */
  measure(start: number, count: number, weighing: Weighing, totals: BlockTotals): void;
}

/** Blocks read at once: large enough for the file system, small enough for the cache. */
export const STAGED_BLOCKS = 4;

export function freshTotals(): BlockTotals {
  return {
    identical: 0,
    nanInReference: 0,
    nanInResult: 0,
    infInReference: 0,
    infInResult: 0,
    unlike: 0,
    maxAbsolute: 0,
    maxRelative: 0,
    maxUlp: 0n,
    maxReference: 0,
    sumAbsolute: 0,
    sumSquares: 0,
    sumReference: 0,
    sumReferenceSquares: 0,
    worstRatio: 0,
    worstIndex: -1,
  };
}

export function plainKernel(): MeasureKernel {
  const reference = new Float64Array(BLOCK * STAGED_BLOCKS);
  const result = new Float64Array(BLOCK * STAGED_BLOCKS);
  const referenceBits = new BigInt64Array(reference.buffer);
  const resultBits = new BigInt64Array(result.buffer);
  return {
    reference,
    result,
    measure(start, count, weighing, totals) {
      const part = <T extends Float64Array | BigInt64Array>(array: T) => array.subarray(start, start + count) as T;
      measureBlock(part(reference), part(result), part(referenceBits), part(resultBits), weighing, totals);
    },
  };
}

const SIGN = 1n << 63n;

function measureBlock(
  reference: Float64Array,
  result: Float64Array,
  referenceBits: BigInt64Array,
  resultBits: BigInt64Array,
  weighing: Weighing,
  totals: BlockTotals,
): void {
  const absolute = new Float64Array(LANES);
  const squares = new Float64Array(LANES);
  const references = new Float64Array(LANES);
  const referenceSquares = new Float64Array(LANES);
  Object.assign(totals, {
    identical: 0,
    nanInReference: 0,
    nanInResult: 0,
    infInReference: 0,
    infInResult: 0,
    unlike: 0,
    worstIndex: -1,
  });
  const worst = (ratio: number, index: number) => {
    if (ratio > totals.worstRatio) {
      totals.worstRatio = ratio;
      totals.worstIndex = index;
    }
  };
  for (let i = 0; i < reference.length; i++) {
    const r = reference[i]!;
    const s = result[i]!;
    const size = Math.abs(r);
    const same = referenceBits[i] === resultBits[i];
    if (same) totals.identical++;
    if (!(size < Number.POSITIVE_INFINITY && Math.abs(s) < Number.POSITIVE_INFINITY)) {
      const [nanInReference, nanInResult] = [Number.isNaN(r), Number.isNaN(s)];
      if (nanInReference) totals.nanInReference++;
      else if (size === Number.POSITIVE_INFINITY) totals.infInReference++;
      if (nanInResult) totals.nanInResult++;
      else if (Math.abs(s) === Number.POSITIVE_INFINITY) totals.infInResult++;
      if (r === s) continue;
      totals.unlike++;
      if (!nanInReference && !nanInResult) totals.maxAbsolute = Number.POSITIVE_INFINITY;
      worst(Number.POSITIVE_INFINITY, i);
      continue;
    }
    const lane = i % LANES;
    references[lane]! += size;
    referenceSquares[lane]! += r * r;
    if (size > totals.maxReference) totals.maxReference = size;
    if (same) continue;
    const d = Math.abs(s - r);
    absolute[lane]! += d;
    squares[lane]! += d * d;
    if (d > totals.maxAbsolute) totals.maxAbsolute = d;
    if (d > 0) {
      const ratio = d / size;
      if (ratio > totals.maxRelative) totals.maxRelative = ratio;
      const allowed = weighing.absolute + weighing.relative * size;
      worst(d / allowed, i);
      const [a, b] = [referenceBits[i]!, resultBits[i]!];
      const distance = (a < 0n ? -(a + SIGN) : a) - (b < 0n ? -(b + SIGN) : b);
      const ulp = distance < 0n ? -distance : distance;
      if (ulp > totals.maxUlp) totals.maxUlp = ulp;
    }
  }
  const sum = (lanes: Float64Array) => lanes[0]! + lanes[2]! + (lanes[1]! + lanes[3]!);
  totals.sumAbsolute = sum(absolute);
  totals.sumSquares = sum(squares);
  totals.sumReference = sum(references);
  totals.sumReferenceSquares = sum(referenceSquares);
}
