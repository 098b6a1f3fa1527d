/** A thread that reads pieces of history, one after another. */
import { parentPort, workerData } from 'node:worker_threads';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import { readPrints } from './read-prints.edge.ts';
import type { Piece } from './scan.edge.ts';
import { scanPiece } from './scan-piece.edge.ts';

const place = workerData as RepositoryPlace;
const BATCH = 64;

parentPort!.on('message', async (piece: Piece) => {
  let batch: unknown[] = [];
  const flush = () => {
    if (batch.length > 0) parentPort!.postMessage({ answers: batch });
    batch = [];
  };
  const give = (answer: unknown) => {
    batch.push(answer);
    if (batch.length >= BATCH) flush();
  };
  try {
    if ('steps' in piece) await scanPiece(place, piece.steps, give);
    else await readPrints(place, piece.blobs, give);
    flush();
    parentPort!.postMessage({ done: true });
  } catch (error) {
    flush();
    parentPort!.postMessage({ failed: String((error as Error).stack ?? error) });
  }
});
