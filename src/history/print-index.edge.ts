/** Makes the index of a repository's procedures, and keeps it between runs; only new commits are read again. */
import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { languageOf } from '../readers/read-source.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { EMPTY_INDEX, extendIndex, type FirstSeen, type PrintIndex } from './print-index.ts';
import { readLog } from './read-log.edge.ts';
import { type BlobPrints, type NamedBlob, readPrints } from './read-prints.edge.ts';
import { cut, runThreads, type ScanOptions } from './scan.edge.ts';
import { historyFolder, readerVersion } from './step-cache.edge.ts';
import { hashText } from './tokens.ts';

/** Below this many blobs a thread is not worth its start. */
const BLOBS_WORTH_THREADS = 200;

/** @returns what is known so far when it is interrupted, without keeping it */
export async function printIndex(repository: Repository, to: string, options: ScanOptions): Promise<PrintIndex> {
  const file = join(historyFolder(repository.place), `prints-${readerVersion()}.bin`);
  let index = options.cache ? load(file) : EMPTY_INDEX;
  if (index.to === to) return index;
  const grown = index.to !== '' && (await repository.mergeBase(index.to, to)) === index.to;
  if (!grown) index = EMPTY_INDEX;
  const log = await readLog(repository, { from: grown ? index.to : null, to }, isProcedural);
  const first = new Map<string, FirstSeen>();
  for (const [order, commit] of log.commits.entries()) {
    for (const { path, after } of commit.files) {
      if (after !== null && !first.has(after)) first.set(after, { commit, order: index.commits + order, path });
    }
  }
  const blobs = [...first].map(([id, { path }]) => ({ id, path }));
  const found: { seen: FirstSeen; bodies: BlobPrints['bodies'] }[] = [];
  await readAll(repository.place, blobs, options, ({ id, bodies }) => found.push({ seen: first.get(id)!, bodies }));
  const made = extendIndex(index, to, index.commits + log.commits.length, found);
  if (options.cache && options.signal?.aborted !== true) save(file, made);
  return made;
}

function isProcedural(path: string): boolean {
  const language = languageOf(path);
  return language !== null && language !== 'table';
}

function readAll(
  place: RepositoryPlace,
  blobs: readonly NamedBlob[],
  { workers, signal }: ScanOptions,
  take: (prints: BlobPrints) => void,
): Promise<void> {
  const script = builtAsset('scan.worker.js');
  if (workers === 0 || blobs.length < BLOBS_WORTH_THREADS || !existsSync(script)) {
    return readPrints(place, blobs, take, signal);
  }
  const pieces = cut(blobs, workers).map((piece) => ({ blobs: piece }));
  return runThreads(script, place, pieces, workers, take, signal);
}

/** One line of JSON with its check sum before it, then the prints as 32-bit numbers. Written beside and moved into place. */
function save(file: string, { prints, ...head }: PrintIndex): void {
  try {
    const text = JSON.stringify({ ...head, length: prints.length });
    const bytes = Buffer.concat([
      Buffer.from(`${hashText(text).toString(36)}\t${text}\n`),
      Buffer.from(prints.buffer, prints.byteOffset, prints.byteLength),
    ]);
    const beside = `${file}.${process.pid}`;
    writeFileSync(beside, bytes, { mode: 0o600 });
    renameSync(beside, file);
  } catch {
    // A cache that cannot be written costs time, nothing else.
  }
}

function load(file: string): PrintIndex {
  try {
    const bytes = readFileSync(file);
    const end = bytes.indexOf(10);
    const [sum, text = ''] = bytes.toString('utf8', 0, end).split('\t');
    if (hashText(text).toString(36) !== sum) return EMPTY_INDEX;
    const { length, ...head } = JSON.parse(text) as Omit<PrintIndex, 'prints'> & { length: number };
    const raw = bytes.subarray(end + 1);
    if (raw.length !== length * 4) return EMPTY_INDEX;
    return { ...head, prints: new Uint32Array(new Uint8Array(raw).buffer) };
  } catch {
    return EMPTY_INDEX;
  }
}
