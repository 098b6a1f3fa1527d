/** Which results a recorded defect touches: by version, by git ancestry, by content, and those of which it can't be known. */
import type { StandingEntry, StandingNotice } from './chain.ts';
import { bare, inRange } from './find.ts';
import type { Entry, Notice } from './record.ts';

export interface Touched {
  readonly entry: string;
  readonly touch: 'touched' | 'not known';
  /** Why, in a sentence or two. */
  readonly because: string;
}

/** What git can say, asked beforehand or on demand; null where the commits are not in this repository. */
export interface Ancestry {
  /** Whether `ancestor` is in the history of `commit`, directly or as a cherry-pick of the same patch. */
  holds(commit: string, ancestor: string): boolean | null;
  /** Content ids that a module's files had in revisions that have the defect: copies in other codes are found by them. */
  contentsWithDefect(notice: Notice): ReadonlySet<string>;
}

/** No repository at hand: nothing is known of ancestry. */
export const NO_ANCESTRY: Ancestry = { holds: () => null, contentsWithDefect: () => new Set() };

/** Results that a notice touches and those that can't be known, in the order of the entries; results known to be free are left out. */
export function touchedBy(notice: StandingNotice, entries: Iterable<StandingEntry>, ancestry: Ancestry): Touched[] {
  if (notice.lifted !== null) return [];
  const contents = ancestry.contentsWithDefect(notice.content);
  const touched: Touched[] = [];
  for (const entry of entries) {
    const answer = touchOf(notice.content, entry.content, ancestry, contents);
    if (answer !== null) touched.push({ entry: entry.id, ...answer });
  }
  return touched;
}

/** null when the notice does not touch the entry. */
export function touchOf(
  notice: Notice,
  entry: Entry,
  ancestry: Ancestry,
  contents: ReadonlySet<string>,
): Pick<Touched, 'touch' | 'because'> | null {
  const using = entry.modules.filter(
    (one) => one.module === notice.module && (notice.component === undefined || one.component === notice.component),
  );
  const copy = entry.modules
    .flatMap((one) => Object.entries(one.contents ?? {}))
    .find(([, id]) => contents.has(bare(id)));
  if (using.length === 0 && copy === undefined) return null;
  const found = using.length === 0 ? null : byVersionOrCommit(notice, entry, using, ancestry);
  const reason =
    copy !== undefined && found?.touch !== 'touched'
      ? { touch: 'touched' as const, because: `it holds ${copy[0]} with the content that has the defect` }
      : found;
  if (reason === null) return null;
  const states = statesMet(notice, entry);
  if (states === 'outside') return null;
  if (states === 'unknown' && reason.touch === 'touched') {
    return {
      touch: 'not known',
      because: `${reason.because}; the states it visited were not recorded, so whether it met the conditions is not known`,
    };
  }
  return reason;
}

function byVersionOrCommit(
  notice: Notice,
  entry: Entry,
  using: Entry['modules'],
  ancestry: Ancestry,
): Pick<Touched, 'touch' | 'because'> | null {
  const inVersions = notice.versions === undefined ? null : using.find((one) => inRange(one.version, notice.versions!));
  const hasCommits = (notice.broughtIn ?? []).length > 0;
  if (!hasCommits) {
    return inVersions == null
      ? null
      : { touch: 'touched', because: `it used ${inVersions.module} ${inVersions.version}, in ${notice.versions}` };
  }
  const answers = entry.code.map(({ commit }) => byAncestry(notice, commit, ancestry));
  const hit = answers.find((one) => one.has === true);
  if (hit !== undefined) return { touch: 'touched', because: hit.because };
  if (answers.some((one) => one.has === null) || answers.length === 0) {
    // Where git can't say, the version still can.
    if (inVersions != null)
      return { touch: 'touched', because: `it used ${inVersions.module} ${inVersions.version}, in ${notice.versions}` };
    if (notice.versions !== undefined) return null;
    return { touch: 'not known', because: answers.find((one) => one.has === null)?.because ?? 'it names no commit' };
  }
  return null;
}

function byAncestry(notice: Notice, commit: string, ancestry: Ancestry): { has: boolean | null; because: string } {
  const brought = (notice.broughtIn ?? []).map((one) => [one, ancestry.holds(commit, one)] as const);
  const mended = (notice.mendedAt ?? []).map((one) => [one, ancestry.holds(commit, one)] as const);
  const mend = mended.find(([, held]) => held === true);
  if (mend !== undefined)
    return { has: false, because: `${commit.slice(0, 10)} holds the mend ${mend[0].slice(0, 10)}` };
  const bring = brought.find(([, held]) => held === true);
  const open = [...brought, ...mended].find(([, held]) => held === null);
  if (bring !== undefined && mended.every(([, held]) => held === false)) {
    return {
      has: true,
      because: `${commit.slice(0, 10)} holds ${bring[0].slice(0, 10)}, which brought the defect in, and no mend`,
    };
  }
  if (open !== undefined)
    return {
      has: null,
      because: `whether ${commit.slice(0, 10)} holds ${open[0].slice(0, 10)} can not be told: one of them is not in this repository`,
    };
  return { has: false, because: '' };
}

/** Whether the run went where the defect shows. All conditions must be met; ranges that meet at all count as entered. */
function statesMet(notice: Notice, entry: Entry): 'met' | 'outside' | 'unknown' {
  let unknown = false;
  for (const condition of notice.states ?? []) {
    const visited = entry.footprint?.find((one) => one.quantity === condition.quantity && one.unit === condition.unit);
    if (visited === undefined) unknown = true;
    else if (
      (condition.from !== null && visited.to < condition.from) ||
      (condition.to !== null && visited.from > condition.to)
    )
      return 'outside';
  }
  return unknown ? 'unknown' : 'met';
}
