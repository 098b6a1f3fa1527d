/** Cuts Python into logical lines of tokens, with comments set apart: text comes in, flat arrays go out, in one pass. */

export const P = { name: 1, number: 2, string: 3, operator: 4 } as const;

export interface LogicalLine {
  /** First token and the one behind the last. */
  readonly from: number;
  to: number;
  /** Columns of white space before it; a tab goes to the next multiple of eight. */
  readonly indent: number;
}

export interface PythonComment {
  readonly start: number;
  readonly end: number;
  readonly line: number;
  readonly alone: boolean;
}

export interface PythonTokens {
  readonly text: string;
  count: number;
  kind: Uint8Array;
  start: Int32Array;
  end: Int32Array;
  line: Int32Array;
  /** For a bracket its partner; -1 where it has none. */
  match: Int32Array;
  readonly lines: LogicalLine[];
  readonly comments: PythonComment[];
  readonly lineStarts: number[];
  readonly incomplete: { line: number; why: string }[];
}

const isName = (code: number) =>
  (code >= 97 && code <= 122) || (code >= 65 && code <= 90) || code === 95 || code >= 128;
const isDigit = (code: number) => code >= 48 && code <= 57;
const TWO = new Set([
  '**',
  '//',
  '->',
  ':=',
  '==',
  '!=',
  '<=',
  '>=',
  '+=',
  '-=',
  '*=',
  '/=',
  '%=',
  '@=',
  '&=',
  '|=',
  '^=',
  '<<',
  '>>',
  '<>',
]);

export function tokenisePython(text: string): PythonTokens {
  const length = text.length;
  let capacity = Math.max(64, length >> 2);
  const tokens: PythonTokens = {
    text,
    count: 0,
    kind: new Uint8Array(capacity),
    start: new Int32Array(capacity),
    end: new Int32Array(capacity),
    line: new Int32Array(capacity),
    match: new Int32Array(0),
    lines: [],
    comments: [],
    lineStarts: [0],
    incomplete: [],
  };
  const { lineStarts, lines, comments } = tokens;
  const open: number[] = [];
  const pairs: number[] = [];
  let at = text.charCodeAt(0) === 0xfeff ? 1 : 0;
  let line = 1;
  let current = null as LogicalLine | null;
  let indent = 0;
  let fresh = true;

  while (at < length) {
    const code = text.charCodeAt(at);
    if (code === 10 || code === 13) {
      at += code === 13 && text.charCodeAt(at + 1) === 10 ? 2 : 1;
      line++;
      lineStarts.push(at);
      if (open.length > 0 && startsStatement(at)) {
        // A bracket that was never closed must not swallow the rest of the file.
        tokens.incomplete.push({
          line: tokens.line[open[0]!]!,
          why: 'a bracket is not closed; reading goes on at the next definition',
        });
        open.length = 0;
      }
      if (open.length === 0) {
        if (current !== null) current.to = tokens.count;
        current = null;
        fresh = true;
        indent = 0;
      }
    } else if (code === 32 || code === 12) {
      if (fresh) indent++;
      at++;
    } else if (code === 9) {
      if (fresh) indent = (Math.floor(indent / 8) + 1) * 8;
      at++;
    } else if (code === 92 && (text.charCodeAt(at + 1) === 10 || text.charCodeAt(at + 1) === 13)) {
      at += text.charCodeAt(at + 1) === 13 && text.charCodeAt(at + 2) === 10 ? 3 : 2;
      line++;
      lineStarts.push(at);
    } else if (code === 35) {
      let end = text.indexOf('\n', at);
      if (end < 0) end = length;
      comments.push({
        start: at,
        end: text.charCodeAt(end - 1) === 13 ? end - 1 : end,
        line,
        alone: tokens.count === 0 || tokens.line[tokens.count - 1] !== line,
      });
      at = end;
    } else {
      fresh = false;
      if (isName(code)) {
        let end = at + 1;
        while (end < length && (isName(text.charCodeAt(end)) || isDigit(text.charCodeAt(end)))) end++;
        const next = text.charCodeAt(end);
        if (
          (next === 34 || next === 39) &&
          end - at <= 2 &&
          /^(?:[rbuft]|rb|br|fr|rf|ur|tr|rt)$/i.test(text.slice(at, end))
        )
          at = string(at, end, next);
        else at = push(P.name, at, end);
      } else if (isDigit(code) || (code === 46 && isDigit(text.charCodeAt(at + 1)))) {
        let end = at + 1;
        while (end < length) {
          const next = text.charCodeAt(end);
          if (isName(next) || isDigit(next) || next === 46) end++;
          else if (
            (next === 43 || next === 45) &&
            (text.charCodeAt(end - 1) | 32) === 101 &&
            (text.charCodeAt(at + 1) | 32) !== 120
          )
            end++;
          else break;
        }
        at = push(P.number, at, end);
      } else if (code === 34 || code === 39) at = string(at, at, code);
      else {
        const two = TWO.has(text.slice(at, at + 2)) ? 2 : 1;
        if (two === 1) {
          if (code === 40 || code === 91 || code === 123) open.push(tokens.count);
          else if (code === 41 || code === 93 || code === 125) {
            const partner = open.pop();
            if (partner !== undefined) pairs.push(partner, tokens.count);
          }
        }
        at = push(P.operator, at, at + two);
      }
    }
  }
  if (current !== null) current.to = tokens.count;
  tokens.match = new Int32Array(tokens.count).fill(-1);
  for (let index = 0; index < pairs.length; index += 2) {
    tokens.match[pairs[index]!] = pairs[index + 1]!;
    tokens.match[pairs[index + 1]!] = pairs[index]!;
  }
  return tokens;

  function push(kind: number, start: number, end: number, onLine = line): number {
    const index = tokens.count;
    if (index === capacity) {
      capacity *= 2;
      tokens.kind = grown(tokens.kind, new Uint8Array(capacity));
      tokens.start = grown(tokens.start, new Int32Array(capacity));
      tokens.end = grown(tokens.end, new Int32Array(capacity));
      tokens.line = grown(tokens.line, new Int32Array(capacity));
    }
    if (current === null) {
      current = { from: index, to: index, indent };
      lines.push(current);
    }
    tokens.kind[index] = kind;
    tokens.start[index] = start;
    tokens.end[index] = end;
    tokens.line[index] = onLine;
    tokens.count = index + 1;
    return end;
  }

  function string(start: number, quoteAt: number, quote: number): number {
    const first = line;
    const triple = text.charCodeAt(quoteAt + 1) === quote && text.charCodeAt(quoteAt + 2) === quote;
    let end = quoteAt + (triple ? 3 : 1);
    let closed = false;
    while (end < length) {
      const code = text.charCodeAt(end);
      if (code === 92) {
        if (text.charCodeAt(end + 1) === 10) {
          line++;
          lineStarts.push(end + 2);
        }
        end += 2;
      } else if (code === 10) {
        if (!triple) break;
        line++;
        end++;
        lineStarts.push(end);
      } else if (
        code === quote &&
        (!triple || (text.charCodeAt(end + 1) === quote && text.charCodeAt(end + 2) === quote))
      ) {
        end += triple ? 3 : 1;
        closed = true;
        break;
      } else end++;
    }
    end = Math.min(end, length);
    if (!closed) tokens.incomplete.push({ line: first, why: 'a string is not closed' });
    return push(P.string, start, end, first);
  }

  function startsStatement(from: number): boolean {
    const code = text.charCodeAt(from);
    // Only `def` and `class` at the margin: nothing inside brackets begins so.
    return (code === 100 && text.startsWith('def ', from)) || (code === 99 && text.startsWith('class ', from));
  }
}

function grown<A extends Uint8Array | Int32Array>(from: A, into: A): A {
  into.set(from);
  return into;
}
