/** Arguments of one type passed in each other's place: no compiler tells them apart, names do. Pure. */
import type { ActualArgument, Argument } from '../../model/interface.ts';

/**
 * Pairs of positions whose names at the call and in the definition match crosswise and not straight.
 *
 * Two names match when they are the same but for case, underscores and a prefix or suffix of one or two letters.
 */
export function exchangedPairs(actuals: readonly ActualArgument[], formals: readonly Argument[]): [number, number][] {
  const pairs: [number, number][] = [];
  const count = Math.min(actuals.length, formals.length);
  for (let i = 0; i < count; i++) {
    const one = plainName(actuals[i]!);
    if (one === null || matches(one, formals[i]!.name)) continue;
    for (let j = i + 1; j < count; j++) {
      const other = plainName(actuals[j]!);
      if (other === null || matches(other, formals[j]!.name)) continue;
      if (!sameType(formals[i]!, formals[j]!)) continue;
      if (
        matches(one, formals[j]!.name) &&
        matches(other, formals[i]!.name) &&
        !matches(one, other) &&
        !isPair(one, other)
      )
        pairs.push([i, j]);
    }
  }
  return pairs;
}

/** `m1` and `m2`, `a` and `b`, `left` and `right`: names of a pair are exchanged on purpose, to ask the other way round. */
function isPair(a: string, b: string): boolean {
  const [one, other] = [a, b].map((name) => name.toLowerCase());
  if (one!.replace(/\d/g, '') === other!.replace(/\d/g, '') || (one!.length === 1 && other!.length === 1)) return true;
  return /left|right/.test(one!) && one!.replace(/left|right/, '') === other!.replace(/left|right/, '');
}

function plainName(actual: ActualArgument): string | null {
  if (actual.keyword !== undefined) return null;
  return actual.form === 'name' || actual.form === 'element' || actual.form === 'section'
    ? (actual.name ?? null)
    : null;
}

function sameType(a: Argument, b: Argument): boolean {
  return a.type === b.type && a.bytes === b.bytes && a.rank === b.rank;
}

/** Exactly alike, or one longer by a letter or two at an end: `rho` and `rhoi`, not `i` and `j`. */
function matches(a: string, b: string): boolean {
  const [one, other] = [a, b].map((name) => name.toLowerCase().replace(/_/g, ''));
  if (one === other) return true;
  const [short, long] = one!.length <= other!.length ? [one!, other!] : [other!, one!];
  if (short.length < 3 || long.length - short.length > 2) return false;
  return long.startsWith(short) || long.endsWith(short);
}
