/** Files named on the command line. */
import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
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
