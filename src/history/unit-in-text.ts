/** A unit that text in the code names - a label, an attribute, a message, a named unit - and that is another one now. Pure. */
import { unitGrade } from '../readers/claims/unit-words.ts';
import type { Edit } from './statements.ts';

export interface UnitPair {
  readonly before: string;
  readonly after: string;
}

/** @returns the units of the first text of which the unit, and not only the wording, is another */
export function unitsInTexts(edits: readonly Edit[], sameUnit: (a: string, b: string) => boolean): UnitPair | null {
  for (const { gone, come } of edits) {
    if (gone.length !== 1 || come.length !== 1) continue;
    const [b, a] = [gone[0]!, come[0]!];
    if (b.kind === 'name' && a.kind === 'name' && UNIT_NAME.test(b.text) && UNIT_NAME.test(a.text)) {
      return { before: b.text, after: a.text };
    }
    if (b.kind !== 'text' || a.kind !== 'text') continue;
    const pair = bracketed(b.text, a.text) ?? wordChanged(b.text, a.text);
    if (pair !== null && !sameUnit(pair.before, pair.after)) return pair;
  }
  return null;
}

/** `UNIT_CONV_TIME`, `units_length`: names that stand for a unit. */
const UNIT_NAME = /^units?_|_units?_/i;

/** `density (kg/m^3)` beside `density (10^3 kg/m^3)`: the last bracket of each. */
function bracketed(before: string, after: string): UnitPair | null {
  const inside = (text: string) => [...text.matchAll(/[[(]([^[\]()]{1,40})[\])]/g)].map(([, unit]) => unit!.trim());
  const [was, is] = [inside(before), inside(after)];
  if (was.length === 0 || was.length !== is.length) return null;
  for (const [index, b] of was.entries()) {
    const a = is[index]!;
    if (b !== a && isUnit(b) && isUnit(a)) return { before: b, after: a };
  }
  return null;
}

/** A text that is a unit, or one word of a message that is a unit before and after. */
function wordChanged(before: string, after: string): UnitPair | null {
  if (before.length <= 30 && after.length <= 30 && isUnit(before) && isUnit(after)) return { before, after };
  const [was, is] = [before.trim().split(/\s+/), after.trim().split(/\s+/)];
  if (was.length !== is.length) return null;
  const differing = was.flatMap((word, at) => (word === is[at] ? [] : [at]));
  if (differing.length !== 1) return null;
  const [b, a] = [was, is].map((words) => words[differing[0]!]!.replace(/^[([]|[)\],.:;]+$/g, '')) as [string, string];
  // A short word is taken for a unit only beside one that can be nothing else.
  const either = (isUnit(b) && unitGrade(a) !== 'none') || (isUnit(a) && unitGrade(b) !== 'none');
  return either ? { before: b, after: a } : null;
}

function isUnit(text: string): boolean {
  const plain = text.replace(/\$|\\cdot|\\,/g, ' ').trim();
  const grade = unitGrade(plain.replace(/^10\^?\{?-?\d+\}?\s*/, ''));
  return grade === 'sure' || grade === 'likely';
}
