/** What changed about numbers written in the code: named constants, physics literals, their precision. Pure. */
import type { Change } from '../model/change.ts';
import type { LiteralUse, NamedConstant } from '../model/interface.ts';
import { type Part, pair, placeIn, type SourceSide } from './source-side.ts';

export function compareConstants(before: readonly SourceSide[], after: readonly SourceSide[]): Change[] {
  const { pairs, removed } = pair(constants(before), constants(after));
  return [...takenFromElsewhere(removed, after), ...pairs.flatMap(comparePair)];
}

/** A physical value that a file no longer sets but still names: another place gives it now, maybe with other digits. */
function takenFromElsewhere(removed: readonly Part<NamedConstant>[], after: readonly SourceSide[]): Change[] {
  return removed.flatMap((b): Change[] => {
    const digits = b.it.text
      .replace(/[eEdD_].*$/, '')
      .replace(/\D/g, '')
      .replace(/^0+|0+$/g, '');
    const now = after.find(({ path }) => path === b.side.path);
    if (digits.length < 3 || now?.text === undefined) return [];
    if (!new RegExp(`(?<![\\w$])${b.name.replace(/\$/g, '\\$')}(?![\\w$])`, 'i').test(now.text())) return [];
    return [
      {
        kind: 'constant-value',
        subject: b.name,
        says: `constant ${b.name}, ${b.it.text}, is no longer set here but still used: another place gives its value`,
        before: { text: b.it.text, place: placeIn(b.side, b.it) },
        after: { text: 'not set here', place: { ...placeIn(now, { line: 1, column: 1 }) } },
      },
    ];
  });
}

function comparePair({ before: b, after: a }: { before: Part<NamedConstant>; after: Part<NamedConstant> }): Change[] {
  const sides = {
    before: { text: b.it.text, place: placeIn(b.side, b.it) },
    after: { text: a.it.text, place: placeIn(a.side, a.it) },
  };
  const was = numberOf(b.it);
  const is = numberOf(a.it);
  if (was === null || is === null) return [];
  if (was !== is) {
    const says = `constant ${a.name} is ${a.it.text}, was ${b.it.text}`;
    return [{ kind: 'constant-value', subject: a.name, says, ...sides }];
  }
  const [old, now] = [literalBytes(b), literalBytes(a)];
  if (b.it.bytes === a.it.bytes && losesDigits(was, old, now)) {
    const says = precisionText(`the value of ${a.name}`, a.it.text, old, now);
    return [{ kind: 'literal-kind', subject: a.name, says, ...sides }];
  }
  return losesDigits(was, b.it.bytes, a.it.bytes)
    ? [
        {
          kind: 'literal-kind',
          subject: a.name,
          says: precisionText(`constant ${a.name}`, a.it.text, b.it.bytes, a.it.bytes),
          ...sides,
        },
      ]
    : [];
}

/**
 * Literals by procedure. Any that lost digits to single precision is told. Of a physics value (several digits, or a power of
 * ten far from one) that goes while another comes, close to it, the literal changed; what merely comes or goes belongs to the body.
 */
export function compareLiterals(before: readonly SourceSide[], after: readonly SourceSide[]): Change[] {
  const changes: Change[] = [];
  const was = byProcedure(before);
  const is = byProcedure(after);
  for (const [procedure, fresh] of is) {
    const old = was.get(procedure);
    if (old === undefined) continue;
    changes.push(...compareWithin(procedure, old, fresh));
  }
  return changes;
}

type Found = Part<LiteralUse>;

function compareWithin(procedure: string, old: readonly Found[], fresh: readonly Found[]): Change[] {
  const changes: Change[] = [];
  const left = [...old];
  const right: Found[] = [];
  for (const a of fresh) {
    const same = left.findIndex((b) => b.it.value === a.it.value && b.it.bytes === a.it.bytes);
    if (same >= 0) left.splice(same, 1);
    else right.push(a);
  }
  for (const a of right) {
    const place = (b: Found) => ({
      before: { text: b.it.text, place: placeIn(b.side, b.it) },
      after: { text: a.it.text, place: placeIn(a.side, a.it) },
    });
    const kind = left.findIndex((b) => b.it.value === a.it.value);
    if (kind >= 0) {
      const [b] = left.splice(kind, 1) as [Found];
      if (losesDigits(a.it.value, b.it.bytes, a.it.bytes)) {
        const says = precisionText(`a literal of ${procedure}`, a.it.text, b.it.bytes, a.it.bytes);
        changes.push({ kind: 'literal-kind', subject: procedure, says, ...place(b) });
      }
      continue;
    }
    if (!isPhysics(a.it)) continue;
    const near = left.findIndex((b) => isPhysics(b.it) && close(b.it.value, a.it.value));
    if (near < 0) continue;
    const [b] = left.splice(near, 1) as [Found];
    const says = `a literal of ${procedure} is ${a.it.text}, was ${b.it.text}`;
    changes.push({ kind: 'literal-value', subject: procedure, says, ...place(b) });
  }
  return changes;
}

/** Within a tenth: an edition of a constant, digits added or lost; not another number altogether. */
function close(a: number, b: number): boolean {
  return Math.abs(a - b) <= 0.1 * Math.max(Math.abs(a), Math.abs(b));
}

function byProcedure(sides: readonly SourceSide[]): Map<string, Found[]> {
  const map = new Map<string, Found[]>();
  for (const side of sides) {
    for (const it of side.code.literals) {
      if (it.procedure === null || it.role === 'named' || it.role === 'integer-division' || !isRealLiteral(it))
        continue;
      const found = map.get(it.procedure) ?? [];
      found.push({ side, it, key: it.text, name: it.text });
      map.set(it.procedure, found);
    }
  }
  return map;
}

function isRealLiteral({ text, value }: LiteralUse): boolean {
  return /[.eEdD]/.test(text) && value !== 0;
}

function isPhysics({ text, value }: LiteralUse): boolean {
  const digits = text
    .replace(/[eEdD_].*$/, '')
    .replace(/[^\d]/g, '')
    .replace(/^0+/, '')
    .replace(/0+$/, '');
  return digits.length >= 4 || (digits.length >= 2 && Math.abs(Math.log10(Math.abs(value))) >= 5);
}

/** Integers and text inside a procedure size its scratch space; they are no physics. */
function constants(sides: readonly SourceSide[]): Part<NamedConstant>[] {
  return sides.flatMap((side) =>
    side.code.constants
      .filter((it) => it.condition === undefined && isReal(it))
      .map((it) => ({ side, it, key: `${it.parent ?? ''}::${it.name}`, name: it.name })),
  );
}

function isReal(it: NamedConstant): boolean {
  return (
    typeof it.value === 'number' &&
    (/real|double|float|complex|number/.test(it.type) || /[.]|\d[eEdD][+-]?\d/.test(it.text))
  );
}

function numberOf(it: NamedConstant): number | null {
  return typeof it.value === 'number' && Number.isFinite(it.value) ? it.value : null;
}

/** Of a Fortran constant that is one literal: 4 for a default real, 8 for one with `d` or a kind, which is taken for double. */
function literalBytes({ side, it }: Part<NamedConstant>): number | null {
  if (
    side.code.language !== 'fortran' ||
    !/^[-+]?(?:\d+\.\d*|\.\d+|\d+(?=[eEdD]))(?:[eEdD][-+]?\d+)?(?:_\w+)?$/.test(it.text.trim())
  )
    return null;
  return /[dD_]/.test(it.text) ? 8 : 4;
}

/** A value that single precision holds exactly is the same in both. */
function losesDigits(value: number, before: number | null, after: number | null): boolean {
  return (
    before !== null &&
    after !== null &&
    before !== after &&
    Math.min(before, after) === 4 &&
    Math.fround(value) !== value
  );
}

function precisionText(name: string, text: string, before: number | null, after: number | null): string {
  const bits = (bytes: number | null) => (bytes === 4 ? 'single' : bytes === 8 ? 'double' : `${bytes}-byte`);
  return `${name}, ${text}, is in ${bits(after)} precision, was in ${bits(before)}`;
}
