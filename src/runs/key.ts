/** Keys of everything that can change a build or a result, so that nothing is run twice and nothing stale is taken. */
import { createHash } from 'node:crypto';
import { canonicalJson, type Json } from '../model/canonical-json.ts';

/** A file as a key sees it: where, which content, whether it can be executed. */
export interface KeyedFile {
  readonly path: string;
  /** git blob id. */
  readonly id: string;
  readonly mode: string;
}

/** SHA-256 of the canonical JSON of a value, 64 hexadecimal digits. */
export function keyOf(value: Json): string {
  return createHash('sha256').update(canonicalJson(value)).digest('hex');
}

/** One digest for a set of files, whatever order they come in. */
export function filesDigest(files: readonly KeyedFile[]): string {
  const hash = createHash('sha256');
  for (const file of [...files].sort((a, b) => (a.path < b.path ? -1 : a.path > b.path ? 1 : 0))) {
    hash.update(`${file.mode} ${file.id} ${file.path}\0`);
  }
  return hash.digest('hex');
}

/**
 * The git blob id of content.
 *
 * @source Git's object format: SHA-1 of `blob LENGTH\0` and the bytes
 */
export function blobId(bytes: Uint8Array): string {
  return createHash('sha1').update(`blob ${bytes.length}\0`).update(bytes).digest('hex');
}

/**
 * The persistent identifier of a file's content: `swh:1:cnt:` and its git blob id. Ids of repositories that use SHA-256
 * have no such form and stay as they are.
 *
 * @source ISO/IEC 18670:2025, the SWHID specification: the identifier of a content is its git blob id
 */
export function contentId(id: string | undefined): string | null {
  return id === undefined ? null : id.length === 40 ? `swh:1:cnt:${id}` : id;
}
