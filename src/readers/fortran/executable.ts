/** Executable statements: calls with their arguments, literals given to reals, files and environment variables. */
import type { ActualArgument, CallSite } from '../../model/interface.ts';
import { statementRead } from './expressions.ts';
import { NOT_CALLED } from './intrinsics.ts';
import { literalsOf } from './literals.ts';
import { WORD } from './names.ts';
import type { Reading } from './reading.ts';
import { declaredFrom, draftIn, implicitType, rankOf, type Scope } from './scope.ts';
import type { Statement } from './statement.ts';

type OpenArgument = { -readonly [key in keyof ActualArgument]: ActualArgument[key] };

/** Takes what is no declaration. */
export function executes(reading: Reading, statement: Statement): void {
  const { scope } = reading;
  const { kind } = scope;
  if (
    reading.inside > 0 ||
    kind === 'module' ||
    kind === 'submodule' ||
    kind === 'type' ||
    kind === 'interface' ||
    kind === 'enum'
  )
    return;
  // FORMAT is the one labelled statement in which names before parentheses are edit descriptors.
  if (statement.label !== '' && statement.keyword('format', 0) >= 0 && statement.code[6] === 40) return;
  // A main program needs no PROGRAM statement; an include file has no unit at all.
  if (kind === 'file' && !begins(statement)) return;
  scope.executing = true;
  const { code } = statement;
  let from = 0;
  // Behind `if (...)`, `where (...)`, `forall (...)` a whole statement follows.
  for (let depth = 0; depth < 4; depth++) {
    const next = behindCondition(statement, from);
    if (next < 0) break;
    if (code[next] !== 44 && !(code[next]! >= 48 && code[next]! <= 57)) from = next;
    else break;
  }
  const assigned = assignmentAt(statement, from);
  const call = assigned >= 0 ? -1 : callAt(reading, statement, from);
  if (reading.options.expressionsOf !== undefined) expressions(reading, statement, from, assigned);
  if (statement.openCount > 0) functionCalls(reading, statement, from, assigned, call);
  if (assigned >= 0) {
    const nameEnd = statement.nameEnd(from);
    if (code[nameEnd] !== 37) assignedLiterals(reading, statement, from, nameEnd, assigned);
  }
  if (statement.quoted && statement.openCount > 0) externals(reading, statement, from);
}

function expressions(reading: Reading, statement: Statement, from: number, assigned: number): void {
  const { name, own } = reading.scope;
  const asked = reading.options.expressionsOf!;
  if (own === null || !(asked.includes(name) || asked.includes(own))) return;
  for (const one of statementRead(statement, from, assigned, own)) {
    const { line, column } = one.parts[0]!;
    reading.found.statements.push({ ...one, line, column });
  }
}

function begins(statement: Statement): boolean {
  if (assignmentAt(statement, 0) >= 0) return true;
  for (const word of HEADS) if (statement.keyword(word, 0) >= 0) return true;
  return false;
}
const HEADS = ['call', 'if', 'do', 'write', 'print', 'read', 'open', 'stop'];

/** Where the statement behind a condition begins; -1 when there is none. */
function behindCondition(statement: Statement, from: number): number {
  const { code, length } = statement;
  const first = code[from];
  let open = -1;
  if (first === 105) open = statement.keyword('if', from);
  else if (first === 119) open = statement.keyword('where', from);
  else if (first === 102) open = statement.keyword('forall', from);
  else if (first === 101) open = statement.keywords('else', 'if', from);
  if (open < 0 || open >= length || code[open] !== 40) return -1;
  const close = statement.match[open]!;
  if (close < 0 || close + 1 >= length) return -1;
  const next = code[close + 1]!;
  return WORD[next] === 1 ? close + 1 : -1;
}

/**
 * The `=` of an assignment that begins at `from`: a name, indexed or a component or not, before it. -1 when it is none.
 */
export function assignmentAt(statement: Statement, from: number): number {
  const { equal, code, match } = statement;
  if (equal < from + 1) return -1;
  let at = statement.nameEnd(from);
  if (at === from) return -1;
  while (at < equal) {
    const byte = code[at]!;
    if (byte === 40 || byte === 91) {
      if (match[at]! < 0) return -1;
      at = match[at]! + 1;
    } else if (byte === 37) {
      const end = statement.nameEnd(at + 1);
      if (end === at + 1) return -1;
      at = end;
    } else return -1;
  }
  if (at !== equal) return -1;
  // `do 10 i = 1, 10` without its blanks.
  if (statement.fixed && statement.commaBehind && code[from] === 100 && code[from + 1] === 111) return -1;
  return equal;
}

/** A CALL at `from`; the index of its callee's name, or -1. */
function callAt(reading: Reading, statement: Statement, from: number): number {
  const { code, match, length } = statement;
  let at = statement.keyword('call', from);
  if (at < 0) return -1;
  let isMethod = false;
  let nameAt = at;
  let nameEnd = statement.nameEnd(at);
  if (nameEnd === at) return -1;
  for (;;) {
    at = nameEnd;
    if (code[at] === 40 && at < length && match[at]! > at && code[match[at]! + 1] === 37 && match[at]! + 1 < length)
      at = match[at]! + 1;
    if (code[at] !== 37 || at >= length) break;
    isMethod = true;
    nameAt = at + 1;
    nameEnd = statement.nameEnd(nameAt);
    if (nameEnd === nameAt) return -1;
  }
  const open = nameEnd < length && code[nameEnd] === 40 ? nameEnd : -1;
  push(reading, statement, statement.name(nameAt, nameEnd), isMethod ? 'method' : 'subroutine', from, open);
  return nameAt;
}

function push(
  reading: Reading,
  statement: Statement,
  callee: string,
  how: CallSite['how'],
  at: number,
  open: number,
): void {
  const piece = statement.pieceAt(at);
  const call: { -readonly [key in keyof CallSite]: CallSite[key] } = {
    callee,
    how,
    caller: reading.scope.own,
    args: open < 0 ? [] : actualArguments(reading, statement, open),
    line: piece.line,
    column: statement.text.column(piece.lineStart, statement.source[at]!),
  };
  const { branch } = statement;
  if (branch !== null) call.condition = branch.whole;
  reading.found.calls.push(call);
}

/** Names before a parenthesis that are no array, no keyword and no intrinsic. */
function functionCalls(reading: Reading, statement: Statement, from: number, assigned: number, called: number): void {
  const { code, opens, openCount, names } = statement;
  const { flags } = names;
  // ALLOCATE and its kin speak of objects.
  const objects = assigned < 0 && called < 0 ? objectList(statement, from) : -1;
  let covered = objects;
  for (let index = 0; index < openCount; index++) {
    const open = opens[index]!;
    const direct = objects >= 0 && open > covered && open < statement.match[objects]!;
    if (direct) covered = Math.max(open, statement.match[open]!);
    let begin = open;
    while (begin > 0 && WORD[code[begin - 1]!] === 1) begin--;
    if (begin === open || begin === called) continue;
    const first = code[begin]!;
    if (first >= 48 && first <= 57) continue;
    const before = begin > 0 ? code[begin - 1]! : 0;
    if (before === 37 || before === 39) continue;
    // `.and.f(x)` is a call, `1.e(` is nothing.
    if (before === 46 && !(begin > 1 && code[begin - 2]! >= 97 && code[begin - 2]! <= 122)) continue;
    // What begins a statement is the name that is assigned to, or a keyword.
    if (begin === from || (begin < from && isHead(statement, begin))) continue;
    if (assigned < 0 && called < 0 && begin > from && isHeadWords(statement, from, begin)) continue;
    if (direct && (begin === objects + 1 || before === 44)) continue;
    const close = statement.match[open]!;
    if (close < 0) continue;
    const id = names.idOf(code, begin, open);
    if (id >= 0 && (flags[id]! & NOT_CALLED) !== 0) continue;
    const name = id >= 0 ? names.text(id) : statement.name(begin, open);
    if (isIndexed(reading.scope, name)) continue;
    push(reading, statement, name, 'function', begin, open);
  }
}

/** A keyword with its condition, before the statement that follows it. */
function isHead(statement: Statement, begin: number): boolean {
  return begin === 0 || isHeadWords(statement, 0, begin);
}

/** Only words and blanks between two places: `do while (`, `else if (`, `select case (`. */
function isHeadWords(statement: Statement, from: number, begin: number): boolean {
  const { code } = statement;
  for (let at = from; at < begin; at++) if (WORD[code[at]!] !== 1 && code[at] !== 32) return false;
  return true;
}

function objectList(statement: Statement, from: number): number {
  for (const word of OBJECTS) {
    const open = statement.keyword(word, from);
    if (open >= 0)
      return open < statement.length && statement.code[open] === 40 && statement.match[open]! > 0 ? open : -1;
  }
  return -1;
}
const OBJECTS = ['allocate', 'deallocate', 'nullify'];

/** Whether a name followed by a parenthesis is an element and no call. */
export function isIndexed(scope: Scope, name: string): boolean {
  const found = draftIn(scope, name);
  if (found === null) return false;
  const { bounds, type } = found.draft;
  return bounds !== null || type === 'character' || (type?.endsWith(')') ?? false);
}

function actualArguments(reading: Reading, statement: Statement, open: number): ActualArgument[] {
  const { length } = statement;
  const close = statement.match[open]! < 0 ? length : statement.match[open]!;
  const args: ActualArgument[] = [];
  if (close === open + 1) return args;
  for (let at = open + 1; at <= close; ) {
    const end = statement.comma(at, close);
    args.push(actualArgument(reading, statement, at, end));
    at = end + 1;
  }
  return args;
}

function actualArgument(reading: Reading, statement: Statement, from: number, to: number): ActualArgument {
  const { code } = statement;
  const place = Math.min(from, statement.length - 1);
  const piece = statement.pieceAt(place);
  const argument: OpenArgument = {
    text: to > from ? statement.folded(from, to, 200) : '',
    form: 'expression',
    line: piece.line,
    column: statement.text.column(piece.lineStart, statement.source[place]!),
  };
  let begin = from;
  const nameEnd = statement.nameEnd(from);
  if (nameEnd > from && nameEnd < to && code[nameEnd] === 61 && code[nameEnd + 1] !== 61) {
    argument.keyword = statement.name(from, nameEnd);
    begin = nameEnd + 1;
  }
  if (begin < to) form(reading, statement, begin, to, argument);
  return argument;
}

function form(reading: Reading, statement: Statement, from: number, to: number, argument: OpenArgument): void {
  const { code, match } = statement;
  const first = code[from]!;
  if (first === 42 || first === 38) {
    if (to > from + 1 && digitsTo(code, from + 1, to)) argument.form = 'alternate-return';
    return;
  }
  const nameEnd = statement.nameEnd(from);
  if (nameEnd > from) {
    if (nameEnd === to) {
      argument.form = 'name';
      argument.name = statement.name(from, to);
      typeOf(reading, argument, argument.name, -1);
      return;
    }
    if (code[nameEnd] !== 40 || match[nameEnd]! !== to - 1) return;
    const name = statement.name(from, nameEnd);
    // What is indexed like an array and declared as none is the result of a function.
    if (!isIndexed(reading.scope, name)) return;
    const sections = sectionsIn(statement, nameEnd + 1, to - 1);
    argument.form = sections === 0 ? 'element' : 'section';
    argument.name = name;
    typeOf(reading, argument, name, sections);
    return;
  }
  if (first === 39) {
    if (to === from + 2) {
      argument.form = 'literal';
      argument.type = 'character';
      argument.rank = 0;
    } else if (code[from + 1] === 39) argument.type = 'character';
    return;
  }
  if (first === 46 && !(code[from + 1]! >= 48 && code[from + 1]! <= 57)) {
    const word = statement.codeText(from, to);
    if (word.startsWith('.true.') || word.startsWith('.false.')) {
      argument.form = 'literal';
      argument.type = 'logical';
      argument.bytes = 4;
      argument.rank = 0;
    }
    return;
  }
  number(statement, from, to, argument);
}

/** How many dimensions an index list leaves: subscripts with a colon. */
function sectionsIn(statement: Statement, from: number, to: number): number {
  const { code, match } = statement;
  let sections = 0;
  let inThis = false;
  for (let at = from; at < to; at++) {
    const byte = code[at]!;
    if (byte === 58 && !inThis) {
      sections++;
      inThis = true;
    } else if (byte === 44) inThis = false;
    else if ((byte === 40 || byte === 91) && match[at]! > at) at = match[at]!;
  }
  return sections;
}

function number(statement: Statement, from: number, to: number, argument: OpenArgument): void {
  const { code } = statement;
  let at = from;
  if (code[at] === 43 || code[at] === 45) at++;
  const digits = at;
  while (at < to && code[at]! >= 48 && code[at]! <= 57) at++;
  let isReal = false;
  let exponent = 0;
  if (at < to && code[at] === 46) {
    isReal = true;
    at++;
    while (at < to && code[at]! >= 48 && code[at]! <= 57) at++;
    if (at === digits + 1) return;
  } else if (at === digits) return;
  if (at < to && (code[at] === 101 || code[at] === 100)) {
    let next = at + 1;
    if (code[next] === 43 || code[next] === 45) next++;
    const start = next;
    while (next < to && code[next]! >= 48 && code[next]! <= 57) next++;
    if (next === start) return;
    exponent = code[at]!;
    isReal = true;
    at = next;
  }
  let kind = false;
  if (at < to && code[at] === 95) {
    kind = true;
    at = statement.wordEnd(at);
  }
  if (at !== to) return;
  argument.form = 'literal';
  argument.type = isReal ? 'real' : 'integer';
  if (!isReal && !kind) argument.bytes = 4;
  else if (isReal && exponent === 100) argument.bytes = 8;
  else if (isReal && !kind) {
    argument.bytes = 4;
    argument.declaredDefault = true;
  }
  argument.rank = 0;
}

function digitsTo(code: Uint8Array, from: number, to: number): boolean {
  for (let at = from; at < to; at++) if (code[at]! < 48 || code[at]! > 57) return false;
  return true;
}

/** What declarations in sight say of a name; nothing is added for what is known from elsewhere. */
function typeOf(reading: Reading, argument: OpenArgument, name: string, sections: number): void {
  const found = draftIn(reading.scope, name);
  if (found === null) return;
  const { scope, draft } = found;
  if (draft.type !== null) {
    argument.type = draft.type;
    argument.bytes = draft.bytes;
    if (draft.kind === undefined) argument.declaredDefault = true;
  } else if (draft.external) {
    argument.type = 'procedure';
    argument.bytes = null;
    argument.declaredDefault = true;
  } else {
    const { type, bytes, kind } = implicitType(scope, name);
    argument.type = type;
    argument.bytes = bytes;
    if (kind === undefined) argument.declaredDefault = true;
  }
  argument.rank = sections >= 0 ? sections : rankOf(draft.bounds);
}

function assignedLiterals(
  reading: Reading,
  statement: Statement,
  from: number,
  nameEnd: number,
  assigned: number,
): void {
  const name = statement.name(from, nameEnd);
  const { scope } = reading;
  const found = draftIn(scope, name);
  let type: string;
  let bytes: number | null;
  if (found !== null) ({ type, bytes } = declaredFrom(found.scope, found.draft, () => null));
  else if (scope.implicit?.[name.charCodeAt(0) - 97] !== undefined) ({ type, bytes } = implicitType(scope, name));
  else return;
  if (type !== 'real' && type !== 'complex') return;
  literalsOf(reading, statement, assigned + 1, statement.length, name, bytes, type, 'assigned');
}

/** Files that OPEN names and environment variables that are asked for, where a literal says which. */
function externals(reading: Reading, statement: Statement, from: number): void {
  const { code, length, match } = statement;
  const open = statement.keyword('open', from);
  if (open >= 0 && open < length && code[open] === 40 && match[open]! > open) {
    for (let at = open + 1; at < match[open]!; ) {
      const end = statement.comma(at, match[open]!);
      if (code[at + 4] === 61 && code[at + 5] === 39 && end === at + 7 && statement.codeText(at, at + 4) === 'file')
        reading.found.externals.push({ kind: 'file', name: statement.constant(at + 5), ...statement.position(0) });
      at = end + 1;
    }
    return;
  }
  for (let index = 0; index < statement.openCount; index++) {
    const at = statement.opens[index]!;
    if (code[at + 1] !== 39 || at + 1 >= length) continue;
    let begin = at;
    while (begin > 0 && WORD[code[begin - 1]!] === 1) begin--;
    if (code[begin] !== 103 && code[begin] !== 99) continue;
    if (!/get_?env\w*$/.test(statement.codeText(begin, at))) continue;
    const name = statement.constant(at + 1);
    if (/^\w+$/.test(name)) reading.found.externals.push({ kind: 'environment', name, ...statement.position(0) });
  }
}
