/** The outputs of a case in two folders in; a deviation for every quantity, feature and conserved total out. */
import type { Deviation, Tolerance } from '../model/deviation.ts';
import type { Case, Domain, Feature, OutputQuantity, Range } from '../model/manifest.ts';
import { openDeclared } from '../outputs/open-output.edge.ts';
import { type OutputFile, OutputProblem } from '../outputs/output-file.ts';
import { compareArrays } from './compare-arrays.ts';
import { CompensatedSum } from './compensated-sum.ts';
import { compareConserved } from './conserved.ts';
import { featureUnit, takeFeature } from './features.ts';
import { type DeviationOf, fieldDeviation, notComparable } from './field-deviation.ts';
import { evaluateFormula } from './formula.ts';
import { type GridConvergence, gridConvergence } from './grid-convergence.ts';
import { type Allowances, judge, placed } from './judge.ts';
import { measureKernel } from './measure-kernel.edge.ts';
import { measureTogether } from './measure-together.edge.ts';
import { measureArrays } from './measuring.ts';
import { LARGEST_HELD, type Pair, readPair } from './read-pair.edge.ts';
import { grainOf, type Series } from './series.ts';
import { completeTolerance, weighingOf } from './tolerance.ts';
import { NO_CHANGE, unitChange } from './unit-factor.ts';

export interface CaseOptions extends Allowances {
  readonly signal?: AbortSignal;
}

/**
 * Compares the outputs of a case with its reference.
 *
 * @param theCase          outputs, quantities, tolerances, features and conserved totals, as declared
 * @param referenceFolder  where the reference's files lie under the names that the case declares
 * @param resultFolder     the same for the result
 * @returns a deviation for every declared quantity, then for shifts, features and conserved totals, in the order of the
 *   manifest; what is missing, damaged or of another shape is *not comparable* and says why
 */
export async function compareCase(
  theCase: Case,
  referenceFolder: string,
  resultFolder: string,
  asked: CaseOptions = {},
): Promise<Deviation[]> {
  const options: CaseOptions = { gridError: gridErrors(theCase), ...asked };
  const pairs = new Map<string, Pair>();
  const deviations: Deviation[] = [];
  const shifts: Deviation[] = [];
  for (const output of theCase.outputs) {
    const reference = await openOr(() => openDeclared(referenceFolder, output));
    const result = await openOr(() => openDeclared(resultFolder, output));
    try {
      for (const [name, quantity] of Object.entries(output.quantities)) {
        options.signal?.throwIfAborted();
        const pair = await readPair(name, quantity, output, reference, result);
        pairs.set(name, pair);
        const base = { case: theCase.case, quantity: name, of: 'field', unit: quantity.unit } as const;
        const deviation =
          pair.kind === 'long'
            ? await longDeviation(base, quantity, pair, reference as OutputFile, result as OutputFile, options)
            : fieldDeviation(base, quantity, pair, measureKernel(), options);
        deviations.push(deviation);
        if (pair.kind === 'held' && pair.shift !== undefined) {
          shifts.push(shiftDeviation(theCase.case, name, pair, pair.shift, output.shift!.tolerance));
        }
      }
    } finally {
      for (const file of [reference, result]) if (!(file instanceof OutputProblem)) file.close();
    }
  }
  for (const [name, feature] of Object.entries(theCase.features ?? {})) {
    deviations.push(featureDeviation(theCase.case, name, feature, pairs, options));
  }
  for (const entry of theCase.conserved ?? []) {
    const total = typeof entry === 'string' ? { total: entry, of: entry } : entry;
    deviations.push(conservedDeviation(theCase.case, total.total, pairs.get(total.of), total.of, total.tolerance));
  }
  return [...deviations.slice(0, pairs.size), ...shifts, ...deviations.slice(pairs.size)];
}

/** The declared values on three grids as what they say of the error of the grid. */
function gridErrors(theCase: Case): Record<string, GridConvergence> {
  const declared = Object.entries(theCase['grid-error'] ?? {});
  return Object.fromEntries(
    declared.map(([name, { fine, middle, coarse, ratio, 'coarse-ratio': coarser }]) => [
      name,
      gridConvergence([fine, middle, coarse], [ratio, coarser ?? ratio]),
    ]),
  );
}

/**
 * The extremes of the quantities that a case declares as its footprint, in the units that its outputs declare; those that
 * cannot be read are left out.
 */
export async function footprintOf(theCase: Case, resultFolder: string): Promise<Domain> {
  const wanted = theCase.footprint ?? {};
  const domain: Record<string, Range> = {};
  for (const output of theCase.outputs) {
    const names = Object.entries(wanted).filter(([, name]) => Object.hasOwn(output.quantities, name));
    if (names.length === 0) continue;
    const file = await openOr(() => openDeclared(resultFolder, output));
    if (file instanceof OutputProblem) continue;
    try {
      for (const [component, name] of names) {
        const extremes = await extremesOf(file, output.quantities[name]!);
        if (extremes !== null) domain[component] = extremes;
      }
    } finally {
      file.close();
    }
  }
  return domain;
}

/** The mean of every quantity of a case, as an ensemble is told by; NaN for one that cannot be read. */
export async function fieldMeans(theCase: Case, resultFolder: string): Promise<Record<string, number>> {
  const means: Record<string, number> = {};
  for (const output of theCase.outputs) {
    const file = await openOr(() => openDeclared(resultFolder, output));
    for (const [name, { dataset }] of Object.entries(output.quantities)) {
      means[name] = file instanceof OutputProblem ? Number.NaN : await meanOf(file, dataset);
    }
    if (!(file instanceof OutputProblem)) file.close();
  }
  return means;
}

async function meanOf(file: OutputFile, dataset: string): Promise<number> {
  const fill = file.find(dataset)?.fill;
  const sum = new CompensatedSum();
  let count = 0;
  try {
    for await (const piece of file.read(dataset)) {
      for (const value of piece) {
        if (value === fill) continue;
        sum.add(value);
        count++;
      }
    }
  } catch (error) {
    if (error instanceof OutputProblem) return Number.NaN;
    throw error;
  }
  return sum.value / count;
}

async function openOr(open: () => Promise<OutputFile>): Promise<OutputFile | OutputProblem> {
  try {
    return await open();
  } catch (error) {
    if (error instanceof OutputProblem) return error;
    throw error;
  }
}

async function extremesOf(file: OutputFile, quantity: OutputQuantity): Promise<Range | null> {
  let [least, greatest] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  const info = file.find(quantity.dataset);
  const found = unitChange(info?.unit, quantity.unit);
  if ('why' in found && !found.unreadable) return null;
  const { factor, offset } = 'why' in found ? NO_CHANGE : found;
  try {
    for await (const piece of file.read(quantity.dataset)) {
      for (const value of piece) {
        if (value === info?.fill) continue;
        if (value < least) least = value;
        if (value > greatest) greatest = value;
      }
    }
  } catch (error) {
    if (error instanceof OutputProblem) return null;
    throw error;
  }
  return least <= greatest ? [least * factor + offset, greatest * factor + offset] : null;
}

async function longDeviation(
  base: DeviationOf,
  quantity: OutputQuantity,
  pair: Extract<Pair, { kind: 'long' }>,
  reference: OutputFile,
  result: OutputFile,
  options: CaseOptions,
): Promise<Deviation> {
  const declared = completeTolerance(quantity.tolerance);
  if (quantity.as !== undefined) {
    const why = `${base.quantity} has more than ${LARGEST_HELD} values: no ${quantity.as} is made of so many`;
    return notComparable({ ...base, tolerance: declared }, why);
  }
  try {
    const streamed = await measureTogether(
      { file: reference, info: pair.reference },
      { file: result, info: pair.result },
      weighingOf(declared),
      // Joined files and those that need hints are not opened a second time for another thread.
      { hints: {}, resultFactor: pair.resultFactor, threads: 1, signal: options.signal },
    );
    if (streamed.referenceCount !== streamed.resultCount) {
      const why = `the reference has ${streamed.referenceCount} elements, the result ${streamed.resultCount}`;
      return notComparable({ ...base, tolerance: declared }, why);
    }
    const grain = grainOf(pair.reference.type, pair.result.type);
    const { deviation, tolerance } = judge(base.quantity, streamed.measured, declared, grain, options);
    return { ...base, ...deviation, tolerance };
  } catch (error) {
    if (!(error instanceof OutputProblem)) throw error;
    const side = error.path === reference.path ? 'reference' : 'result';
    return notComparable({ ...base, tolerance: declared }, `the ${side} ${error.message}`);
  }
}

function shiftDeviation(
  theCase: string,
  name: string,
  pair: Extract<Pair, { kind: 'held' }>,
  shift: number,
  most: number,
): Deviation {
  const tolerance: Tolerance = { absolute: most, norm: 'pointwise' };
  const unit = pair.reference.along?.unit ?? '';
  const deviation = compareArrays(Float64Array.of(0), Float64Array.of(shift), tolerance);
  return { case: theCase, quantity: `shift of ${name}`, of: 'feature', unit, tolerance, ...deviation };
}

function featureDeviation(
  theCase: string,
  name: string,
  feature: Feature,
  pairs: ReadonlyMap<string, Pair>,
  options: CaseOptions,
): Deviation {
  const declared = completeTolerance(feature.tolerance);
  const base = { case: theCase, quantity: name, of: 'feature' } as const;
  const failed = (why: string) => notComparable({ ...base, unit: feature.unit ?? '', tolerance: declared }, why);
  const pair = pairs.get(feature.of);
  if (pair === undefined) return failed(`no output of the case has a quantity "${feature.of}"`);
  if (pair.kind === 'none') return failed(pair.why);
  if (pair.kind === 'long')
    return failed(`${feature.of} has more than ${LARGEST_HELD} values: features are made of shorter fields`);
  const own = pair.own!;
  const reference = featureOf(feature, own.reference, pairs, 'reference');
  const result = featureOf(feature, own.result, pairs, 'result');
  if ('why' in reference) return failed(`in the reference, ${reference.why}`);
  if ('why' in result) return failed(`in the result, ${result.why}`);
  const [a, b] = [Float64Array.of(reference.value), Float64Array.of(result.value)];
  const measured = measureArrays(a, b, weighingOf(declared), measureKernel());
  const grain = grainOf(own.reference.type, own.result.type);
  const { deviation, tolerance } = judge(name, measured, declared, grain, options);
  return { ...base, unit: reference.unit, ...deviation, tolerance };
}

function featureOf(
  feature: Feature,
  series: Series,
  pairs: ReadonlyMap<string, Pair>,
  side: 'reference' | 'result',
): { readonly value: number; readonly unit: string } | { readonly why: string } {
  let taken: { readonly value: number; readonly unit: string } | { readonly why: string };
  if (feature.take === 'formula') {
    if (feature.formula === undefined) return { why: 'there is no formula: declare one beside "take: formula"' };
    const held = [...pairs].flatMap(([name, pair]) =>
      pair.kind !== 'long' && pair.own !== undefined ? [[name, pair.own[side]] as const] : [],
    );
    taken = evaluateFormula(feature.formula, new Map(held));
  } else {
    const one = takeFeature(feature, series);
    taken =
      'why' in one ? one : { value: one.value, unit: featureUnit(feature.take, series.unit, series.along?.unit ?? '') };
  }
  if ('why' in taken || feature.unit === undefined) return taken;
  const change = taken.unit === '' ? NO_CHANGE : unitChange(taken.unit, feature.unit);
  if ('why' in change) {
    return change.unreadable
      ? { ...taken, unit: feature.unit }
      : { why: `it comes in ${taken.unit}, which cannot be brought to ${feature.unit}` };
  }
  return { value: taken.value * change.factor + change.offset, unit: feature.unit };
}

function conservedDeviation(
  theCase: string,
  name: string,
  pair: Pair | undefined,
  of: string,
  declared: Tolerance | undefined,
): Deviation {
  const base = { case: theCase, quantity: name, of: 'conserved' } as const;
  const failed = (why: string) => notComparable({ ...base, unit: '', tolerance: completeTolerance(declared) }, why);
  if (pair === undefined) return failed(`no output of the case has a quantity "${of}"`);
  if (pair.kind === 'none' && pair.own === undefined) return failed(pair.why);
  if (pair.kind === 'long') return failed(`${of} has more than ${LARGEST_HELD} values along the run`);
  const own = pair.own!;
  const { tolerance, ...deviation } = compareConserved(own.reference.values, own.result.values, declared);
  return { ...base, unit: own.result.unit, tolerance, ...placed(deviation, own.result) };
}
