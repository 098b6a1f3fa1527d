/** The bytes of a file on disk. */
import { closeSync, existsSync, fstatSync, openSync, readSync } from 'node:fs';
import type { ByteSource } from './byte-source.ts';
import { OutputProblem } from './output-file.ts';

/** @throws {OutputProblem} `missing` when it does not exist, `unsupported` for a folder */
export function openBytes(path: string): ByteSource {
  let file: number;
  try {
    file = openSync(path, 'r');
  } catch (error) {
    const missing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    const says = missing ? 'does not exist' : `cannot be opened: ${(error as Error).message}`;
    throw new OutputProblem('missing', path, says, { cause: error });
  }
  const status = fstatSync(file);
  if (status.isDirectory()) {
    closeSync(file);
    throw new OutputProblem('unsupported', path, 'is a folder, not a result file');
  }
  let open = true;
  return {
    path,
    size: status.size,
    readAt(offset, into) {
      let done = 0;
      while (done < into.length) {
        const count = readSync(file, into, done, into.length - done, offset + done);
        if (count === 0) break;
        done += count;
      }
      return done;
    },
    close() {
      if (open) closeSync(file);
      open = false;
    },
  };
}

export function exists(path: string): boolean {
  return existsSync(path);
}
