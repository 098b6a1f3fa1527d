/** What comments and names of a unit claim about what is declared in it. */

import type { Claim } from '../../model/interface.ts';
import { CommentClaims } from '../claims/claims-from-comment.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import { EMPTY, lookAtComment, MENTIONS, SAYS } from '../claims/comment-gate.ts';
import type { Reading } from './reading.ts';
import type { Scope } from './scope.ts';
import type { Statement } from './statement.ts';

/** Comments on the lines of a declaration; later lines that go on about it are told by `lastNames`. */
export function claimDeclared(reading: Reading, statement: Statement, names: readonly string[]): void {
  if (reading.inside > 0) return;
  reading.lastNames = names;
  reading.lastLine = statement.endLine;
  const { comments, commentCount } = statement;
  for (let at = 0; at < commentCount; at += 3) {
    const [from, to, line] = [comments[at]!, comments[at + 1]!, comments[at + 2]!];
    if ((lookAtComment(reading.names, reading.text.bytes, from, to, -1) & SAYS) === 0) continue;
    // A comment on a continued line is about what stands on that line.
    const onLine = statement.pieceCount === 1 ? names : namesOnLine(statement, line, names);
    claimComment(reading, onLine.length > 0 ? onLine : names, from, to, line);
  }
}

/** A comment of its own that goes on about the last declaration. */
export function claimFollowing(reading: Reading, from: number, to: number, line: number): void {
  if ((lookAtComment(reading.names, reading.text.bytes, from, to, -1) & SAYS) === 0) return;
  claimComment(reading, reading.lastNames, from, to, line);
}

function claimComment(reading: Reading, names: readonly string[], from: number, to: number, line: number): void {
  if (names.length === 0) return;
  const claims = new CommentClaims(names, reading.scope.own, { looked: true });
  takeLine(reading, claims, from, to, line);
  for (const claim of claims.claims) reading.found.claims.push(claim);
}

/** A line goes on without end in no comment that anyone reads. */
const LONGEST_LINE = 1000;

function takeLine(reading: Reading, claims: CommentClaims, from: number, to: number, line: number): void {
  const { text } = reading;
  const begin = behindMark(text.bytes, from, to);
  let lineStart = from;
  while (lineStart > 0 && text.bytes[lineStart - 1] !== 10) lineStart--;
  claims.line(text.slice(begin, Math.min(to, begin + LONGEST_LINE)), line, text.column(lineStart, begin));
}

/** Behind the marks that make it a comment: `c`, `C*`, `!`, `!!`, `!>`, `!<`. */
function behindMark(bytes: Uint8Array, from: number, to: number): number {
  let at = from;
  const first = bytes[at]!;
  if (first === 99 || first === 67) {
    // `ccc` is a mark, `coefficient` in column 1 begins with one.
    let end = at;
    while (end < to && bytes[end] === first) end++;
    const next = end < to ? bytes[end]! | 32 : 32;
    at = next >= 97 && next <= 122 ? at + 1 : end;
  }
  while (at < to && (bytes[at] === 33 || bytes[at] === 42 || bytes[at] === 62 || bytes[at] === 60)) at++;
  return at;
}

function namesOnLine(statement: Statement, line: number, names: readonly string[]): readonly string[] {
  let from = -1;
  let to = statement.length;
  for (let at = 0; at < statement.pieceCount; at++) {
    const piece = statement.pieces[at]!;
    if (piece.line === line && from < 0) from = piece.index;
    else if (piece.line > line) {
      to = piece.index;
      break;
    }
  }
  if (from < 0) return [];
  const there = new Set<string>();
  for (let at = from; at < to; ) {
    const end = statement.nameEnd(at);
    if (end > at) there.add(statement.name(at, Math.min(end, to)));
    at = Math.max(at + 1, statement.wordEnd(at));
  }
  return names.filter((name) => there.has(name));
}

let stamps = 0;

/**
 * Comment blocks above and inside a procedure speak of its arguments and variables by name.
 *
 * @param first  index in `reading.comments` of the first comment that belongs to it
 */
export function claimBlocks(reading: Reading, scope: Scope, first: number): void {
  const { comments, names, text } = reading;
  if (comments.length <= first) return;
  const candidates = new Set<string>();
  for (const { dummies } of scope.headers) for (const { name } of dummies) if (name !== '*') candidates.add(name);
  for (const name of scope.drafts.keys()) candidates.add(name);
  if (scope.kind === 'function') candidates.add(scope.name);
  if (candidates.size === 0) return;
  const stamp = ++stamps;
  for (const name of candidates) names.stamp(name, stamp);
  let claims: CommentClaims | null = null;
  let list: string[] | null = null;
  let lastLine = -2;
  /** Lines that name something and say nothing: they matter once a later line says something. */
  let waiting: number[] = [];
  let mentioned = false;
  for (let at = first; at < comments.length; at += 3) {
    const [from, to, line] = [comments[at]!, comments[at + 1]!, comments[at + 2]!];
    if (line !== lastLine + 1) {
      keep(reading, claims);
      claims = null;
      mentioned = false;
    }
    lastLine = line;
    const look = lookAtComment(names, text.bytes, behindMark(text.bytes, from, to), to, stamp);
    if (look === EMPTY) {
      claims?.endSubject();
      mentioned = false;
      continue;
    }
    if (!mentioned) {
      if ((look & MENTIONS) === 0) continue;
      mentioned = true;
      waiting = [];
    }
    if ((look & SAYS) === 0) {
      if ((look & MENTIONS) !== 0) waiting.push(at);
      continue;
    }
    if (claims === null) {
      list ??= [...candidates];
      claims = new CommentClaims(list, scope.own, { block: true, looked: true });
    }
    for (const one of waiting) claims.subjectOf(lineText(reading, comments[one]!, comments[one + 1]!));
    waiting = [];
    takeLine(reading, claims, from, to, line);
  }
  keep(reading, claims);
}

function lineText(reading: Reading, from: number, to: number): string {
  const begin = behindMark(reading.text.bytes, from, to);
  return reading.text.slice(begin, Math.min(to, begin + LONGEST_LINE));
}

function keep(reading: Reading, claims: CommentClaims | null): void {
  if (claims !== null) for (const claim of claims.claims) reading.found.claims.push(claim);
}

interface NameClaim {
  readonly what: Claim['what'];
  readonly value: string;
}

/** What names claim, asked once for each: the same few thousand are used all over a code. */
const BY_NAME = new Map<string, readonly NameClaim[]>();
const MOST_NAMES = 100_000;

export function claimName(reading: Reading, name: string, line: number, column: number, parent: string | null): void {
  let known = BY_NAME.get(name);
  if (known === undefined) {
    if (BY_NAME.size > MOST_NAMES) BY_NAME.clear();
    known = claimsFromName(name, { line: 1, column: 1 }, null).map(({ what, value }) => ({ what, value }));
    BY_NAME.set(name, known);
  }
  for (const { what, value } of known)
    reading.found.claims.push({ name, parent, what, value, text: name, from: 'name', line, column });
}
