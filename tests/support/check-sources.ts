/** Small sources held against each other, and what is found of them, a line each. */
import type { Finding } from '../../src/model/finding.ts';
import type { FileInterface } from '../../src/model/interface.ts';
import { checkCode } from '../../src/readers/callers/check-code.ts';
import type { LinkOptions } from '../../src/readers/link.ts';
import { readSource } from '../../src/readers/read-source.ts';

export async function findingsIn(
  sources: Readonly<Record<string, string>>,
  options: LinkOptions = {},
): Promise<Finding[]> {
  const files = new Map<string, FileInterface>();
  for (const [path, text] of Object.entries(sources)) files.set(path, await readSource(path, Buffer.from(text)));
  return checkCode(files, options);
}

/** `FILE:LINE gravity kind`, sorted as findings are. */
export async function check(sources: Readonly<Record<string, string>>, options: LinkOptions = {}): Promise<string[]> {
  return (await findingsIn(sources, options)).map(
    (one) => `${one.place.file}:${one.place.line} ${one.gravity} ${one.kind}`,
  );
}
