/** What is asked of the scan for one commit, and what it answers. Plain data: it crosses threads and lies in the cache. */
import type { Change } from '../model/change.ts';
import type { FileChange } from './commit-record.ts';

export interface ScanStep {
  readonly commit: string;
  /** Source files only; never empty. */
  readonly files: readonly FileChange[];
}

export interface ScanAnswer {
  readonly commit: string;
  /** What differs from every parent, each with its place before and after. */
  readonly changes: readonly Change[];
  /** Files that are the same module under another path: moved, renamed, rewritten. */
  readonly moved: readonly { readonly from: string; readonly to: string }[];
  /** Files of which a side is not in this clone or could not be read whole, with why. */
  readonly missing: readonly { readonly path: string; readonly why: string }[];
}

/** The same files with the same contents are the same step, in whichever commit: cherry-picks are compared once. */
export function stepText(step: ScanStep): string {
  return step.files.map(({ path, before, after }) => `${path}\0${before.join(',')}\0${after}`).join('\n');
}
