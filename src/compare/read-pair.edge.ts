/** One quantity of a case from both sides: read, brought to the declared unit, onto the same elements, or why that cannot be. */
import type { CaseOutput, OutputQuantity } from '../model/manifest.ts';
import { type DatasetInfo, elementsOf, type OutputFile, OutputProblem } from '../outputs/output-file.ts';
import { type Aligned, moved, ontoCoarser, pairByKey, sameAxis, shiftOf } from './align.ts';
import { settleAbsent } from './measure-streams.ts';
import type { Axis, Series } from './series.ts';
import { applyChange, NO_CHANGE, type UnitChange, unitChange } from './unit-factor.ts';

/** Fields up to this many values are held in memory, so that they can be aligned, plotted and made features of. */
export const LARGEST_HELD = 1 << 22;

export type Pair =
  | {
      readonly kind: 'held';
      readonly reference: Series;
      readonly result: Series;
      readonly weight: Float64Array | null;
      readonly notes: readonly string[];
      /** How far the result lay shifted, in the unit of the axis. */
      readonly shift?: number;
      /** Both as they were written, before they were put onto the same elements: what features are made of. */
      readonly own: OwnSeries;
    }
  /** Too long to hold: measured as it is read. */
  | {
      readonly kind: 'long';
      readonly reference: DatasetInfo;
      readonly result: DatasetInfo;
      /** Result values times this are in the reference's unit. */
      readonly resultFactor: number;
    }
  | { readonly kind: 'none'; readonly why: string; readonly own?: OwnSeries };

export interface OwnSeries {
  readonly reference: Series;
  readonly result: Series;
}

const none = (why: string, own?: OwnSeries): Pair => ({ kind: 'none', why, ...(own === undefined ? {} : { own }) });

export async function readPair(
  name: string,
  quantity: OutputQuantity,
  output: CaseOutput,
  reference: OutputFile | OutputProblem,
  result: OutputFile | OutputProblem,
): Promise<Pair> {
  if (reference instanceof OutputProblem) return none(`${output.file} of the reference ${reference.message}`);
  if (result instanceof OutputProblem) return none(`${output.file} of the result ${result.message}`);
  let side = 'reference';
  try {
    const a = await readSide(name, quantity, output, reference);
    side = 'result';
    const b = await readSide(name, quantity, output, result);
    if (typeof a === 'string') return none(`${output.file} of the reference ${a}`);
    if (typeof b === 'string') return none(`${output.file} of the result ${b}`);
    if (a.series === null || b.series === null) return long(name, output, a, b);
    const keys = output.match;
    if (keys === undefined) return align(a, b, quantity, output);
    side = 'reference';
    const referenceKeys = await reference.readAll(keys);
    side = 'result';
    const paired = pairByKey(a.series, b.series, referenceKeys, await result.readAll(keys));
    return 'why' in paired
      ? none(paired.why)
      : align({ ...a, series: paired.reference }, { ...b, series: paired.result }, quantity, output, paired.note);
  } catch (error) {
    if (error instanceof OutputProblem) return none(`${output.file} of the ${side} ${error.message}`);
    throw error;
  }
}

interface Side {
  readonly info: DatasetInfo;
  readonly change: UnitChange;
  /** null when it is too long to hold. */
  readonly series: Series | null;
  readonly weight: Float64Array | null;
}

/** @returns a predicate of the file when its unit cannot be brought to the declared one */
async function readSide(
  name: string,
  quantity: OutputQuantity,
  output: CaseOutput,
  file: OutputFile,
): Promise<Side | string> {
  const info = file.find(quantity.dataset);
  // Says which data sets there are.
  if (info === null) throw file.absent(quantity.dataset);
  const held = holdUpTo(file, quantity.dataset, info);
  const found = unitChange(info.unit, quantity.unit);
  // A heading in brackets that is no unit says nothing against the declared one.
  if ('why' in found && !found.unreadable)
    return `has ${info.name} in ${info.unit}, but ${found.why} as the case declares it`;
  const change = 'why' in found ? NO_CHANGE : found;
  if (held === null) return { info, change, series: null, weight: null };
  applyChange(held, change);
  const shape = info.shape.map((extent) => extent ?? held.length);
  const along = output.along === undefined ? null : await readAxis(output.along, file);
  const weight = quantity.weight === undefined ? null : await file.readAll(quantity.weight);
  return { info, change, series: { name, unit: quantity.unit, values: held, shape, type: info.type, along }, weight };
}

function holdUpTo(file: OutputFile, dataset: string, info: DatasetInfo): Float64Array | null {
  const elements = elementsOf(info);
  if (elements !== null && elements > LARGEST_HELD) return null;
  const cursor = file.cursor(dataset);
  try {
    let values = new Float64Array(elements ?? 65_536);
    let length = 0;
    for (;;) {
      length += cursor.fill(values.subarray(length));
      if (length < values.length || elements !== null)
        return length === values.length ? values : values.slice(0, length);
      if (length > LARGEST_HELD) return null;
      const larger = new Float64Array(values.length * 4);
      larger.set(values);
      values = larger;
    }
  } finally {
    cursor.close();
  }
}

async function readAxis(along: string, file: OutputFile): Promise<Axis> {
  const values = await file.readAll(along);
  return { name: along.replace(/^\/+/, ''), unit: file.find(along)!.unit ?? '', values };
}

function long(name: string, output: CaseOutput, a: Side, b: Side): Pair {
  if (a.series !== null || b.series !== null || a.info.shape.join() !== b.info.shape.join()) {
    return none(
      `${name} has the shape ${shapeText(a.info.shape)} in the reference and ${shapeText(b.info.shape)} in the result`,
    );
  }
  if (output.match !== undefined)
    return none(`${name} is too long to be paired by ${output.match}: ${shapeText(a.info.shape)}`);
  if (a.change.offset !== 0 || b.change.offset !== 0)
    return none(`${name} is too long to be brought from ${a.info.unit} or ${b.info.unit} by an offset`);
  return { kind: 'long', reference: a.info, result: b.info, resultFactor: b.change.factor / a.change.factor };
}

function align(a: Side, b: Side, quantity: OutputQuantity, output: CaseOutput, said?: string): Pair {
  const notes = said === undefined ? [] : [said];
  let [reference, result] = [a.series!, b.series!];
  const axisChange = unitChange(result.along?.unit || undefined, reference.along?.unit || undefined);
  if ('why' in axisChange) return none(`the axes differ: ${axisChange.why}`);
  if (result.along !== null && axisChange !== NO_CHANGE) {
    const values = result.along.values.slice();
    applyChange(values, axisChange);
    result = { ...result, along: { ...result.along, unit: reference.along!.unit, values } };
  }
  const oneSided = settleAbsent(
    reference.values,
    result.values,
    Math.min(reference.values.length, result.values.length),
    { reference: changed(a), result: changed(b) },
  );
  if (oneSided > 0) notes.push(`${oneSided} elements have a value on one side only`);
  const own = { reference, result };
  let weight = a.weight;
  let shift: number | null = null;
  if (output.shift !== undefined) {
    shift = shiftOf(reference, result, output.shift.tolerance);
    if (shift === null)
      return none(`${reference.name} has no rising or falling axis along which a shift could be told`, own);
    if (shift !== 0) {
      result = moved(result, -shift);
      notes.push(`the result lay ${shift} ${reference.along!.unit} further along and was moved back`);
    }
  }
  const onOneGrid = sameGrid(reference, result);
  if (!onOneGrid) {
    if (reference.along === null || result.along === null) {
      return none(
        `${reference.name} has the shape ${shapeText(reference.shape)} in the reference and ${shapeText(result.shape)} in the result`,
        own,
      );
    }
    if (reference.type.startsWith('complex'))
      return none('the axes differ, and complex values are not interpolated', own);
    const aligned: Aligned = ontoCoarser(reference, result, quantity.extensive === true);
    if ('why' in aligned) return none(aligned.why, own);
    ({ reference, result } = aligned);
    if (aligned.note !== undefined) notes.push(aligned.note);
    // Weights belong to the reference's own elements.
    weight = null;
  }
  return { kind: 'held', reference, result, weight, notes, own, ...(shift === null ? {} : { shift }) };
}

function changed({ info, change }: Side): number | undefined {
  return info.fill === undefined ? undefined : info.fill * change.factor + change.offset;
}

function sameGrid(reference: Series, result: Series): boolean {
  if (reference.shape.join() !== result.shape.join() || reference.values.length !== result.values.length) return false;
  return reference.along === null || result.along === null || sameAxis(reference.along, result.along);
}

const shapeText = (shape: readonly (number | null)[]) =>
  shape.length === 0 ? 'of one number' : shape.map((extent) => extent ?? 'many').join(' x ');
