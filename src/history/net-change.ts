/** Everything between two commits as one step: what a reviewer is asked to merge, however many commits it took. */
import { parseCommit } from '../sources/git-object.ts';
import type { Repository } from '../sources/repository.edge.ts';
import type { CommitRecord, FileChange } from './commit-record.ts';

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
  const [before, after] = await Promise.all([idsAt(repository, base), idsAt(repository, head)]);
  const files: FileChange[] = [];
  for (const path of new Set([...before.keys(), ...after.keys()])) {
    const [old, now] = [before.get(path) ?? null, after.get(path) ?? null];
    if (old !== now && wanted(path)) files.push({ path, before: [old], after: now });
  }
  files.sort((a, b) => (a.path < b.path ? -1 : 1));
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

async function idsAt(repository: Repository, commit: string): Promise<Map<string, string>> {
  const { entries } = await repository.list(commit);
  return new Map(entries.filter((entry) => entry.kind === 'file').map((entry) => [entry.path, entry.id]));
}
