/** A thread that scans pieces of history, one after another. */
import { parentPort, workerData } from 'node:worker_threads';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import { scanPiece } from './scan-piece.edge.ts';
import type { ScanAnswer, ScanStep } from './scan-step.ts';

const place = workerData as RepositoryPlace;
const BATCH = 64;

parentPort!.on('message', async (steps: readonly ScanStep[]) => {
  let batch: ScanAnswer[] = [];
  const flush = () => {
    if (batch.length > 0) parentPort!.postMessage({ answers: batch });
    batch = [];
  };
  try {
    await scanPiece(place, steps, (answer) => {
      batch.push(answer);
      if (batch.length >= BATCH) flush();
    });
    flush();
    parentPort!.postMessage({ done: true });
  } catch (error) {
    flush();
    parentPort!.postMessage({ failed: String((error as Error).stack ?? error) });
  }
});
