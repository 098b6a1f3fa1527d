/** Opens source to read: the work tree, a plain folder, or a commit straight from git's objects. */
import { existsSync, realpathSync, statSync } from 'node:fs';
import { findRepository, type RepositoryPlace } from './find-repository.edge.ts';
import { objectId, parseCommit, parseTree } from './git-object.ts';
import { pathFromBytes, staysInside } from './git-path.ts';
import { Repository } from './repository.edge.ts';
import { SourceProblem } from './source-problem.ts';
import type { SourceTree, TreeEntry } from './tree.ts';
import { listFolder, listWorkTree, plainWorkFile, readWorkFile } from './work-tree.edge.ts';

/**
 * Paths are relative to the root of the repository that `cwd` lies in, or to `cwd` itself where there is none.
 *
 * @param revision  any name git knows a commit by; the work tree when absent
 * @throws {SourceProblem} when there is no such folder or revision, or the repository is bare and no revision was named
 */
export async function openTree(cwd: string, revision?: string): Promise<SourceTree> {
  if (!existsSync(cwd) || !statSync(cwd).isDirectory()) {
    throw new SourceProblem(`There is no folder ${cwd}.`, 'name a folder that exists.');
  }
  const place = findRepository(cwd);
  if (place === null) {
    if (revision === undefined) return folderTree(realpathSync(cwd));
    throw new SourceProblem(
      `${cwd} lies in no git repository, so it has no revision "${revision}".`,
      'leave the revision out.',
    );
  }
  if (revision === undefined) {
    if (!place.bare) return workTree(place);
    throw new SourceProblem(`${place.root} is a bare repository without a work tree.`, 'name a revision: --at HEAD.');
  }
  const repository = new Repository(place);
  return commitTree(repository, await repository.resolve(revision));
}

/** @throws {SourceProblem} when the folder lies in no repository */
export function openRepository(cwd: string): Repository {
  const place = findRepository(cwd);
  if (place === null) {
    throw new SourceProblem(`${cwd} lies in no git repository.`, 'go into one: history is read from git.');
  }
  return new Repository(place);
}

/** The tree of a commit whose full id is known. Entries are listed once, on first use. */
export function commitTree(repository: Repository, commit: string): SourceTree {
  let listing: Promise<ReadonlyMap<string, TreeEntry>> | null = null;
  const listed = () => {
    listing ??= repository.list(commit).then(({ entries }) => new Map(entries.map((entry) => [entry.path, entry])));
    return listing;
  };
  return {
    root: repository.place.root,
    revision: commit,
    entries: async () => [...(await listed()).values()],
    async read(path) {
      const entry = (await listed()).get(path);
      return entry?.kind === 'file' && entry.id !== null && staysInside(path) ? repository.blob(entry.id) : null;
    },
  };
}

function workTree(place: RepositoryPlace): SourceTree {
  return {
    root: place.root,
    revision: null,
    entries: () => listWorkTree(place),
    read: (path) => readWorkFile(place.root, path),
    onDisk: (path) => plainWorkFile(place.root, path),
  };
}

function folderTree(root: string): SourceTree {
  return {
    root,
    revision: null,
    entries: () => listFolder(root),
    read: (path) => readWorkFile(root, path),
    onDisk: (path) => plainWorkFile(root, path),
  };
}

/** The git id of a file or folder of a commit: what identifies content wherever it lies. @returns null when there is none */
export async function idAt(
  repository: Repository,
  commit: string,
  path: string,
): Promise<{ readonly type: 'cnt' | 'dir'; readonly id: string } | null> {
  const object = await repository.object(commit);
  if (object?.type !== 'commit') return null;
  let id = parseCommit(object.bytes).tree;
  if (path === '' || path === '.') return { type: 'dir', id };
  const parts = path.replace(/\/+$/, '').split('/');
  for (const [index, part] of parts.entries()) {
    const tree = await repository.object(id);
    if (tree?.type !== 'tree') return null;
    const entry = parseTree(tree.bytes, repository.format).find((one) => pathFromBytes(one.name) === part);
    if (entry === undefined) return null;
    if (entry.mode !== '40000')
      return index === parts.length - 1 && entry.mode !== '160000' ? { type: 'cnt', id: entry.id } : null;
    id = entry.id;
  }
  return { type: 'dir', id };
}

/** The git id of bytes that are in no repository yet. */
export function idOf(bytes: Uint8Array): string {
  return objectId('blob', bytes);
}
