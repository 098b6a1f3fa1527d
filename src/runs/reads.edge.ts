/**
 * Which files of a laid tree were read, told from their access times: every file is laid as never read, and under the usual
 * mount option `relatime` its first read moves its access time. Costs nothing and asks for no tool. Where access times can't
 * be trusted, every file counts as read: more runs, never a wrong one.
 */
import { lstatSync, mkdirSync, readFileSync, rmSync, statfsSync, statSync, utimesSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { KeyedFile } from './key.ts';
import { NEVER_READ } from './tree-files.edge.ts';

// ext2/3/4 and tmpfs. File systems that can clone a file without reading it, and those over a network, do not qualify.
const TRUSTED = new Set([0xef53, 0x01021994]);
const trusted = new Map<string, boolean>();

export function canTellReads(folder: string): boolean {
  const known = trusted.get(folder);
  if (known !== undefined) return known;
  let answer = false;
  try {
    if (TRUSTED.has(statfsSync(folder).type)) {
      mkdirSync(folder, { recursive: true });
      const file = join(folder, `probe-${process.pid}`);
      writeFileSync(file, 'x');
      utimesSync(file, NEVER_READ, new Date());
      const before = statSync(file).atimeMs;
      readFileSync(file);
      answer = before === NEVER_READ.getTime() && statSync(file).atimeMs > before;
      rmSync(file);
    }
  } catch {
    // No answer is no trust.
  }
  trusted.set(folder, answer);
  return answer;
}

/**
 * Path to content id of every file that was read since it was laid. Links and what is no longer there count as read.
 *
 * @returns null when reads can't be told
 */
export function readsOf(scratch: string, tree: string, files: readonly KeyedFile[]): Record<string, string> | null {
  if (!canTellReads(scratch)) return null;
  const reads: Record<string, string> = {};
  for (const file of files) {
    if (file.mode === '160000') continue;
    let never = false;
    try {
      never = file.mode !== '120000' && lstatSync(join(tree, file.path)).atimeMs === NEVER_READ.getTime();
    } catch {
      // Gone or renamed by the build: read.
    }
    if (!never) reads[file.path] = file.id;
  }
  return reads;
}
