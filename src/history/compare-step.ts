/** Compares the files of one commit with those of its parents. Pure. */
import type { Change } from '../model/change.ts';
import { compareSides, stamped } from './compare-interfaces.ts';
import type { FileContent } from './file-content.ts';
import { sharedPrints } from './fingerprint.ts';
import type { ScanAnswer, ScanStep } from './scan-step.ts';
import type { SourceSide } from './source-side.ts';

/** A blob read, or why not. */
export type Reading = { readonly content: FileContent } | { readonly why: string };

/** Contents that agree this far are one file under two paths. */
const MOVED_SIMILARITY = 0.5;

/**
 * @param reading  gives a blob as it was read under a path
 * @param sameUnit  whether two spellings mean the same unit
 */
export function compareStep(
  step: ScanStep,
  reading: (id: string, path: string) => Reading,
  sameUnit: (a: string, b: string) => boolean,
): ScanAnswer {
  const missing = new Map<string, string>();
  const take = (id: string | null, path: string): FileContent | null => {
    if (id === null) return null;
    const found = reading(id, path);
    if ('content' in found) return found.content;
    missing.set(path, found.why);
    return null;
  };
  const look = (side: SourceSide, path: string): SourceSide => {
    const failed = side.code.incomplete.find((one) => one.why.startsWith('the reader failed'));
    if (failed !== undefined) missing.set(path, failed.why);
    return { ...side, path };
  };
  const parents = Math.max(...step.files.map((file) => file.before.length));
  const perParent: Change[][] = [];
  let moved: ScanAnswer['moved'] = [];
  for (let parent = 0; parent < parents; parent += 1) {
    const before: SourceSide[] = [];
    const after: SourceSide[] = [];
    const gone: { path: string; id: string; side: SourceSide }[] = [];
    const fresh: { path: string; id: string; side: SourceSide }[] = [];
    for (const file of step.files) {
      const id = file.before[parent] ?? null;
      if (id === file.after) continue;
      const b = take(id, file.path);
      const a = take(file.after, file.path);
      // With one side unknown nothing can be said of the file; it must not look born or dead.
      if ((b === null && id !== null) || (a === null && file.after !== null)) continue;
      if (b !== null) before.push(look(a === null ? b.whole() : b.besides(a), file.path));
      if (a !== null) after.push(look(b === null ? a.whole() : a.besides(b), file.path));
      if (b !== null && a === null) gone.push({ path: file.path, id: id!, side: before.at(-1)! });
      if (a !== null && b === null) fresh.push({ path: file.path, id: file.after!, side: after.at(-1)! });
    }
    if (parent === 0) moved = findMoved(gone, fresh);
    perParent.push(compareSides(before, after, sameUnit));
  }
  return {
    commit: step.commit,
    changes: againstAll(perParent).map((change) => stamped(change, step.commit)),
    moved,
    missing: [...missing].map(([path, why]) => ({ path, why })),
  };
}

/** A change that one side of a merge already had is none of the merge. */
function againstAll(perParent: readonly Change[][]): Change[] {
  const [first = [], ...others] = perParent;
  return first.filter((change) =>
    others.every((changes) => changes.some((one) => one.kind === change.kind && one.subject === change.subject)),
  );
}

interface Candidate {
  readonly path: string;
  readonly id: string;
  readonly side: SourceSide;
}

/** The same content first; then the most procedures in common, by name or by what they do. */
function findMoved(gone: readonly Candidate[], fresh: readonly Candidate[]): { from: string; to: string }[] {
  const pairs: { from: string; to: string; score: number }[] = [];
  if (gone.length === 0 || fresh.length === 0) return [];
  const [was, is] = [gone.map(contentsOf), fresh.map(contentsOf)];
  for (const [i, b] of gone.entries()) {
    for (const [j, a] of fresh.entries()) {
      const score = b.id === a.id ? 2 : Math.max(sharedNames(was[i]!, is[j]!), sharedBodies(was[i]!, is[j]!));
      if (score >= MOVED_SIMILARITY) pairs.push({ from: b.path, to: a.path, score });
    }
  }
  pairs.sort((x, y) => y.score - x.score || baseSame(y) - baseSame(x) || (x.from + x.to < y.from + y.to ? -1 : 1));
  const used = new Set<string>();
  return pairs
    .filter(({ from, to }) => {
      if (used.has(`b${from}`) || used.has(`a${to}`)) return false;
      used.add(`b${from}`).add(`a${to}`);
      return true;
    })
    .map(({ from, to }) => ({ from, to }));
}

function baseSame({ from, to }: { from: string; to: string }): number {
  return from.slice(from.lastIndexOf('/')) === to.slice(to.lastIndexOf('/')) ? 1 : 0;
}

function sharedNames(b: Contents, a: Contents): number {
  let shared = 0;
  for (const name of b.names) if (a.names.has(name)) shared += 1;
  return b.names.size === 0 || a.names.size === 0 ? 0 : shared / Math.max(b.names.size, a.names.size);
}

function sharedBodies(b: Contents, a: Contents): number {
  const most = Math.max(b.prints.length, a.prints.length);
  // Where the lengths alone rule it out nothing need be counted.
  if (most === 0 || Math.min(b.prints.length, a.prints.length) < MOVED_SIMILARITY * most) return 0;
  return sharedPrints(b.prints, a.prints) / most;
}

interface Contents {
  readonly names: ReadonlySet<string>;
  readonly prints: readonly number[];
}

function contentsOf({ side }: Candidate): Contents {
  const prints = new Set<number>();
  for (const body of side.bodies?.values() ?? []) for (const print of body.prints) prints.add(print);
  return {
    names: new Set(side.code.procedures.map((one) => one.name.toLowerCase())),
    prints: [...prints].sort((x, y) => x - y),
  };
}
