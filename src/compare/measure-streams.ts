/** Two data sets read side by side, a few blocks at a time, and measured as they come: memory does not grow with their length. */
import type { ArrayCursor, TableCursor } from '../outputs/output-file.ts';
import { RunningLedger } from './block-sums.ts';
import { BLOCK, type MeasureKernel, type Weighing } from './measure-block.ts';
import { conclude, type Measured, Measuring } from './measuring.ts';

export interface Streamed {
  readonly measured: Measured;
  /** Elements of either side; unequal when one ended before the other. */
  readonly referenceCount: number;
  readonly resultCount: number;
  /** Elements that have no value on one side only. */
  readonly absentOnOneSide: number;
}

/** The values that stand for no value on either side. */
export interface Fills {
  readonly reference?: number | undefined;
  readonly result?: number | undefined;
}

/** Pauses now and then, so that an interrupt is heard. */
const PAUSE_ELEMENTS = 1 << 23;

/** @throws what the cursors throw, and the signal's reason when it is aborted */
export async function measureStreams(
  reference: ArrayCursor,
  result: ArrayCursor,
  weighing: Weighing,
  kernel: MeasureKernel,
  options: { readonly fills?: Fills; readonly resultFactor?: number; readonly signal?: AbortSignal } = {},
): Promise<Streamed> {
  const ledger = new RunningLedger();
  const measuring = new Measuring(kernel, weighing, ledger);
  const { fills = {}, resultFactor = 1 } = options;
  let [referenceCount, resultCount, absentOnOneSide, sincePause] = [0, 0, 0, 0];
  for (;;) {
    const a = reference.fill(kernel.reference);
    const b = result.fill(kernel.result);
    const both = Math.min(a, b);
    absentOnOneSide += settleAbsent(kernel.reference, kernel.result, both, fills);
    if (resultFactor !== 1) for (let i = 0; i < both; i++) kernel.result[i] = kernel.result[i]! * resultFactor;
    measuring.take(both);
    referenceCount += a;
    resultCount += b;
    if (a !== b || a < kernel.reference.length) break;
    sincePause += a;
    if (sincePause >= PAUSE_ELEMENTS) {
      sincePause = 0;
      await pause(options.signal);
    }
  }
  referenceCount += rest(reference, referenceCount, resultCount, kernel.reference);
  resultCount += rest(result, resultCount, referenceCount, kernel.result);
  return {
    measured: conclude([measuring.part()], ledger.totals(), weighing),
    referenceCount,
    resultCount,
    absentOnOneSide,
  };
}

/** Rows of a table, a block at a time; one may come from another thread. */
export interface TableRows {
  /** The next BLOCK rows, an array a column; fewer only at the end. The arrays are valid until the next call. */
  next(): Promise<{ readonly count: number; readonly columns: readonly Float64Array[] }>;
}

/** A table read by this thread. */
export function rowsOf(table: TableCursor, columns: number): TableRows {
  const arrays = Array.from({ length: columns }, () => new Float64Array(BLOCK));
  return { next: async () => ({ count: table.fill(arrays), columns: arrays }) };
}

/** All columns of two tables in one pass over either. */
export async function measureTables(
  reference: TableRows,
  result: TableRows,
  weighings: readonly Weighing[],
  kernel: MeasureKernel,
  signal?: AbortSignal,
): Promise<readonly Streamed[]> {
  const columns = weighings.map((weighing) => {
    const ledger = new RunningLedger();
    return { ledger, measuring: new Measuring(kernel, weighing, ledger) };
  });
  let [referenceCount, resultCount, sincePause] = [0, 0, 0];
  for (;;) {
    const b = await result.next();
    const a = await reference.next();
    const both = Math.min(a.count, b.count);
    columns.forEach(({ measuring }, index) => {
      kernel.reference.set(a.columns[index]!.subarray(0, both));
      kernel.result.set(b.columns[index]!.subarray(0, both));
      measuring.take(both);
    });
    referenceCount += a.count;
    resultCount += b.count;
    if (a.count !== b.count || a.count < BLOCK) break;
    sincePause += a.count * columns.length;
    if (sincePause >= PAUSE_ELEMENTS) {
      sincePause = 0;
      await pause(signal);
    }
  }
  if (referenceCount > resultCount) referenceCount += await moreRows(reference, referenceCount);
  if (resultCount > referenceCount) resultCount += await moreRows(result, resultCount);
  return columns.map(({ measuring, ledger }, index) => ({
    measured: conclude([measuring.part()], ledger.totals(), weighings[index]!),
    referenceCount,
    resultCount,
    absentOnOneSide: 0,
  }));
}

/** How many more rows a table has; its last block was a short one when it has none. */
async function moreRows(rows: TableRows, sofar: number): Promise<number> {
  let more = 0;
  for (let count = sofar % BLOCK === 0 ? BLOCK : 0; count === BLOCK; more += count) count = (await rows.next()).count;
  return more;
}

/**
 * Elements without a value on both sides agree: both become 0. Where only one side has none, the result becomes NaN, which
 * never passes.
 *
 * @returns how many have a value on one side only
 */
export function settleAbsent(reference: Float64Array, result: Float64Array, count: number, fills: Fills): number {
  if (fills.reference === undefined && fills.result === undefined) return 0;
  const isFill = (value: number, fill: number | undefined) =>
    value === fill || (fill !== undefined && Number.isNaN(fill) && Number.isNaN(value));
  let oneSided = 0;
  for (let i = 0; i < count; i++) {
    const a = isFill(reference[i]!, fills.reference);
    const b = isFill(result[i]!, fills.result);
    if (!a && !b) continue;
    if (a !== b) oneSided++;
    if (a) reference[i] = 0;
    result[i] = a && b ? 0 : Number.NaN;
  }
  return oneSided;
}

async function pause(signal: AbortSignal | undefined): Promise<void> {
  await new Promise((resolve) => setImmediate(resolve));
  signal?.throwIfAborted();
}

/** How many more elements the longer side has, for the message. */
function rest(cursor: ArrayCursor, own: number, other: number, buffer: Float64Array): number {
  let more = 0;
  for (let count = buffer.length; count === buffer.length && own > other; more += count) count = cursor.fill(buffer);
  return more;
}
