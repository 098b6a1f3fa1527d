/** The digest of a file that may be larger than memory. */
import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';

/** @returns `sha256:` and 64 hexadecimal digits @throws as Node does when the file cannot be read */
export async function sha256OfFile(file: string): Promise<string> {
  const hash = createHash('sha256');
  await pipeline(createReadStream(file), hash);
  return `sha256:${hash.digest('hex')}`;
}
