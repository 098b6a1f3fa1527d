/** Totals that a run must keep: how far the values along the run drift from the first. */
import type { Tolerance } from '../model/deviation.ts';
import { type ArrayDeviation, compareArrays } from './compare-arrays.ts';
import { completeTolerance } from './tolerance.ts';

/** Rounding of the sums that form a total: what is not worth calling a drift. Common practice. */
const ROUNDING = 1e-12;

/**
 * Compares every value of a total with the first one of the same run.
 * Without a declared tolerance the result may drift as far as the reference run did, and by rounding (1e-12).
 */
export function compareConserved(
  reference: Float64Array,
  result: Float64Array,
  declared: Partial<Tolerance> | undefined,
): ArrayDeviation & { readonly tolerance: Tolerance } {
  const tolerance = completeTolerance(declared) ?? {
    // Absolute, so that a total that starts from zero (a momentum) may drift as well.
    absolute: drift(reference) * (1 + 1e-9),
    relative: ROUNDING,
    norm: 'pointwise' as const,
    reason: 'the drift of the reference run itself, and rounding of 1e-12',
  };
  const start = new Float64Array(result.length).fill(result[0] ?? Number.NaN);
  const deviation = compareArrays(start, result, tolerance);
  return { ...deviation, tolerance };
}

/** Largest |value - first| along a run, in the unit of the total. */
export function drift(values: Float64Array): number {
  const first = values[0] ?? Number.NaN;
  return values.reduce((most, value) => (value === first ? most : Math.max(most, Math.abs(value - first))), 0);
}
