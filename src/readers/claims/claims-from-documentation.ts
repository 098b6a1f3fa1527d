/**
 * What the documentation of a procedure says of its arguments and of itself: tags (`@param`, `:param x:`), sections in the
 * NumPy and the Google style, and plain lines. Text and names come in, claims go out.
 */
import type { Claim } from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { claimsFromComment } from './claims-from-comment.ts';
import { unitsInComment } from './units-in-comment.ts';

export interface Documented {
  /** The comment without its marks. */
  readonly text: string;
  readonly at: Position;
  /** Names of the arguments. */
  readonly args: readonly string[];
  /** The procedure itself, for what is said of its result; null when it gives none. */
  readonly itself: string | null;
  /** What the arguments belong to: the procedure, with its parents. */
  readonly owner: string;
  /** What the procedure belongs to. */
  readonly parent: string | null;
  readonly from: 'comment' | 'docstring';
}

const TAG =
  /^[\s*!]*(?:[@\\](\w+)|:(\w+)\b[^:\n]*:|(Parameters|Returns?|Yields|Other Parameters|Attributes|Arguments|Args|Raises|Notes?|Examples?|References|See Also)\s*:?\s*$)/;

export function claimsFromDocumentation(documented: Documented): Claim[] {
  const { args, itself, owner, parent, from } = documented;
  const lines = documented.text.split('\n');
  const claims: Claim[] = [];
  const seen = new Set<string>();
  const keep = (found: readonly Claim[]) => {
    for (const one of found) {
      const key = `${one.parent ?? ''}\0${one.name}\0${one.what}`;
      if (!seen.has(key)) claims.push(one);
      seen.add(key);
    }
  };
  const place = (index: number): Position => ({
    line: documented.at.line + index,
    column: index === 0 ? documented.at.column : 1,
  });
  let section: 'description' | 'arguments' | 'result' | 'other' = 'description';
  let start = 0;
  const flush = (end: number) => {
    if (end <= start) return;
    const text = lines.slice(start, end).join('\n');
    if (section === 'arguments') {
      keep(claimsFromComment(text, args, place(start), owner, { from, block: true, caseSensitive: true }));
    } else if (section === 'result' && itself !== null) {
      keep(claimsFromComment(text, [itself], place(start), parent, { from, caseSensitive: true }));
    } else if (section === 'description') {
      keep(claimsFromComment(text, args, place(start), owner, { from, block: true, caseSensitive: true }));
      // The description speaks of the result when it names one unit only, and no argument beside it.
      if (itself !== null && claims.length === 0) {
        const units = lines.slice(start, end).flatMap((line) => unitsInComment(line));
        if (units.length === 1)
          keep(claimsFromComment(text, [itself], place(start), parent, { from, caseSensitive: true }));
      }
    }
  };
  for (let index = 0; index < lines.length; index++) {
    const match = TAG.exec(lines[index]!);
    if (match === null) continue;
    const word = (match[1] ?? match[2] ?? match[3] ?? '').toLowerCase();
    const next = /^(?:param|var|ivar|cvar|arg|args|arguments|parameters|other parameters|attributes|type|field)$/.test(
      word,
    )
      ? 'arguments'
      : /^(?:returns?|retval|rtype|result|yields)$/.test(word)
        ? 'result'
        : /^(?:brief|details|short|f|rm|b|c|e|p|a|math|units?|mathrm|text)$/.test(word)
          ? null
          : 'other';
    if (next === null) continue;
    flush(index);
    start = index;
    section = next;
  }
  flush(lines.length);
  return claims;
}
