/** What changed about procedures that others call: arguments, results, names. Pure. */
import type { Change } from '../model/change.ts';
import type { Argument, Language, Procedure } from '../model/interface.ts';
import { declaredText, sameBytes, sameRank, sameType } from './compare-declared.ts';
import type { ProcedureBody } from './fingerprint.ts';
import { type Pairing, type Part, placeIn } from './source-side.ts';

type Found = Part<Procedure>;

/** Two procedures whose fingerprints agree this far are the same procedure under another name. */
const RENAMED_SIMILARITY = 0.7;

export function compareProcedures({ pairs, removed, added }: Pairing<Procedure>): Change[] {
  const renamed = findRenamed(removed, added);
  const changes: Change[] = [];
  for (const { before, after } of pairs) changes.push(...compareProcedure(before, after));
  for (const before of removed) {
    const after = renamed.get(before);
    if (after?.name === before.name) {
      // One of several overloads, told apart by its body.
      changes.push(...compareProcedure(before, after));
      continue;
    }
    const says = after === undefined ? `${what(before)} is gone` : `${what(before)} is now called ${after.name}`;
    changes.push({
      kind: 'procedure-removed',
      subject: before.name,
      says,
      before: side(before, signature(before.it)),
      ...(after === undefined ? {} : { after: side(after, signature(after.it)) }),
    });
  }
  const known = new Set(renamed.values());
  for (const after of added) {
    if (known.has(after)) continue;
    changes.push({
      kind: 'procedure-added',
      subject: after.name,
      says: `${what(after)} is new`,
      after: side(after, signature(after.it)),
    });
  }
  return changes;
}

/** `eos(rho, temp, pres)`. */
export function signature(it: Procedure): string {
  return `${it.name}(${it.args.map((arg) => arg.name).join(', ')})`;
}

function compareProcedure(before: Found, after: Found): Change[] {
  const changes: Change[] = [...compareArguments(before, after), ...compareResult(before, after)];
  const body = bodyOf(before);
  const other = bodyOf(after);
  if (changes.length === 0 && body !== undefined && other !== undefined && !sameBody(body, other)) {
    changes.push({
      kind: 'implementation',
      subject: after.name,
      says: `the body of ${after.name} changed`,
      // Most of a history is made of these: the place alone keeps what is stored of it small.
      after: side(after, ''),
    });
  }
  return changes;
}

function sameBody(a: ProcedureBody, b: ProcedureBody): boolean {
  return (a.written !== undefined && a.written === b.written) || a.hash === b.hash;
}

function compareArguments(before: Found, after: Found): Change[] {
  const was = before.it.args;
  const is = after.it.args;
  const changes: Change[] = [];
  const matched = matchArguments(was, is);
  const change = (kind: Change['kind'], says: string, b: Argument | null, a: Argument | null) => {
    changes.push({
      kind,
      subject: after.name,
      says,
      ...(b === null ? {} : { before: { text: declaredText(b), place: placeIn(before.side, b) } }),
      ...(a === null ? {} : { after: { text: declaredText(a), place: placeIn(after.side, a) } }),
    });
  };
  for (const b of was) {
    if (!matched.has(b))
      change(
        'argument-removed',
        `${after.name} no longer takes ${b.name || `a ${ordinal(was.indexOf(b) + 1)} argument`}`,
        b,
        null,
      );
  }
  const kept = new Set(matched.values());
  for (const a of is) {
    if (kept.has(a)) continue;
    const last = is.slice(is.indexOf(a)).every((one) => !kept.has(one) || isKeywordOnly(one));
    if (isOptional(a) && (last || isKeywordOnly(a))) {
      change('optional-argument-added', `${after.name} takes ${a.name}, optional`, null, a);
    } else {
      const place = isOptional(a) ? `optional, in ${ordinal(is.indexOf(a) + 1)} place before others` : 'required';
      change(
        'argument-added',
        `${after.name} takes ${a.name || `a ${ordinal(is.indexOf(a) + 1)} argument`}, ${place}`,
        null,
        a,
      );
    }
  }
  const order = was.filter((b) => matched.has(b) && !isKeywordOnly(matched.get(b)!));
  const newOrder = is.filter((a) => kept.has(a) && !isKeywordOnly(a));
  const moved = order.filter((b, index) => newOrder[index] !== matched.get(b));
  if (moved.length > 0) {
    const first = moved[0]!;
    const to = matched.get(first)!;
    const others = moved.length > 2 ? `, and ${moved.length - 1} others moved` : '';
    const says = `argument ${first.name} of ${after.name} moved from ${ordinal(was.indexOf(first) + 1)} to ${ordinal(is.indexOf(to) + 1)} place${others}`;
    changes.push({
      kind: 'argument-reordered',
      subject: after.name,
      says,
      before: side(before, signature(before.it)),
      after: side(after, signature(after.it)),
    });
  }
  for (const [b, a] of matched) {
    const name = `${a.name || ordinal(is.indexOf(a) + 1)} of ${after.name}`;
    if (
      a.name !== '' &&
      b.name !== '' &&
      b.name.toLowerCase() !== a.name.toLowerCase() &&
      namesMatter(before, after, b)
    ) {
      change('argument-renamed', `argument ${b.name} of ${after.name} is now called ${a.name}`, b, a);
    }
    // Between languages types have other names; only what is spelled alike is compared.
    if (before.side.code.language !== after.side.code.language) continue;
    if (!sameType(b, a)) change('argument-type', `argument ${name} is ${a.type}, was ${b.type}`, b, a);
    else if (!sameBytes(b, a)) change('argument-bytes', `argument ${name} has ${a.bytes} bytes, had ${b.bytes}`, b, a);
    if (!sameRank(b, a)) change('argument-rank', `argument ${name} has rank ${a.rank}, had ${b.rank}`, b, a);
    if (b.intent !== null && a.intent !== null && b.intent !== a.intent) {
      change('argument-intent', `argument ${name} is intent(${a.intent}), was intent(${b.intent})`, b, a);
    }
    if (isOptional(b) && !isOptional(a)) change('argument-optional', `argument ${name} is no longer optional`, b, a);
    if (!isOptional(b) && isOptional(a)) change('optional-argument-added', `argument ${name} became optional`, b, a);
    if (b.default !== undefined && a.default !== undefined && !sameDefault(b.default, a.default)) {
      change('argument-default', `argument ${name} is ${a.default} by default, was ${b.default}`, b, a);
    }
  }
  return changes;
}

/** By name first; of what is left over, by place where the lists are equally long and the types agree: a new name. */
function matchArguments(was: readonly Argument[], is: readonly Argument[]): Map<Argument, Argument> {
  const matched = new Map<Argument, Argument>();
  // Prototypes may leave names out; then only places tell which is which.
  if ([...was, ...is].some((one) => one.name === '')) {
    for (const [index, b] of was.entries()) if (is[index] !== undefined) matched.set(b, is[index]);
    return matched;
  }
  const free = new Map(is.map((a) => [a.name.toLowerCase(), a]));
  for (const b of was) {
    const a = free.get(b.name.toLowerCase());
    if (a === undefined) continue;
    matched.set(b, a);
    free.delete(b.name.toLowerCase());
  }
  if (was.length !== is.length) return matched;
  const taken = new Set(matched.values());
  for (const [index, b] of was.entries()) {
    const a = is[index]!;
    if (!matched.has(b) && !taken.has(a) && sameType(b, a) && sameRank(b, a)) matched.set(b, a);
  }
  return matched;
}

function compareResult(before: Found, after: Found): Change[] {
  const b = before.it.result;
  const a = after.it.result;
  const changes: Change[] = [];
  if (before.side.code.language === after.side.code.language) {
    const differs =
      (b === null) !== (a === null)
        ? isFortran(after.side.code.language)
        : b !== null && a !== null && !(sameType(b, a) && sameBytes(b, a) && sameRank(b, a));
    if (differs) {
      const text = (it: typeof a) => (it === null ? 'nothing' : declaredText({ ...it, name: '' }).trim());
      changes.push({
        kind: 'result-type',
        subject: after.name,
        says: `${after.name} returns ${text(a)}, returned ${text(b)}`,
        before: side(before, text(b)),
        after: side(after, text(a)),
      });
    }
  }
  const was = before.it.returns ?? [];
  const is = after.it.returns ?? [];
  if (was.length > 0 && is.length > 0 && was.join() !== is.join()) {
    const sameNames = [...was].sort().join() === [...is].sort().join();
    if (sameNames || was.length !== is.length) {
      changes.push({
        kind: 'return-order',
        subject: after.name,
        says: `${after.name} returns (${is.join(', ')}), returned (${was.join(', ')})`,
        before: side(before, was.join(', ')),
        after: side(after, is.join(', ')),
      });
    }
  }
  return changes;
}

/** Best match first, each procedure once; names and argument counts break ties. */
function findRenamed(removed: readonly Found[], added: readonly Found[]): Map<Found, Found> {
  // Through an index of prints: a generated file may lose and gain thousands of procedures in one commit.
  const holders = new Map<number, Found[]>();
  for (const after of added) {
    for (const print of bodyOf(after)?.prints ?? []) {
      const list = holders.get(print);
      if (list === undefined) holders.set(print, [after]);
      else if (list.length < MOST_HOLDERS) list.push(after);
    }
  }
  const candidates: { before: Found; after: Found; score: number }[] = [];
  for (const before of removed) {
    const body = bodyOf(before);
    if (body === undefined || body.tokens < 20) continue;
    const shared = new Map<Found, number>();
    for (const print of body.prints) {
      for (const after of holders.get(print) ?? []) shared.set(after, (shared.get(after) ?? 0) + 1);
    }
    for (const [after, count] of shared) {
      const score = count / (body.prints.length + bodyOf(after)!.prints.length - count);
      if (score >= RENAMED_SIMILARITY) candidates.push({ before, after, score });
    }
  }
  candidates.sort(
    (x, y) => y.score - x.score || Number(y.before.name === y.after.name) - Number(x.before.name === x.after.name),
  );
  const renamed = new Map<Found, Found>();
  const taken = new Set<Found>();
  for (const { before, after } of candidates) {
    if (renamed.has(before) || taken.has(after)) continue;
    renamed.set(before, after);
    taken.add(after);
  }
  return renamed;
}

/** A print that so many procedures hold is idiom and tells none of them from another. */
const MOST_HOLDERS = 30;

function bodyOf({ side, it }: Found): ProcedureBody | undefined {
  return side.bodies?.get(it.line);
}

/** Only where a caller may pass arguments by keyword: not to C, and not to Fortran procedures without explicit interface. */
function namesMatter(before: Found, after: Found, b: Argument): boolean {
  const { language } = after.side.code;
  if (b.passing === 'positional') return false;
  if (isFortran(language)) return before.it.parent !== null && after.it.parent !== null;
  return language === 'python';
}

function isFortran(language: Language): boolean {
  return language === 'fortran';
}

function isOptional(arg: Argument): boolean {
  return arg.optional || arg.default !== undefined || arg.passing === 'variadic' || arg.passing === 'variadic-keyword';
}

function isKeywordOnly(arg: Argument): boolean {
  return arg.passing === 'keyword' || arg.passing === 'variadic-keyword';
}

/** `1`, `1.0`, `1.d0`, `1._r8` are one value; other text must agree but for white space and case. */
function sameDefault(before: string, after: string): boolean {
  const plain = (text: string) => text.replace(/\s+/g, '').toLowerCase();
  return plain(before) === plain(after) || (number(before) !== null && number(before) === number(after));
}

function number(text: string): number | null {
  const plain = text.trim().toLowerCase().replace(/_\w+$/, '').replace('d', 'e').replace(/f$/, '');
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/.test(plain) ? Number(plain) : null;
}

function what({ it, name }: Found): string {
  return `${it.kind} ${name}`;
}

function side(part: Found, text: string) {
  return { text, place: placeIn(part.side, part.it) };
}

function ordinal(count: number): string {
  const last = count % 100 >= 11 && count % 100 <= 13 ? 0 : count % 10;
  return `${count}${['th', 'st', 'nd', 'rd'][last] ?? 'th'}`;
}
