/** The outputs of a case in two folders in; a deviation for every quantity, feature and conserved total out. */
import { join } from 'node:path';
import type { Deviation, Tolerance } from '../model/deviation.ts';
import type { Case, CaseOutput, Domain, Feature, OutputQuantity, Range } from '../model/manifest.ts';
import { openOutput } from '../outputs/open-output.edge.ts';
import { type DatasetInfo, type OutputFile, OutputProblem } from '../outputs/output-file.ts';
import { type ArrayDeviation, compareArrays } from './compare-arrays.ts';
import { compareConserved } from './conserved.ts';
import { featureUnit, takeFeature } from './features.ts';
import { profileOf } from './profile.ts';
import { type Axis, grainOf, positionOf, type Series } from './series.ts';
import { completeTolerance } from './tolerance.ts';

/** A quantity as both runs wrote it, or why there is none. */
type Pair = { readonly reference: Series; readonly result: Series } | { readonly why: string };

/**
 * Compares the outputs of a case with its reference.
 *
 * @param theCase          outputs, quantities, tolerances, features and conserved totals, as declared
 * @param referenceFolder  where the reference's files lie under the names that the case declares
 * @param resultFolder     the same for the result
 * @returns a deviation for every declared quantity, then feature, then conserved total, in the order of the manifest;
 *   what is missing, damaged or of another shape is *not comparable* and says why
 */
export async function compareCase(theCase: Case, referenceFolder: string, resultFolder: string): Promise<Deviation[]> {
  const pairs = new Map<string, Pair>();
  const deviations: Deviation[] = [];
  for (const output of theCase.outputs) {
    const reference = await openOr(join(referenceFolder, output.file));
    const result = await openOr(join(resultFolder, output.file));
    for (const [name, quantity] of Object.entries(output.quantities)) {
      const pair = await readPair(name, quantity, output, reference, result);
      pairs.set(name, pair);
      deviations.push(fieldDeviation(theCase.case, name, quantity, pair));
    }
    for (const file of [reference, result]) if (!(file instanceof OutputProblem)) file.close();
  }
  for (const [name, feature] of Object.entries(theCase.features ?? {})) {
    deviations.push(featureDeviation(theCase.case, name, feature, pairs.get(feature.of)));
  }
  for (const entry of theCase.conserved ?? []) {
    const total = typeof entry === 'string' ? { total: entry, of: entry } : entry;
    deviations.push(conservedDeviation(theCase.case, total.total, pairs.get(total.of), total.of, total.tolerance));
  }
  return deviations;
}

/** The extremes of the quantities that a case declares as its footprint; those that cannot be read are left out. */
export async function footprintOf(theCase: Case, resultFolder: string): Promise<Domain> {
  const wanted = theCase.footprint ?? {};
  const domain: Record<string, Range> = {};
  for (const output of theCase.outputs) {
    const names = Object.entries(wanted).filter(([, name]) => Object.hasOwn(output.quantities, name));
    if (names.length === 0) continue;
    const file = await openOr(join(resultFolder, output.file));
    if (file instanceof OutputProblem) continue;
    for (const [component, name] of names) {
      const extremes = await extremesOf(file, output.quantities[name]!.dataset);
      if (extremes !== null) domain[component] = extremes;
    }
    file.close();
  }
  return domain;
}

async function openOr(path: string): Promise<OutputFile | OutputProblem> {
  try {
    return await openOutput(path);
  } catch (error) {
    if (error instanceof OutputProblem) return error;
    throw error;
  }
}

async function extremesOf(file: OutputFile, dataset: string): Promise<Range | null> {
  let [least, greatest] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  try {
    for await (const piece of file.read(dataset)) {
      for (const value of piece) {
        if (value < least) least = value;
        if (value > greatest) greatest = value;
      }
    }
  } catch (error) {
    if (error instanceof OutputProblem) return null;
    throw error;
  }
  return least <= greatest ? [least, greatest] : null;
}

async function readPair(
  name: string,
  quantity: OutputQuantity,
  output: CaseOutput,
  reference: OutputFile | OutputProblem,
  result: OutputFile | OutputProblem,
): Promise<Pair> {
  if (reference instanceof OutputProblem) return { why: `${output.file} of the reference ${reference.message}` };
  if (result instanceof OutputProblem) return { why: `${output.file} of the result ${result.message}` };
  const sides: Series[] = [];
  for (const [side, file] of [['reference', reference] as const, ['result', result] as const]) {
    try {
      sides.push(await readSeries(name, quantity, output.along, file));
    } catch (error) {
      if (!(error instanceof OutputProblem)) throw error;
      return { why: `${output.file} of the ${side} ${error.message}` };
    }
  }
  const [a, b] = [sides[0]!, sides[1]!];
  if (a.values.length !== b.values.length || a.shape.join() !== b.shape.join()) {
    return {
      why: `${name} has the shape ${shapeText(a.shape)} in the reference and ${shapeText(b.shape)} in the result`,
    };
  }
  return { reference: a, result: b };
}

const shapeText = (shape: readonly number[]) => (shape.length === 0 ? 'of one number' : shape.join(' x '));

async function readSeries(
  name: string,
  quantity: OutputQuantity,
  along: string | undefined,
  file: OutputFile,
): Promise<Series> {
  const values = await file.readAll(quantity.dataset);
  const info = file.find(quantity.dataset)!;
  let axis: Axis | null = null;
  if (along !== undefined) {
    const positions = await file.readAll(along);
    axis = { name: along.replace(/^\/+/, ''), unit: file.find(along)!.unit ?? '', values: positions };
  }
  return { name, unit: quantity.unit, values, shape: shapeOf(info, values), type: info.type, along: axis };
}

function shapeOf(info: DatasetInfo, values: Float64Array): number[] {
  return info.shape.map((extent) => extent ?? values.length);
}

function fieldDeviation(theCase: string, name: string, quantity: OutputQuantity, pair: Pair): Deviation {
  const tolerance = completeTolerance(quantity.tolerance);
  const base = { case: theCase, quantity: name, of: 'field', unit: quantity.unit, tolerance } as const;
  if ('why' in pair) return notComparable(base, pair.why);
  const { reference, result } = pair;
  const deviation = compareArrays(reference.values, result.values, tolerance ?? undefined, {
    grain: grainOf(reference.type, result.type),
  });
  const profile = profileOf(reference, result, tolerance);
  return { ...base, ...placed(deviation, reference), ...(profile === null ? {} : { profile }) };
}

/** The worst element with its position along the axis. */
function placed(deviation: ArrayDeviation, reference: Series): ArrayDeviation {
  const { worst } = deviation.measures;
  const at = worst === null ? null : positionOf(reference, worst.index);
  if (worst === null || at === null) return deviation;
  const along = { value: at, unit: reference.along!.unit };
  return { ...deviation, measures: { ...deviation.measures, worst: { ...worst, along } } };
}

function featureDeviation(theCase: string, name: string, feature: Feature, pair: Pair | undefined): Deviation {
  const tolerance = completeTolerance(feature.tolerance);
  const base = { case: theCase, quantity: name, of: 'feature', tolerance } as const;
  if (pair === undefined) {
    return notComparable({ ...base, unit: feature.unit ?? '' }, `no output of the case has a quantity "${feature.of}"`);
  }
  if ('why' in pair) return notComparable({ ...base, unit: feature.unit ?? '' }, pair.why);
  const unit = feature.unit ?? featureUnit(feature.take, pair.reference.unit, pair.reference.along?.unit ?? '');
  const reference = takeFeature(feature, pair.reference);
  const result = takeFeature(feature, pair.result);
  if ('why' in reference) return notComparable({ ...base, unit }, `in the reference, ${reference.why}`);
  if ('why' in result) return notComparable({ ...base, unit }, `in the result, ${result.why}`);
  const deviation = compareArrays(
    Float64Array.of(reference.value),
    Float64Array.of(result.value),
    tolerance ?? undefined,
    { grain: grainOf(pair.reference.type, pair.result.type) },
  );
  return { ...base, unit, ...deviation };
}

function conservedDeviation(
  theCase: string,
  name: string,
  pair: Pair | undefined,
  of: string,
  declared: Tolerance | undefined,
): Deviation {
  const base = { case: theCase, quantity: name, of: 'conserved' } as const;
  if (pair === undefined || 'why' in pair) {
    const why = pair === undefined ? `no output of the case has a quantity "${of}"` : pair.why;
    return notComparable({ ...base, unit: '', tolerance: completeTolerance(declared) }, why);
  }
  const deviation = compareConserved(pair.reference.values, pair.result.values, declared);
  return { ...base, unit: pair.result.unit, tolerance: deviation.tolerance, ...placed(deviation, pair.result) };
}

function notComparable(
  base: Pick<Deviation, 'case' | 'quantity' | 'of' | 'unit' | 'tolerance'>,
  why: string,
): Deviation {
  return { ...base, class: 'not comparable', measures: null, tolerances: null, why };
}
