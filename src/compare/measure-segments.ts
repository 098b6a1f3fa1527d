/** Two long data sets measured by several threads: each takes the next stretch of elements that nobody has taken yet. */
import type { ArrayCursor } from '../outputs/output-file.ts';
import { SharedLedger } from './block-sums.ts';
import { BLOCK, type MeasureKernel, STAGED_BLOCKS, type Weighing } from './measure-block.ts';
import { type Fills, settleAbsent } from './measure-streams.ts';
import { Measuring, type Part } from './measuring.ts';

/** What the threads share. */
export interface SharedWork {
  /** Elements of either side. */
  readonly count: number;
  readonly weighing: Weighing;
  readonly fills: Fills;
  readonly resultFactor: number;
  /** Sums of every block. */
  readonly sums: SharedArrayBuffer;
  /** One 32-bit integer: how many stretches were taken. */
  readonly taken: SharedArrayBuffer;
}

/** A stretch: long enough that taking one costs nothing, short enough that threads end together. */
const STRETCH = STAGED_BLOCKS * BLOCK * 64;

export interface SegmentsFound {
  readonly part: Part;
  readonly absentOnOneSide: number;
}

/** Measures stretches until none is left. Both cursors can skip, and stand at the start. */
export async function measureSegments(
  work: SharedWork,
  reference: ArrayCursor,
  result: ArrayCursor,
  kernel: MeasureKernel,
  pause: () => Promise<void>,
): Promise<SegmentsFound> {
  const measuring = new Measuring(kernel, work.weighing, new SharedLedger(work.sums));
  const counter = new Int32Array(work.taken);
  const room = kernel.reference.length;
  let at = 0;
  let absentOnOneSide = 0;
  for (;;) {
    const start = Atomics.add(counter, 0, 1) * STRETCH;
    if (start >= work.count) return { part: measuring.part(), absentOnOneSide };
    reference.skip!(start - at);
    result.skip!(start - at);
    measuring.goTo(start);
    const end = Math.min(start + STRETCH, work.count);
    for (at = start; at < end; ) {
      const size = Math.min(room, end - at);
      reference.fill(kernel.reference.subarray(0, size));
      result.fill(kernel.result.subarray(0, size));
      absentOnOneSide += settleAbsent(kernel.reference, kernel.result, size, work.fills);
      if (work.resultFactor !== 1) {
        for (let i = 0; i < size; i++) kernel.result[i] = kernel.result[i]! * work.resultFactor;
      }
      measuring.take(size);
      at += size;
    }
    await pause();
  }
}
