/**
 * Answers of earlier scans, one file a repository. It can be deleted at any time; the next scan makes it again.
 * Lines are only ever appended, each in one write, so several processes may write at once; a line cut short by a kill or
 * damaged on disk fails its check sum and is passed over.
 */
import { createHash } from 'node:crypto';
import {
  closeSync,
  existsSync,
  mkdirSync,
  openSync,
  readdirSync,
  readFileSync,
  rmSync,
  statSync,
  writeSync,
} from 'node:fs';
import { basename, join } from 'node:path';
import { builtAsset } from '../sources/assets.edge.ts';
import { cacheFolder } from '../sources/cache-folder.edge.ts';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import type { ScanAnswer } from './scan-step.ts';
import { hashText } from './tokens.ts';

export interface StepCache {
  get(key: string): ScanAnswer | undefined;
  put(key: string, answer: ScanAnswer): void;
  close(): void;
}

/** A cache that grew longer is begun anew. */
const LARGEST_BYTES = 256 * 1024 * 1024;
/** Raise it when what is kept changes its shape. */
const SHAPE = 1;

let version: string | null = null;

/** Another build of the readers may see something else in the same bytes: its answers are kept apart. */
export function readerVersion(): string {
  if (version !== null) return version;
  const script = builtAsset('scan.worker.js');
  const bytes = existsSync(script) ? readFileSync(script) : Buffer.from('unbuilt');
  version = `${SHAPE}-${createHash('md5').update(bytes).digest('hex').slice(0, 12)}`;
  return version;
}

export function openStepCache(place: RepositoryPlace): StepCache {
  const file = join(historyFolder(place), `steps-${readerVersion()}.jsonl`);
  const known = load(file);
  let handle: number | null = null;
  let pending: string[] = [];
  const flush = () => {
    if (pending.length === 0) return;
    try {
      if (handle === null) {
        forgetOlder(file);
        handle = openSync(file, 'a', 0o600);
      }
      writeSync(handle, pending.join(''));
    } catch {
      // A cache that cannot be written costs time, nothing else.
    }
    pending = [];
  };
  return {
    get(key) {
      const line = known.get(key);
      return line === undefined ? undefined : (JSON.parse(line) as ScanAnswer);
    },
    put(key, answer) {
      const text = JSON.stringify(answer);
      pending.push(`${key}\t${hashText(text).toString(36)}\t${text}\n`);
      if (pending.length >= 200) flush();
    },
    close() {
      flush();
      if (handle !== null) closeSync(handle);
    },
  };
}

/** The folder of everything derived from one repository's history; made on first use. */
export function historyFolder(place: RepositoryPlace): string {
  const id = createHash('sha256').update(place.commonFolder).digest('hex').slice(0, 16);
  const folder = join(cacheFolder(), 'history', id);
  try {
    mkdirSync(folder, { recursive: true, mode: 0o700 });
  } catch {
    // Said by the first write, which is passed over too.
  }
  return folder;
}

function load(file: string): Map<string, string> {
  const known = new Map<string, string>();
  try {
    if (statSync(file).size > LARGEST_BYTES) {
      rmSync(file, { force: true });
      return known;
    }
    for (const line of readFileSync(file, 'utf8').split('\n')) {
      const [key, sum, text] = line.split('\t');
      if (text !== undefined && hashText(text).toString(36) === sum) known.set(key!, text);
    }
  } catch {
    // No cache yet, or none that can be read.
  }
  return known;
}

/** Answers of other builds of the readers are of no use any more. */
function forgetOlder(file: string): void {
  const folder = join(file, '..');
  for (const name of readdirSync(folder)) {
    if (/^(steps|report)-/.test(name) && !name.includes(readerVersion()) && name !== basename(file)) {
      rmSync(join(folder, name), { force: true });
    }
  }
}
