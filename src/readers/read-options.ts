/** What every reader may be told besides the bytes of its file. */
export interface ReadOptions {
  /** Preprocessor names and their values; a branch that they rule out is not read. Nothing given: every branch is read. */
  readonly define?: Readonly<Record<string, string>>;
  /**
   * Bytes of a file that this one includes, at the same revision, or null when there is none.
   * `path` as the source writes it, `from` the path of the file that includes it.
   */
  readonly include?: (path: string, from: string) => Uint8Array | null;
  /** Read executable statements as expressions too (Fortran), of the procedures named, by name or path; nothing given: none. */
  readonly expressionsOf?: readonly string[];
}
