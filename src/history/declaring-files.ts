/** The files that declare things (manifests, version files, change logs) as they stood at each commit. */
import type { CommitRange, Repository } from '../sources/repository.edge.ts';
import type { CommitRecord, FileChange } from './commit-record.ts';
import { readLog } from './read-log.edge.ts';
import { isVersionFile } from './version-text.ts';

/** Path to blob id. The same object stands for every commit that left these files alone. */
export type DeclaringFiles = ReadonlyMap<string, string>;

export function isDeclaring(path: string, folder: string): boolean {
  return isManifest(path, folder) || isVersionFile(path);
}

export function isManifest(path: string, folder: string): boolean {
  return path.startsWith(folder === '' ? '' : `${folder}/`) && /\.ya?ml$/.test(path);
}

/**
 * @param commits  parents before children; files that {@link isDeclaring} holds for must be among those kept
 * @returns for each commit, and for parents that lie before the range, what they hold
 */
export async function declaringFiles(
  repository: Repository,
  commits: readonly CommitRecord[],
  folder: string,
  range: CommitRange,
): Promise<ReadonlyMap<string, DeclaringFiles>> {
  const states = new Map<string, DeclaringFiles>();
  const listed = async (commit: string): Promise<DeclaringFiles> => {
    const { entries } = await repository.list(commit);
    const kept = entries.filter(({ path, kind }) => kind === 'file' && isDeclaring(path, folder));
    return new Map(kept.map(({ path, id }) => [path, id]));
  };
  const merges = commits.some((commit) => commit.parents.length > 1) ? await merged(repository, range, folder) : null;
  for (const commit of commits) {
    const [first] = commit.parents;
    if (first !== undefined && !states.has(first)) states.set(first, await listed(first));
    const before = first === undefined ? EMPTY : states.get(first)!;
    // A merge tells only what differs from all sides; against its first parent it tells what it took from the others too.
    const files = commit.parents.length > 1 ? (merges?.get(commit.id) ?? []) : commit.files;
    const changed = files.filter(({ path }) => isDeclaring(path, folder));
    if (changed.length === 0) {
      states.set(commit.id, before);
      continue;
    }
    const state = new Map(before);
    for (const { path, after } of changed) {
      if (after === null) state.delete(path);
      else state.set(path, after);
    }
    states.set(commit.id, state);
  }
  return states;
}

/** What every merge of the range changed against its first parent. */
async function merged(
  repository: Repository,
  range: CommitRange,
  folder: string,
): Promise<ReadonlyMap<string, readonly FileChange[]>> {
  const log = await readLog(repository, range, (path) => isDeclaring(path, folder), 'merges against the first parent');
  return new Map(log.commits.map(({ id, files }) => [id, files]));
}

const EMPTY: DeclaringFiles = new Map();
