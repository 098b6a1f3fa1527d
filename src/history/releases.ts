/** Which release each commit went out with. Pure. */
import type { CommitRecord } from './commit-record.ts';

export interface Release {
  /** `v1.2`, as tagged. */
  readonly name: string;
  readonly commit: string;
  readonly version: string;
}

export interface ReleaseWindow {
  /** The last release before the commit; null when it is older than all. */
  readonly previous: Release | null;
  /** The first release that holds the commit; null when none does yet. */
  readonly next: Release | null;
}

/**
 * @param commits   parents before children
 * @param releases  tagged commits; one commit with several tags keeps the greatest version, given last
 */
export function releaseWindows(
  commits: readonly CommitRecord[],
  releases: readonly Release[],
): ReadonlyMap<string, ReleaseWindow> {
  const at = new Map(releases.map((release) => [release.commit, release]));
  const order = new Map(commits.map((commit, index) => [commit.id, index]));
  const earlier = (a: Release | null, b: Release | null) =>
    a === null ? b : b === null ? a : (order.get(a.commit) ?? -1) <= (order.get(b.commit) ?? -1) ? a : b;
  const later = (a: Release | null, b: Release | null) =>
    a === null ? b : b === null ? a : (order.get(a.commit) ?? -1) >= (order.get(b.commit) ?? -1) ? a : b;

  const next = new Map<string, Release | null>();
  for (let index = commits.length - 1; index >= 0; index -= 1) {
    const commit = commits[index]!;
    const own = at.get(commit.id) ?? next.get(commit.id) ?? null;
    next.set(commit.id, own);
    for (const parent of commit.parents) next.set(parent, earlier(next.get(parent) ?? null, own));
  }
  const held = new Map<string, Release | null>();
  const windows = new Map<string, ReleaseWindow>();
  for (const commit of commits) {
    const previous = commit.parents
      .map((parent) => at.get(parent) ?? held.get(parent) ?? null)
      .reduce<Release | null>(later, null);
    held.set(commit.id, previous);
    windows.set(commit.id, { previous, next: next.get(commit.id) ?? null });
  }
  return windows;
}

/**
 * True when versions follow the calendar (`22.06`, `2023.1`): they say when a release was made, not what it breaks, so no
 * bump can be read from them. Common practice, known as calendar versioning.
 *
 * @param releases  with the second each was tagged at
 */
export function followsCalendar(releases: readonly { readonly version: string; readonly seconds: number }[]): boolean {
  const dated = releases.filter(({ version, seconds }) => {
    const major = Number(version.split('.')[0]);
    const year = new Date(seconds * 1000).getUTCFullYear();
    return major === year || major === year % 100;
  });
  return releases.length >= 3 && dated.length >= 0.8 * releases.length;
}
