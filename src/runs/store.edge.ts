/**
 * What was built and run, kept by key so that nothing is done twice. Folders of the store:
 *   scratch/NAME/        of one running Mortise; swept at the next start when its owner is dead
 *   builds/KEY/tree/     the code as it was built; build.json once it is done
 *   results/KEY/         result.json, log.txt and out/, put there whole by one rename
 *   times/NAME.json      how long a case or a build took last
 */
import { randomBytes } from 'node:crypto';
import {
  accessSync,
  closeSync,
  constants,
  existsSync,
  fsyncSync,
  mkdirSync,
  openSync,
  readdirSync,
  readFileSync,
  readSync,
  renameSync,
  rmSync,
  statSync,
  utimesSync,
  writeSync,
} from 'node:fs';
import { dirname, join, relative, sep } from 'node:path';
import { type Guard, startGuard } from './guard.edge.ts';
import { isHeld, markOwned } from './owner.edge.ts';
import { gitFolder } from './tree-files.edge.ts';

export interface Store {
  readonly folder: string;
  /** Of this process alone; removed at the end whatever happens. */
  readonly scratch: string;
  readonly guard: Guard;
}

/** The store of a code: in git's own folder, where no reader of the work tree meets it, else `.mortise` beside the code. */
export function storeFolder(root: string, env: Readonly<Record<string, string | undefined>>): string {
  if (env.MORTISE_STORE !== undefined && env.MORTISE_STORE !== '') return env.MORTISE_STORE;
  const git = gitFolder(root);
  return git === null ? join(root, '.mortise') : join(git, 'mortise');
}

/** The folder for builds and results can't be used; the message says why and what to set instead. */
export class StoreUnusable extends Error {
  override readonly name = 'StoreUnusable';
}

/**
 * Opens a store and sweeps what dead processes left in it.
 *
 * @throws {StoreUnusable} when the folder can't be written
 */
export function openStore(folder: string): Store {
  try {
    for (const name of ['builds', 'results', 'times', 'scratch']) mkdirSync(join(folder, name), { recursive: true });
    accessSync(folder, constants.W_OK);
  } catch (error) {
    throw new StoreUnusable(
      `builds and results can't be kept in ${folder}: ${(error as Error).message}; set MORTISE_STORE to a folder that can be written`,
      { cause: error },
    );
  }
  sweep(folder);
  const scratch = join(folder, 'scratch', `${process.pid}-${randomBytes(4).toString('hex')}`);
  mkdirSync(scratch, { recursive: true });
  markOwned(scratch);
  return { folder, scratch, guard: startGuard(scratch) };
}

export function closeStore(store: Store): void {
  rmSync(store.scratch, { recursive: true, force: true, maxRetries: 3 });
  store.guard.rest();
}

function sweep(folder: string): void {
  for (const name of list(join(folder, 'scratch'))) {
    const old = join(folder, 'scratch', name);
    if (!isHeld(old)) rmSync(old, { recursive: true, force: true, maxRetries: 3 });
  }
  const builds = list(join(folder, 'builds')).map((name) => join(folder, 'builds', name));
  for (const build of builds) {
    if (!existsSync(join(build, 'build.json')) && !isHeld(build)) rmSync(build, { recursive: true, force: true });
  }
  const done = builds
    .filter((build) => existsSync(join(build, 'build.json')))
    .map((build) => ({ build, at: used(build) }));
  done.sort((a, b) => b.at - a.at);
  for (const { build } of done.slice(KEPT_BUILDS)) if (!isHeld(build)) rmSync(build, { recursive: true, force: true });
}

/** Built trees are large and can be made again; results are small and are all kept. */
const KEPT_BUILDS = 12;

function used(build: string): number {
  try {
    return statSync(join(build, 'build.json')).mtimeMs;
  } catch {
    return 0;
  }
}

function list(folder: string): string[] {
  try {
    return readdirSync(folder);
  } catch {
    return [];
  }
}

export interface BuildPlace {
  readonly folder: string;
  readonly tree: string;
  readonly log: string;
  /** True when it is built; false when this process is to build it now. */
  readonly done: boolean;
}

/**
 * Takes the place of a build. It is built where it will stay, since many a build writes absolute paths into what it makes.
 * Waits while another process builds it.
 */
export async function takeBuild(store: Store, key: string, signal: AbortSignal): Promise<BuildPlace> {
  const folder = join(store.folder, 'builds', key);
  const place = { folder, tree: join(folder, 'tree'), log: join(folder, 'log.txt') };
  for (;;) {
    signal.throwIfAborted();
    try {
      mkdirSync(folder);
      markOwned(folder);
      mkdirSync(place.tree);
      return { ...place, done: false };
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
    }
    if (existsSync(join(folder, 'build.json'))) {
      markOwned(folder);
      utimesSync(join(folder, 'build.json'), new Date(), new Date());
      return { ...place, done: true };
    }
    if (!isHeld(folder)) rmSync(folder, { recursive: true, force: true });
    else await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

export function finishBuild(place: BuildPlace, record: object): void {
  writeWhole(join(place.folder, 'build.json'), JSON.stringify(record));
}

export function buildRecord<T>(place: BuildPlace): T {
  return JSON.parse(readFileSync(join(place.folder, 'build.json'), 'utf8')) as T;
}

export function dropBuild(place: BuildPlace): void {
  rmSync(place.folder, { recursive: true, force: true, maxRetries: 3 });
}

export function resultFolder(store: Store, key: string): string {
  return join(store.folder, 'results', key);
}

/** The record of a kept result; null when there is none, or its files are not as they were when it was kept. */
export function keptResult<T extends { files: Readonly<Record<string, number>> }>(store: Store, key: string): T | null {
  const folder = resultFolder(store, key);
  try {
    const record = JSON.parse(readFileSync(join(folder, 'result.json'), 'utf8')) as T;
    const whole = Object.entries(record.files).every(
      ([file, bytes]) => statSync(join(folder, 'out', file)).size === bytes,
    );
    return whole ? record : null;
  } catch {
    return null;
  }
}

function dropResult(store: Store, key: string): void {
  renameSync(resultFolder(store, key), join(store.scratch, `old-${randomBytes(6).toString('hex')}`));
}

/** A new folder with `out/` in it, for one run. */
export function runFolder(store: Store): string {
  const folder = join(store.scratch, randomBytes(6).toString('hex'));
  mkdirSync(join(folder, 'out'), { recursive: true });
  return folder;
}

/** A folder beside the outputs for what a run means to throw away. */
export function temporaryFolder(folder: string): string {
  const temporary = join(folder, 'tmp');
  mkdirSync(temporary, { recursive: true });
  return temporary;
}

export function dropTemporary(folder: string): void {
  rmSync(join(folder, 'tmp'), { recursive: true, force: true, maxRetries: 3 });
}

/** Puts a finished run where it is kept, whole or not at all. Whoever was first is kept. */
export function keepResult(store: Store, key: string, folder: string, record: object, instead = false): string {
  // Not forced to the disk: should the machine fail, the sizes in the record tell that files were cut short.
  writeWhole(join(folder, 'result.json'), JSON.stringify(record), false);
  const place = resultFolder(store, key);
  if (existsSync(place) && (instead || keptResult(store, key) === null)) dropResult(store, key);
  try {
    renameSync(folder, place);
  } catch (error) {
    if (!['EEXIST', 'ENOTEMPTY'].includes((error as NodeJS.ErrnoException).code ?? '')) throw error;
  }
  return place;
}

export interface EarlierReads {
  /** Key of the result. */
  readonly key: string;
  /** Path to git blob id. */
  readonly reads: Readonly<Record<string, string>>;
}

/** Earlier results that differ from a run in nothing but the content of files, with the files each had read. */
export function keptReads(store: Store, key: string): EarlierReads[] {
  const folder = join(store.folder, 'reads', key);
  return list(folder).flatMap((name) => {
    try {
      return [JSON.parse(readFileSync(join(folder, name), 'utf8')) as EarlierReads];
    } catch {
      return [];
    }
  });
}

export function rememberReads(store: Store, key: string, earlier: EarlierReads): void {
  writeWhole(join(store.folder, 'reads', key, `${earlier.key}.json`), JSON.stringify(earlier), false);
}

export function keptFailure<T>(store: Store, key: string): T | null {
  try {
    return JSON.parse(readFileSync(join(store.folder, 'failures', `${key}.json`), 'utf8')) as T;
  } catch {
    return null;
  }
}

export function keepFailure(store: Store, key: string, record: object): void {
  writeWhole(join(store.folder, 'failures', `${key}.json`), JSON.stringify(record), false);
}

/** The files below a folder, relative to it with `/`, and their sizes in bytes. */
export function outFiles(folder: string): Record<string, number> {
  const files = readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(folder, join(entry.parentPath, entry.name)).split(sep).join('/'))
    .sort();
  return Object.fromEntries(files.map((file) => [file, statSync(join(folder, file)).size]));
}

/** Of what a build is to make, what is not there. */
export function madeFiles(tree: string, makes: readonly string[]): string[] {
  return makes.filter((file) => !existsSync(join(tree, file)));
}

export function expectedSeconds(store: Store, name: string): number | null {
  try {
    return (JSON.parse(readFileSync(timeFile(store, name), 'utf8')) as { seconds: number }).seconds;
  } catch {
    return null;
  }
}

export function rememberSeconds(store: Store, name: string, seconds: number): void {
  const before = expectedSeconds(store, name);
  // The newest run counts half: machines and codes change, one odd run should not mislead.
  writeWhole(
    timeFile(store, name),
    JSON.stringify({ seconds: before === null ? seconds : (before + seconds) / 2 }),
    false,
  );
}

function timeFile(store: Store, name: string): string {
  return join(store.folder, 'times', `${name.replace(/[^\w-]/g, '_')}.json`);
}

/** Writes a file whole or not at all, and on the disk before it returns unless told otherwise. */
export function writeWhole(file: string, content: string | Uint8Array, durable = true): void {
  mkdirSync(dirname(file), { recursive: true });
  const temporary = `${file}.${process.pid}.${randomBytes(4).toString('hex')}`;
  const descriptor = openSync(temporary, 'wx');
  try {
    const bytes = typeof content === 'string' ? Buffer.from(content) : content;
    for (let done = 0; done < bytes.length; ) done += writeSync(descriptor, bytes, done);
    if (durable) fsyncSync(descriptor);
  } finally {
    closeSync(descriptor);
  }
  renameSync(temporary, file);
}

/** The last lines of a log, at most `bytes` of it; empty when there is none. */
export function logTail(file: string, bytes = 4000): string {
  let descriptor: number;
  try {
    descriptor = openSync(file, 'r');
  } catch {
    return '';
  }
  try {
    const { size } = statSync(file);
    const buffer = Buffer.alloc(Math.min(size, bytes));
    readSync(descriptor, buffer, 0, buffer.length, size - buffer.length);
    const text = buffer.toString('utf8');
    return size > bytes ? text.slice(text.indexOf('\n') + 1) : text;
  } finally {
    closeSync(descriptor);
  }
}
