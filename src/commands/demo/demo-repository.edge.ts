/** Lays the demo code with its replayed history into a folder, as a git repository of its own. */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { packageRoot } from '../../sources/assets.edge.ts';
import { safeEnvironment } from '../../sources/safe-git.ts';
import { type DemoSources, type DemoStep, demoCommits, demoSteps, fastImport } from './demo-history.ts';

export interface LaidDemo {
  /** Step of the history to its full commit id. */
  readonly commits: ReadonlyMap<string, string>;
}

/** The folder holds something already. */
export class FolderNotEmpty extends Error {
  override readonly name = 'FolderNotEmpty';
}

/**
 * @param folder  absolute; made when it is not there
 * @param until  the last step of the history to lay; all when absent
 * @throws {FolderNotEmpty} when there is something in it
 * @throws {Error} when git is missing or fails; the message is git's own
 */
export function layDemo(folder: string, until?: string): LaidDemo {
  if (existsSync(folder) && readdirSync(folder).length > 0) {
    throw new FolderNotEmpty(`${folder} holds something already`);
  }
  mkdirSync(folder, { recursive: true });
  const commits = demoCommits(readSteps(), demoSources(), until);
  const marks = join(folder, '.git', 'demo-marks');
  git(folder, ['init', '--quiet', '--initial-branch=main', '--template=', '.']);
  git(folder, ['fast-import', '--quiet', '--force', `--export-marks=${marks}`], fastImport(commits));
  git(folder, ['checkout', '--quiet', '--force', 'main']);
  const ids = new Map(
    readFileSync(marks, 'utf8')
      .trim()
      .split('\n')
      .map((line) => line.split(' ') as [string, string]),
  );
  return { commits: new Map(commits.map((commit, index) => [commit.step.id, ids.get(`:${index + 1}`)!])) };
}

export const demoFolder = join(packageRoot, 'fixtures', 'demo');

export function readSteps(): DemoStep[] {
  return demoSteps(readFileSync(join(demoFolder, 'history.yaml'), 'utf8'));
}

function demoSources(): DemoSources {
  const first = new Map([
    ...filesBelow(join(demoFolder, 'first')),
    ...filesBelow(join(packageRoot, 'manifests', 'demo'), 'manifests/'),
  ]);
  // Git would leave these out of a checkout of this project, so they are not kept as files here.
  first.set('.gitignore', Buffer.from('build/\nout/\n'));
  // The tool that strips types is vendored, so that the demo builds with Node alone.
  const [program, licence] = ['strip-types.cjs', 'strip-types-licence.md'].map((name) =>
    readFileSync(join(packageRoot, 'dist', name)),
  );
  first.set('tools/vendor/strip-types.cjs', program!);
  first.set('tools/vendor/LICENSE.md', licence!);
  return {
    first,
    later: (name) => readFileSync(join(demoFolder, 'later', name)),
    recorded: (step) => filesBelow(join(demoFolder, 'recorded', step), 'manifests/references/'),
  };
}

function filesBelow(folder: string, prefix = ''): Map<string, Uint8Array> {
  const files = new Map<string, Uint8Array>();
  if (!existsSync(folder)) return files;
  for (const entry of readdirSync(folder, { recursive: true, withFileTypes: true })) {
    if (!entry.isFile()) continue;
    const path = join(entry.parentPath, entry.name);
    files.set(prefix + path.slice(folder.length + 1).replaceAll('\\', '/'), readFileSync(path));
  }
  return files;
}

function git(cwd: string, words: readonly string[], input?: Buffer): void {
  const env = safeEnvironment(process.env);
  const done = spawnSync('git', words, { cwd, env, ...(input === undefined ? {} : { input }), maxBuffer: 1 << 28 });
  if (done.error !== undefined)
    throw new Error(`git could not be started: ${done.error.message}`, { cause: done.error });
  if (done.status !== 0) throw new Error(`git ${words[0]}: ${done.stderr.toString('utf8').trim()}`);
}

/** `name` below a folder, or `name-2`, `name-3`, ... when that is taken. */
export function freeFolder(cwd: string, name: string): string {
  const taken = (folder: string) => existsSync(folder) && readdirSync(folder).length > 0;
  let folder = join(cwd, name);
  for (let number = 2; taken(folder); number++) folder = join(cwd, `${name}-${number}`);
  return folder;
}
