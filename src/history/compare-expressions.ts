/**
 * What procedures compute otherwise: signs, factors, numbers, orders and units in text that came, went or changed places.
 * Only procedures whose text differs are cut into statements, so the cost follows the size of the change. Pure.
 */

import type { ChangeKind } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import {
  type Explained,
  editsOf,
  explainStatement,
  keepsItsName,
  spelled,
  targetOf,
  tokenKey,
} from './explain-statement.ts';
import type { SourceSide } from './source-side.ts';
import { type Edit, type Statement, type StatementToken, statementsOf } from './statements.ts';

/** A procedure of which more statements came or went was written anew: nothing in it can be put beside what was there. */
const MOST_STATEMENTS = 80;
/** Two statements that share this part of their tokens are two states of one. */
const SAME_STATEMENT = 0.6;

export function compareExpressions(
  before: readonly SourceSide[],
  after: readonly SourceSide[],
  sameUnit: (a: string, b: string) => boolean,
): Change[] {
  const was = new Map(before.map((side) => [side.path, side]));
  return after.flatMap((side) => {
    const old = was.get(side.path);
    return old === undefined ? [] : compareFile(old, side, sameUnit);
  });
}

function compareFile(before: SourceSide, after: SourceSide, sameUnit: (a: string, b: string) => boolean): Change[] {
  if (before.text === undefined || after.text === undefined || before.code.language !== after.code.language) return [];
  if (before.code.language === 'table') return [];
  const [oldLines, lines] = [before.text().split('\n'), after.text().split('\n')];
  const [oldRegions, regions] = [regionsOf(before, oldLines), regionsOf(after, lines)];
  const changes: Change[] = [];
  for (const [name, a] of regions) {
    const b = oldRegions.get(name);
    if (b === undefined || textOf(b, oldLines) === textOf(a, lines)) continue;
    const told = compareStatements(cutRegion(before, b, oldLines), cutRegion(after, a, lines), sameUnit);
    const subject = a.name === '' ? after.path.slice(after.path.lastIndexOf('/') + 1) : a.name;
    for (const [kind, found] of told) {
      const { says, b: from, a: to } = found[0]!;
      const more = found.length === 1 ? '' : `, and ${found.length - 1} more of the kind`;
      const place = (side: SourceSide, statement: Statement) => ({
        file: side.path,
        line: statement.line,
        column: 1,
        ...(side.revision === undefined ? {} : { revision: side.revision }),
      });
      changes.push({
        kind,
        subject,
        says: `in ${subject} ${says}${more}`,
        before: { text: shown(from), place: place(before, from) },
        after: { text: shown(to), place: place(after, to) },
      });
    }
  }
  return changes;
}

function shown(statement: Statement): string {
  const text = spelled(statement.tokens);
  return text.length > 160 ? `${text.slice(0, 157)}...` : text;
}

interface Region {
  readonly name: string;
  readonly ranges: { readonly from: number; readonly to: number }[];
}

/** Outermost procedures, and under the empty name what lies in none: scripts, initialisers. */
function regionsOf(side: SourceSide, lines: readonly string[]): Map<string, Region> {
  const regions = new Map<string, Region>();
  const seen = new Map<string, number>();
  const gaps: { from: number; to: number }[] = [];
  let reached = 0;
  const procedures = side.code.procedures
    .filter(({ endLine, line, prototype }) => endLine > line && prototype !== true)
    .sort((x, y) => x.line - y.line || y.endLine - x.endLine);
  for (const [index, one] of procedures.entries()) {
    // A procedure with internal ones is cut where they begin; they are regions of their own.
    const inner = procedures.slice(index + 1).find(({ line }) => line > one.line);
    const to = inner !== undefined && inner.line <= one.endLine ? inner.line - 1 : one.endLine;
    if (one.line <= reached && to <= reached) continue;
    if (one.line - 1 > reached) gaps.push({ from: reached + 1, to: one.line - 1 });
    const count = seen.get(one.name) ?? 0;
    seen.set(one.name, count + 1);
    regions.set(`${one.name}#${count}`, { name: one.name, ranges: [{ from: one.line, to }] });
    reached = Math.max(reached, to);
  }
  if (reached < lines.length) gaps.push({ from: reached + 1, to: lines.length });
  regions.set('', { name: '', ranges: gaps });
  return regions;
}

function textOf({ ranges }: Region, lines: readonly string[]): string {
  return ranges.map(({ from, to }) => lines.slice(from - 1, to).join('\n')).join('\n');
}

function cutRegion(side: SourceSide, { ranges }: Region, lines: readonly string[]): Statement[] {
  return ranges.flatMap(({ from, to }) =>
    statementsOf(lines.slice(from - 1, to).join('\n'), side.code.language, side.code.form, from),
  );
}

interface Told extends Explained {
  readonly b: Statement;
  readonly a: Statement;
}

function compareStatements(
  before: readonly Statement[],
  after: readonly Statement[],
  sameUnit: (a: string, b: string) => boolean,
): Map<ChangeKind, Told[]> {
  const told = new Map<ChangeKind, Told[]>();
  let [gone, come] = leftOver(before, after);
  const tell = (explained: Explained | null, b: Statement, a: Statement) => {
    if (explained === null) return;
    const list = told.get(explained.kind) ?? [];
    list.push({ ...explained, b, a });
    told.set(explained.kind, list);
  };
  for (const { b, a } of exchangedSettings(before, after))
    tell({ kind: 'expression-order', says: `the ways in which ${targetOf(a)} is set have changed places` }, b, a);
  if (gone.length > MOST_STATEMENTS || come.length > MOST_STATEMENTS) return told;
  const renamed = renamedIn(pairsOf(gone, come), before, after);
  if (renamed.size > 0)
    [gone, come] = leftOver(
      gone.map((one) => withNames(one, renamed)),
      come,
    );
  const pairs = pairsOf(gone, come);
  const names = new Set(before.flatMap(({ tokens }) => tokens.map(({ text }) => text)));
  const kept = new Set(after.flatMap(({ tokens }) => tokens.map(({ text }) => text)));
  const swaps = new Map<string, { b: Statement; a: Statement }>();
  for (const { b, a } of pairs) {
    const explained = explainStatement(b, a, sameUnit);
    tell(explained, b, a);
    if (explained !== null) continue;
    const edits = editsOf(b.tokens, a.tokens);
    const operand = edits.length === 1 && isAssigned(a) ? otherOperand(edits[0]!, names, kept) : null;
    if (operand !== null) tell({ kind: 'expression-changed', says: `${targetOf(a)} has ${operand}` }, b, a);
    for (const { gone: out, come: into } of edits) {
      if (out.length !== 1 || into.length !== 1 || out[0]!.kind === 'mark' || into[0]!.kind === 'mark') continue;
      const [from, to] = [tokenKey(out[0]!), tokenKey(into[0]!)];
      const back = swaps.get(`${to}\0${from}`);
      // Two statements of which each now has what the other had.
      if (back !== undefined && back.a !== a)
        tell({ kind: 'expression-order', says: `${from} and ${to} have changed places, in ${targetOf(a)} too` }, b, a);
      else swaps.set(`${from}\0${to}`, { b, a });
    }
  }
  const paired = new Set(pairs.flatMap(({ b, a }) => [b, a]));
  for (const one of come) {
    const scale = paired.has(one) ? null : scaledInPlace(one);
    if (scale !== null)
      tell({ kind: 'expression-factor', says: `${targetOf(one)} is scaled by ${scale}, was not` }, one, one);
  }
  for (const one of gone) {
    const scale = paired.has(one) ? null : scaledInPlace(one);
    if (scale !== null)
      tell({ kind: 'expression-factor', says: `${targetOf(one)} is no longer scaled by ${scale}` }, one, one);
  }
  return told;
}

function isAssigned({ tokens }: Statement): boolean {
  return (
    tokens.some(({ text }) => /^(?:[-+*/]?=)$/.test(text)) && tokens.some(({ text }) => /^(?:[-+*/]|\*\*)$/.test(text))
  );
}

/** One thing in the place of another that is still used: no new name for the same thing, another operand. */
function otherOperand(
  { gone, come, previous }: Edit,
  names: ReadonlySet<string>,
  kept: ReadonlySet<string>,
): string | null {
  const [b, a] = [gone[0], come[0]];
  if (gone.length !== 1 || come.length !== 1 || b!.kind !== 'name' || a!.kind !== 'name') return null;
  const member = /^(?:\.|%|->)$/.test(previous?.text ?? '');
  return names.has(a!.text) || (member && kept.has(b!.text)) ? `${a!.text} where it had ${b!.text}` : null;
}

/** The same statements that set one thing, in another order: the last one counts, or each has its own case. */
function exchangedSettings(
  before: readonly Statement[],
  after: readonly Statement[],
): { b: Statement; a: Statement }[] {
  const byTarget = (statements: readonly Statement[]) => {
    const map = new Map<string, Statement[]>();
    for (const one of statements) {
      if (one.tokens[0]!.kind !== 'name' || !isAssigned(one)) continue;
      const list = map.get(targetOf(one));
      if (list === undefined) map.set(targetOf(one), [one]);
      else list.push(one);
    }
    return map;
  };
  const was = byTarget(before);
  return [...byTarget(after)].flatMap(([target, now]) => {
    const old = was.get(target);
    if (old === undefined || now.length < 2 || old.length !== now.length) return [];
    const at = now.findIndex(({ key }, index) => key !== old[index]!.key);
    const keys = (list: readonly Statement[]) =>
      list
        .map(({ key }) => key)
        .sort()
        .join('\n');
    return at < 0 || keys(old) !== keys(now) ? [] : [{ b: old[at]!, a: now[at]! }];
  });
}

/** What stands on one side only; the same statement elsewhere in the procedure is the same. */
function leftOver(before: readonly Statement[], after: readonly Statement[]): [Statement[], Statement[]] {
  const counts = new Map<string, number>();
  for (const { key } of before) counts.set(key, (counts.get(key) ?? 0) + 1);
  const come = after.filter(({ key }) => {
    const count = counts.get(key) ?? 0;
    if (count > 0) counts.set(key, count - 1);
    return count === 0;
  });
  const gone = before.filter(({ key }) => {
    const count = counts.get(key) ?? 0;
    if (count > 0) counts.set(key, count - 1);
    return count > 0;
  });
  return [gone, come];
}

/** Each statement that came with the most similar one that went; the order in which they stand breaks ties. */
function pairsOf(gone: readonly Statement[], come: readonly Statement[]): { b: Statement; a: Statement }[] {
  const candidates: { i: number; j: number; score: number }[] = [];
  const bags = gone.map(bagOf);
  for (const [j, a] of come.entries()) {
    const bag = bagOf(a);
    for (const [i, b] of gone.entries()) {
      const sameTarget = targetOf(a) === targetOf(b);
      const most = sameTarget ? 4 : 2;
      if (Math.min(a.tokens.length, b.tokens.length) * most < Math.max(a.tokens.length, b.tokens.length)) continue;
      let shared = 0;
      for (const [token, count] of bag) shared += Math.min(count, bags[i]!.get(token) ?? 0);
      const score = (2 * shared) / (a.tokens.length + b.tokens.length);
      if (score >= SAME_STATEMENT || (score >= SAME_STATEMENT - 0.2 && sameTarget))
        candidates.push({ i, j, score: score + (sameTarget ? 0.3 : 0) });
    }
  }
  candidates.sort((x, y) => y.score - x.score || Math.abs(x.i - x.j) - Math.abs(y.i - y.j) || x.j - y.j);
  const [usedB, usedA] = [new Set<number>(), new Set<number>()];
  const pairs: { b: Statement; a: Statement; j: number }[] = [];
  for (const { i, j } of candidates) {
    if (usedB.has(i) || usedA.has(j)) continue;
    usedB.add(i);
    usedA.add(j);
    pairs.push({ b: gone[i]!, a: come[j]!, j });
  }
  return pairs.sort((x, y) => x.j - y.j);
}

function bagOf({ tokens }: Statement): Map<string, number> {
  const bag = new Map<string, number>();
  for (const token of tokens) bag.set(tokenKey(token), (bag.get(tokenKey(token)) ?? 0) + 1);
  return bag;
}

/** A name that is gone altogether while another, unknown before, stands wherever it stood: the same thing under a new name. */
function renamedIn(
  pairs: readonly { b: Statement; a: Statement }[],
  before: readonly Statement[],
  after: readonly Statement[],
): Map<string, string> {
  const names = (statements: readonly Statement[]) =>
    new Set(statements.flatMap(({ tokens }) => tokens.filter(({ kind }) => kind === 'name').map(({ text }) => text)));
  const renamed = new Map<string, string>();
  if (pairs.length === 0) return renamed;
  const [was, is] = [names(before), names(after)];
  for (const { b, a } of pairs) {
    if (a.tokens[0]!.text === 'common') continue;
    for (const { gone, come } of editsOf(b.tokens, a.tokens)) {
      if (gone.length !== come.length) continue;
      for (const [index, out] of gone.entries()) {
        const into = come[index]!;
        if (out.kind !== 'name' || into.kind !== 'name' || keepsItsName(out.text)) continue;
        if (
          !is.has(out.text) &&
          !was.has(into.text) &&
          !renamed.has(out.text) &&
          ![...renamed.values()].includes(into.text)
        )
          renamed.set(out.text, into.text);
      }
    }
  }
  return renamed;
}

function withNames({ line, tokens }: Statement, renamed: ReadonlyMap<string, string>): Statement {
  const fresh = tokens.map((one): StatementToken => {
    const text = one.kind === 'name' ? renamed.get(one.text) : undefined;
    return text === undefined ? one : { ...one, text };
  });
  const key = fresh.map((one) => (one.kind === 'number' ? String(one.value) : one.text)).join(' ');
  return { line, tokens: fresh, key };
}

/** `x *= f`, `x = x*f`, `x = f*x`, and the same with `/`: the factor; null for anything else. */
function scaledInPlace({ tokens: all }: Statement): string | null {
  const tokens = withoutCondition(all);
  const equals = tokens.findIndex(({ text }) => text === '=' || text === '*=' || text === '/=');
  if (
    equals < 1 ||
    tokens.length - equals > 20 ||
    tokens[0]!.kind !== 'name' ||
    /^(?:if|else|elif|while|assert|return)$/i.test(tokens[0]!.text)
  )
    return null;
  const right = tokens.slice(equals + 1);
  if (tokens[equals]!.text !== '=') return spelled(right);
  const left = tokens.slice(0, equals).map(tokenKey).join(' ');
  const keys = right.map(tokenKey);
  const own = keys.slice(0, equals).join(' ');
  if (own === left && /^[*/]$/.test(right[equals]?.text ?? '')) return spelled(right.slice(equals + 1));
  const last = keys.slice(-equals).join(' ');
  if (last === left && right.at(-equals - 1)?.text === '*') return spelled(right.slice(0, -equals - 1));
  return null;
}

/** `if (condition) x = x*f` in Fortran: the statement behind the condition. */
function withoutCondition(tokens: readonly StatementToken[]): readonly StatementToken[] {
  if (tokens[0]?.text !== 'if' || tokens[1]?.text !== '(') return tokens;
  let depth = 0;
  for (const [at, { text, kind }] of tokens.entries()) {
    if (kind !== 'mark') continue;
    if (text === '(') depth += 1;
    else if (text === ')' && --depth === 0) return at + 1 < tokens.length ? tokens.slice(at + 1) : tokens;
  }
  return tokens;
}
