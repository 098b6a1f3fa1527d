/** Everything between two commits as one step: what a reviewer is asked to merge, however many commits it took. */
import { runGit } from '../sources/git.edge.ts';
import { parseCommit } from '../sources/git-object.ts';
import { pathFromBytes } from '../sources/git-path.ts';
import type { ListedEntry, Repository } from '../sources/repository.edge.ts';
import type { CommitRecord, FileChange } from './commit-record.ts';

/** One path that differs, with its git mode and blob id on each side; null where that side has none. */
export interface NetFile {
  readonly path: string;
  readonly before: NetSide | null;
  readonly after: NetSide | null;
}

export interface NetSide {
  /** `100644`, `100755`, `120000` for a link, `160000` for a submodule. */
  readonly mode: string;
  readonly id: string;
}

/** Every path that differs between two commits, in the order of their names. Costs what changed, not the size of the code. */
export async function netFiles(repository: Repository, base: string, head: string): Promise<NetFile[]> {
  const words = ['diff-tree', '-r', '-z', '--raw', '--no-renames', '--no-abbrev', '--no-ext-diff', '--no-textconv'];
  const { status, out } = await runGit(repository.place, 'objects', [...words, base, head]);
  // A clone that lacks folders can still be walked as far as it goes.
  return status === 0 ? parseRaw(out) : listedDifference(repository, base, head);
}

/**
 * @param wanted  paths to keep
 * @returns a record that names `head` as the commit and `base` as its one parent, with every file that differs
 */
export async function netChange(
  repository: Repository,
  base: string,
  head: string,
  wanted: (path: string) => boolean,
): Promise<CommitRecord> {
  const files = (await netFiles(repository, base, head)).flatMap(({ path, before, after }): FileChange[] => {
    const [old, now] = [blobOf(before), blobOf(after)];
    return old === now || !wanted(path) ? [] : [{ path, before: [old], after: now }];
  });
  const object = await repository.object(head);
  const { author, committer, message } = parseCommit(object?.type === 'commit' ? object.bytes : new Uint8Array());
  return {
    id: head,
    parents: [base],
    author: author.name,
    email: author.email,
    authored: author.seconds,
    seconds: committer.seconds,
    subject: message.split('\n')[0] ?? '',
    files,
  };
}

/** Links and submodules are no source. */
function blobOf(side: NetSide | null): string | null {
  return side?.mode.startsWith('100') === true ? side.id : null;
}

/** `:mode mode id id status NUL path NUL`, again and again. */
function parseRaw(out: Buffer): NetFile[] {
  const files: NetFile[] = [];
  for (let at = 0; at < out.length; ) {
    const end = out.indexOf(0, at);
    const last = out.indexOf(0, end + 1);
    if (end < 0 || last < 0) break;
    const [oldMode, mode, oldId, id] = out.toString('latin1', at + 1, end).split(' ');
    const side = (itsMode: string, itsId: string) => (itsMode === '000000' ? null : { mode: itsMode, id: itsId });
    const path = pathFromBytes(out.subarray(end + 1, last));
    files.push({ path, before: side(oldMode!, oldId!), after: side(mode!, id!) });
    at = last + 1;
  }
  return files.sort((a, b) => (a.path < b.path ? -1 : 1));
}

async function listedDifference(repository: Repository, base: string, head: string): Promise<NetFile[]> {
  const [before, after] = await Promise.all([entriesAt(repository, base), entriesAt(repository, head)]);
  const files: NetFile[] = [];
  for (const path of new Set([...before.keys(), ...after.keys()])) {
    const [old, now] = [before.get(path), after.get(path)];
    if (old?.id === now?.id && old?.mode === now?.mode) continue;
    const side = (entry: ListedEntry | undefined) => (entry === undefined ? null : { mode: entry.mode, id: entry.id });
    files.push({ path, before: side(old), after: side(now) });
  }
  return files.sort((a, b) => (a.path < b.path ? -1 : 1));
}

async function entriesAt(repository: Repository, commit: string): Promise<Map<string, ListedEntry>> {
  const { entries } = await repository.list(commit);
  return new Map(entries.map((entry) => [entry.path, entry]));
}
