/** The deviation of a field that both sides hold in memory, aligned. */
import type { Deviation } from '../model/deviation.ts';
import type { OutputQuantity } from '../model/manifest.ts';
import { asComplex } from './complex-deviation.ts';
import { histograms } from './histogram.ts';
import { type Allowances, judge, placed, withNotes } from './judge.ts';
import type { MeasureKernel } from './measure-block.ts';
import { measureArrays } from './measuring.ts';
import { profileOf } from './profile.ts';
import type { OwnSeries, Pair } from './read-pair.edge.ts';
import { grainOf } from './series.ts';
import { spectra } from './spectrum.ts';
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
  const transformed = quantity.as === undefined || pair.own === undefined ? pair : statisticOf(pair.own, quantity);
  if ('why' in transformed) return notComparable({ ...base, tolerance: declared }, transformed.why);
  const { reference, result, weight, notes } = transformed;
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
    ...(quantity.as === undefined ? {} : { unit: reference.unit }),
    ...withNotes(placed(deviation, reference), notes),
    tolerance,
    ...(profile === null ? {} : { profile }),
  };
}

/** Spectra or distributions in place of the fields, made of each side as it was written. */
function statisticOf(
  { reference, result }: OwnSeries,
  quantity: OutputQuantity,
): Pick<Extract<Pair, { kind: 'held' }>, 'reference' | 'result' | 'weight' | 'notes'> | { readonly why: string } {
  const made = quantity.as === 'spectrum' ? spectra(reference, result) : histograms(reference, result, quantity.bins);
  if ('why' in made) return made;
  return { ...made, weight: null, notes: [`compared as ${quantity.as}`] };
}

export function notComparable(base: DeviationOf & Pick<Deviation, 'tolerance'>, why: string): Deviation {
  return { ...base, class: 'not comparable', measures: null, tolerances: null, why };
}
