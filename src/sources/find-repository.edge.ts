/** Finds the repository that a folder lies in, without asking git: its discovery honours configuration that points elsewhere. */
import { existsSync, readFileSync, realpathSync, statSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';

export interface RepositoryPlace {
  /** Absolute path of the work tree; of the git folder itself when the repository is bare. */
  readonly root: string;
  readonly bare: boolean;
  /** The folder with HEAD: of this work tree, when there are several. */
  readonly gitFolder: string;
  /** The folder with objects and refs, shared by all work trees. */
  readonly commonFolder: string;
  readonly objectFormat: 'sha1' | 'sha256';
  readonly shallow: boolean;
  /** True when the repository was cloned without some of its objects. */
  readonly partial: boolean;
}

/** @returns null when neither this folder nor one above it is a repository */
export function findRepository(cwd: string): RepositoryPlace | null {
  if (!existsSync(cwd)) return null;
  for (let folder = realpathSync(cwd); ; folder = dirname(folder)) {
    const place = repositoryAt(folder);
    if (place !== null) return place;
    if (dirname(folder) === folder) return null;
  }
}

function repositoryAt(folder: string): RepositoryPlace | null {
  const dotGit = join(folder, '.git');
  if (isFolder(dotGit) && looksLikeGit(dotGit)) return describe(folder, dotGit, false);
  const pointed = pointedFolder(dotGit, folder);
  if (pointed !== null) return describe(folder, pointed, false);
  return looksLikeGit(folder) ? describe(folder, folder, true) : null;
}

/** Linked work trees and submodules have a file `.git` that says where the git folder is. */
function pointedFolder(file: string, folder: string): string | null {
  const text = readSmall(file);
  const match = text === null ? null : /^gitdir: (.+?)\r?\n?$/s.exec(text);
  if (match === null) return null;
  const target = resolve(folder, match[1]!);
  return existsSync(join(target, 'HEAD')) ? target : null;
}

function looksLikeGit(folder: string): boolean {
  const common = commonOf(folder);
  return existsSync(join(folder, 'HEAD')) && isFolder(join(common, 'objects')) && isFolder(join(common, 'refs'));
}

function commonOf(gitFolder: string): string {
  const text = readSmall(join(gitFolder, 'commondir'));
  return text === null ? gitFolder : resolve(gitFolder, text.trim());
}

function describe(root: string, gitFolder: string, bare: boolean): RepositoryPlace {
  const commonFolder = commonOf(gitFolder);
  const config = readSmall(join(commonFolder, 'config')) ?? '';
  return {
    root,
    bare,
    gitFolder,
    commonFolder,
    objectFormat: /^\s*objectformat\s*=\s*"?sha256/im.test(config) ? 'sha256' : 'sha1',
    shallow: existsSync(join(commonFolder, 'shallow')),
    partial: /^\s*(partialclone\s*=|promisor\s*=\s*true)/im.test(config),
  };
}

function isFolder(path: string): boolean {
  return statSync(path, { throwIfNoEntry: false })?.isDirectory() === true;
}

/** null for what is no file, or too long to be one that git writes. */
function readSmall(path: string): string | null {
  const stats = statSync(path, { throwIfNoEntry: false });
  if (stats?.isFile() !== true || stats.size > 1_000_000) return null;
  try {
    return readFileSync(path, 'utf8');
  } catch {
    return null;
  }
}
