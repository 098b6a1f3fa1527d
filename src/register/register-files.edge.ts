/** The register's folder on disk: every record in a file of its own, written so that it is there whole or not at all. */
import { randomBytes } from 'node:crypto';
import {
  closeSync,
  existsSync,
  fsyncSync,
  mkdirSync,
  openSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeSync,
} from 'node:fs';
import { dirname, join } from 'node:path';

/** Folder of the register below the root of a code's repository. */
export const REGISTER_FOLDER = 'manifests/register';

/** Paths of all record files below the folder, sorted; none when there is no folder. Temporary files are not records. */
export function listRecordFiles(folder: string): string[] {
  try {
    return readdirSync(folder, { recursive: true, encoding: 'utf8' })
      .filter((name) => name.endsWith('.yaml') && !/(^|[\\/])\./.test(name))
      .map((name) => name.replaceAll('\\', '/'))
      .sort();
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw error;
  }
}

export function readRecordBytes(folder: string, file: string): Uint8Array {
  return readFileSync(join(folder, file));
}

/**
 * Writes a new record: to a temporary file, forced to disk, then renamed, then the folder is
 * forced to disk. When this returns the record survives a power cut; when it throws nothing is there.
 *
 * A name holds part of the record's seal, so a file of the same name is the same record.
 *
 * @throws {NodeJS.ErrnoException} ENOSPC, EROFS, EACCES, EIO, ... from the file system
 */
export function writeRecordFile(folder: string, file: string, text: string): void {
  const target = join(folder, file);
  const parent = dirname(target);
  if (existsSync(target)) return;
  mkdirSync(parent, { recursive: true });
  const temporary = join(parent, `.${randomBytes(8).toString('hex')}.part`);
  const handle = openSync(temporary, 'wx', 0o644);
  try {
    try {
      const bytes = Buffer.from(text, 'utf8');
      for (let done = 0; done < bytes.length; ) done += writeSync(handle, bytes, done);
      fsyncSync(handle);
    } finally {
      closeSync(handle);
    }
    renameSync(temporary, target);
  } catch (error) {
    rmSync(temporary, { force: true });
    throw error;
  }
  syncFolder(parent);
  syncFolder(folder);
}

function syncFolder(folder: string): void {
  const handle = openSync(folder, 'r');
  try {
    fsyncSync(handle);
  } finally {
    closeSync(handle);
  }
}
