/** Any two result files, or folders of them, without manifests: every data set that both hold, and what only one has. */
import { readdirSync, statSync } from 'node:fs';
import { join, relative, sep } from 'node:path';
import type { Deviation, Tolerance } from '../model/deviation.ts';
import { compareText } from '../model/place.ts';
import { type OutputHints, openOutput } from '../outputs/open-output.edge.ts';
import { type DatasetInfo, elementsOf, type OutputFile, OutputProblem } from '../outputs/output-file.ts';
import { classify } from './compare-arrays.ts';
import { fieldDeviation } from './field-deviation.ts';
import { measureKernel } from './measure-kernel.edge.ts';
import type { Streamed } from './measure-streams.ts';
import { measureTablesTogether, measureTogether } from './measure-together.edge.ts';
import { LARGEST_HELD, readPair } from './read-pair.edge.ts';
import { grainOf } from './series.ts';
import { completeTolerance, weighingOf } from './tolerance.ts';
import { unitFactor } from './unit-factor.ts';

export interface FileComparison {
  /** One for every data set on both sides; `case` is the file, relative to the folders compared. */
  readonly deviations: readonly Deviation[];
  /** Files and data sets that only one side has. */
  readonly missing: readonly Missing[];
}

export interface Missing {
  readonly file: string;
  /** Absent when the whole file is missing. */
  readonly dataset?: string;
  readonly from: 'reference' | 'result';
}

export interface FileOptions extends OutputHints {
  readonly tolerance?: Partial<Tolerance>;
  /** Data sets to compare; all when absent. */
  readonly only?: readonly string[];
  /** Data set that is the axis: fields on unlike grids are brought onto the coarser one. */
  readonly along?: string;
  /** Data set whose values pair the elements of both sides. */
  readonly match?: string;
  readonly signal?: AbortSignal;
}

/** @returns deviations and gaps in the order of file names, then of data sets in the reference */
export async function compareFiles(
  reference: string,
  result: string,
  options: FileOptions = {},
): Promise<FileComparison> {
  const [a, b] = [filesUnder(reference), filesUnder(result)];
  // Two single files are compared whatever their names.
  if (a === null && b === null) return comparePair('', reference, result, options);
  const deviations: Deviation[] = [];
  const missing: Missing[] = [];
  const names = [...new Set([...(a ?? ['']), ...(b ?? [''])])].sort(compareText);
  for (const file of names) {
    if (!(a ?? ['']).includes(file)) missing.push({ file, from: 'reference' });
    else if (!(b ?? ['']).includes(file)) missing.push({ file, from: 'result' });
    else {
      const pair = await comparePair(file, join(reference, file), join(result, file), options);
      deviations.push(...pair.deviations);
      missing.push(...pair.missing);
    }
  }
  return { deviations, missing };
}

/** Paths of the files under a folder, `/` between parts; null for a file. */
function filesUnder(path: string): string[] | null {
  if (statSync(path, { throwIfNoEntry: false })?.isDirectory() !== true) return null;
  return readdirSync(path, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(path, join(entry.parentPath, entry.name)).split(sep).join('/'));
}

async function comparePair(
  file: string,
  referencePath: string,
  resultPath: string,
  options: FileOptions,
): Promise<FileComparison> {
  const sides: OutputFile[] = [];
  try {
    for (const [side, path] of [['reference', referencePath] as const, ['result', resultPath] as const]) {
      try {
        sides.push(await openOutput(path, options));
      } catch (error) {
        if (!(error instanceof OutputProblem)) throw error;
        return {
          deviations: [notComparable(file, file === '' ? 'file' : file, '', null, `the ${side} ${error.message}`)],
          missing: [],
        };
      }
    }
    return await compareOpened(file, sides[0]!, sides[1]!, options);
  } finally {
    for (const side of sides) side.close();
  }
}

interface Shared {
  readonly name: string;
  readonly reference: DatasetInfo;
  readonly result: DatasetInfo;
  /** Result values times this are in the reference's unit. */
  readonly factor: number;
}

async function compareOpened(
  file: string,
  reference: OutputFile,
  result: OutputFile,
  options: FileOptions,
): Promise<FileComparison> {
  const missing: Missing[] = [];
  const shared: Shared[] = [];
  const failed = new Map<string, Deviation>();
  const wanted = options.only?.map((name) => reference.find(name) ?? result.find(name) ?? name);
  const isWanted = (info: DatasetInfo) =>
    wanted === undefined || wanted.some((one) => one === info || (typeof one === 'object' && one.name === info.name));
  for (const name of wanted ?? []) {
    if (typeof name === 'string')
      missing.push({ file, dataset: name, from: 'reference' }, { file, dataset: name, from: 'result' });
  }
  const order: string[] = [];
  for (const info of reference.datasets().filter(isWanted)) {
    const other = result.find(info.name);
    if (other === null) {
      missing.push({ file, dataset: info.name, from: 'result' });
      continue;
    }
    order.push(info.name);
    const why = unlike(info, other);
    const factor = unitFactor(other.unit, info.unit);
    if (why !== null) failed.set(info.name, notComparable(file, info.name, info.unit ?? '', options.tolerance, why));
    else if (typeof factor === 'string')
      failed.set(info.name, notComparable(file, info.name, info.unit ?? '', options.tolerance, factor));
    else shared.push({ name: info.name, reference: info, result: other, factor });
  }
  for (const info of result.datasets().filter(isWanted)) {
    if (reference.find(info.name) === null) missing.push({ file, dataset: info.name, from: 'reference' });
  }
  if (options.along !== undefined || options.match !== undefined) {
    return { deviations: await alignEach(file, reference, result, order, options), missing };
  }
  if (order.length === 0 && missing.length === 0) {
    return {
      deviations: [
        notComparable(file, file === '' ? 'file' : file, '', null, 'neither side holds a data set of numbers'),
      ],
      missing,
    };
  }
  const measured = await measureShared(file, reference, result, shared, options);
  return { deviations: order.map((name) => failed.get(name) ?? measured.get(name)!), missing };
}

/** Field by field, both sides in memory, aligned as a case would be. */
async function alignEach(
  file: string,
  reference: OutputFile,
  result: OutputFile,
  names: readonly string[],
  options: FileOptions,
): Promise<Deviation[]> {
  const { along, match, tolerance = {} } = options;
  // What elements are told apart by is not compared itself: it differs where alignment is needed.
  const isKey = (name: string) => [along, match].some((key) => key !== undefined && reference.find(key)?.name === name);
  const deviations: Deviation[] = [];
  for (const name of names.filter((one) => !isKey(one))) {
    options.signal?.throwIfAborted();
    const quantity = { dataset: name, unit: reference.find(name)!.unit ?? '', tolerance };
    const output = {
      file: file === '' ? 'the file' : file,
      quantities: {},
      ...(along === undefined ? {} : { along }),
      ...(match === undefined ? {} : { match }),
    };
    const base = { case: file, quantity: name, of: 'field', unit: quantity.unit } as const;
    const pair = await readPair(name, quantity, output, reference, result);
    if (pair.kind === 'long') {
      const why = `more than ${LARGEST_HELD} elements are not aligned: compare without --along and --match`;
      deviations.push(notComparable(file, name, quantity.unit, tolerance, why));
    } else deviations.push(fieldDeviation(base, quantity, pair, measureKernel(), {}));
  }
  return deviations;
}

function unlike(reference: DatasetInfo, result: DatasetInfo): string | null {
  const [a, b] = [elementsOf(reference), elementsOf(result)];
  const shape = (info: DatasetInfo) =>
    info.shape.length === 0 ? 'a single number' : info.shape.map((extent) => extent ?? '?').join(' x ');
  const known = a !== null && b !== null;
  if (known && (a !== b || reference.shape.join() !== result.shape.join())) {
    return `the reference's shape is ${shape(reference)}, the result's ${shape(result)}`;
  }
  return reference.type.startsWith('complex') === result.type.startsWith('complex')
    ? null
    : 'one side is complex, the other is not';
}

/** Columns taken from a table at once; a wider one is read several times so that memory stays bounded. */
const COLUMNS_AT_ONCE = 200;

async function measureShared(
  file: string,
  reference: OutputFile,
  result: OutputFile,
  shared: readonly Shared[],
  options: FileOptions,
): Promise<Map<string, Deviation>> {
  const tolerance = completeTolerance(options.tolerance);
  const weighing = weighingOf(tolerance);
  const deviations = new Map<string, Deviation>();
  const conclude = (one: Shared, streamed: Streamed) =>
    deviations.set(one.name, deviationOf(file, one, streamed, tolerance));
  const failAll = (some: readonly Shared[], error: unknown) => {
    if (!(error instanceof OutputProblem)) throw error;
    const side = error.path === reference.path ? 'reference' : 'result';
    for (const one of some) {
      deviations.set(
        one.name,
        notComparable(file, one.name, one.reference.unit ?? '', tolerance, `the ${side} ${error.message}`),
      );
    }
  };

  const plain = shared.filter((one) => one.factor === 1);
  const asTable = reference.table([]) !== null && result.table([]) !== null ? plain : [];
  for (let first = 0; first < asTable.length; first += COLUMNS_AT_ONCE) {
    const some = asTable.slice(first, first + COLUMNS_AT_ONCE);
    try {
      const names = (side: 'reference' | 'result') => some.map((one) => one[side].name);
      const [a, b] = [
        { file: reference, names: names('reference') },
        { file: result, names: names('result') },
      ];
      const { signal } = options;
      const streamed = await measureTablesTogether(a, b, weighing, { hints: hintsOf(options), signal });
      some.forEach((one, index) => {
        conclude(one, streamed[index]!);
      });
    } catch (error) {
      failAll(some, error);
    }
  }
  for (const one of shared.filter((candidate) => !asTable.includes(candidate))) {
    try {
      const [a, b] = [
        { file: reference, info: one.reference },
        { file: result, info: one.result },
      ];
      const { signal } = options;
      conclude(
        one,
        await measureTogether(a, b, weighing, { hints: hintsOf(options), resultFactor: one.factor, signal }),
      );
    } catch (error) {
      failAll([one], error);
    }
  }
  return deviations;
}

/** Only what another thread can be given. */
function hintsOf({ patterns, layout }: FileOptions): OutputHints {
  return { ...(patterns === undefined ? {} : { patterns }), ...(layout === undefined ? {} : { layout }) };
}

function deviationOf(file: string, one: Shared, streamed: Streamed, tolerance: Tolerance | null): Deviation {
  const unit = one.reference.unit ?? '';
  const { referenceCount, resultCount, absentOnOneSide } = streamed;
  if (referenceCount !== resultCount) {
    return notComparable(
      file,
      one.name,
      unit,
      tolerance,
      `the reference has ${referenceCount} elements, the result ${resultCount}`,
    );
  }
  const { why, ...found } = classify(streamed.measured, tolerance, grainOf(one.reference.type, one.result.type));
  const says = [
    absentOnOneSide > 0 ? `${absentOnOneSide} elements have a value on one side only` : (why ?? null),
    one.factor === 1 ? null : `the result, in ${one.result.unit}, was converted to ${unit}`,
    one.reference.guessed === true ? `nothing declares the type; read as ${one.reference.type}` : null,
  ].filter((text) => text !== null);
  const base = { case: file, quantity: one.name, of: 'field', unit, tolerance } as const;
  return { ...base, ...found, ...(says.length === 0 ? {} : { why: says.join('; ') }) };
}

function notComparable(
  file: string,
  quantity: string,
  unit: string,
  tolerance: Partial<Tolerance> | null | undefined,
  why: string,
): Deviation {
  const complete = completeTolerance(tolerance ?? undefined);
  return {
    case: file,
    quantity,
    of: 'field',
    class: 'not comparable',
    unit,
    measures: null,
    tolerances: null,
    tolerance: complete,
    why,
  };
}
