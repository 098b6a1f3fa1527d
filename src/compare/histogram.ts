/** Distributions of values: what two turbulent runs share where their points do not. */
import type { Series } from './series.ts';

/**
 * The share of the values in each of `bins` equal bins between `least` and `greatest`, with the shares below and above as first
 * and last element. Bins hold their lower edge; the last one holds its upper edge too, as numpy.histogram has it.
 *
 * @param values  shape (n,), no NaN
 * @returns shape (bins + 2,), sums to 1
 */
export function histogram(values: Float64Array, least: number, greatest: number, bins: number): Float64Array {
  const shares = new Float64Array(bins + 2);
  const width = (greatest - least) / bins;
  for (const value of values) {
    const inside = value >= least && value <= greatest;
    const bin = inside ? Math.min(bins - 1, width === 0 ? 0 : Math.floor((value - least) / width)) + 1 : 0;
    shares[value > greatest ? bins + 1 : bin]! += 1;
  }
  for (let i = 0; i < shares.length; i++) shares[i]! /= values.length;
  return shares;
}

/** Both sides over the range of the reference; what the result has outside of it counts in the outer elements. */
export function histograms(
  reference: Series,
  result: Series,
  bins = 64,
): { readonly reference: Series; readonly result: Series } | { readonly why: string } {
  for (const side of [reference, result]) {
    if (side.type.startsWith('complex')) return { why: `${side.name} is complex: its distribution is not made` };
    const bad = side.values.findIndex((value) => !Number.isFinite(value));
    const whose = side === reference ? 'reference' : 'result';
    if (bad >= 0) return { why: `the ${whose} holds ${side.values[bad]} in element ${bad}: it has no distribution` };
    if (side.values.length === 0) return { why: `the ${whose} has no elements` };
  }
  let [least, greatest] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const value of reference.values) {
    least = Math.min(least, value);
    greatest = Math.max(greatest, value);
  }
  const width = (greatest - least) / bins;
  const middles = Float64Array.from({ length: bins + 2 }, (_, i) => least + (i - 0.5) * width);
  const along = { name: reference.name, unit: reference.unit, values: middles };
  const made = (side: Series): Series => ({
    ...side,
    unit: '1',
    type: 'float64',
    values: histogram(side.values, least, greatest, bins),
    shape: [bins + 2],
    along,
  });
  return { reference: made(reference), result: made(result) };
}
