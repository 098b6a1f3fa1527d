/** Measures two data sets, on two threads when they are long; the measures are the same bits either way. */
import { existsSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import type { OutputHints } from '../outputs/open-output.edge.ts';
import { type DatasetInfo, elementsOf, type OutputFile } from '../outputs/output-file.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import { SharedLedger } from './block-sums.ts';
import { BLOCK, type Weighing } from './measure-block.ts';
import { measureKernel } from './measure-kernel.edge.ts';
import { measureSegments, type SegmentsFound, type SharedWork } from './measure-segments.ts';
import { measureStreams, type Streamed } from './measure-streams.ts';
import { conclude } from './measuring.ts';

/** Starting a thread and opening the files in it costs as much as measuring some thirty million elements. */
const WORTH_A_THREAD = 1 << 25;

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
