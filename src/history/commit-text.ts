/** A commit in one line. Pure. */
import type { CommitRecord } from './commit-record.ts';

/** `4f1c2ab90d 2014-03-02 A. Author: Use new rates`. */
export function commitText(commit: Omit<CommitRecord, 'files'>): string {
  return `${commit.id.slice(0, 10)} ${dayOf(commit.authored)} ${commit.author}: ${commit.subject}`;
}

export function dayOf(seconds: number): string {
  const date = new Date(seconds * 1000);
  return Number.isNaN(date.getTime()) ? 'no date' : date.toISOString().slice(0, 10);
}
