/**
 * Starts git processes. Two ways in:
 * - on the repository's own git folder, for refs and the index, with everything that could run a program overridden;
 * - on a bare folder of our own that borrows the repository's objects, for everything that reads objects. There the
 *   repository's configuration is not read at all, and an object that a partial clone lacks is missing, not fetched.
 */
import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { cacheFolder } from './cache-folder.edge.ts';
import type { RepositoryPlace } from './find-repository.edge.ts';
import { SAFE_WORDS, safeEnvironment } from './safe-git.ts';
import { SourceProblem } from './source-problem.ts';

export type GitView = 'refs' | 'objects';

export interface GitOutcome {
  readonly status: number;
  readonly out: Buffer;
  readonly err: string;
}

/** Starts git and hands back the process; the caller reads its streams. */
export function startGit(
  place: RepositoryPlace,
  view: GitView,
  words: readonly string[],
): ChildProcessWithoutNullStreams {
  return spawn('git', [...SAFE_WORDS, ...words], {
    cwd: place.root,
    env: gitEnvironment(place, view),
    stdio: ['pipe', 'pipe', 'pipe'],
    windowsHide: true,
  });
}

/**
 * Runs git to its end.
 * @throws {SourceProblem} when there is no git on this machine
 */
export function runGit(
  place: RepositoryPlace,
  view: GitView,
  words: readonly string[],
  input = '',
): Promise<GitOutcome> {
  return new Promise((done, fail) => {
    const child = startGit(place, view, words);
    const out: Buffer[] = [];
    let err = '';
    child.on('error', (cause) => fail(gitAbsent(cause)));
    child.stdout.on('data', (chunk: Buffer) => out.push(chunk));
    child.stderr.on('data', (chunk: Buffer) => {
      if (err.length < 10_000) err += chunk.toString('utf8');
    });
    child.on('close', (status) => done({ status: status ?? -1, out: Buffer.concat(out), err }));
    child.stdin.on('error', () => {});
    child.stdin.end(input);
  });
}

export function gitAbsent(cause: unknown): SourceProblem {
  return new SourceProblem('git could not be started.', 'install git and see that it is in PATH.', { cause });
}

export function gitEnvironment(place: RepositoryPlace, view: GitView): Record<string, string> {
  const env = safeEnvironment(process.env);
  if (view === 'refs') {
    return { ...env, GIT_DIR: place.gitFolder, ...(place.bare ? {} : { GIT_WORK_TREE: place.root }) };
  }
  return {
    ...env,
    GIT_DIR: viewFolder(place.objectFormat),
    GIT_OBJECT_DIRECTORY: join(place.commonFolder, 'objects'),
    GIT_GRAFT_FILE: join(place.commonFolder, 'info', 'grafts'),
    ...(place.shallow ? { GIT_SHALLOW_FILE: join(place.commonFolder, 'shallow') } : {}),
  };
}

const views = new Map<string, string>();

/** A git folder without refs, hooks or configuration of anyone's. It holds nothing, so all repositories share it. */
function viewFolder(objectFormat: 'sha1' | 'sha256'): string {
  const known = views.get(objectFormat);
  if (known !== undefined) return known;
  let folder = join(cacheFolder(), `objects-view-${objectFormat}`);
  try {
    makeView(folder, objectFormat);
  } catch {
    // A cache that cannot be written (read-only home) is no reason to stop.
    folder = mkdtempSync(join(tmpdir(), 'mortise-view-'));
    makeView(folder, objectFormat);
  }
  views.set(objectFormat, folder);
  return folder;
}

function makeView(folder: string, objectFormat: 'sha1' | 'sha256'): void {
  if (existsSync(join(folder, 'HEAD'))) return;
  mkdirSync(join(folder, 'objects'), { recursive: true });
  mkdirSync(join(folder, 'refs'), { recursive: true });
  const format =
    objectFormat === 'sha1'
      ? '[core]\n\trepositoryformatversion = 0\n\tbare = true\n'
      : '[core]\n\trepositoryformatversion = 1\n\tbare = true\n[extensions]\n\tobjectformat = sha256\n';
  writeFileSync(join(folder, 'config'), format);
  // HEAD comes last: its presence says that the rest is there.
  writeFileSync(join(folder, 'HEAD'), 'ref: refs/heads/none\n');
}
