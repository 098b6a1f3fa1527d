/** Git objects hashed and taken apart, as every tool that speaks git does it. Pure. */
import { createHash } from 'node:crypto';

export type ObjectFormat = 'sha1' | 'sha256';

/**
 * The id that git gives an object.
 * @source Pro Git, "Git Internals - Git Objects": the hash of `type SP length NUL content`
 */
export function objectId(
  type: 'blob' | 'tree' | 'commit' | 'tag',
  bytes: Uint8Array,
  format: ObjectFormat = 'sha1',
): string {
  return createHash(format).update(`${type} ${bytes.length}\0`).update(bytes).digest('hex');
}

export interface RawTreeEntry {
  /** As git writes it: `100644`, `100755`, `120000`, `160000`, `40000`. */
  readonly mode: string;
  readonly name: Uint8Array;
  readonly id: string;
}

/** The entries of a tree object; reading stops at the first that is broken. */
export function parseTree(bytes: Uint8Array, format: ObjectFormat = 'sha1'): RawTreeEntry[] {
  const idLength = format === 'sha1' ? 20 : 32;
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  const entries: RawTreeEntry[] = [];
  for (let at = 0; at < buffer.length; ) {
    const space = buffer.indexOf(32, at);
    const nul = buffer.indexOf(0, space + 1);
    if (space < 0 || nul < 0 || nul + 1 + idLength > buffer.length) break;
    entries.push({
      mode: buffer.toString('latin1', at, space),
      name: buffer.subarray(space + 1, nul),
      id: buffer.toString('hex', nul + 1, nul + 1 + idLength),
    });
    at = nul + 1 + idLength;
  }
  return entries;
}

export interface Person {
  readonly name: string;
  readonly email: string;
  /** Seconds since 1970, and the offset as written. */
  readonly seconds: number;
  readonly offset: string;
}

export interface ParsedCommit {
  readonly tree: string;
  readonly parents: readonly string[];
  readonly author: Person;
  readonly committer: Person;
  readonly message: string;
}

export function parseCommit(bytes: Uint8Array): ParsedCommit {
  const text = decodeText(bytes);
  const end = text.indexOf('\n\n');
  const head = end < 0 ? text : text.slice(0, end);
  const field = (name: string) => new RegExp(`^${name} (.*)$`, 'm').exec(head)?.[1] ?? '';
  return {
    tree: field('tree'),
    parents: [...head.matchAll(/^parent ([0-9a-f]+)$/gm)].map((match) => match[1]!),
    author: parsePerson(field('author')),
    committer: parsePerson(field('committer')),
    message: end < 0 ? '' : text.slice(end + 2),
  };
}

function parsePerson(text: string): Person {
  const match = /^(.*?) ?<(.*?)> (-?\d+) ([+-]\d+)$/.exec(text);
  return {
    name: match?.[1] ?? text,
    email: match?.[2] ?? '',
    seconds: Number(match?.[3] ?? 0),
    offset: match?.[4] ?? '+0000',
  };
}

const strict = new TextDecoder('utf-8', { fatal: true });
const latin1 = new TextDecoder('latin1');

/** UTF-8 where it is, Latin-1 where it is not: no byte is lost. */
export function decodeText(bytes: Uint8Array): string {
  try {
    return strict.decode(bytes);
  } catch {
    return latin1.decode(bytes);
  }
}
