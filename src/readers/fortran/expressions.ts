/** Executable statements as expressions with positions, for the procedures that are asked about: statement bytes come in, trees go out. */
import type { Expression, ReadStatement } from '../../model/expression.ts';
import type { Statement } from './statement.ts';

/** Deeper or longer ones are given as text. */
const DEEPEST = 60;
const LONGEST = 20_000;

const DOTTED: Readonly<Record<string, number>> = {
  eqv: 1,
  neqv: 1,
  or: 2,
  and: 3,
  eq: 5,
  ne: 5,
  lt: 5,
  le: 5,
  gt: 5,
  ge: 5,
};
/** Fortran 2018, table 10.1, weakest first; a defined operator binds weakest. */
const SYMBOLS: readonly (readonly [string, number])[] = [
  ['==', 5],
  ['/=', 5],
  ['<=', 5],
  ['>=', 5],
  ['//', 6],
  ['**', 9],
  ['<', 5],
  ['>', 5],
  ['+', 7],
  ['-', 7],
  ['*', 8],
  ['/', 8],
];
const RELATIONAL: Readonly<Record<string, string>> = { eq: '==', ne: '/=', lt: '<', le: '<=', gt: '>', ge: '>=' };

/**
 * An assignment, a CALL, or the condition of IF or WHILE; null for every other statement.
 *
 * @param from      where the statement proper begins, behind `if (...)`
 * @param assigned  the index of its `=`, or -1
 */
export function statementRead(
  statement: Statement,
  from: number,
  assigned: number,
  procedure: string,
): Omit<ReadStatement, 'line' | 'column'>[] {
  if (statement.length > LONGEST) return [];
  const read: Omit<ReadStatement, 'line' | 'column'>[] = [];
  const { code, match, length } = statement;
  for (const word of ['if', 'elseif', 'else if', 'where', 'do while']) {
    const open = statement.keyword(statement.fixed ? word.replace(' ', '') : word, 0);
    if (open < 0 || code[open] !== 40 || match[open]! < 0 || assigned === 0) continue;
    if (from > 0 || assigned < 0)
      read.push({ kind: 'condition', procedure, parts: [parseExpression(statement, open + 1, match[open]!)] });
    break;
  }
  if (assigned > 0)
    read.push({
      kind: 'assignment',
      procedure,
      parts: [
        parseExpression(statement, from, assigned),
        parseExpression(statement, code[assigned + 1] === 62 ? assigned + 2 : assigned + 1, length),
      ],
    });
  else {
    const call = statement.keyword('call', from);
    if (call >= 0) read.push({ kind: 'call', procedure, parts: [parseExpression(statement, call, length)] });
  }
  return read;
}

/** The expression between two places of a statement; what can not be read is given as `unread` with its text. */
export function parseExpression(statement: Statement, from: number, to: number): Expression {
  const parser = new Parser(statement, to);
  return parser.whole(from);
}

class Parser {
  private readonly statement: Statement;
  private to: number;
  private at = 0;
  private depth = 0;
  private failed = false;

  constructor(statement: Statement, to: number) {
    this.statement = statement;
    this.to = to;
  }

  whole(from: number): Expression {
    this.at = from;
    const found = this.binary(0);
    return this.failed || this.at !== this.to ? this.unread(from, this.to) : found;
  }

  private node(kind: Expression['kind'], value: string, at: number, parts: readonly Expression[] = []): Expression {
    return { kind, value, parts, ...this.statement.position(Math.min(at, this.statement.length - 1)) };
  }

  private unread(from: number, to: number): Expression {
    return this.node('unread', this.statement.folded(from, Math.max(from + 1, to), 200), from);
  }

  private binary(least: number): Expression {
    if (++this.depth > DEEPEST) this.failed = true;
    if (this.failed) return this.unread(this.at, this.at + 1);
    const begin = this.at;
    let left = this.unary();
    while (!this.failed && this.at < this.to) {
      const operator = this.operatorAt();
      if (operator === null || operator.rank < least) break;
      this.at = operator.end;
      // `**` binds to the right, everything else to the left.
      const right = this.binary(operator.rank === 9 ? 9 : operator.rank + 1);
      left = this.node('binary', operator.name, begin, [left, right]);
    }
    this.depth--;
    return left;
  }

  private operatorAt(): { name: string; rank: number; end: number } | null {
    const { code } = this.statement;
    const { at, to } = this;
    if (code[at] === 46) {
      const end = this.statement.wordEnd(at + 1);
      if (end >= to || code[end] !== 46) return null;
      const word = this.statement.codeText(at + 1, end);
      if (word === 'not' || word === 'true' || word === 'false') return null;
      return { name: RELATIONAL[word] ?? `.${word}.`, rank: DOTTED[word] ?? 0, end: end + 1 };
    }
    for (const [symbol, rank] of SYMBOLS) {
      if (code[at] !== symbol.charCodeAt(0)) continue;
      if (symbol.length === 2 && (at + 1 >= to || code[at + 1] !== symbol.charCodeAt(1))) continue;
      return { name: symbol, rank, end: at + symbol.length };
    }
    return null;
  }

  private unary(): Expression {
    const { code } = this.statement;
    const begin = this.at;
    const byte = code[begin]!;
    if (byte === 45 || byte === 43) {
      this.at++;
      return this.node('unary', byte === 45 ? '-' : '+', begin, [this.binary(8)]);
    }
    if (byte === 46 && this.at < this.to) {
      const end = this.statement.wordEnd(begin + 1);
      const word = this.statement.codeText(begin + 1, end);
      if (word === 'not' && code[end] === 46) {
        this.at = end + 1;
        return this.node('unary', '.not.', begin, [this.binary(4)]);
      }
    }
    return this.primary();
  }

  private primary(): Expression {
    const { statement } = this;
    const { code, match } = statement;
    const begin = this.at;
    if (begin >= this.to) {
      this.failed = true;
      return this.unread(begin, begin + 1);
    }
    const byte = code[begin]!;
    if (byte === 39) {
      this.at = begin + 2;
      return this.node('text', statement.constant(begin), begin);
    }
    if ((byte >= 48 && byte <= 57) || (byte === 46 && code[begin + 1]! >= 48 && code[begin + 1]! <= 57)) {
      const number = /^(?:\d+(?:\.(?![a-z]+\.)\d*)?|\.\d+)(?:[ed][+-]?\d+)?(?:_\w+)?/.exec(
        statement.codeText(begin, Math.min(this.to, begin + 60)),
      );
      this.at = begin + (number?.[0].length ?? 1);
      return this.node('number', statement.original(begin, this.at), begin);
    }
    if (byte === 46) {
      const end = statement.wordEnd(begin + 1);
      const word = statement.codeText(begin, end + 1);
      this.at = end + 1;
      if (word !== '.true.' && word !== '.false.') this.failed = true;
      return this.node('logical', word, begin);
    }
    if (byte === 40 || byte === 91) {
      const close = match[begin]!;
      if (close < 0 || close >= this.to) {
        this.failed = true;
        return this.unread(begin, begin + 1);
      }
      const isArray = byte === 91 || (code[begin + 1] === 47 && code[close - 1] === 47 && close > begin + 2);
      const parts =
        byte === 91
          ? this.list(begin + 1, close)
          : isArray
            ? this.list(begin + 2, close - 1)
            : this.list(begin + 1, close);
      this.at = close + 1;
      return isArray
        ? this.node('array', '', begin, parts)
        : parts.length === 1
          ? parts[0]!
          : this.node('complex', '', begin, parts);
    }
    return this.reference();
  }

  /** A name with whatever indexes it and the components behind it. */
  private reference(): Expression {
    const { statement } = this;
    const { code, match } = statement;
    const begin = this.at;
    const nameEnd = statement.nameEnd(begin);
    if (nameEnd === begin || nameEnd > this.to) {
      this.failed = true;
      return this.unread(begin, begin + 1);
    }
    let found = this.node('name', statement.name(begin, nameEnd), begin);
    this.at = nameEnd;
    while (this.at < this.to) {
      if (code[this.at] === 40 && match[this.at]! > this.at && match[this.at]! < this.to) {
        const close = match[this.at]!;
        found = this.node('indexed', found.value, begin, [found, ...this.list(this.at + 1, close)]);
        this.at = close + 1;
      } else if (code[this.at] === 37) {
        const end = statement.nameEnd(this.at + 1);
        if (end === this.at + 1) break;
        found = this.node('component', statement.name(this.at + 1, end), begin, [found]);
        this.at = end;
      } else break;
    }
    return found;
  }

  private list(from: number, to: number): Expression[] {
    const { statement } = this;
    const parts: Expression[] = [];
    const outer = this.to;
    for (let at = from; at < to; ) {
      const end = statement.comma(at, to);
      parts.push(this.item(at, end));
      at = end + 1;
    }
    this.to = outer;
    return parts;
  }

  /** An argument, a subscript or a section. */
  private item(from: number, to: number): Expression {
    const { statement } = this;
    const { code, match } = statement;
    const nameEnd = statement.nameEnd(from);
    if (nameEnd > from && nameEnd < to && code[nameEnd] === 61 && code[nameEnd + 1] !== 61)
      return this.node('keyword', statement.name(from, nameEnd), from, [this.part(nameEnd + 1, to)]);
    const colons: number[] = [];
    for (let at = from; at < to; at++) {
      if ((code[at] === 40 || code[at] === 91) && match[at]! > at) at = match[at]!;
      else if (code[at] === 58) colons.push(at);
    }
    if (colons.length === 0) return this.part(from, to);
    const ends = [...colons, to];
    const parts = ends.map((end, index) => {
      const begin = index === 0 ? from : ends[index - 1]! + 1;
      return begin === end ? this.node('absent', '', begin) : this.part(begin, end);
    });
    return this.node('section', '', from, parts);
  }

  private part(from: number, to: number): Expression {
    const outer = this.to;
    this.to = to;
    this.at = from;
    const found = this.binary(0);
    if (this.at !== to) this.failed = true;
    this.to = outer;
    return found;
  }
}
