/**
 * Cuts C and C++ into tokens, and sets comments and preprocessor lines apart: text comes in, flat arrays go out.
 * One pass, no backtracking: every character is looked at a bounded number of times.
 */

import type { Position } from '../../model/place.ts';

export const T = { name: 1, number: 2, string: 3, char: 4, punctuation: 5 } as const;

export interface Comment {
  readonly start: number;
  readonly end: number;
  readonly line: number;
  readonly endLine: number;
  /** Nothing but white space stands before it on its line. */
  readonly alone: boolean;
}

export interface Macro {
  readonly name: string;
  /** Parameters as written; null for an object-like macro. */
  readonly params: string | null;
  readonly body: string;
  readonly line: number;
  readonly offset: number;
  readonly condition: number;
}

export interface Directive {
  readonly path: string;
  readonly line: number;
  readonly column: number;
  readonly condition: number;
}

export interface Tokens {
  readonly text: string;
  count: number;
  kind: Uint8Array;
  start: Int32Array;
  end: Int32Array;
  line: Int32Array;
  /** Index into `conditions`; 0 is unconditional. */
  condition: Int32Array;
  readonly conditions: string[];
  /** For a condition: which #if it belongs to, so that its other branches can be told. */
  readonly group: number[];
  /** For a bracket of any kind its partner; -1 where it has none. */
  match: Int32Array;
  readonly comments: Comment[];
  readonly macros: Macro[];
  readonly includes: Directive[];
  readonly lineStarts: number[];
  readonly incomplete: { line: number; why: string }[];
  /** Offsets of what the guard of a header encloses; null without one. */
  guard: { readonly from: number; readonly to: number } | null;
}

/** Where a part of a file stands in it. */
export interface Part {
  /** It begins inside the guard of a header. */
  readonly guarded: boolean;
  /** It ends inside the guard. */
  readonly open: boolean;
  /** Something stands above it, so that its first #ifndef is no guard. */
  readonly later: boolean;
}

/** Tokens as the parsers of declarations look at them. */
export interface TokenView {
  readonly language: 'c' | 'c++';
  word(at: number): string;
  kind(at: number): number;
  /** The partner of a bracket; -1 where it has none. */
  match(at: number): number;
  condition(at: number): string;
  at(token: number): Position;
  textOf(from: number, to: number): string;
}

interface Branch {
  readonly group: number;
  /** Conditions of the branches before this one. */
  readonly before: string[];
  /** Condition outside. */
  readonly outer: number;
  /** Open brackets where the #if stood. */
  readonly depth: number[];
  /** Open brackets at the end of the first branch that was read. */
  first: number[] | null;
  live: boolean;
  taken: boolean;
  readonly outerLive: boolean;
}

const IDENT = new Uint8Array(256);
for (let code = 0; code < 256; code++) {
  const character = String.fromCharCode(code);
  if (/[A-Za-z_$]/.test(character) || code >= 128) IDENT[code] = 1;
  else if (/[0-9]/.test(character)) IDENT[code] = 2;
}
const isIdent = (code: number) => code >= 256 || IDENT[code] !== 0;

export function tokenise(text: string, define: Readonly<Record<string, string>> = {}, part?: Part): Tokens {
  const length = text.length;
  let capacity = Math.max(64, length >> 2);
  const tokens: Tokens = {
    text,
    count: 0,
    kind: new Uint8Array(capacity),
    start: new Int32Array(capacity),
    end: new Int32Array(capacity),
    line: new Int32Array(capacity),
    condition: new Int32Array(capacity),
    conditions: [''],
    group: [-1],
    match: new Int32Array(0),
    comments: [],
    macros: [],
    includes: [],
    lineStarts: [0],
    incomplete: [],
    guard: null,
  };
  const { lineStarts, comments } = tokens;
  const branches: Branch[] = [];
  let condition = 0;
  let live = true;
  let groups = 0;
  let at = 0;
  let line = 1;
  let lineHasCode = false;
  let guard: string | null = null;
  let directives = part?.later === true ? 2 : 0;
  const brackets = new Brackets();
  if (part?.guarded === true)
    branches.push({
      group: ++groups,
      before: [],
      outer: 0,
      depth: [],
      first: null,
      live: true,
      taken: false,
      outerLive: true,
    });

  while (at < length) {
    const code = text.charCodeAt(at);
    if (code === 10) {
      at++;
      line++;
      lineStarts.push(at);
      lineHasCode = false;
    } else if (code === 32 || code === 9 || code === 13 || code === 12 || code === 11) at++;
    else if (code === 92) {
      // A backslash outside a directive only joins lines.
      at++;
    } else if (code === 47 && (text.charCodeAt(at + 1) === 47 || text.charCodeAt(at + 1) === 42)) at = comment(at);
    else if (code === 35 && !lineHasCode) at = directive(at);
    else if (!live) {
      // A branch that is ruled out: only its line ends and directives matter.
      const end = text.indexOf('\n', at);
      at = end < 0 ? length : end;
    } else {
      lineHasCode = true;
      if (isIdent(code) && !(code >= 48 && code <= 57)) {
        let end = at + 1;
        while (end < length && isIdent(text.charCodeAt(end))) end++;
        const next = text.charCodeAt(end);
        if (next === 34 && /^(?:u8|u|U|L)?R$/.test(text.slice(at, end))) at = rawString(at, end);
        else if ((next === 34 || next === 39) && end - at <= 2 && /^(?:u8|u|U|L)$/.test(text.slice(at, end)))
          at = quoted(at, end, next);
        else {
          push(T.name, at, end);
          at = end;
        }
      } else if ((code >= 48 && code <= 57) || (code === 46 && digit(text.charCodeAt(at + 1)))) {
        let end = at + 1;
        while (end < length) {
          const next = text.charCodeAt(end);
          if (isIdent(next) || next === 46) end++;
          else if (next === 39 && isIdent(text.charCodeAt(end + 1))) end += 2;
          else if ((next === 43 || next === 45) && exponentBefore(at, end)) end++;
          else break;
        }
        push(T.number, at, end);
        at = end;
      } else if (code === 34 || code === 39) at = quoted(at, at, code);
      else {
        const next = text.charCodeAt(at + 1);
        const two = (code === 58 && next === 58) || (code === 45 && next === 62) ? 2 : 1;
        if (two === 1) {
          if (code === 40 || code === 91 || code === 123) brackets.open(code, tokens.count);
          else if (code === 41 || code === 93 || code === 125) brackets.close(code, tokens.count);
        }
        push(T.punctuation, at, at + two);
        at += two;
      }
    }
  }
  if (branches.length > (part?.open === true ? 1 : 0))
    tokens.incomplete.push({ line, why: 'an #if is not closed before the end of the file' });
  tokens.match = brackets.finish(tokens.count);
  return tokens;

  function push(kind: number, start: number, end: number): void {
    const index = tokens.count;
    if (index === capacity) {
      capacity *= 2;
      tokens.kind = grown(tokens.kind, new Uint8Array(capacity));
      tokens.start = grown(tokens.start, new Int32Array(capacity));
      tokens.end = grown(tokens.end, new Int32Array(capacity));
      tokens.line = grown(tokens.line, new Int32Array(capacity));
      tokens.condition = grown(tokens.condition, new Int32Array(capacity));
    }
    tokens.kind[index] = kind;
    tokens.start[index] = start;
    tokens.end[index] = end;
    tokens.line[index] = line;
    tokens.condition[index] = condition;
    tokens.count = index + 1;
  }

  function exponentBefore(start: number, end: number): boolean {
    const before = text.charCodeAt(end - 1) | 32;
    const hexadecimal = (text.charCodeAt(start + 1) | 32) === 120;
    return hexadecimal ? before === 112 : before === 101;
  }

  function comment(start: number): number {
    const first = line;
    let end: number;
    if (text.charCodeAt(start + 1) === 47) {
      end = text.indexOf('\n', start);
      if (end < 0) end = length;
      // A comment line that ends in a backslash goes on.
      while (end < length && text.charCodeAt(end - 1) === 92) {
        line++;
        lineStarts.push(end + 1);
        const next = text.indexOf('\n', end + 1);
        end = next < 0 ? length : next;
      }
    } else {
      const close = text.indexOf('*/', start + 2);
      end = close < 0 ? length : close + 2;
      if (close < 0) tokens.incomplete.push({ line, why: 'a comment is not closed before the end of the file' });
      for (let next = text.indexOf('\n', start); next >= 0 && next < end; next = text.indexOf('\n', next + 1)) {
        line++;
        lineStarts.push(next + 1);
      }
    }
    if (live) comments.push({ start, end, line: first, endLine: line, alone: !lineHasCode });
    return end;
  }

  function quoted(start: number, open: number, quote: number): number {
    let end = open + 1;
    while (end < length) {
      const code = text.charCodeAt(end);
      if (code === 92) {
        if (text.charCodeAt(end + 1) === 10) {
          line++;
          lineStarts.push(end + 2);
        }
        end += 2;
      } else if (code === quote) {
        end++;
        break;
      } else if (code === 10) break;
      else end++;
    }
    end = Math.min(end, length);
    push(quote === 34 ? T.string : T.char, start, end);
    return end;
  }

  function rawString(start: number, open: number): number {
    const paren = text.indexOf('(', open);
    const mark = paren < 0 || paren - open > 18 ? null : `)${text.slice(open + 1, paren)}"`;
    const close = mark === null ? -1 : text.indexOf(mark, paren);
    const end = close < 0 ? Math.min(length, open + 1) : close + mark!.length;
    push(T.string, start, end);
    for (let next = text.indexOf('\n', start); next >= 0 && next < end; next = text.indexOf('\n', next + 1)) {
      line++;
      lineStarts.push(next + 1);
    }
    return end;
  }

  function directive(start: number): number {
    const offset = start;
    const first = line;
    let end = start;
    let clean = '';
    let from = start + 1;
    // To the end of the line, over joined lines and comments.
    for (;;) {
      end = text.indexOf('\n', from);
      if (end < 0) end = length;
      const open = text.indexOf('/*', from);
      const slashes = text.indexOf('//', from);
      if (
        open >= 0 &&
        open < end &&
        (slashes < 0 || slashes > open || slashes >= end) &&
        !insideQuotes(text, from, open)
      ) {
        const close = text.indexOf('*/', open + 2);
        clean += `${text.slice(from, open)} `;
        const after = close < 0 ? length : close + 2;
        for (let next = text.indexOf('\n', open); next >= 0 && next < after; next = text.indexOf('\n', next + 1)) {
          line++;
          lineStarts.push(next + 1);
        }
        if (live) comments.push({ start: open, end: after, line: first, endLine: line, alone: false });
        from = after;
        if (after >= length) {
          end = length;
          break;
        }
        continue;
      }
      const back = text.charCodeAt(end - 1) === 13 ? end - 2 : end - 1;
      if (slashes >= 0 && slashes < end && !insideQuotes(text, from, slashes)) {
        clean += text.slice(from, slashes);
        if (live) comments.push({ start: slashes, end, line, endLine: line, alone: false });
        break;
      }
      if (end < length && text.charCodeAt(back) === 92) {
        clean += `${text.slice(from, back)} `;
        line++;
        lineStarts.push(end + 1);
        from = end + 1;
        continue;
      }
      clean += text.slice(from, end);
      break;
    }
    apply(clean.trim(), first, offset);
    return end;
  }

  function apply(words: string, at: number, offset: number): void {
    const split = /^(\w+)\s*/.exec(words);
    if (split === null) return;
    const keyword = split[1]!;
    const rest = words.slice(split[0]!.length).trim();
    directives++;
    switch (keyword) {
      case 'if':
      case 'ifdef':
      case 'ifndef': {
        const said =
          keyword === 'if'
            ? rest
            : keyword === 'ifdef'
              ? `defined(${rest.split(/\s/)[0]})`
              : `!defined(${rest.split(/\s/)[0]})`;
        const branch: Branch = {
          group: ++groups,
          before: [],
          outer: condition,
          depth: brackets.save(),
          first: null,
          live: true,
          taken: false,
          outerLive: live,
        };
        branches.push(branch);
        if (directives === 1 && keyword === 'ifndef') guard = rest.split(/\s/)[0]!;
        else if (directives === 1 && /^!\s*defined\s*\(?\s*(\w+)\s*\)?$/.test(rest))
          guard = /(\w+)\s*\)?$/.exec(rest)![1]!;
        enter(branch, said);
        break;
      }
      case 'elif':
      case 'elifdef':
      case 'elifndef':
      case 'else': {
        const branch = branches.at(-1);
        if (branch === undefined) {
          tokens.incomplete.push({ line: at, why: `#${keyword} without #if` });
          break;
        }
        if (live) branch.first ??= brackets.save();
        brackets.restore(branch.depth);
        enter(
          branch,
          keyword === 'else'
            ? null
            : keyword === 'elif'
              ? rest
              : `${keyword === 'elifndef' ? '!' : ''}defined(${rest})`,
        );
        break;
      }
      case 'endif': {
        const branch = branches.pop();
        if (branch === undefined) {
          tokens.incomplete.push({ line: at, why: '#endif without #if' });
          break;
        }
        if (branch.first !== null) brackets.restore(branch.first);
        if (tokens.guard !== null && branches.length === 0 && tokens.guard.to === length)
          tokens.guard = { from: tokens.guard.from, to: offset };
        condition = branch.outer;
        live = branch.outerLive;
        break;
      }
      case 'define': {
        if (!live) break;
        const match = /^([A-Za-z_$][\w$]*)(\([^)]*\))?\s*/.exec(rest);
        if (match === null) break;
        // The guard of a header is no condition that anyone could choose.
        if (directives === 2 && match[1] === guard && branches.length === 1) {
          tokens.conditions[condition] = '';
          condition = 0;
          tokens.guard = { from: offset, to: length };
          (branches[0] as { -readonly [K in keyof Branch]: Branch[K] }).outer = 0;
          break;
        }
        const params = match[2] ?? null;
        tokens.macros.push({
          name: match[1]!,
          params,
          body: rest.slice(match[0]!.length).trim(),
          line: at,
          offset: offset + Math.max(0, text.slice(offset, offset + 200).indexOf(match[1]!)),
          condition,
        });
        break;
      }
      case 'include':
      case 'include_next':
      case 'import': {
        if (!live) break;
        const match = /^[<"]([^>"]*)[>"]/.exec(rest);
        if (match !== null) tokens.includes.push({ path: match[1]!, line: at, column: 1, condition });
        break;
      }
    }
  }

  function enter(branch: Branch, said: string | null): void {
    const negated = branch.before.map((one) => negate(one));
    const own = said === null ? negated.join(' && ') : said;
    const truth = said === null ? null : truthOf(said, define);
    branch.live = branch.outerLive && !branch.taken && truth !== false;
    if (truth === true) branch.taken = true;
    if (said !== null) branch.before.push(said);
    live = branch.live;
    const outer = tokens.conditions[branch.outer] ?? '';
    const shown = own.replace(/\s+/g, ' ').slice(0, 200);
    // Decided by --define: it stands there unconditionally.
    const decided = truth === true;
    condition = tokens.conditions.length;
    tokens.conditions.push(decided ? outer : outer === '' ? shown : `${outer} && ${shown}`);
    tokens.group.push(branch.group);
  }
}

const digit = (code: number) => code >= 48 && code <= 57;

function grown<A extends Uint8Array | Int32Array>(from: A, into: A): A {
  into.set(from);
  return into;
}

function insideQuotes(text: string, from: number, to: number): boolean {
  let inside = false;
  for (let at = from; at < to; at++) {
    const code = text.charCodeAt(at);
    if (code === 92) at++;
    else if (code === 34) inside = !inside;
  }
  return inside;
}

function negate(condition: string): string {
  return /^!?\s*\w+$|^!?defined\(\w+\)$/.test(condition)
    ? condition.startsWith('!')
      ? condition.slice(1).trim()
      : `!${condition}`
    : `!(${condition})`;
}

/** True or false where the condition is decided by the names given; null where it is open. `0` and `1` always are. */
function truthOf(said: string, define: Readonly<Record<string, string>>): boolean | null {
  const plain = said.trim();
  if (plain === '0') return false;
  if (plain === '1') return true;
  const alternatives = plain.split('||');
  if (alternatives.length > 1) {
    const truths = alternatives.map((one) => truthOf(one, define));
    return truths.includes(true) ? true : truths.every((one) => one === false) ? false : null;
  }
  const parts = plain.split('&&');
  if (parts.length > 1) {
    const truths = parts.map((one) => truthOf(one, define));
    return truths.includes(false) ? false : truths.every((one) => one === true) ? true : null;
  }
  const defined = /^(!?)\s*defined\s*\(?\s*(\w+)\s*\)?$/.exec(plain);
  if (defined !== null) return Object.hasOwn(define, defined[2]!) ? defined[1] === '' : null;
  const compared = /^(!?)\s*(\w+)\s*(?:(==|!=|>=|<=|>|<)\s*(-?\w+))?$/.exec(plain);
  if (compared === null || !Object.hasOwn(define, compared[2]!)) return null;
  const value = Number(define[compared[2]!] === '' ? 1 : define[compared[2]!]);
  if (compared[3] === undefined) return (value !== 0) !== (compared[1] === '!');
  const other = Object.hasOwn(define, compared[4]!) ? Number(define[compared[4]!]) : Number(compared[4]);
  if (Number.isNaN(value) || Number.isNaN(other)) return null;
  const answers = {
    '==': value === other,
    '!=': value !== other,
    '>=': value >= other,
    '<=': value <= other,
    '>': value > other,
    '<': value < other,
  };
  return answers[compared[3] as keyof typeof answers];
}

/**
 * Pairs brackets. At #else the state of the #if comes back, at #endif that of the first branch, so that alternatives which
 * each open a brace (two headers over one body) do not unbalance the rest.
 */
class Brackets {
  /** Token of each open bracket times four, plus its kind: 0 round, 1 square, 2 curly. */
  private stack: number[] = [];
  private readonly pairs: number[] = [];

  open(code: number, token: number): void {
    this.stack.push(token * 4 + (code === 40 ? 0 : code === 91 ? 1 : 2));
  }

  close(code: number, token: number): void {
    const wanted = code === 41 ? 0 : code === 93 ? 1 : 2;
    // A bracket that was never closed is dropped when one further out is; a stray one has no partner.
    for (let depth = this.stack.length - 1; depth >= 0 && depth > this.stack.length - 4; depth--) {
      const kind = this.stack[depth]! % 4;
      if (kind === wanted) {
        this.pairs.push((this.stack[depth]! - kind) / 4, token);
        this.stack.length = depth;
        return;
      }
      // A closing round or square bracket does not reach out of a block.
      if (wanted !== 2 && kind === 2) return;
    }
  }

  save(): number[] {
    // Deep nesting at many conditions would cost the square of the file; the outermost brackets are what matters.
    return this.stack.slice(0, 200);
  }

  restore(saved: readonly number[]): void {
    this.stack = saved.slice();
  }

  finish(count: number): Int32Array {
    const match = new Int32Array(count).fill(-1);
    for (let index = 0; index < this.pairs.length; index += 2) {
      const [open, close] = [this.pairs[index]!, this.pairs[index + 1]!];
      // In alternatives one brace may close several; the first pair stands.
      if (match[open] === -1) match[open] = close;
      if (match[close] === -1) match[close] = open;
    }
    return match;
  }
}
