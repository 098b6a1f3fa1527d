/** Two arrays in; how far they are apart, and in which class that falls, out. */
import type { DeviationClass, Measures, Tolerance } from '../model/deviation.ts';
import { type MeasureKernel, plainKernel } from './measure-block.ts';
import { type Measured, measureArrays } from './measuring.ts';
import { completeTolerance, tolerancesOf, weighingOf } from './tolerance.ts';

/** Results of one algorithm on another machine or in another order seldom differ by more, element by element. Common practice. */
export const ROUNDOFF_ULP = 16;

/** Arrays that cannot be compared element by element. */
export class ShapeMismatch extends Error {
  override readonly name = 'ShapeMismatch';
}

export interface ArrayDeviation {
  readonly class: DeviationClass;
  readonly measures: Measures;
  /** The measured deviation over the allowed one; null when not comparable. */
  readonly tolerances: number | null;
  readonly why?: string;
}

export interface CompareOptions {
  /**
   * Doubles between two neighbours of the type that the numbers were stored as: 1 for float64, 2^29 for float32.
   * ULP distances are counted in the stored type.
   */
  readonly grain?: number;
  readonly kernel?: MeasureKernel;
}

/**
 * How far a result is from its reference, element by element.
 * Element i is within tolerance when |result[i] - reference[i]| <= absolute + relative * |reference[i]|.
 * The reference sets the scale, so the two are not interchangeable. Equal infinities agree; a NaN never passes.
 *
 * Classes: *bit-for-bit*, every element has the same bits (zeros of unlike sign differ); *beyond tolerance*, more than is
 * allowed; *roundoff*, allowed, and no element is more than 16 ULP off; *within tolerance*, allowed; *not comparable*, the
 * reference holds a NaN, or there is nothing to compare. Where no tolerance is declared only roundoff is allowed.
 *
 * @param reference  shape (n,), in the unit the case declares, e.g. erg/g
 * @param result     shape (n,), same unit, same order
 * @param tolerance  `absolute` in that unit, >= 0; `relative` and `ulp` dimensionless, >= 0
 * @throws {ShapeMismatch} when the lengths differ
 * @source the criterion of numpy.isclose (NumPy documentation): |a - b| <= atol + rtol * |b|
 */
export function compareArrays(
  reference: Float64Array,
  result: Float64Array,
  tolerance?: Partial<Tolerance>,
  options: CompareOptions = {},
): ArrayDeviation {
  if (reference.length !== result.length) {
    throw new ShapeMismatch(`the reference has ${reference.length} elements, the result ${result.length}`);
  }
  const complete = completeTolerance(tolerance);
  const measured = measureArrays(reference, result, weighingOf(complete), options.kernel ?? plainKernel());
  return classify(measured, complete, options.grain);
}

/** The class that measures fall in, under the rules of compareArrays. */
export function classify(inDoubles: Measured, tolerance: Tolerance | null, grain = 1): ArrayDeviation {
  const measured = inGrains(inDoubles, grain);
  const { measures } = measured;
  const { count, identical, nanInReference, nanInResult } = measures;
  if (count === 0) return { class: 'not comparable', measures, tolerances: null, why: 'there is nothing to compare' };
  if (nanInReference > 0) {
    const both = nanInResult > 0 ? `, the result ${elements(nanInResult)}` : '';
    return {
      class: 'not comparable',
      measures,
      tolerances: null,
      why: `the reference holds NaN in ${elements(nanInReference)}${both}: a NaN is equal to nothing, not even itself`,
    };
  }
  const why = remark(measured);
  const said = why === null ? {} : { why };
  if (identical === count) return { class: 'bit-for-bit', measures, tolerances: 0 };
  const isRoundoff = measured.unlike === 0 && measures.maxUlp <= ROUNDOFF_ULP;
  const tolerances =
    tolerance === null
      ? measured.unlike > 0
        ? Number.POSITIVE_INFINITY
        : measures.maxUlp / ROUNDOFF_ULP
      : tolerancesOf(measured, tolerance);
  const allowed = tolerances <= 1;
  return {
    class: allowed ? (isRoundoff ? 'roundoff' : 'within tolerance') : 'beyond tolerance',
    measures,
    tolerances,
    ...said,
  };
}

function inGrains(measured: Measured, grain: number): Measured {
  if (grain === 1) return measured;
  return {
    ...measured,
    ulp: measured.ulp / BigInt(grain),
    measures: { ...measured.measures, maxUlp: measured.measures.maxUlp / grain },
  };
}

function remark({ measures, unlike }: Measured): string | null {
  const { nanInResult, infInResult, infInReference, maxAbsolute, identical, count } = measures;
  if (nanInResult > 0) return `the result holds NaN in ${elements(nanInResult)} where the reference has numbers`;
  if (unlike > 0 && infInResult > 0)
    return `the result is infinite in ${elements(infInResult)}, the reference in ${infInReference}`;
  if (unlike > 0) return `the reference is infinite in ${elements(infInReference)} where the result is not`;
  if (maxAbsolute === 0 && identical < count) return 'differs only in the sign of zeros';
  const worst = measures.worst;
  if (worst !== null && isDenormal(worst.reference) && Math.abs(worst.result) < SMALLEST_NORMAL) {
    return 'the worst element is below the smallest normal number, where digits are lost';
  }
  return null;
}

/** IEEE Std 754-2019, binary64. */
const SMALLEST_NORMAL = 2 ** -1022;
const isDenormal = (value: number) => value !== 0 && Math.abs(value) < SMALLEST_NORMAL;
const elements = (count: number) => `${count} element${count === 1 ? '' : 's'}`;
