/** Which module a path belonged to at each commit, followed backward through moves and renames. Pure. */
import type { CommitRecord } from './commit-record.ts';
import type { ScanAnswer } from './scan-step.ts';

export interface NamedPath {
  /** The path under which the file is known last. */
  readonly last: string;
  readonly movedFrom?: string;
}

/**
 * @param commits  parents before children
 * @returns by commit and path as it was called there
 */
export function followPaths(
  commits: readonly CommitRecord[],
  answers: ReadonlyMap<string, ScanAnswer>,
): (commit: string, path: string) => NamedPath {
  const alias = new Map<string, string>();
  const found = new Map<string, NamedPath>();
  for (let index = commits.length - 1; index >= 0; index -= 1) {
    const commit = commits[index]!;
    const moved = answers.get(commit.id)?.moved ?? [];
    for (const { from, to } of moved) {
      const last = alias.get(to) ?? to;
      found.set(`${commit.id}\0${to}`, { last, movedFrom: from });
      found.set(`${commit.id}\0${from}`, { last });
    }
    // A path is born where it was moved to: what stood there before was another file.
    for (const { from, to } of moved) {
      const last = alias.get(to) ?? to;
      alias.delete(to);
      alias.set(from, last);
    }
    for (const { path } of commit.files) {
      const key = `${commit.id}\0${path}`;
      if (!found.has(key)) found.set(key, { last: alias.get(path) ?? path });
    }
  }
  return (commit, path) => found.get(`${commit}\0${path}`) ?? { last: path };
}

/** Names of modules drafted one a file: the file's name, or its path where two files share one. */
export function draftNames(paths: Iterable<string>): ReadonlyMap<string, string> {
  const all = [...new Set(paths)].sort();
  const byStem = new Map<string, string[]>();
  for (const path of all) byStem.set(stem(path), [...(byStem.get(stem(path)) ?? []), path]);
  return new Map(all.map((path) => [path, byStem.get(stem(path))!.length === 1 ? stem(path) : path]));
}

function stem(path: string): string {
  const name = path.slice(path.lastIndexOf('/') + 1);
  const dot = name.lastIndexOf('.');
  return (dot > 0 ? name.slice(0, dot) : name).toLowerCase();
}
