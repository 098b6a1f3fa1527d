/** One source file as it stands on one side of a comparison, and its parts by name. Pure. */
import type { FileInterface, Procedure } from '../model/interface.ts';
import type { Place, Position } from '../model/place.ts';
import type { Bodies } from './procedure-bodies.ts';

export interface SourceSide {
  readonly path: string;
  readonly revision?: string;
  readonly code: FileInterface;
  /** What each procedure does, by the line it begins at; absent where only the interface is compared. */
  readonly bodies?: Bodies;
  /** The source itself, where expressions are to be compared as well. */
  readonly text?: () => string;
}

/** One part of a file, with the file. */
export interface Part<T> {
  readonly side: SourceSide;
  readonly it: T;
  /** What makes it the same part on the other side, without the file: language-wide name and the scope it stands in. */
  readonly key: string;
  readonly name: string;
}

export function placeIn(side: SourceSide, at: Position): Place {
  const { line, column } = at;
  return { file: side.path, line, column, ...(side.revision === undefined ? {} : { revision: side.revision }) };
}

/**
 * The procedures of a file that another file can call. Internal procedures, statement functions and main programs have no
 * callers outside; of a prototype and its definition in one file the definition stands.
 */
export function callable(side: SourceSide): Part<Procedure>[] {
  const { procedures } = side.code;
  const hosts = new Set(procedures.map((one) => one.name));
  const scopes = new Set([...side.code.types.map((one) => one.name)]);
  const defined = new Set(procedures.filter((one) => one.prototype !== true).map((one) => one.name));
  const seen = new Map<string, number>();
  const parts: Part<Procedure>[] = [];
  for (const it of procedures) {
    if (it.kind === 'program' || it.kind === 'statement-function' || it.kind === 'block-data') continue;
    if (it.visibility === 'private') continue;
    if (it.prototype === true && defined.has(it.name)) continue;
    const scope = it.parent?.split('::').at(-1);
    if (scope !== undefined && hosts.has(scope) && !scopes.has(scope) && it.kind !== 'separate-module-procedure')
      continue;
    const base = `${it.parent ?? ''}::${it.name}`;
    // The same name under two preprocessor conditions is two procedures; they are paired in the order they stand.
    const count = seen.get(base) ?? 0;
    seen.set(base, count + 1);
    parts.push({ side, it, key: count === 0 ? base : `${base}#${count}`, name: it.name });
  }
  return parts;
}

export interface Pairing<T> {
  readonly pairs: readonly { readonly before: Part<T>; readonly after: Part<T> }[];
  readonly removed: readonly Part<T>[];
  readonly added: readonly Part<T>[];
}

/**
 * Finds for each part of one side the same part on the other: in the same file first, then with the same scope in any
 * file, then by name alone where that name stands once on each side. So moves between files, splits, merges, new folders,
 * another source form or language are no change of the part itself.
 */
export function pair<T>(before: readonly Part<T>[], after: readonly Part<T>[]): Pairing<T> {
  const pairs: { before: Part<T>; after: Part<T> }[] = [];
  let left = [...before];
  let right = [...after];
  const rules: ((part: Part<T>) => string)[] = [
    (part) => `${part.side.path}\0${part.key}`,
    (part) => `${part.side.path}\0${part.name}`,
    (part) => part.key,
    (part) => part.name.toLowerCase(),
  ];
  for (const rule of rules) {
    if (left.length === 0 || right.length === 0) break;
    const rightBy = singles(right, rule);
    const leftBy = singles(left, rule);
    const taken = new Set<Part<T>>();
    for (const [key, one] of leftBy) {
      const other = rightBy.get(key);
      if (one === null || other === undefined || other === null) continue;
      pairs.push({ before: one, after: other });
      taken.add(one).add(other);
    }
    left = left.filter((part) => !taken.has(part));
    right = right.filter((part) => !taken.has(part));
  }
  return { pairs, removed: left, added: right };
}

/** By key; null where several parts share one. */
function singles<T>(parts: readonly Part<T>[], rule: (part: Part<T>) => string): Map<string, Part<T> | null> {
  const map = new Map<string, Part<T> | null>();
  for (const part of parts) {
    const key = rule(part);
    map.set(key, map.has(key) ? null : part);
  }
  return map;
}
