/** Scans the steps of a history: from the cache what was compared before, in worker threads the rest. */
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { Worker } from 'node:worker_threads';
import { builtAsset } from '../sources/assets.edge.ts';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import type { NamedBlob } from './read-prints.edge.ts';
import { scanPiece } from './scan-piece.edge.ts';
import { type ScanAnswer, type ScanStep, stepText } from './scan-step.ts';
import { openStepCache } from './step-cache.edge.ts';

export interface ScanOptions {
  /** Threads; 0 scans in this one. */
  readonly workers: number;
  readonly cache: boolean;
  readonly signal?: AbortSignal;
  readonly onProgress?: (done: number, all: number) => void;
}

/** Fewer steps than this are done before a thread has started. */
const STEPS_WORTH_THREADS = 40;

/**
 * @param give  takes each answer, in no order
 * @returns false when it was interrupted; what was answered until then is in the cache and need not be done again
 */
export async function scan(
  place: RepositoryPlace,
  steps: readonly ScanStep[],
  options: ScanOptions,
  give: (answer: ScanAnswer) => void,
): Promise<boolean> {
  const cache = options.cache ? openStepCache(place) : null;
  const open: ScanStep[] = [];
  const keys = new Map<string, string>();
  let done = 0;
  for (const step of steps) {
    const key = cache === null ? '' : createHash('md5').update(stepText(step)).digest('base64url');
    const known = cache?.get(key);
    if (known === undefined) {
      open.push(step);
      keys.set(step.commit, key);
    } else {
      done += 1;
      give({ ...known, ...restamped(known, step.commit) });
    }
  }
  const take = (answer: ScanAnswer) => {
    cache?.put(keys.get(answer.commit)!, answer);
    done += 1;
    if (done % 50 === 0) options.onProgress?.(done, steps.length);
    give(answer);
  };
  try {
    await scanOpen(place, open, options, take);
  } finally {
    cache?.close();
  }
  return options.signal?.aborted !== true;
}

async function scanOpen(
  place: RepositoryPlace,
  steps: readonly ScanStep[],
  { workers, signal }: ScanOptions,
  take: (answer: ScanAnswer) => void,
): Promise<void> {
  const script = builtAsset('scan.worker.js');
  if (workers === 0 || steps.length < STEPS_WORTH_THREADS || !existsSync(script)) {
    return scanPiece(place, steps, take, signal);
  }
  const pieces = cut(steps, workers).map((piece) => ({ steps: piece }));
  await runThreads(script, place, pieces, workers, take, signal);
}

/** Long runs share the most blobs between neighbours; a few for each thread even out their work. */
export function cut<T>(all: readonly T[], workers: number): T[][] {
  const length = Math.max(STEPS_WORTH_THREADS, Math.min(2_000, Math.ceil(all.length / (workers * 3))));
  const pieces: T[][] = [];
  for (let at = 0; at < all.length; at += length) pieces.push(all.slice(at, at + length));
  return pieces;
}

/** Interfaces live a moment: a roomy young generation keeps them from being copied about. */
const LIMITS = { maxOldGenerationSizeMb: 2048, maxYoungGenerationSizeMb: 64 };

/** What a thread is asked to do; each piece is answered in batches. */
export type Piece = { readonly steps: readonly ScanStep[] } | { readonly blobs: readonly NamedBlob[] };

/** Ends every thread when the pieces are done, when one fails, or when it is interrupted. */
export async function runThreads<A>(
  script: string,
  place: RepositoryPlace,
  pieces: Piece[],
  workers: number,
  take: (answer: A) => void,
  signal?: AbortSignal,
): Promise<void> {
  const count = Math.min(workers, pieces.length);
  await Promise.all(Array.from({ length: count }, () => runThread(script, place, pieces, take, signal)));
}

function runThread<A>(
  script: string,
  place: RepositoryPlace,
  pieces: Piece[],
  take: (answer: A) => void,
  signal: AbortSignal | undefined,
): Promise<void> {
  return new Promise((done, fail) => {
    const worker = new Worker(script, { workerData: place, resourceLimits: LIMITS });
    const stop = () => void worker.terminate().then(() => done());
    signal?.addEventListener('abort', stop, { once: true });
    const next = () => {
      const piece = pieces.shift();
      if (piece === undefined || signal?.aborted === true) stop();
      else worker.postMessage(piece);
    };
    worker.on('message', (message: { answers?: A[]; done?: true; failed?: string }) => {
      for (const answer of message.answers ?? []) take(answer);
      if (message.done === true) next();
      if (message.failed !== undefined) {
        void worker.terminate();
        fail(new Error(message.failed));
      }
    });
    worker.on('error', fail);
    next();
  });
}

/** A cached answer may have been given for another commit with the same files. */
function restamped(answer: ScanAnswer, commit: string): Pick<ScanAnswer, 'commit' | 'changes'> {
  if (answer.commit === commit) return answer;
  const text = JSON.stringify(answer.changes).replaceAll(answer.commit, commit);
  return { commit, changes: JSON.parse(text) as ScanAnswer['changes'] };
}
