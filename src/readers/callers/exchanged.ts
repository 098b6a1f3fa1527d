/** Arguments of one type passed in each other's place: no compiler tells them apart, names do. Pure. */
import type { ActualArgument, Argument } from '../../model/interface.ts';
import { plainName, type Usage } from './usage.ts';

/** From this many other callers on a name is known to belong to an argument whose own name does not say so. */
const KNOWN_CALLERS = 2;
/** Where neither name says so: a procedure that is given anything (`copy(a, b, n)`) teaches nothing. */
const KNOWN_BY_USE_ALONE = { callers: 3, share: 0.5 };

/**
 * Pairs of positions whose names at the call match the definition crosswise and not straight; where the definition has
 * another name, what other callers pass stands for it.
 *
 * Not told is what is meant: names that are each other's counterpart (`m1` and `m2`, `left` and `right`), and exchanges that
 * another argument follows (`b, ldb, a, lda` for `a, lda, b, ldb`, or two pairs in one call).
 */
export function exchangedPairs(
  actuals: readonly ActualArgument[],
  formals: readonly Argument[],
  usage?: Usage,
): [number, number][] {
  const pairs: [number, number][] = [];
  const names = actuals.map(plainName);
  const count = Math.min(actuals.length, formals.length);
  for (let i = 0; i < count; i++) {
    const one = names[i] ?? null;
    if (one === null || matches(one, formals[i]!.name)) continue;
    for (let j = i + 1; j < count; j++) {
      const other = names[j] ?? null;
      if (other === null || matches(other, formals[j]!.name)) continue;
      if (!sameType(formals[i]!, formals[j]!) || matches(one, other) || isPair(one, other)) continue;
      const crosswise = isCrosswise(one, other, formals[i]!, formals[j]!, usage);
      if (crosswise && !isFollowed(names, formals, i, j)) pairs.push([i, j]);
    }
  }
  // More than one pair in a call is a group that changes sides on purpose.
  return pairs.length > 1 ? [] : pairs;
}

function isCrosswise(one: string, other: string, first: Argument, second: Argument, usage: Usage | undefined): boolean {
  const [oneIsSecond, otherIsFirst] = [matches(one, second.name), matches(other, first.name)];
  if (oneIsSecond && otherIsFirst) return true;
  // What others pass: each name for the other argument, and nobody but this caller the way it stands here.
  if (usage === undefined || usage.callersPassing(one, first) > 1 || usage.callersPassing(other, second) > 1)
    return false;
  const callers = [usage.callersPassing(one, second), usage.callersPassing(other, first)] as const;
  if (oneIsSecond) return callers[1] >= KNOWN_CALLERS;
  if (otherIsFirst) return callers[0] >= KNOWN_CALLERS;
  return (
    Math.min(...callers) >= KNOWN_BY_USE_ALONE.callers &&
    Math.min(usage.shareOf(one, second), usage.shareOf(other, first)) >= KNOWN_BY_USE_ALONE.share
  );
}

/** True where a third argument changes sides with the two: the whole group is exchanged, as for the reverse direction. */
function isFollowed(names: readonly (string | null)[], formals: readonly Argument[], i: number, j: number): boolean {
  const [first, second] = differing(formals[i]!.name, formals[j]!.name);
  if (first === '' || second === '') return false;
  return names.some((name, k) => {
    const formal = formals[k];
    if (k === i || k === j || name === null || formal === undefined) return false;
    return [
      [first, second],
      [second, first],
    ].some(([from, to]) => {
      if (!formal.name.toLowerCase().includes(from!)) return false;
      const expected = formal.name.toLowerCase().replaceAll(from!, to!);
      return from!.length > 2 ? name.toLowerCase().includes(to!) : matches(name, expected);
    });
  });
}

/** What is left of two names without the beginning and the end that they share. */
function differing(a: string, b: string): [string, string] {
  const [one, other] = [a.toLowerCase(), b.toLowerCase()];
  let from = 0;
  while (from < Math.min(one.length, other.length) && one[from] === other[from]) from++;
  let end = 0;
  while (end < Math.min(one.length, other.length) - from && one.at(-1 - end) === other.at(-1 - end)) end++;
  return [one.slice(from, one.length - end), other.slice(from, other.length - end)];
}

const COUNTERPARTS = [
  ['left', 'right'],
  ['send', 'recv'],
  ['src', 'dst'],
  ['from', 'to'],
  ['in', 'out'],
  ['old', 'new'],
] as const;

/**
 * Names of a pair are exchanged on purpose, to ask the other way round: `left` and `right`, and all that differ in one
 * letter or number only (`ci` and `cj`, `lda` and `ldb`, `m1` and `m2`).
 */
function isPair(a: string, b: string): boolean {
  const [one, other] = differing(a, b);
  if ((one.length <= 1 && other.length <= 1) || (/^\d*$/.test(one) && /^\d*$/.test(other))) return true;
  return COUNTERPARTS.some(
    ([left, right]) => (one.includes(left) && other.includes(right)) || (one.includes(right) && other.includes(left)),
  );
}

function sameType(a: Argument, b: Argument): boolean {
  return a.type === b.type && a.bytes === b.bytes && a.rank === b.rank;
}

/** Exactly alike, or one longer by a letter or two at an end: `rho` and `rhoi`, not `i` and `j`. */
function matches(a: string, b: string): boolean {
  const one = a.toLowerCase().replaceAll('_', '');
  const other = b.toLowerCase().replaceAll('_', '');
  if (one === other) return true;
  const [short, long] = one.length <= other.length ? [one, other] : [other, one];
  if (short.length < 3 || long.length - short.length > 2) return false;
  return long.startsWith(short) || long.endsWith(short);
}
