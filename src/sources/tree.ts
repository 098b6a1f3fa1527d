/** Source at a revision, as values: what every later stage reads files through, whether they lie in the work tree or in git. */

export interface TreeEntry {
  /** Relative to the root of the repository, `/` between folders. Bytes that are not UTF-8 stand as `\xHH`. */
  readonly path: string;
  /** git blob id of the content; null where the work tree was not hashed. */
  readonly id: string | null;
  readonly kind: 'file' | 'link' | 'submodule';
}

export interface SourceTree {
  /** Absolute path of the repository or folder. */
  readonly root: string;
  /** Full commit id; null for the work tree. */
  readonly revision: string | null;
  entries(): Promise<readonly TreeEntry[]>;
  /** null when there is no such file, when it is a link or leads outside the root, or when a clone lacks the object. */
  read(path: string): Promise<Uint8Array | null>;
  /**
   * Absolute path of a plain file of the work tree, for what is too large to be read whole. Absent where files lie in git's objects;
   * null where `read` gives null for another reason than length.
   */
  onDisk?(path: string): Promise<string | null>;
}
