/** What a user can mend about where source is read from: an unknown revision, a folder that is no repository. */
export class SourceProblem extends Error {
  override readonly name = 'SourceProblem';
  /** What to do next, as an instruction. */
  readonly next: string;

  /** @param message  what is wrong, naming the revision, path or folder */
  constructor(message: string, next: string, options?: ErrorOptions) {
    super(message, options);
    this.next = next;
  }
}
