/** What `mortise help FINDING` shows for one kind of finding. */
export interface Explanation {
  /** What it means for the physics. */
  readonly means: string;
  /** How it comes about. */
  readonly arises: string;
  /** How to mend it. */
  readonly mend: string;
  /** When it may be accepted. */
  readonly accept: string;
  readonly example: string;
}
