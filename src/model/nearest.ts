/** The known name that someone most likely meant: for "did you mean" in every message about a name that does not exist. */

/**
 * The known name at the least distance from `meant`, or null when none is near.
 * Near: at most one slip for every three characters (one for short names), or one holds the other as a whole word.
 * Ties go to the name that comes first in `known`.
 */
export function nearest(meant: string, known: Iterable<string>): string | null {
  const wanted = fold(meant).slice(0, LONGEST);
  let best: string | null = null;
  let least = Number.POSITIVE_INFINITY;
  for (const name of known) {
    const candidate = fold(name).slice(0, LONGEST);
    const allowed = Math.max(1, Math.floor(Math.max(wanted.length, candidate.length) / 3));
    const slips = candidate === wanted ? 0 : isPart(wanted, candidate) ? allowed : distance(wanted, candidate, allowed);
    if (slips <= allowed && slips < least) {
      best = name;
      least = slips;
    }
  }
  return best;
}

/** ` (did you mean "eos-table"?)`, or nothing. */
export function didYouMean(meant: string, known: Iterable<string>): string {
  const name = nearest(meant, known);
  return name === null ? '' : ` (did you mean "${name}"?)`;
}

/** Names beyond this length are compared by their beginning, so that hostile input cannot make the comparison slow. */
const LONGEST = 80;

function fold(name: string): string {
  return name.toLowerCase().replace(/[_ ]/g, '-');
}

function isPart(a: string, b: string): boolean {
  const [short, long] = a.length < b.length ? [a, b] : [b, a];
  return short.length >= 3 && long.split(/[-./]/).includes(short);
}

/** Insertions, deletions, exchanges of neighbours and replacements between two words; anything above `limit` is `limit + 1`. */
function distance(a: string, b: string, limit: number): number {
  if (Math.abs(a.length - b.length) > limit) return limit + 1;
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const cost = a[i - 1] === b[j - 1] ? 0 : 1;
      let slips = Math.min(last[j]! + 1, row[j - 1]! + 1, last[j - 1]! + cost);
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1])
        slips = Math.min(slips, beforeLast[j - 2]! + 1);
      row.push(slips);
    }
    if (Math.min(...row) > limit) return limit + 1;
    beforeLast = last;
    last = row;
  }
  return last[b.length]!;
}
