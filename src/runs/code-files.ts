/** Which files of a tree can change what a build or a run does, and how to tell that two trees agree on them. */
import { compareText } from '../model/place.ts';
import { blobId, type KeyedFile, keyOf } from './key.ts';

/** Everything but the manifests: they are read by Mortise alone, so a new tolerance never asks for a new run. */
export function codeFiles(files: readonly KeyedFile[], manifestFolder: string): KeyedFile[] {
  const prefix = `${manifestFolder}/`;
  return files.filter((file) => manifestFolder === '' || !file.path.startsWith(prefix));
}

/** The files with some of them replaced; null takes a file away. */
export function replacedFiles(
  files: readonly KeyedFile[],
  replaced: ReadonlyMap<string, Uint8Array | null>,
): KeyedFile[] {
  if (replaced.size === 0) return [...files];
  const kept = files.filter((file) => replaced.get(file.path) !== null);
  const result = kept.map((file) =>
    replaced.has(file.path) ? { ...file, id: blobId(replaced.get(file.path)!) } : file,
  );
  const known = new Set(files.map((file) => file.path));
  for (const [path, bytes] of replaced) {
    if (bytes !== null && !known.has(path)) result.push({ path, id: blobId(bytes), mode: '100644' });
  }
  return result;
}

/**
 * A digest of the names alone. A build that lists a folder, or looks for a file that is not there, depends on names;
 * so a result is taken for another tree only when both have the same names.
 */
export function namesDigest(files: readonly KeyedFile[]): string {
  return keyOf(
    [...files].sort((a, b) => compareText(a.path, b.path)).map((file) => `${file.mode} ${wellFormed(file.path)}`),
  );
}

/** True when the files that were read are, name by name, the same content in the tree at hand. */
export function agreesOnReads(reads: Readonly<Record<string, string>>, ids: ReadonlyMap<string, string>): boolean {
  return Object.entries(reads).every(([path, id]) => ids.get(path) === id);
}

export function wellFormed(text: string): string {
  return text.isWellFormed() ? text : encodeURIComponent(text.toWellFormed());
}
