/** Declarations: types, attributes, COMMON, PARAMETER, USE, IMPLICIT, storage. A statement comes in, the scope learns. */
import type { StorageStatement } from '../../model/interface.ts';
import { claimDeclared } from './comment-claims.ts';
import { evaluate } from './evaluate.ts';
import { kindBytes, kindExpression, type TypeSpec, typeSpecAt } from './kinds.ts';
import { literalsOf } from './literals.ts';
import type { Reading } from './reading.ts';
import { type Draft, declaredFrom, type ImplicitType, kindIn, type Scope, valueIn } from './scope.ts';
import type { Statement } from './statement.ts';

/**
 * Takes a statement that declares something; false when it is none.
 *
 * @param spec  the type that it begins with
 */
export function declares(reading: Reading, statement: Statement, spec: TypeSpec | null): boolean {
  if (spec !== null) return typed(reading, statement, spec);
  switch (statement.code[0]) {
    case 97: // a
      return (
        attribute(reading, statement, 'allocatable') ||
        attribute(reading, statement, 'asynchronous') ||
        attribute(reading, statement, 'automatic')
      );
    case 98: // b
      return bindStatement(reading, statement);
    case 99: // c
      return (
        common(reading, statement) ||
        contains(reading, statement) ||
        attribute(reading, statement, 'contiguous') ||
        attribute(reading, statement, 'codimension')
      );
    case 100: // d
      return attribute(reading, statement, 'dimension') || storing(reading, statement, 'data');
    case 101: // e
      return (
        attribute(reading, statement, 'external') ||
        storing(reading, statement, 'equivalence') ||
        enumerator(reading, statement)
      );
    case 105: // i
      return (
        implicit(reading, statement) ||
        attribute(reading, statement, 'intent') ||
        attribute(reading, statement, 'intrinsic') ||
        importing(statement)
      );
    case 110: // n
      return storing(reading, statement, 'namelist');
    case 111: // o
      return attribute(reading, statement, 'optional');
    case 112: // p
      return (
        parameter(reading, statement) ||
        access(reading, statement, 'public') ||
        access(reading, statement, 'private') ||
        attribute(reading, statement, 'pointer') ||
        attribute(reading, statement, 'protected')
      );
    case 115: // s
      return attribute(reading, statement, 'save') || attribute(reading, statement, 'static');
    case 116: // t
      return attribute(reading, statement, 'target');
    case 117: // u
      return use(reading, statement);
    case 118: // v
      return attribute(reading, statement, 'value') || attribute(reading, statement, 'volatile');
    default:
      return false;
  }
}

/** Bounds between parentheses, an entry a dimension. */
function boundsIn(statement: Statement, open: number, close: number): string[] {
  const bounds: string[] = [];
  for (let at = open + 1; at < close; ) {
    const end = statement.comma(at, close);
    bounds.push(statement.codeText(at, end));
    at = end + 1;
  }
  return bounds;
}

/** The place of the `::` that stands outside parentheses; -1 when there is none. */
function separatorOf(statement: Statement, from: number): number {
  const { code, match, length } = statement;
  for (let at = from; at + 1 < length; at++) {
    const byte = code[at]!;
    if (byte === 58) return code[at + 1] === 58 ? at : -1;
    if ((byte === 40 || byte === 91) && match[at]! > at) at = match[at]!;
    else if (byte === 61) return -1;
  }
  return -1;
}

interface Attributes {
  readonly list: string[];
  intent: Draft['intent'];
  dimension: string[] | null;
  isParameter: boolean;
}

function attributesIn(statement: Statement, from: number, to: number): Attributes {
  const found: Attributes = { list: [], intent: null, dimension: null, isParameter: false };
  for (let at = from; at < to; ) {
    const end = statement.comma(at, to);
    const word = statement.wordEnd(at);
    const name = statement.name(at, word);
    if (name === 'intent') found.intent = intentOf(statement.codeText(word, end));
    else if (name === 'dimension' && statement.code[word] === 40)
      found.dimension = boundsIn(statement, word, statement.match[word]!);
    else if (end > at) {
      if (name === 'parameter') found.isParameter = true;
      found.list.push(statement.codeText(at, end));
    }
    at = end + 1;
  }
  return found;
}

function intentOf(text: string): Draft['intent'] {
  if (text === '(in)') return 'in';
  if (text === '(out)') return 'out';
  return text === '(inout)' || text === '(in out)' ? 'inout' : null;
}

const NONE: Attributes = { list: [], intent: null, dimension: null, isParameter: false };

function typed(reading: Reading, statement: Statement, spec: TypeSpec): boolean {
  const { code, length } = statement;
  const { scope } = reading;
  let at = spec.end;
  let attributes = NONE;
  const next = at < length ? code[at] : 0;
  if (next === 44 || next === 58) {
    const separator = separatorOf(statement, at);
    if (separator >= 0) {
      if (next === 44) attributes = attributesIn(statement, at + 1, separator);
      at = separator + 2;
    } else if (next === 44) at++;
    else return false;
  }
  const names: string[] = [];
  while (at < length) {
    const end = statement.comma(at, length);
    const nameEnd = statement.nameEnd(at);
    if (nameEnd > at) {
      const name = statement.name(at, nameEnd);
      entity(reading, scope, statement, spec, attributes, name, at, nameEnd, end);
      names.push(name);
    }
    at = end + 1;
  }
  if (names.length === 0) return false;
  claimDeclared(reading, statement, names);
  return true;
}

function entity(
  reading: Reading,
  scope: Scope,
  statement: Statement,
  spec: TypeSpec,
  attributes: Attributes,
  name: string,
  from: number,
  nameEnd: number,
  to: number,
): void {
  const { code } = statement;
  let bounds: string[] | null = attributes.dimension;
  let { bytes, kind, length } = spec;
  let at = nameEnd;
  for (let more = true; more && at < to; ) {
    more = false;
    if (code[at] === 40) {
      const close = statement.match[at]!;
      if (close < 0) break;
      bounds = boundsIn(statement, at, close);
      at = close + 1;
      more = true;
    } else if (code[at] === 91 && statement.match[at]! > at) {
      at = statement.match[at]! + 1;
      more = true;
    } else if (code[at] === 42) {
      let end = at + 1;
      if (code[end] === 40 && statement.match[end]! > end) {
        if (spec.type === 'character') length = statement.codeText(end + 1, statement.match[end]!);
        end = statement.match[end]! + 1;
      } else {
        while (end < to && code[end]! >= 48 && code[end]! <= 57) end++;
        const digits = statement.codeText(at + 1, end);
        if (spec.type === 'character') length = digits;
        else if (digits !== '') [bytes, kind] = [Number(digits), digits];
      }
      at = end;
      more = true;
    }
  }
  const piece = statement.pieceAt(from);
  const branch = statement.divided ? piece.branch : statement.branch;
  const column = statement.text.column(piece.lineStart, statement.source[from]!);
  const draft = scope.typedDraft(name, piece.line, column, branch);
  draft.line = piece.line;
  draft.column = column;
  draft.type = spec.type;
  draft.bytes = bytes;
  if (kind !== undefined) draft.kind = kind;
  if (length !== undefined) draft.length = length;
  if (bounds !== null) draft.bounds = bounds;
  if (attributes.intent !== null) draft.intent = attributes.intent;
  draft.branch ??= branch;
  for (const one of attributes.list) {
    if (one === 'optional') draft.optional = true;
    else if (one === 'external') draft.external = true;
    else if (one === 'public') scope.publicNames.add(name);
    else if (one === 'private') scope.privateNames.add(name);
    else draft.add(one);
  }
  if (at >= to || code[at] !== 61) return;
  const begin = code[at + 1] === 62 ? at + 2 : at + 1;
  if (attributes.isParameter) namedConstant(reading, statement, name, spec.type, bytes, from, begin, to);
  else {
    draft.value = statement.original(begin, to).trim().slice(0, 200);
    if (spec.type === 'real' || spec.type === 'complex')
      literalsOf(reading, statement, begin, to, name, bytes, spec.type, 'assigned');
  }
}

/** A named constant whose value stands between `begin` and `to`. */
export function namedConstant(
  reading: Reading,
  statement: Statement,
  name: string,
  type: string,
  bytes: number | null,
  from: number,
  begin: number,
  to: number,
): void {
  const { scope } = reading;
  const text = statement.original(begin, to).trim();
  const quoted = statement.code[begin] === 39;
  const value = quoted
    ? joinedConstants(statement, begin, to)
    : evaluate(statement.codeText(begin, to), (other) => valueIn(scope, other));
  if (typeof value === 'number') scope.setValue(name, type === 'integer' ? Math.trunc(value) : value);
  let shown: number | string | null = value;
  if (type === 'integer') {
    const expression = statement.codeText(begin, to);
    const kind = kindExpression(expression) ?? kindBytes(expression, (other) => kindIn(scope, other));
    if (kind !== null) {
      scope.setKind(name, kind);
      if (typeof value !== 'number') {
        scope.setValue(name, kind);
        shown = kind;
      }
    }
    if (typeof shown === 'number') shown = Math.trunc(shown);
  }
  if (reading.inside > 0) return;
  const condition = statement.conditionAt(from);
  reading.found.constants.push({
    name,
    parent: scope.own,
    type,
    bytes,
    text: text.length > 400 ? text.slice(0, 400) : text,
    value: shown,
    line: statement.lineAt(from),
    column: statement.columnAt(from),
    ...(condition === null ? {} : { condition }),
  });
  if (type === 'real' || type === 'complex') literalsOf(reading, statement, begin, to, name, bytes, type, 'named');
}

/** `'abc'//'def'`; null when anything else stands between. */
function joinedConstants(statement: Statement, begin: number, to: number): string | null {
  const { code } = statement;
  let joined = '';
  for (let at = begin; at < to; at += 4) {
    if (code[at] !== 39 || code[at + 1] !== 39) return null;
    joined += statement.constant(at);
    if (at + 2 < to && !(code[at + 2] === 47 && code[at + 3] === 47)) return null;
  }
  return joined;
}

function parameter(reading: Reading, statement: Statement): boolean {
  const open = statement.keyword('parameter', 0);
  if (open < 0 || statement.code[open] !== 40 || open >= statement.length) return false;
  const close = statement.match[open]!;
  if (close < 0) return false;
  const { scope } = reading;
  const names: string[] = [];
  for (let at = open + 1; at < close; ) {
    const end = statement.comma(at, close);
    const nameEnd = statement.nameEnd(at);
    if (nameEnd > at && statement.code[nameEnd] === 61) {
      const name = statement.name(at, nameEnd);
      const draft = scope.draft(name, statement.lineAt(at), statement.columnAt(at), statement.branch);
      draft.add('parameter');
      const { type, bytes } = declaredFrom(scope, draft, NO_BOUND);
      namedConstant(reading, statement, name, type, bytes, at, nameEnd + 1, end);
      names.push(name);
    }
    at = end + 1;
  }
  claimDeclared(reading, statement, names);
  return true;
}

const NO_BOUND = (): null => null;

function enumerator(reading: Reading, statement: Statement): boolean {
  const { scope } = reading;
  if (scope.kind !== 'enum') return false;
  let at = statement.keyword('enumerator', 0);
  if (at < 0) return false;
  if (statement.code[at] === 58) at += 2;
  while (at < statement.length) {
    const end = statement.comma(at, statement.length);
    const nameEnd = statement.nameEnd(at);
    if (nameEnd > at) {
      const name = statement.name(at, nameEnd);
      const host = scope.parent ?? scope;
      const given = statement.code[nameEnd] === 61;
      const value: number | null = given
        ? evaluate(statement.codeText(nameEnd + 1, end), (other) => valueIn(host, other))
        : scope.lastEnumerator === null
          ? null
          : scope.lastEnumerator + 1;
      scope.lastEnumerator = value;
      if (value !== null) host.setValue(name, value);
      if (reading.inside === 0)
        reading.found.constants.push({
          name,
          parent: host.own,
          type: 'integer',
          bytes: 4,
          text: given ? statement.original(nameEnd + 1, end).trim() : '',
          value,
          line: statement.lineAt(at),
          column: statement.columnAt(at),
        });
    }
    at = end + 1;
  }
  return true;
}

function common(reading: Reading, statement: Statement): boolean {
  const { code, length } = statement;
  let at = statement.keyword('common', 0);
  if (at < 0 || at >= length) return false;
  const { scope } = reading;
  let name = '';
  let nameAt = Math.min(at, length - 1);
  while (at < length) {
    if (code[at] === 47) {
      let close = at + 1;
      while (close < length && code[close] !== 47) close++;
      name = statement.codeText(at + 1, close);
      nameAt = close > at + 1 ? at + 1 : at;
      at = close + 1;
      continue;
    }
    // Members up to the next block.
    const members: Draft[] = [];
    while (at < length && code[at] !== 47) {
      const nameEnd = statement.nameEnd(at);
      if (nameEnd === at) {
        at++;
        continue;
      }
      const piece = statement.pieceAt(at);
      const member = scope.draft(
        statement.name(at, nameEnd),
        piece.line,
        statement.text.column(piece.lineStart, statement.source[at]!),
        statement.divided ? piece.branch : statement.branch,
      );
      at = nameEnd;
      if (code[at] === 40 && at < length && statement.match[at]! > at) {
        member.bounds = boundsIn(statement, at, statement.match[at]!);
        at = statement.match[at]! + 1;
      }
      members.push(member);
      if (code[at] === 44) at++;
      else if (code[at] === 32) at++;
    }
    if (members.length > 0) {
      const condition = statement.condition;
      const key = `${name} ${reading.inside === 0} ${condition ?? ''}`;
      const known = scope.commons.get(key);
      // One block may be written over several statements: its storage goes on.
      if (known !== undefined) for (const member of members) known.members.push(member);
      else
        scope.commons.set(key, {
          name,
          members,
          line: statement.lineAt(nameAt),
          column: statement.columnAt(nameAt),
          condition,
          own: reading.inside === 0,
        });
      if (statement.commentCount > 0)
        claimDeclared(
          reading,
          statement,
          members.map((one) => one.name),
        );
      else reading.lastNames = [];
    }
  }
  return true;
}

function attribute(reading: Reading, statement: Statement, word: string): boolean {
  const { code, length } = statement;
  let at = statement.keyword(word, 0);
  if (at < 0) return false;
  const { scope } = reading;
  let intent: Draft['intent'] = null;
  if (word === 'intent') {
    if (code[at] !== 40 || at >= length || statement.match[at]! < 0) return false;
    const close = statement.match[at]!;
    intent = intentOf(statement.codeText(at, close + 1));
    at = close + 1;
  }
  const next = at < length ? code[at]! : 0;
  if (next === 40 || next === 37) return false;
  if (next === 58) at += 2;
  if (at >= length && word !== 'save') return false;
  const names: string[] = [];
  while (at < length) {
    const end = statement.comma(at, length);
    const nameEnd = statement.nameEnd(at);
    if (nameEnd > at) {
      const name = statement.name(at, nameEnd);
      const piece = statement.pieceAt(at);
      const draft = scope.draft(
        name,
        piece.line,
        statement.text.column(piece.lineStart, statement.source[at]!),
        statement.branch,
      );
      if (code[nameEnd] === 40 && nameEnd < end && statement.match[nameEnd]! > nameEnd)
        draft.bounds = boundsIn(statement, nameEnd, statement.match[nameEnd]!);
      if (intent !== null) draft.intent = intent;
      else if (word === 'optional') draft.optional = true;
      else if (word === 'external') draft.external = true;
      else if (word !== 'dimension' && word !== 'save' && word !== 'intrinsic') draft.add(word);
      names.push(name);
    } else if (word === 'save' && code[at] === 47) {
      // SAVE of a whole COMMON block.
      names.push(statement.codeText(at + 1, Math.max(at + 1, end - 1)));
    }
    at = end + 1;
  }
  if (word === 'save' && reading.inside === 0)
    reading.found.storage.push({
      kind: 'save',
      parent: scope.own,
      names,
      text: statement.original(0, statement.length).slice(0, 200),
      ...statement.position(0),
    });
  if (word === 'dimension') claimDeclared(reading, statement, names);
  return true;
}

/** `bind(c) :: x` binds variables and COMMON blocks; nothing of the interface changes. */
function bindStatement(_reading: Reading, statement: Statement): boolean {
  const at = statement.keyword('bind', 0);
  return (
    at >= 0 && statement.code[at] === 40 && statement.match[at]! > 0 && statement.code[statement.match[at]! + 1] === 58
  );
}

function importing(statement: Statement): boolean {
  return statement.keyword('import', 0) >= 0;
}

function contains(reading: Reading, statement: Statement): boolean {
  if (statement.length !== 8 || statement.keyword('contains', 0) < 0) return false;
  reading.scope.containing = true;
  return true;
}

function access(reading: Reading, statement: Statement, word: 'public' | 'private'): boolean {
  const { scope } = reading;
  let at = statement.keyword(word, 0);
  if (at < 0) return false;
  const { code, length } = statement;
  if (at >= length) {
    if (word === 'private') scope.isPrivate = true;
    return true;
  }
  if (code[at] === 40 || code[at] === 37 || code[at] === 61) return false;
  if (code[at] === 58) at += 2;
  while (at < length) {
    const end = statement.comma(at, length);
    const name = statement.codeText(at, end);
    if (word === 'public') scope.publicNames.add(name);
    else scope.privateNames.add(name);
    at = end + 1;
  }
  return true;
}

function storing(reading: Reading, statement: Statement, word: 'equivalence' | 'data' | 'namelist'): boolean {
  const at = statement.keyword(word, 0);
  if (at < 0 || at >= statement.length) return false;
  const { code } = statement;
  const next = code[at]!;
  if (word === 'equivalence' ? next !== 40 : word === 'namelist' ? next !== 47 : next !== 40 && !isNameStart(next))
    return false;
  if (word === 'data' && statement.equal >= 0) return false;
  if (reading.inside > 0) return true;
  reading.found.storage.push({
    kind: word as StorageStatement['kind'],
    parent: reading.scope.own,
    names: storedNames(statement, at, word === 'data'),
    text: statement.original(0, Math.min(statement.length, 400)).slice(0, 200),
    ...statement.position(0),
  });
  return true;
}

const MOST_STORED = 200;

/** Names that a statement binds; values between slashes are none. */
function storedNames(statement: Statement, from: number, hasValues: boolean): string[] {
  const names = new Set<string>();
  const { code, length } = statement;
  let inValues = false;
  for (let at = from; at < length && names.size < MOST_STORED; ) {
    const byte = code[at]!;
    if (byte === 47 && hasValues) inValues = !inValues;
    if (inValues || !isNameStart(byte) || (at > 0 && code[at - 1]! >= 48 && code[at - 1]! <= 57)) {
      at++;
      continue;
    }
    const end = statement.wordEnd(at);
    names.add(statement.name(at, end));
    at = end;
  }
  return [...names];
}

function isNameStart(byte: number): boolean {
  return (byte >= 97 && byte <= 122) || byte === 95;
}

function use(reading: Reading, statement: Statement): boolean {
  let at = statement.keyword('use', 0);
  if (at < 0) return false;
  const { code, length } = statement;
  const separator = separatorOf(statement, at);
  if (code[at] === 44 && separator >= 0) at = separator + 2;
  else if (code[at] === 58 && code[at + 1] === 58) at += 2;
  const nameEnd = statement.nameEnd(at);
  if (nameEnd === at || (nameEnd < length && code[nameEnd] !== 44)) return false;
  reading.scope.openEnded = true;
  if (reading.inside > 0) return true;
  const module = statement.name(at, nameEnd);
  at = nameEnd + 1;
  let isOnly = false;
  if (at < length && statement.keyword('only', at) === at + 4 && code[at + 4] === 58) {
    isOnly = true;
    at += 5;
  }
  const names: { local: string; name: string }[] = [];
  while (at < length) {
    const end = statement.comma(at, length);
    let arrow = -1;
    for (let place = at; place + 1 < end; place++)
      if (code[place] === 61 && code[place + 1] === 62) {
        arrow = place;
        break;
      }
    if (arrow >= 0) names.push({ local: statement.codeText(at, arrow), name: statement.codeText(arrow + 2, end) });
    else if (end > at) {
      const name = statement.codeText(at, end);
      names.push({ local: name, name });
    }
    at = end + 1;
  }
  const { condition } = statement;
  reading.found.uses.push({
    module,
    parent: reading.scope.own,
    ...(isOnly ? { only: names } : names.length > 0 ? { renames: names } : {}),
    ...statement.position(0),
    ...(condition === null ? {} : { condition }),
  });
  return true;
}

function implicit(reading: Reading, statement: Statement): boolean {
  let at = statement.keyword('implicit', 0);
  if (at < 0) return false;
  const { scope } = reading;
  const { code, length } = statement;
  if (statement.keyword('none', at) >= 0) {
    scope.implicit = null;
    return true;
  }
  const rules: (ImplicitType | undefined)[] = [...(scope.implicit ?? [])];
  while (at < length) {
    // `real*8 (a-h,o-z)`: the letters stand in the last parenthesis before the comma.
    const end = statement.comma(at, length);
    let open = -1;
    for (let place = at; place < end; place++) {
      if (code[place] !== 40) continue;
      open = place;
      if (statement.match[place]! < place) break;
      place = statement.match[place]!;
    }
    if (open < 0) break;
    const spec = implicitSpec(statement, at, open, (name) => kindIn(scope, name));
    if (spec !== null)
      for (let place = open + 1; place < end && code[place] !== 41; place++) {
        const letter = code[place]! - 97;
        if (letter < 0 || letter > 25) continue;
        let last = letter;
        if (code[place + 1] === 45) {
          last = code[place + 2]! - 97;
          place += 2;
        }
        for (let one = letter; one <= Math.min(25, last); one++) rules[one] = spec;
      }
    at = end + 1;
  }
  scope.implicit = rules;
  return true;
}

/** The type before the letters; `implicit real (a-h)` has them where a kind could stand. */
function implicitSpec(
  statement: Statement,
  from: number,
  open: number,
  kindOf: (name: string) => number | null,
): ImplicitType | null {
  const { match, length } = statement;
  const kept = match[open]!;
  // The letters themselves must not be taken for a kind.
  match[open] = -1;
  statement.length = open;
  const spec = typeSpecAt(statement, from, kindOf);
  match[open] = kept;
  statement.length = length;
  return spec;
}
