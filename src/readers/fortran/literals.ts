/** Real literals and integer divisions in an expression that a thing is given. */
import type { LiteralUse } from '../../model/interface.ts';
import { kindBytes } from './kinds.ts';
import { WORD } from './names.ts';
import type { Reading } from './reading.ts';
import { kindIn } from './scope.ts';
import type { Statement } from './statement.ts';

const isDigit = (byte: number | undefined): boolean => byte !== undefined && byte >= 48 && byte <= 57;

/**
 * Literals between `from` and `to` of a statement, given to `target`.
 *
 * @param role  what a literal has that stands alone; others are `mixed`, or what stands around them says
 */
export function literalsOf(
  reading: Reading,
  statement: Statement,
  from: number,
  to: number,
  target: string,
  targetBytes: number | null,
  type: string,
  role: LiteralUse['role'],
): void {
  if (reading.inside > 0) return;
  const { code } = statement;
  const single = type === 'complex' && targetBytes !== null ? targetBytes / 2 : targetBytes;
  const divisions: LiteralUse[] = [];
  for (let at = from; at < to; ) {
    const byte = code[at]!;
    if (byte === 39) {
      at += 2;
      continue;
    }
    const begins = isDigit(byte) || (byte === 46 && isDigit(code[at + 1]));
    if (!begins) {
      at = WORD[byte] === 1 ? Math.max(at + 1, statement.wordEnd(at)) : at + 1;
      continue;
    }
    const before = at > from ? code[at - 1]! : 0;
    const literal = literalAt(statement, at, to);
    if (literal.isReal) {
      if (WORD[before] !== 1 && before !== 46 && (literal.end >= to || WORD[code[literal.end]!] !== 1))
        reading.found.literals.push({
          text: statement.original(at, literal.end),
          value: Number(statement.codeText(at, literal.mantissaEnd).replace('d', 'e')),
          bytes:
            literal.kind === 'd'
              ? 8
              : literal.kind === ''
                ? 4
                : kindBytes(literal.kind, (name) => kindIn(reading.scope, name)),
          role: roleAt(statement, from, at, literal.end, to, role),
          target,
          targetBytes: single,
          procedure: reading.procedurePath(),
          line: statement.lineAt(at),
          column: statement.columnAt(at),
        });
      at = literal.end;
      continue;
    }
    const end = literal.end;
    // `2/3`, neither part of a longer number.
    if (code[end] === 47 && end < to && isDigit(code[end + 1]) && WORD[before] !== 1 && before !== 46) {
      let last = end + 1;
      while (last < to && isDigit(code[last])) last++;
      const above = Number(statement.codeText(at, end));
      const below = Number(statement.codeText(end + 1, last));
      if ((last >= to || (WORD[code[last]!] !== 1 && code[last] !== 46)) && !(below !== 0 && above % below === 0))
        divisions.push({
          text: `${statement.codeText(at, end)}/${statement.codeText(end + 1, last)}`,
          value: Math.trunc(above / below),
          bytes: 4,
          role: 'integer-division',
          target,
          targetBytes: single,
          procedure: reading.procedurePath(),
          line: statement.lineAt(at),
          column: statement.columnAt(at),
        });
    }
    at = Math.max(end, at + 1);
  }
  for (const division of divisions) reading.found.literals.push(division);
}

interface Literal {
  readonly isReal: boolean;
  /** Behind the digits and the exponent. */
  readonly mantissaEnd: number;
  /** Behind the kind too. */
  readonly end: number;
  readonly kind: string;
}

function literalAt(statement: Statement, from: number, to: number): Literal {
  const { code } = statement;
  let at = from;
  let isReal = false;
  let kind = '';
  while (at < to && isDigit(code[at])) at++;
  if (code[at] === 46 && at < to && !isOperator(code, at, to)) {
    isReal = true;
    at++;
    while (at < to && isDigit(code[at])) at++;
  }
  if (at < to && (code[at] === 101 || code[at] === 100)) {
    let next = at + 1;
    if (code[next] === 43 || code[next] === 45) next++;
    if (next < to && isDigit(code[next])) {
      if (code[at] === 100) kind = 'd';
      isReal = true;
      at = next;
      while (at < to && isDigit(code[at])) at++;
    }
  }
  const mantissaEnd = at;
  if (at + 1 < to && code[at] === 95 && WORD[code[at + 1]!] === 1) {
    const end = statement.wordEnd(at);
    kind = statement.name(at + 1, end);
    at = end;
  }
  return { isReal, mantissaEnd, end: at, kind };
}

/** `1.eq.n`: the point begins an operator. */
function isOperator(code: Uint8Array, point: number, to: number): boolean {
  let at = point + 1;
  while (at < to && code[at]! >= 97 && code[at]! <= 122) at++;
  return at > point + 1 && at < to && code[at] === 46;
}

function roleAt(
  statement: Statement,
  from: number,
  begin: number,
  end: number,
  to: number,
  role: LiteralUse['role'],
): LiteralUse['role'] {
  const { code } = statement;
  let before = begin;
  while (before > from && (code[before - 1] === 45 || code[before - 1] === 43)) before--;
  if (before === from && end >= to) return role;
  if (before > from && code[before - 1] === 40) before--;
  if (before - 2 >= from && code[before - 1] === 42 && code[before - 2] === 42) return 'exponent';
  return role === 'named' ? 'named' : 'mixed';
}
