/** The deviation of a field that both sides hold in memory, aligned. */
import type { Deviation } from '../model/deviation.ts';
import type { OutputQuantity } from '../model/manifest.ts';
import { asComplex } from './complex-deviation.ts';
import { type Allowances, judge, placed, withNotes } from './judge.ts';
import type { MeasureKernel } from './measure-block.ts';
import { measureArrays } from './measuring.ts';
import { profileOf } from './profile.ts';
import type { Pair } from './read-pair.edge.ts';
import { grainOf } from './series.ts';
import { completeTolerance, weighingOf } from './tolerance.ts';
import { withWeights } from './weighted-norms.ts';

export type DeviationOf = Pick<Deviation, 'case' | 'quantity' | 'of' | 'unit'>;

export function fieldDeviation(
  base: DeviationOf,
  quantity: OutputQuantity,
  pair: Exclude<Pair, { kind: 'long' }>,
  kernel: MeasureKernel,
  options: Allowances,
): Deviation {
  const declared = completeTolerance(quantity.tolerance);
  if (pair.kind === 'none') return notComparable({ ...base, tolerance: declared }, pair.why);
  const { reference, result, weight, notes } = pair;
  const weighing = weighingOf(declared);
  let measured = measureArrays(reference.values, result.values, weighing, kernel);
  if (reference.type.startsWith('complex')) measured = asComplex(measured, reference.values, result.values, weighing);
  if (weight !== null) {
    const weighted = withWeights(measured, reference.values, result.values, weight);
    if (typeof weighted === 'string') return notComparable({ ...base, tolerance: declared }, weighted);
    measured = weighted;
  }
  const { deviation, tolerance } = judge(
    base.quantity,
    measured,
    declared,
    grainOf(reference.type, result.type),
    options,
  );
  const profile = profileOf(reference, result, tolerance);
  return {
    ...base,
    ...withNotes(placed(deviation, reference), notes),
    tolerance,
    ...(profile === null ? {} : { profile }),
  };
}

export function notComparable(base: DeviationOf & Pick<Deviation, 'tolerance'>, why: string): Deviation {
  return { ...base, class: 'not comparable', measures: null, tolerances: null, why };
}
