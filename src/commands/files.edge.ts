/** Files named on the command line. */
import { randomBytes } from 'node:crypto';
import { mkdir, readFile, realpath, rename, rm, writeFile } from 'node:fs/promises';
import { dirname, join, resolve } from 'node:path';
import { UsageError } from './command.ts';

/** @throws {UsageError} saying which file and why */
export async function readWhole(cwd: string, file: string): Promise<Uint8Array> {
  try {
    return await readFile(resolve(cwd, file));
  } catch (error) {
    throw new UsageError(
      `${file} could not be read: ${(error as NodeJS.ErrnoException).code ?? (error as Error).message}`,
    );
  }
}

/** The absolute path with links followed. @throws {UsageError} when there is no such file */
export async function realPath(file: string): Promise<string> {
  try {
    return await realpath(file);
  } catch (error) {
    throw new UsageError(`${file} could not be read: ${(error as NodeJS.ErrnoException).code}`);
  }
}

/** Writes a file whole or not at all: a reader never meets half of it. @throws {UsageError} saying which file and why */
export async function writeWhole(cwd: string, file: string, text: string): Promise<void> {
  const target = resolve(cwd, file);
  const temporary = join(dirname(target), `.${randomBytes(6).toString('hex')}.part`);
  try {
    await writeFile(temporary, text);
    await rename(temporary, target);
  } catch (error) {
    await rm(temporary, { force: true });
    throw new UsageError(
      `${file} could not be written: ${(error as NodeJS.ErrnoException).code ?? (error as Error).message}`,
    );
  }
}

/** The text of a file; null when there is none. */
export async function readIfThere(file: string): Promise<string | null> {
  try {
    return await readFile(file, 'utf8');
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
}

/** Writes a file that is not there yet, and the folders above it. @throws {NodeJS.ErrnoException} EEXIST when it is there after all */
export async function writeNew(file: string, text: string): Promise<void> {
  await mkdir(dirname(file), { recursive: true });
  await writeFile(file, text, { flag: 'wx' });
}
