/** Files as they lie in a folder. Links are listed and never followed; nothing outside the root is opened. */
import { constants, existsSync } from 'node:fs';
import { lstat, open, readdir, realpath } from 'node:fs/promises';
import { join, sep } from 'node:path';
import type { RepositoryPlace } from './find-repository.edge.ts';
import { runGit } from './git.edge.ts';
import { bytesFromPath, pathFromBytes, staysInside } from './git-path.ts';
import { LARGEST_OBJECT_BYTES } from './object-reader.edge.ts';
import type { TreeEntry } from './tree.ts';

/** What git tracks and what it does not ignore, as far as it lies in the work tree. */
export async function listWorkTree(place: RepositoryPlace): Promise<TreeEntry[]> {
  const [tracked, others] = await Promise.all([
    runGit(place, 'refs', ['ls-files', '-z', '--cached']),
    runGit(place, 'refs', ['ls-files', '-z', '--others', '--exclude-standard']),
  ]);
  // A damaged index is no reason to see nothing: the folder itself still tells what is there.
  if (tracked.status !== 0 || others.status !== 0) return listFolder(place.root);
  const paths = new Set([...splitPaths(tracked.out), ...splitPaths(others.out)]);
  const entries: TreeEntry[] = [];
  for (const path of [...paths].sort()) {
    const kind = await kindAt(place.root, path.replace(/\/$/, ''));
    if (kind !== null) entries.push({ path: path.replace(/\/$/, ''), id: null, kind });
  }
  return entries;
}

/** Every file below a folder that is no repository; hidden folders of version control are passed over. */
export async function listFolder(root: string): Promise<TreeEntry[]> {
  const entries: TreeEntry[] = [];
  const folders: Buffer[] = [Buffer.alloc(0)];
  for (let folder = folders.pop(); folder !== undefined; folder = folders.pop()) {
    const names = await readdir(absolute(root, folder), { withFileTypes: true, encoding: 'buffer' }).catch(() => []);
    for (const one of names as unknown as {
      name: Buffer;
      isDirectory(): boolean;
      isFile(): boolean;
      isSymbolicLink(): boolean;
    }[]) {
      if (PASSED_OVER.has(one.name.toString('latin1'))) continue;
      const path = folder.length === 0 ? one.name : Buffer.concat([folder, Buffer.from('/'), one.name]);
      if (one.isDirectory()) folders.push(path);
      else if (one.isFile()) entries.push({ path: pathFromBytes(path), id: null, kind: 'file' });
      else if (one.isSymbolicLink()) entries.push({ path: pathFromBytes(path), id: null, kind: 'link' });
    }
  }
  return entries.sort((a, b) => (a.path < b.path ? -1 : 1));
}

const PASSED_OVER = new Set(['.git', '.hg', '.svn', 'node_modules']);

/**
 * @returns null when there is no such file, when it or a folder above it is a link, when it is no plain file, or when it is
 *   too long to be source
 */
export async function readWorkFile(root: string, path: string): Promise<Uint8Array | null> {
  if (!staysInside(path)) return null;
  const file = absolute(root, bytesFromPath(path));
  try {
    const folder = await realpath(parentOf(file), { encoding: 'buffer' });
    if (!folder.equals(parentOf(file))) return null;
    // Opening a pipe or a device would wait for ever.
    const handle = await open(file, constants.O_RDONLY | constants.O_NOFOLLOW | constants.O_NONBLOCK);
    try {
      const stats = await handle.stat();
      if (!stats.isFile() || stats.size > LARGEST_OBJECT_BYTES) return null;
      return await handle.readFile();
    } finally {
      await handle.close();
    }
  } catch {
    return null;
  }
}

/** Absolute path of a plain file, however long; null where readWorkFile gives null for a link, a device or a way out. */
export async function plainWorkFile(root: string, path: string): Promise<string | null> {
  const kind = await kindAt(root, path);
  if (kind !== 'file') return null;
  const file = absolute(root, bytesFromPath(path));
  const folder = await realpath(parentOf(file), { encoding: 'buffer' }).catch(() => null);
  // A name that is not UTF-8 cannot be handed to libraries that open files by themselves.
  const text = file.toString('utf8');
  return folder?.equals(parentOf(file)) === true && Buffer.from(text).equals(file) ? text : null;
}

async function kindAt(root: string, path: string): Promise<TreeEntry['kind'] | null> {
  if (!staysInside(path)) return null;
  const file = absolute(root, bytesFromPath(path));
  const stats = await lstat(file).catch(() => null);
  if (stats === null) return null;
  if (stats.isSymbolicLink()) return 'link';
  if (stats.isFile()) return 'file';
  return stats.isDirectory() && existsSync(join(root, path, '.git')) ? 'submodule' : null;
}

function absolute(root: string, path: Buffer): Buffer {
  return path.length === 0 ? Buffer.from(root) : Buffer.concat([Buffer.from(root + sep), path]);
}

function parentOf(file: Buffer): Buffer {
  return file.subarray(0, file.lastIndexOf(0x2f));
}

function splitPaths(out: Buffer): string[] {
  const paths: string[] = [];
  for (let at = 0; at < out.length; ) {
    const end = out.indexOf(0, at);
    paths.push(pathFromBytes(out.subarray(at, end)));
    at = end + 1;
  }
  return paths;
}
