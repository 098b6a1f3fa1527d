/** Norms in which elements count by their mass, volume or time. */
import type { Totals } from './block-sums.ts';
import { CompensatedSum } from './compensated-sum.ts';
import type { Measured } from './measuring.ts';

/**
 * Replaces the L1 and L2 norms of a measurement by weighted ones: sum of w |x|, root of the sum of w x^2.
 *
 * @param weight shape (n,), or one for each row of a field; not negative
 * @returns why not, when the weights do not fit
 */
export function withWeights(
  measured: Measured,
  reference: Float64Array,
  result: Float64Array,
  weight: Float64Array,
): Measured | string {
  const each = reference.length / weight.length;
  if (!Number.isInteger(each)) return `${weight.length} weights do not fit ${reference.length} elements`;
  if (weight.some((one) => !(one >= 0))) return 'a weight is negative or NaN';
  if (measured.unlike > 0) return measured;
  const sums = Array.from({ length: 5 }, () => new CompensatedSum());
  for (let i = 0; i < reference.length; i++) {
    const w = weight[Math.floor(i / each)]!;
    const r = reference[i]!;
    const d = result[i]! - r;
    // Equal infinities agree and have no size.
    if (!Number.isFinite(r) || !Number.isFinite(d)) continue;
    sums[0]!.add(w * Math.abs(d));
    sums[1]!.add(w * Math.abs(r));
    sums[2]!.add(w * d * d);
    sums[3]!.add(w * r * r);
    sums[4]!.add(w);
  }
  const norms: Totals = {
    l1: sums[0]!.value,
    l1Reference: sums[1]!.value,
    l2: Math.sqrt(sums[2]!.value),
    l2Reference: Math.sqrt(sums[3]!.value),
  };
  const share = (a: number, b: number) => (a === 0 ? 0 : a / b);
  return {
    ...measured,
    norms,
    weightTotal: sums[4]!.value,
    measures: { ...measured.measures, l1: share(norms.l1, norms.l1Reference), l2: share(norms.l2, norms.l2Reference) },
  };
}
