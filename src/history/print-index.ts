/** Every version of every procedure of a repository's whole history, by fingerprint. Pure. */
import type { CommitRecord } from './commit-record.ts';
import type { ProcedureBody } from './fingerprint.ts';

/** One version of a procedure: where and when it was first seen. */
export interface PrintedProcedure {
  readonly name: string;
  /** Of its tokens; equal for what differs in layout and comments only. */
  readonly hash: string;
  /** Equal for what differs in the names of things, too: one version, wherever it was copied to. */
  readonly form: string;
  readonly path: string;
  readonly commit: string;
  /** When that commit was authored, seconds since 1970. */
  readonly seconds: number;
  /** Place of the commit in the history, parents before children. */
  readonly order: number;
  readonly tokens: number;
  /** Its prints lie in `prints` from here, this many. */
  readonly from: number;
  readonly count: number;
}

export interface PrintIndex {
  /** The commit up to which history was read. */
  readonly to: string;
  readonly commits: number;
  readonly procedures: readonly PrintedProcedure[];
  readonly prints: Uint32Array;
}

export const EMPTY_INDEX: PrintIndex = { to: '', commits: 0, procedures: [], prints: new Uint32Array() };

/** Where a blob first came up. */
export interface FirstSeen {
  readonly commit: CommitRecord;
  readonly order: number;
  readonly path: string;
}

/** The index with what new blobs hold; versions known already keep their first place. */
export function extendIndex(
  index: PrintIndex,
  to: string,
  commits: number,
  found: readonly { readonly seen: FirstSeen; readonly bodies: readonly ProcedureBody[] }[],
): PrintIndex {
  const known = new Set(index.procedures.map((one) => `${one.name} ${one.hash}`));
  const procedures: PrintedProcedure[] = [...index.procedures];
  const added: (readonly number[])[] = [];
  let from = index.prints.length;
  for (const { seen, bodies } of [...found].sort((a, b) => a.seen.order - b.seen.order)) {
    for (const body of bodies) {
      const key = `${body.name} ${body.hash}`;
      if (known.has(key)) continue;
      known.add(key);
      procedures.push({
        name: body.name,
        hash: body.hash,
        form: body.form,
        path: seen.path,
        commit: seen.commit.id,
        seconds: seen.commit.authored,
        order: seen.order,
        tokens: body.tokens,
        from,
        count: body.prints.length,
      });
      added.push(body.prints);
      from += body.prints.length;
    }
  }
  const prints = new Uint32Array(from);
  prints.set(index.prints);
  let at = index.prints.length;
  for (const list of added) {
    prints.set(list, at);
    at += list.length;
  }
  return { to, commits, procedures, prints };
}

export interface PrintMatch {
  readonly query: PrintedProcedure;
  readonly match: PrintedProcedure;
  /** Shared prints over those of the smaller one, 0 to 1. */
  readonly containment: number;
  /** Every token is the same but for the names of things. */
  readonly exact: boolean;
}

/** Two procedures that share this much of the smaller one have a common origin; chance hits lie far below. */
const LEAST_CONTAINMENT = 0.5;
/** Prints that so many versions of unlike procedures share are idiom, not descent. */
const LEAST_SHARED = 4;

/** Every version in `index` that a version in `queries` shares its origin with. One pass over the prints of the index. */
export function searchIndex(queries: PrintIndex, chosen: readonly PrintedProcedure[], index: PrintIndex): PrintMatch[] {
  const holders = new Map<number, number[]>();
  for (const [number, { from, count }] of chosen.entries()) {
    for (let at = from; at < from + count; at += 1) {
      const print = queries.prints[at]!;
      const list = holders.get(print);
      if (list === undefined) holders.set(print, [number]);
      else list.push(number);
    }
  }
  const matches: PrintMatch[] = [];
  const shared = new Uint32Array(chosen.length);
  for (const match of index.procedures) {
    const touched: number[] = [];
    for (let at = match.from; at < match.from + match.count; at += 1) {
      for (const number of holders.get(index.prints[at]!) ?? []) {
        if (shared[number] === 0) touched.push(number);
        shared[number]! += 1;
      }
    }
    for (const number of touched) {
      const query = chosen[number]!;
      const containment = shared[number]! / Math.min(query.count, match.count);
      const exact = query.form === match.form;
      if (exact || (shared[number]! >= LEAST_SHARED && containment >= LEAST_CONTAINMENT)) {
        matches.push({ query, match, containment, exact });
      }
      shared[number] = 0;
    }
  }
  return matches;
}
