/** Measures two data sets, on two threads when they are long; the measures are the same bits either way. */
import { existsSync, statSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import type { OutputHints } from '../outputs/open-output.edge.ts';
import {
  type DatasetInfo,
  elementsOf,
  type OutputFile,
  OutputProblem,
  type OutputProblemKind,
} from '../outputs/output-file.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import { SharedLedger } from './block-sums.ts';
import { BLOCK, type Weighing } from './measure-block.ts';
import { measureKernel } from './measure-kernel.edge.ts';
import { measureSegments, type SegmentsFound, type SharedWork } from './measure-segments.ts';
import { measureStreams, measureTables, rowsOf, type Streamed, type TableRows } from './measure-streams.ts';
import { conclude } from './measuring.ts';

/** Starting a thread and opening the files in it costs as much as measuring some hundred million elements. */
const WORTH_A_THREAD = 1 << 27;

export interface ThreadTask {
  readonly reference: { readonly path: string; readonly name: string };
  readonly result: { readonly path: string; readonly name: string };
  readonly hints: OutputHints;
  readonly work: SharedWork;
}

export interface TogetherOptions {
  readonly hints: OutputHints;
  readonly resultFactor: number;
  /** 1 keeps to this thread. */
  readonly threads?: number;
  readonly signal?: AbortSignal | undefined;
}

/** @throws {OutputProblem} when either side cannot be read to its end */
export async function measureTogether(
  reference: { readonly file: OutputFile; readonly info: DatasetInfo },
  result: { readonly file: OutputFile; readonly info: DatasetInfo },
  weighing: Weighing,
  options: TogetherOptions,
): Promise<Streamed> {
  const a = reference.file.cursor(reference.info.name);
  const b = result.file.cursor(result.info.name);
  const fills = { reference: reference.info.fill, result: result.info.fill };
  const count = elementsOf(reference.info);
  const { hints, resultFactor, signal, threads = Math.min(2, availableParallelism()) } = options;
  try {
    const worker = builtAsset('measure-part.worker.js');
    const alone = count === null || count < WORTH_A_THREAD || threads < 2 || count !== elementsOf(result.info);
    if (alone || a.skip === undefined || b.skip === undefined || !existsSync(worker)) {
      const more = signal === undefined ? {} : { signal };
      return await measureStreams(a, b, weighing, measureKernel(), { fills, resultFactor, ...more });
    }
    const ledger = SharedLedger.forBlocks(Math.ceil(count / BLOCK));
    const work = { count, weighing, fills, resultFactor, sums: ledger.memory, taken: new SharedArrayBuffer(4) };
    const place = (side: typeof reference) => ({ path: side.file.path, name: side.info.name });
    const task: ThreadTask = { reference: place(reference), result: place(result), hints, work };
    const other = inThread(worker, task);
    // Should this thread fail first, the other's failure is no one's to hear.
    other.found.catch(() => {});
    try {
      const own = await measureSegments(work, a, b, measureKernel(), async () => {
        await new Promise((resolve) => setImmediate(resolve));
        signal?.throwIfAborted();
      });
      const both = [own, await other.found];
      return {
        measured: conclude(
          both.map((one) => one.part),
          ledger.totals(),
          weighing,
        ),
        referenceCount: count,
        resultCount: count,
        absentOnOneSide: both.reduce((sum, one) => sum + one.absentOnOneSide, 0),
      };
    } finally {
      await other.end();
    }
  } finally {
    a.close();
    b.close();
  }
}

function inThread(script: string, task: ThreadTask): { found: Promise<SegmentsFound>; end(): Promise<unknown> } {
  const worker = new Worker(script, { workerData: task });
  const found = new Promise<SegmentsFound>((resolve, reject) => {
    worker.once('message', resolve);
    worker.once('error', reject);
    worker.once('exit', (status) => reject(new Error(`a measuring thread ended with status ${status}`)));
  });
  return { found, end: () => worker.terminate() };
}

/** Text worth parsing in a thread of its own. */
const WORTH_A_THREAD_BYTES = 1 << 26;
/** Blocks that the other thread may be ahead. */
const AHEAD = 4;

export interface RowsTask {
  readonly path: string;
  readonly names: readonly string[];
  readonly hints: OutputHints;
  /** Two 32-bit integers: blocks sent, blocks taken. */
  readonly progress: SharedArrayBuffer;
  readonly ahead: number;
}

export type RowsMessage =
  | { readonly count: number; readonly columns: readonly Float64Array[] }
  | { readonly problem: { readonly kind: OutputProblemKind; readonly path: string; readonly says: string } };

/** Two tables column by column: the reference is parsed by another thread when both are large, the result by this one. */
export async function measureTablesTogether(
  reference: { readonly file: OutputFile; readonly names: readonly string[] },
  result: { readonly file: OutputFile; readonly names: readonly string[] },
  weighing: Weighing,
  options: Omit<TogetherOptions, 'resultFactor'>,
): Promise<readonly Streamed[]> {
  const { hints, signal, threads = Math.min(2, availableParallelism()) } = options;
  const script = builtAsset('read-rows.worker.js');
  const size = ({ file }: typeof reference) => statSync(file.path, { throwIfNoEntry: false })?.size ?? 0;
  const together = threads > 1 && existsSync(script) && Math.min(size(reference), size(result)) >= WORTH_A_THREAD_BYTES;
  const weighings = reference.names.map(() => weighing);
  const own = rowsOf(result.file.table(result.names)!, result.names.length);
  if (!together) {
    const other = rowsOf(reference.file.table(reference.names)!, reference.names.length);
    return measureTables(other, own, weighings, measureKernel(), signal);
  }
  const task = { path: reference.file.path, names: reference.names, hints, ahead: AHEAD };
  const other = rowsFromThread(script, task);
  try {
    return await measureTables(other, own, weighings, measureKernel(), signal);
  } finally {
    await other.end();
  }
}

function rowsFromThread(script: string, task: Omit<RowsTask, 'progress'>): TableRows & { end(): Promise<unknown> } {
  const progress = new SharedArrayBuffer(8);
  const counters = new Int32Array(progress);
  const worker = new Worker(script, { workerData: { ...task, progress } satisfies RowsTask });
  const arrived: RowsMessage[] = [];
  let failed: Error | null = null;
  let wake = () => {};
  worker.on('message', (message: RowsMessage) => {
    arrived.push(message);
    wake();
  });
  worker.on('error', (error) => {
    failed = error;
    wake();
  });
  return {
    async next() {
      while (arrived.length === 0 && failed === null) {
        await new Promise<void>((resolve) => {
          wake = resolve;
        });
      }
      const message = arrived.shift();
      if (message === undefined) throw failed!;
      if ('problem' in message) {
        const { kind, path, says } = message.problem;
        throw new OutputProblem(kind, path, says);
      }
      Atomics.add(counters, 1, 1);
      Atomics.notify(counters, 1);
      return message;
    },
    end: () => worker.terminate(),
  };
}
