/** The files of a code at a revision or in its work tree: listed with their content ids, and laid into a scratch folder without running hooks or filters. */
import { execFile, spawn, spawnSync } from 'node:child_process';
import {
  closeSync,
  constants,
  copyFileSync,
  existsSync,
  lstatSync,
  mkdirSync,
  openSync,
  readdirSync,
  readFileSync,
  readlinkSync,
  symlinkSync,
  utimesSync,
  writeFileSync,
  writeSync,
} from 'node:fs';
import { dirname, join } from 'node:path';
import { blobId } from './key.ts';

export interface TreeFile {
  /** As git spells it; bytes that are not UTF-8 read as Latin-1 with a leading NUL, so that no two names meet. */
  readonly path: string;
  readonly id: string;
  /** `100644`, `100755`, `120000` (a link), `160000` (a submodule). */
  readonly mode: string;
}

export interface TreeListing {
  /** Absolute path of the repository or folder. */
  readonly root: string;
  /** Full commit id: of the tree, or of HEAD under a work tree; null outside git. */
  readonly commit: string | null;
  /** True when the files are the work tree's. */
  readonly workTree: boolean;
  /** Tracked files that differ from the commit, and declared files that are not tracked. Empty at a revision. */
  readonly changed: readonly string[];
  readonly files: readonly TreeFile[];
}

/** git could not do what was asked of it; the message is git's own. */
export class GitFailed extends Error {
  override readonly name = 'GitFailed';
}

// Settings of a hostile repository that would run programs are turned off; a missing object is an answer, never a download.
const SAFE = ['-c', 'core.fsmonitor=false', '-c', 'core.hooksPath=/dev/null', '-c', 'core.quotePath=false'];
const ENVIRONMENT = {
  ...process.env,
  GIT_NO_LAZY_FETCH: '1',
  GIT_OPTIONAL_LOCKS: '0',
  GIT_TERMINAL_PROMPT: '0',
  LC_ALL: 'C',
};

/** The output of one git command, as bytes. @throws {GitFailed} */
export function git(root: string, words: readonly string[]): Buffer {
  const done = spawnSync('git', [...SAFE, ...words], { cwd: root, env: ENVIRONMENT, maxBuffer: 2 ** 30 });
  if (done.error !== undefined)
    throw new GitFailed(`git could not be started: ${done.error.message}`, { cause: done.error });
  if (done.status !== 0) throw new GitFailed(done.stderr.toString('utf8').trim() || `git ${words[0]} failed`);
  return done.stdout;
}

/** The same without holding up what else goes on. @throws {GitFailed} */
export function gitSoon(root: string, words: readonly string[]): Promise<Buffer> {
  return new Promise((resolve, reject) => {
    execFile(
      'git',
      [...SAFE, ...words],
      { cwd: root, env: ENVIRONMENT, maxBuffer: 2 ** 30, encoding: 'buffer' },
      (error, stdout, stderr) => {
        if (error === null) resolve(stdout);
        else reject(new GitFailed(stderr.toString('utf8').trim() || error.message, { cause: error }));
      },
    );
  });
}

const folders = new Map<string, string | null>();

/**
 * The folder that git keeps for the whole repository; null outside git. Asked once a repository.
 *
 * @throws {GitFailed} when there is a repository that git refuses to read
 */
export function gitFolder(root: string): string | null {
  const known = folders.get(root);
  if (known !== undefined) return known;
  let folder: string | null = null;
  try {
    folder = git(root, ['rev-parse', '--path-format=absolute', '--git-common-dir']).toString('utf8').trimEnd() || null;
  } catch (error) {
    // A repository that git refuses to read, for its owner or its format, must not pass for a plain folder.
    if (existsSync(join(root, '.git'))) throw error;
  }
  folders.set(root, folder);
  return folder;
}

/** `Name <address>` as git knows who commits here; null when it does not. */
export function gitUser(root: string): string | null {
  try {
    const [name, address] = ['user.name', 'user.email'].map((key) =>
      git(root, ['config', key]).toString('utf8').trim(),
    );
    return `${name} <${address}>`;
  } catch {
    return null;
  }
}

/** The full commit id of a revision. @throws {GitFailed} naming the revision */
export function commitOf(root: string, revision: string): string {
  if (revision.startsWith('-')) throw new GitFailed(`"${revision}" is no revision`);
  try {
    return git(root, ['rev-parse', '--verify', '--quiet', '--end-of-options', `${revision}^{commit}`])
      .toString('utf8')
      .trim();
  } catch (error) {
    throw new GitFailed(`there is no commit "${revision}" in ${root}`, { cause: error });
  }
}

/**
 * Lists a tree.
 *
 * @param revision  null for the work tree: its tracked files, and of those that are not tracked only the ones in `declared`
 * @param declared  files that manifests name
 * @throws {GitFailed}
 */
export async function listTree(
  root: string,
  revision: string | null,
  declared: readonly string[] = [],
): Promise<TreeListing> {
  if (revision !== null) {
    const commit = commitOf(root, revision);
    const listed = await gitSoon(root, ['ls-tree', '-r', '-z', '--full-tree', commit]);
    const files = splitNul(listed).map((entry): TreeFile => {
      const tab = entry.indexOf(9);
      const [mode, , id] = entry.subarray(0, tab).toString('latin1').split(' ');
      return { mode: mode!, id: id!, path: pathOf(entry.subarray(tab + 1)) };
    });
    return { root, commit, workTree: false, changed: [], files };
  }
  if (gitFolder(root) === null) return listFolder(root);
  // What differs from the commit, by the index and by the times of files; asked together, since each start of git costs.
  const [head, listed, differing] = await Promise.all([
    gitSoon(root, ['rev-parse', '--verify', '--quiet', 'HEAD^{commit}']).catch(() => null),
    gitSoon(root, ['ls-files', '-s', '-z']),
    gitSoon(root, [
      'diff-index',
      '--raw',
      '-z',
      '--no-renames',
      '--no-abbrev',
      '--ignore-submodules=all',
      'HEAD',
    ]).catch(() => null),
  ]);
  const commit = head === null ? null : head.toString('latin1').trim();
  const differs = readRawDifferences(differing);
  const files: TreeFile[] = [];
  const changed = new Set<string>();
  const known = new Set<string>();
  for (const entry of splitNul(listed)) {
    const tab = entry.indexOf(9);
    const [mode, id] = entry.subarray(0, tab).toString('latin1').split(' ') as [string, string];
    const path = pathOf(entry.subarray(tab + 1));
    if (known.has(path)) continue;
    known.add(path);
    const difference = differs.get(path);
    // Without a commit nothing can be told from the index: every file is read.
    if (mode === '160000' || (differing !== null && difference === undefined)) {
      files.push({ path, id, mode });
      continue;
    }
    const now = fileNow(root, path);
    if (now !== null) files.push(now);
    // A file that was only touched has another time but the same content.
    if (now === null || now.id !== difference?.id || now.mode !== difference.mode) changed.add(path);
  }
  for (const path of differs.keys()) if (!known.has(path)) changed.add(path);
  for (const path of declared) {
    if (known.has(path) || !isInside(path)) continue;
    const now = fileNow(root, path);
    if (now === null) continue;
    known.add(path);
    files.push(now);
    changed.add(path);
  }
  return { root, commit, workTree: true, changed: [...changed].sort(), files };
}

/** `git diff-index --raw -z`: path to what the commit has there. */
function readRawDifferences(bytes: Buffer | null): Map<string, { id: string; mode: string }> {
  const differences = new Map<string, { id: string; mode: string }>();
  const parts = splitNul(bytes ?? Buffer.alloc(0));
  for (let i = 0; i + 1 < parts.length; i += 2) {
    const [mode, , id] = parts[i]!.toString('latin1').slice(1).split(' ');
    differences.set(pathOf(parts[i + 1]!), { mode: mode!, id: id! });
  }
  return differences;
}

function listFolder(root: string): TreeListing {
  const files: TreeFile[] = [];
  const walk = (folder: string) => {
    for (const entry of readdirSync(join(root, folder), { withFileTypes: true })) {
      const path = folder === '' ? entry.name : `${folder}/${entry.name}`;
      if (entry.isDirectory()) {
        if (entry.name !== '.git' && entry.name !== '.mortise') walk(path);
      } else {
        const now = fileNow(root, path);
        if (now !== null) files.push(now);
      }
    }
  };
  walk('');
  return { root, commit: null, workTree: true, changed: [], files };
}

function fileNow(root: string, path: string): TreeFile | null {
  const at = join(root, rawPath(path));
  try {
    const stat = lstatSync(at);
    if (stat.isSymbolicLink()) return { path, id: blobId(Buffer.from(readlinkSync(at))), mode: '120000' };
    if (!stat.isFile()) return null;
    return { path, id: blobId(readFileSync(at)), mode: (stat.mode & 0o100) === 0 ? '100644' : '100755' };
  } catch (error) {
    if (['ENOENT', 'ENOTDIR'].includes((error as NodeJS.ErrnoException).code ?? '')) return null;
    throw error;
  }
}

export interface LaidTree {
  /** What is not there, and why: links that lead outside, submodules, objects that the clone lacks. */
  readonly absent: readonly { readonly path: string; readonly why: string }[];
}

/** Long ago: with the usual mount option `relatime` the first read of a file moves its access time, so reads can be told afterwards. */
export const NEVER_READ = new Date(0);

/**
 * Lays a listed tree into an empty folder.
 *
 * @param replaced  path to bytes that go in place of what is listed; null leaves the file out
 * @throws {GitFailed} when git ends early
 */
export async function layTree(
  listing: TreeListing,
  folder: string,
  replaced: ReadonlyMap<string, Uint8Array | null> = new Map(),
): Promise<LaidTree> {
  const absent: { path: string; why: string }[] = [];
  const links: { path: string; target: string }[] = [];
  const wanted: TreeFile[] = [];
  const made = new Set<string>();
  const put = (path: string, write: (file: string) => void) => {
    const file = join(folder, rawPath(path));
    if (!made.has(dirname(file))) mkdirSync(dirname(file), { recursive: true });
    made.add(dirname(file));
    write(file);
    utimesSync(file, NEVER_READ, new Date());
  };
  for (const file of listing.files) {
    if (!isInside(file.path)) absent.push({ path: file.path, why: 'its path leads outside the tree' });
    else if (replaced.has(file.path)) {
      const bytes = replaced.get(file.path)!;
      if (bytes !== null)
        put(file.path, (at) => writeFileSync(at, bytes, { flag: 'wx', mode: permissions(file.mode) }));
    } else if (file.mode === '160000') absent.push({ path: file.path, why: 'it is a submodule' });
    else if (!listing.workTree) wanted.push(file);
    else if (file.mode === '120000')
      links.push({ path: file.path, target: readlinkSync(join(listing.root, rawPath(file.path))) });
    else {
      put(file.path, (at) =>
        copyFileSync(join(listing.root, rawPath(file.path)), at, constants.COPYFILE_EXCL | constants.COPYFILE_FICLONE),
      );
    }
  }
  for (const [path, bytes] of replaced) {
    if (bytes === null || listing.files.some((file) => file.path === path) || !isInside(path)) continue;
    put(path, (at) => writeFileSync(at, bytes, { flag: 'wx' }));
  }
  if (wanted.length > 0) {
    await eachObject(listing.root, wanted, (file, bytes) => {
      if (bytes === null) absent.push({ path: file.path, why: 'this clone lacks its content' });
      else if (file.mode === '120000') links.push({ path: file.path, target: bytes.toString('utf8') });
      else {
        put(file.path, (at) => {
          const descriptor = openSync(at, 'wx', permissions(file.mode));
          for (let done = 0; done < bytes.length; ) done += writeSync(descriptor, bytes, done);
          closeSync(descriptor);
        });
      }
    });
  }
  // Links come last, so that no file is ever written through one.
  for (const { path, target } of links) {
    if (!isInside(target.startsWith('/') ? '..' : normal(`${dirname(path)}/${target}`))) {
      absent.push({ path, why: `it is a link that leads outside, to ${target}` });
      continue;
    }
    const at = join(folder, rawPath(path));
    mkdirSync(dirname(at), { recursive: true });
    if (!existsSync(at)) symlinkSync(target, at);
  }
  return { absent };
}

function permissions(mode: string): number {
  return mode === '100755' ? 0o755 : 0o644;
}

/** Streams objects out of one `git cat-file --batch`; `take` gets null for those that are missing. */
function eachObject(
  root: string,
  files: readonly TreeFile[],
  take: (file: TreeFile, bytes: Buffer | null) => void,
): Promise<void> {
  return new Promise((resolve, reject) => {
    const child = spawn('git', [...SAFE, 'cat-file', '--batch', '--buffer'], {
      cwd: root,
      env: ENVIRONMENT,
      stdio: ['pipe', 'pipe', 'ignore'],
    });
    let next = 0;
    let pending: Buffer[] = [];
    let have = 0;
    /** Bytes the object at hand still needs, its line end included; null while its header is awaited. */
    let need: number | null = null;
    child.on('error', (error) => reject(new GitFailed(`git could not be started: ${error.message}`, { cause: error })));
    child.stdin.on('error', () => {});
    child.stdin.end(files.map((file) => `${file.id}\n`).join(''));
    child.stdout.on('data', (chunk: Buffer) => {
      pending.push(chunk);
      have += chunk.length;
      if (need !== null && have < need) return;
      let all = pending.length === 1 ? pending[0]! : Buffer.concat(pending, have);
      try {
        for (;;) {
          if (need === null) {
            const end = all.indexOf(10);
            if (end < 0) break;
            const header = all.subarray(0, end).toString('latin1').split(' ');
            all = all.subarray(end + 1);
            if (header[1] === 'missing' || header.length < 3) take(files[next++]!, null);
            else need = Number(header[2]) + 1;
          } else {
            if (all.length < need) break;
            take(files[next++]!, all.subarray(0, need - 1));
            all = all.subarray(need);
            need = null;
          }
        }
      } catch (error) {
        child.kill();
        reject(error as Error);
        return;
      }
      pending = [all];
      have = all.length;
    });
    child.on('close', () => {
      if (next === files.length) resolve();
      else reject(new GitFailed(`git gave ${next} of ${files.length} objects`));
    });
  });
}

function splitNul(bytes: Buffer): Buffer[] {
  const parts: Buffer[] = [];
  for (let from = 0; from < bytes.length; ) {
    const end = bytes.indexOf(0, from);
    parts.push(bytes.subarray(from, end < 0 ? bytes.length : end));
    from = end < 0 ? bytes.length : end + 1;
  }
  return parts;
}

function pathOf(bytes: Buffer): string {
  const text = bytes.toString('utf8');
  return Buffer.from(text, 'utf8').equals(bytes) ? text : `\0${bytes.toString('latin1')}`;
}

/** Names that are not UTF-8 are laid under a spelling that is; the code under test could not name them portably either. */
function rawPath(path: string): string {
  return path.startsWith('\0') ? path.slice(1) : path;
}

function isInside(path: string): boolean {
  return (
    !path.startsWith('/') &&
    path.split('/').every((part) => part !== '' && part !== '.' && part !== '..' && part.toLowerCase() !== '.git')
  );
}

function normal(path: string): string {
  const parts: string[] = [];
  for (const part of path.split('/')) {
    if (part === '' || part === '.') continue;
    if (part === '..' && parts.length > 0 && parts.at(-1) !== '..') parts.pop();
    else parts.push(part);
  }
  return parts.join('/') || 'here';
}
