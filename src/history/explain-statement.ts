/**
 * What a statement computes now that it did not before: a sign, a factor, a number, an order, a function, a unit in text.
 * Two states of one statement come in, as tokens; one sentence goes out, or null when nothing of this kind is plain to see. Pure.
 */
import type { ChangeKind } from '../model/bump.ts';
import { shortNumber } from '../model/short-number.ts';
import type { Edit, Statement, StatementToken } from './statements.ts';
import { unitsInTexts } from './unit-in-text.ts';

export interface Explained {
  readonly kind: ChangeKind;
  readonly says: string;
}

const LONGEST = 300;
const MOST_EDITS = 6;

/** Statements that compute nothing: declarations are compared by their own rules, loops and sizes are no physics. */
const NO_EXPRESSION =
  /^(?:use|import|from|include|implicit|private|public|integer|real|logical|character|complex|double|type|class|save|format|allocate|deallocate|do|for|while|template|using|namespace|typedef|def|subroutine|function|module|end|enddo|endif|common|dimension|external|intent|struct|enum|parameter|equivalence|namelist|pure|elemental|recursive|program|interface|procedure|contains|only|assert|raise|throw|with|except)$/i;
const TELLS_PEOPLE =
  /^(?:write|print|printf|fprintf|sprintf|snprintf|cout|cerr|log\w*|logger|warn\w*|error\w*|message|abort|stop|assert\w*|debug_msg|wrf_message|wrf_debug|amrex|self_log)$/i;

/** @param sameUnit  whether two spellings mean the same unit */
export function explainStatement(
  before: Statement,
  after: Statement,
  sameUnit: (a: string, b: string) => boolean,
): Explained | null {
  if (before.key === after.key) return null;
  if (before.tokens.length > LONGEST || after.tokens.length > LONGEST) return null;
  const head = after.tokens[0]!;
  const declared = declaredOtherwise(before, after);
  if (declared !== null) return declared;
  const edits = editsOf(before.tokens, after.tokens);
  const units = unitsInTexts(edits, sameUnit);
  if (units !== null)
    return { kind: 'unit-changed', says: `the unit in a text is ${units.after}, was ${units.before}` };
  if (
    head.kind === 'name' &&
    ((NO_EXPRESSION.test(head.text) && !isInitialiser(after)) || TELLS_PEOPLE.test(head.text))
  )
    return null;
  if (isHeader(before) || isHeader(after)) return null;
  const where = targetOf(after);
  return (
    exchanged(before, after, where) ??
    signs(before, after, where) ??
    factors(before, after, where) ??
    functions(before, after, where) ??
    opposites(edits, where) ??
    terms(edits, where) ??
    keys(edits, where)
  );
}

/** `const double x = a*b`: a declaration in C that computes. Fortran sets `::` between and gives constants only. */
function isInitialiser({ tokens }: Statement): boolean {
  const equals = tokens.findIndex(({ text }) => text === '=');
  const left = tokens.slice(0, Math.max(0, equals));
  return (
    /^(?:double|float|real|Real)$/.test(tokens[0]!.text) && left.length > 1 && left.every(({ text }) => text !== '::')
  );
}

/** `double f(double x)`, `elemental real function f(x)`, a prototype: the interface is compared, not its text. */
function isHeader({ tokens }: Statement): boolean {
  // `Packet *first, *last`: names that are declared, not multiplied.
  if (
    tokens[0]!.kind === 'name' &&
    tokens[1]?.text === '*' &&
    tokens.every(({ text }) => !/^(?:[-+*/]?=|\()$/.test(text))
  )
    return true;
  if (tokens.slice(0, 6).some(({ text }) => /^(?:subroutine|function|procedure|operator)$/.test(text))) return true;
  const open = tokens.findIndex(({ text }) => text === '(' || text === '=');
  if (open < 2 || tokens[open]!.text === '=') return false;
  const words = tokens.slice(0, open);
  if (/^(?:call|return|else|if|elif|case|delete|new|co_return|throw|not|and|or|where|elseif)$/.test(words[0]!.text))
    return false;
  // Two words in a row before the parenthesis: a type and the name that it declares.
  return words.some(
    ({ kind }, at) =>
      kind === 'name' && at > 0 && (words[at - 1]!.kind === 'name' || /^[*&>]$/.test(words[at - 1]!.text)),
  );
}

/** What the statement gives a value to, in a few words. */
export function targetOf({ tokens }: Statement): string {
  const equals = tokens.findIndex(({ text }) => /^(?:[-+*/]?=)$/.test(text));
  if (equals > 0) {
    const left = tokens.slice(0, equals);
    return cut(spelled(left.slice(lastWord(left))));
  }
  if (tokens[0]?.text === 'return') return 'the result';
  const name = tokens[0]?.text.toLowerCase() === 'call' ? tokens[1] : tokens[0];
  const isCall =
    name?.kind === 'name' && tokens.some(({ text }) => text === '(') && !/^(?:if|else|elif|elseif)$/i.test(name.text);
  return isCall ? `the call of ${name.text}` : 'a condition';
}

/** `const double x` is x; `a % b(i)` stays whole. */
function lastWord(left: readonly StatementToken[]): number {
  let from = 0;
  let depth = 0;
  for (let at = 1; at < left.length; at += 1) {
    const { text, kind } = left[at]!;
    if (text === '(' || text === '[') depth += 1;
    else if (text === ')' || text === ']') depth -= 1;
    else if (depth === 0 && kind === 'name' && (left[at - 1]!.kind === 'name' || /^[*&>)]$/.test(left[at - 1]!.text)))
      from = at;
  }
  return from;
}

/** Arguments, subscripts or unpacked names of one list in another order. */
function exchanged(before: Statement, after: Statement, where: string): Explained | null {
  const found = exchangedIn(listsOf(before.tokens), listsOf(after.tokens)) ?? exchangedFarApart(before, after);
  if (found === null) return null;
  const says =
    found.length === 2
      ? `${found[0]} and ${found[1]} have changed places in ${where}`
      : `${found.length} items have changed places in ${where}, the first now ${found[0]}`;
  return { kind: 'expression-order', says };
}

/** Two names of one expression that each stand where the other stood, with more than an operator between them. */
function exchangedFarApart(before: Statement, after: Statement): string[] | null {
  const edits = editsOf(before.tokens, after.tokens);
  const [first, second] = edits;
  if (edits.length !== 2 || before.tokens.length !== after.tokens.length) return null;
  if (edits.some(({ gone, come }) => gone.length !== 1 || come.length !== 1 || gone[0]!.kind === 'mark')) return null;
  const [x, y] = [tokenKey(first!.gone[0]!), tokenKey(first!.come[0]!)];
  if (tokenKey(second!.gone[0]!) !== y || tokenKey(second!.come[0]!) !== x) return null;
  const [from, to] = [after.tokens.indexOf(first!.come[0]!), after.tokens.lastIndexOf(second!.come[0]!)];
  return to - from > 2 ? [y, x] : null;
}

interface List {
  /** The name in front of it: what is called or subscripted. */
  readonly name: string;
  readonly open: string;
  readonly items: readonly (readonly StatementToken[])[];
}

/** Every bracketed list with at least two items, and unpacked names left of `=`, in the order in which they open. */
function listsOf(tokens: readonly StatementToken[]): List[] {
  const lists: List[] = [];
  const walk = (from: number, to: number, name: string, open: string) => {
    const items: StatementToken[][] = [[]];
    let depth = 0;
    for (let at = from; at < to; at += 1) {
      const one = tokens[at]!;
      if (depth === 0 && one.text === ',' && one.kind === 'mark') items.push([]);
      else items.at(-1)!.push(one);
      if (one.kind !== 'mark') continue;
      if (OPENING.test(one.text)) depth += 1;
      else if (CLOSING.test(one.text)) depth -= 1;
    }
    if (items.length > 1) lists.push({ name, open, items });
  };
  const equals = tokens.findIndex(({ text }) => text === '=');
  if (equals > 0 && tokens.slice(0, equals).every(({ kind, text }) => kind === 'name' || text === ',' || text === '.'))
    walk(0, equals, '', '=');
  const open: number[] = [];
  for (const [at, { kind, text }] of tokens.entries()) {
    if (kind !== 'mark') continue;
    if (OPENING.test(text)) open.push(at);
    else if (CLOSING.test(text)) {
      const start = open.pop();
      if (start !== undefined)
        walk(start + 1, at, tokens[start - 1]?.kind === 'name' ? tokens[start - 1]!.text : '', tokens[start]!.text);
    }
  }
  return lists;
}

const OPENING = /^[([{]$/;
const CLOSING = /^[)\]}]$/;
/** The order of what these take says nothing. */
const ANY_ORDER =
  /^(?:[ad]?max\d?|[ad]?min\d?|f?max|f?min|amax1|amin1|dmax1|dmin1|hypot|set|isinstance|only|shared|private|print|write)$/i;

function exchangedIn(before: readonly List[], after: readonly List[]): string[] | null {
  if (before.length !== after.length) return null;
  for (const [index, b] of before.entries()) {
    const a = after[index]!;
    if (b.name !== a.name || b.items.length !== a.items.length || ANY_ORDER.test(a.name)) continue;
    const keyword = (item: readonly StatementToken[]) => item[1]?.text === '=' && item[0]?.kind === 'name';
    const [was, is] = [b.items, a.items].map((items) => items.filter((item) => !keyword(item)).map(keyOf)) as [
      string[],
      string[],
    ];
    if (was.join() === is.join() || was.length !== is.length) continue;
    if ([...was].sort().join('\0') !== [...is].sort().join('\0')) continue;
    // Words in a list (names of fields, of modules) are sorted now and then.
    if (a.items.every((item) => item.every(({ kind }) => kind === 'text'))) continue;
    return is.filter((item, at) => item !== was[at]).map(cut);
  }
  return null;
}

/** The same tokens but for plus and minus: a term has another sign. */
function signs(before: Statement, after: Statement, where: string): Explained | null {
  const plain = ({ tokens }: Statement) =>
    tokens
      .filter(({ kind, text }) => kind !== 'mark' || !/^[-+()]$/.test(text))
      .map((one) => (one.kind === 'mark' && /^[-+]?=$/.test(one.text) ? '=' : tokenKey(one)));
  const signed = ({ tokens }: Statement) => tokens.filter(({ text }) => text !== '(' && text !== ')');
  if (plain(before).join(' ') !== plain(after).join(' ')) return null;
  const edits = editsOf(signed(before), signed(after));
  if (edits.length === 0) return null;
  // `i-1` for `i+1` is another neighbour, not another sign.
  if (edits.every(({ next }) => next?.kind === 'number' && next.real === false)) return null;
  const { next } = edits[0]!;
  const term = next === undefined ? '' : ` at ${cut(next.text)}`;
  return { kind: 'expression-sign', says: `a term${term} in ${where} has the other sign` };
}

const PART_OF_FACTOR = /^(?:\*|\/|\*\*|%|\.|::|->|-|,|\[|\])$/;

/** Factors that came or went, and numbers that are others. */
function factors(before: Statement, after: Statement, where: string): Explained | null {
  const flat = ({ tokens }: Statement) => tokens.filter(({ text }) => text !== '(' && text !== ')');
  const edits = editsOf(flat(before), flat(after));
  if (edits.length === 0 || edits.length > MOST_EDITS) return null;
  const written = editsOf(before.tokens, after.tokens);
  const says: Explained[] = [];
  for (const { gone, come, previous, next } of edits) {
    const all = [...gone, ...come];
    // With the parentheses as they stand: what is divided behind one is not divided by the number in it.
    const raw = written.find((one) => one.gone[0] === gone[0] && one.come[0] === come[0]) ?? { previous, next };
    const near = [raw.previous?.text, raw.next?.text];
    const multiplied = near.includes('*') || near.includes('/');
    if (gone.length === 1 && come.length === 1 && gone[0]!.kind === 'number' && come[0]!.kind === 'number') {
      const [b, a] = [gone[0]!, come[0]!];
      const counts = b.real !== true && a.real !== true && previous?.text !== '**';
      if (counts || !Number.isFinite(b.value) || !Number.isFinite(a.value)) return null;
      says.push(
        multiplied
          ? {
              kind: 'expression-factor',
              says: `a factor in ${where} is ${a.text}, was ${b.text}${ratioText(b.value!, a.value!)}`,
            }
          : { kind: 'literal-value', says: `a number in ${where} is ${a.text}, was ${b.text}` },
      );
      continue;
    }
    if (all.every(({ text }) => text === '*' || text === '/') && gone.length === come.length) {
      const now = come[0]!.text === '*' ? 'multiplied by' : 'divided by';
      says.push({
        kind: 'expression-factor',
        says: `${where} is ${now} ${next?.text ?? 'a factor'}, was the other way round`,
      });
      continue;
    }
    // Dividing by 100 is multiplying by 0.01, but for the last digit.
    if (areReciprocal(gone, come)) continue;
    const isFactor =
      all.some(({ text }) => text === '*' || text === '/') &&
      all.every(({ kind, text }) => kind === 'number' || kind === 'name' || PART_OF_FACTOR.test(text)) &&
      all.some(({ kind }) => kind === 'number' || kind === 'name');
    if (!isFactor) {
      const isTerm = all.every(
        ({ kind, text }) => kind === 'number' || kind === 'name' || /^[-+]$/.test(text) || PART_OF_FACTOR.test(text),
      );
      if (!isTerm || !all.some(({ text }) => /^[-+]$/.test(text))) return null;
      continue;
    }
    const [was, is] = [cut(spelled(gone)), cut(spelled(come))];
    says.push({
      kind: 'expression-factor',
      says:
        gone.length === 0
          ? `${where} has gained the factor ${is}`
          : come.length === 0
            ? `${where} has lost the factor ${was}`
            : `${where} has ${is} where it had ${was}`,
    });
  }
  // A factor that comes in one place and goes in another of one statement was moved.
  const moved =
    edits
      .flatMap(({ gone }) => gone.map(tokenKey))
      .sort()
      .join(' ') ===
    edits
      .flatMap(({ come }) => come.map(tokenKey))
      .sort()
      .join(' ');
  return moved ? null : (says.find(({ kind }) => kind === 'expression-factor') ?? says[0] ?? null);
}

function areReciprocal(gone: readonly StatementToken[], come: readonly StatementToken[]): boolean {
  const [b, a] = [gone[1]?.value, come[1]?.value];
  if (gone.length !== 2 || come.length !== 2 || b === undefined || a === undefined) return false;
  const operators = `${gone[0]!.text}${come[0]!.text}`;
  return (operators === '*/' || operators === '/*') && Math.abs(a * b - 1) < 1e-12;
}

function ratioText(before: number, after: number): string {
  const ratio = after / before;
  if (!Number.isFinite(ratio) || ratio === 0) return '';
  const power = Math.log10(Math.abs(ratio));
  return ratio < 0 && ratio === -1
    ? ', the other sign'
    : Math.abs(power - Math.round(power)) < 1e-12 && Math.round(power) !== 0
      ? `, a power of ten: ${shortNumber(ratio)}`
      : '';
}

const PART_OF_TERM = /^(?:[-+*/%.,]|\*\*|::|->|\(|\)|\[|\])$/;

/** Terms that came or went, and numbers that became names: nothing is said of subscripts that shift by whole numbers. */
function terms(edits: readonly Edit[], where: string): Explained | null {
  if (edits.length === 0 || edits.length > 3) return null;
  let says: string | null = null;
  for (const { gone, come, previous, next } of edits) {
    const all = [...gone, ...come];
    const named = all.some(({ kind, real }) => kind === 'name' || real === true);
    const plain = all.every(({ kind, text }) => kind !== 'mark' || PART_OF_TERM.test(text));
    if (!plain || !named) return null;
    const beside = [previous?.text, next?.text].some((text) => /^(?:[-+*/]|\*\*)$/.test(text ?? ''));
    const [was, is] = [cut(spelled(gone)), cut(spelled(come))];
    if (gone.length === 1 && come.length === 1 && gone[0]!.kind === 'number' && come[0]!.kind === 'name' && beside) {
      says ??= `${where} has ${is} where it had ${was}`;
    } else if (all.some(({ text, kind }) => kind === 'mark' && /^[-+]$/.test(text))) {
      says ??=
        gone.length === 0
          ? `${where} has gained ${is}`
          : come.length === 0
            ? `${where} has lost ${was}`
            : `${where} has ${is} where it had ${was}`;
    } else return null;
  }
  return says === null ? null : { kind: 'expression-changed', says };
}

const FUNCTIONS =
  /^(?:d?log10|a?log10|a?log|dlog|ln|d?exp|exp10|pow10|exp2|log2|d?sqrt|cbrt|radians|degrees|deg2rad|rad2deg|deg_to_rad|[ad]?sin|[ad]?cos|[ad]?tan|arcsin|arccos|arctan|sind|cosd|tand|abs|fabs|[a-z]+_to_[a-z]+|to_[a-z]+)$/i;

/** An expression taken through a function, or no longer: a logarithm, a root, degrees to radians. */
function functions(before: Statement, after: Statement, where: string): Explained | null {
  const flat = ({ tokens }: Statement) =>
    tokens.filter(({ text }) => !/^(?:\(|\)|std|np|numpy|math|::|\.)$/.test(text));
  const edits = editsOf(flat(before), flat(after));
  if (edits.length === 0 || edits.length > 2) return null;
  const single = edits.map(({ gone, come }) => (gone.length + come.length === 1 ? (come[0] ?? gone[0]!) : null));
  if (single.some((one) => one === null || one.kind !== 'name' || !FUNCTIONS.test(one.text))) return null;
  const came = edits[0]!.come.length === 1;
  const name = single[0]!.text;
  return {
    kind: 'expression-changed',
    says: came ? `${where} is taken through ${name}, was not` : `${where} is no longer taken through ${name}`,
  };
}

const OPPOSITES: readonly (readonly [RegExp, RegExp])[] = [
  [/^[ad]?f?max1?$/i, /^[ad]?f?min1?$/i],
  [/^<=?$/, /^>=?$/],
  [/^==$/, /^(?:!=|\/=)$/],
  [/^=$/, /^==$/],
  [/^[ad]?sin$/i, /^[ad]?cos$/i],
  [/^(?:a|d)?log$/i, /^(?:a|d)?log10$/i],
  [/^floor$/i, /^ceil(?:ing)?$/i],
  [/^and$|^&&$/i, /^or$|^\|\|$/i],
];

function opposites(edits: readonly Edit[], where: string): Explained | null {
  if (edits.length === 0 || edits.length > MOST_EDITS) return null;
  for (const { gone, come } of edits) {
    if (gone.length !== 1 || come.length !== 1) return null;
    const [b, a] = [gone[0]!.text, come[0]!.text];
    if (!OPPOSITES.some(([one, other]) => (one.test(b) && other.test(a)) || (other.test(b) && one.test(a))))
      return null;
  }
  const { gone, come } = edits[0]!;
  return { kind: 'expression-changed', says: `${where} has ${come[0]!.text} where it had ${gone[0]!.text}` };
}

/** A name that is no name of the code's own: another one there is another function, not a new name for the same thing. */
export function keepsItsName(name: string): boolean {
  return (
    FUNCTIONS.test(name) ||
    OPPOSITES.some((pair) => pair.some((one) => one.test(name))) ||
    /^units?_|_units?_/i.test(name)
  );
}

/** Another key of a dictionary or another name of a property, given as text. */
function keys(edits: readonly Edit[], where: string): Explained | null {
  if (edits.length !== 1) return null;
  const { gone, come, previous } = edits[0]!;
  if (gone.length !== 1 || come.length !== 1 || gone[0]!.kind !== 'text' || come[0]!.kind !== 'text') return null;
  const isKey = (text: string) =>
    /^[A-Za-z_]\w{0,30}$|^[\w./-]{1,60}\.(?:nc4?|h5|hdf5|dat|txt|csv|npy|npz|json|tab)$/.test(text);
  if (!isKey(gone[0]!.text) || !isKey(come[0]!.text) || !/^[[(,]$/.test(previous?.text ?? '')) return null;
  return { kind: 'expression-changed', says: `${where} names "${come[0]!.text}", named "${gone[0]!.text}"` };
}

/** Runs of tokens that differ, by the longest common subsequence. */
export function editsOf(before: readonly StatementToken[], after: readonly StatementToken[]): Edit[] {
  const [b, a] = [before.map(tokenKey), after.map(tokenKey)];
  let start = 0;
  while (start < b.length && start < a.length && b[start] === a[start]) start += 1;
  let [endB, endA] = [b.length, a.length];
  while (endB > start && endA > start && b[endB - 1] === a[endA - 1]) {
    endB -= 1;
    endA -= 1;
  }
  const [rows, columns] = [endB - start, endA - start];
  const width = columns + 1;
  const lengths = new Uint16Array((rows + 1) * width);
  for (let i = rows - 1; i >= 0; i -= 1) {
    for (let j = columns - 1; j >= 0; j -= 1) {
      lengths[i * width + j] =
        b[start + i] === a[start + j]
          ? lengths[(i + 1) * width + j + 1]! + 1
          : Math.max(lengths[(i + 1) * width + j]!, lengths[i * width + j + 1]!);
    }
  }
  const edits: Edit[] = [];
  let [i, j] = [0, 0];
  while (i < rows || j < columns) {
    const [fromI, fromJ] = [i, j];
    while (i < rows || j < columns) {
      if (i < rows && j < columns && b[start + i] === a[start + j]) break;
      if (j >= columns || (i < rows && lengths[(i + 1) * width + j]! >= lengths[i * width + j + 1]!)) i += 1;
      else j += 1;
    }
    if (i > fromI || j > fromJ) {
      const previous = after[start + fromJ - 1];
      const next = after[start + j];
      edits.push({
        gone: before.slice(start + fromI, start + i),
        come: after.slice(start + fromJ, start + j),
        ...(previous === undefined ? {} : { previous }),
        ...(next === undefined ? {} : { next }),
      });
    }
    while (i < rows && j < columns && b[start + i] === a[start + j]) {
      i += 1;
      j += 1;
    }
  }
  return edits;
}

export function tokenKey(one: StatementToken): string {
  return one.kind === 'number' ? String(one.value) : one.kind === 'text' ? `"${one.text}"` : one.text;
}

function keyOf(item: readonly StatementToken[]): string {
  return item.map(tokenKey).join('');
}

export function spelled(tokens: readonly StatementToken[]): string {
  return tokens
    .map(({ text }) => text)
    .join(' ')
    .replace(/ ?([%.()[\],]) ?/g, '$1')
    .trim();
}

function cut(text: string): string {
  return text.length > 60 ? `${text.slice(0, 57)}...` : text;
}

const NUMERIC_TYPE = /^(?:real|double|float|long|int|short|integer|complex|_r[ls]|real4|real8|real32|real64)$/i;

/** A local thing of another numeric type, or storage in another COMMON block: neither is part of an interface. */
function declaredOtherwise(before: Statement, after: Statement): Explained | null {
  const [b, a] = [before.tokens, after.tokens];
  if (/^common$/.test(a[0]!.text) && b[0]!.text === 'common') {
    const edits = editsOf(b, a);
    const [edit] = edits;
    if (edits.length !== 1 || edit!.gone.length !== 1 || edit!.come.length !== 1) return null;
    if (edit!.previous?.text !== '/' || edit!.next?.text !== '/') return null;
    const says = `${a[4]?.text ?? 'what it holds'} lies in COMMON /${edit!.come[0]!.text}/, lay in /${edit!.gone[0]!.text}/`;
    return { kind: 'common-layout', says };
  }
  const types = (tokens: readonly StatementToken[]) => {
    const end = tokens.findIndex(
      ({ text, kind }) =>
        !(NUMERIC_TYPE.test(text) || kind === 'number' || /^(?:\*|const|static|unsigned)$/.test(text)),
    );
    return end <= 0 || !NUMERIC_TYPE.test(tokens[0]!.text) || tokens[end]!.kind !== 'name'
      ? null
      : {
          text: tokens
            .slice(0, end)
            .map(({ text }) => text)
            .join(''),
          rest: tokens.slice(end),
        };
  };
  const [was, is] = [types(b), types(a)];
  if (was === null || is === null || was.text === is.text || is.rest[0]?.text !== was.rest[0]?.text) return null;
  if (
    is.rest[1]?.text === '(' &&
    is.rest.length > 3 &&
    is.rest.every(({ text }) => text !== '=') &&
    /^[a-z]/.test(is.text) &&
    is.text !== 'real'
  )
    return null;
  return { kind: 'literal-kind', says: `${is.rest[0]!.text} is declared ${is.text}, was ${was.text}` };
}
