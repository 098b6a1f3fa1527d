/** Types and kinds as Fortran writes them, to a type and bytes. Pure. */
import type { Statement } from './statement.ts';

export interface TypeSpec {
  readonly type: string;
  /** null where only something outside this file knows. */
  readonly bytes: number | null;
  readonly kind: string | undefined;
  readonly length: string | undefined;
  /** Where the specification ends in the code, the blank behind it included. */
  readonly end: number;
}

/** Kind names that the language itself defines (Fortran 2018, 16.10.2 and 18.2), as bytes of one real or integer. */
const KNOWN_KINDS: Readonly<Record<string, number>> = {
  real32: 4,
  real64: 8,
  real128: 16,
  int8: 1,
  int16: 2,
  int32: 4,
  int64: 8,
  c_int: 4,
  c_short: 2,
  c_long: 8,
  c_long_long: 8,
  c_size_t: 8,
  c_int8_t: 1,
  c_int16_t: 2,
  c_int32_t: 4,
  c_int64_t: 8,
  c_intptr_t: 8,
  c_float: 4,
  c_double: 8,
  c_long_double: 16,
  c_bool: 1,
  c_char: 1,
  c_float_complex: 4,
  c_double_complex: 8,
};

type KindOf = (name: string) => number | null;

/**
 * The type that a statement says at `from`; null when it says none there.
 *
 * @param kindOf  bytes that a kind name stands for, as far as the file knows
 */
export function typeSpecAt(statement: Statement, from: number, kindOf: KindOf): TypeSpec | null {
  let end: number;
  switch (statement.code[from]) {
    case 114: // r
      end = statement.keyword('real', from);
      return end < 0 ? null : numeric(statement, 'real', 4, end, kindOf);
    case 105: // i
      end = statement.keyword('integer', from);
      return end < 0 ? null : numeric(statement, 'integer', 4, end, kindOf);
    case 108: // l
      end = statement.keyword('logical', from);
      return end < 0 ? null : numeric(statement, 'logical', 4, end, kindOf);
    case 100: // d
      end = statement.keywords('double', 'precision', from);
      if (end >= 0) return specOf('real', 8, 'double precision', undefined, end);
      end = statement.keywords('double', 'complex', from);
      return end < 0 ? null : specOf('complex', 16, 'double complex', undefined, end);
    case 99: // c
      end = statement.keyword('character', from);
      if (end >= 0) return character(statement, end);
      end = statement.keyword('complex', from);
      if (end >= 0) return numeric(statement, 'complex', 8, end, kindOf);
      return named(statement, 'class', from);
    case 98: // b
      end = statement.keyword('byte', from);
      return end < 0 ? null : specOf('byte', 1, undefined, undefined, end);
    case 116: // t
      return named(statement, 'type', from);
    case 112: // p
      return named(statement, 'procedure', from);
    case 95: // _
      return macro(statement, from);
    default:
      return null;
  }
}

function specOf(
  type: string,
  bytes: number | null,
  kind: string | undefined,
  length: string | undefined,
  end: number,
): TypeSpec {
  return { type, bytes, kind, length, end };
}

/** Types behind macros that large codes use (`_RL`, `_RS`): their bytes are found when the file is linked with the macro. */
function macro(statement: Statement, from: number): TypeSpec | null {
  const end = statement.wordEnd(from);
  const { code } = statement;
  const second = code[from + 1];
  const third = code[from + 2];
  const real = end - from === 3 && second === 114 && (third === 52 || third === 56 || third === 108 || third === 115);
  if (!real && !(end - from === 2 && second === 105)) return null;
  return specOf(
    real ? 'real' : 'integer',
    null,
    statement.name(from, end),
    undefined,
    code[end] === 32 ? end + 1 : end,
  );
}

function numeric(statement: Statement, type: string, plain: number, from: number, kindOf: KindOf): TypeSpec | null {
  const { code, length } = statement;
  if (from < length && code[from] === 42) {
    const end = digitsEnd(statement, from + 1);
    if (end === from + 1) return null;
    const kind = statement.name(from + 1, end);
    return specOf(type, Number(kind), kind, undefined, behindBlank(statement, end));
  }
  if (from < length && code[from] === 40) {
    const close = statement.match[from]!;
    if (close < 0) return null;
    let begin = from + 1;
    if (statement.keyword('kind', begin) === begin + 4 && code[begin + 4] === 61) begin += 5;
    const kind = statement.codeText(begin, close);
    const unit = kindBytes(kind, kindOf);
    return specOf(
      type,
      unit === null ? null : type === 'complex' ? 2 * unit : unit,
      kind,
      undefined,
      behindBlank(statement, close + 1),
    );
  }
  return specOf(type, plain, undefined, undefined, from);
}

function character(statement: Statement, from: number): TypeSpec | null {
  const { code } = statement;
  if (from < statement.length && code[from] === 42) {
    if (code[from + 1] === 40) {
      const close = statement.match[from + 1]!;
      if (close < 0) return null;
      return specOf('character', 1, undefined, statement.codeText(from + 2, close), behindBlank(statement, close + 1));
    }
    const end = digitsEnd(statement, from + 1);
    if (end === from + 1) return null;
    return specOf('character', 1, undefined, statement.name(from + 1, end), behindBlank(statement, end));
  }
  if (from < statement.length && code[from] === 40) {
    const close = statement.match[from]!;
    if (close < 0) return null;
    return specOf('character', 1, undefined, lengthIn(statement, from + 1, close), behindBlank(statement, close + 1));
  }
  return specOf('character', 1, undefined, '1', from);
}

function lengthIn(statement: Statement, from: number, to: number): string {
  let first: string | null = null;
  for (let at = from; at < to; ) {
    const end = statement.comma(at, to);
    const text = statement.codeText(at, end);
    if (text.startsWith('len=')) return text.slice(4);
    if (first === null && !text.startsWith('kind=')) first = text;
    at = end + 1;
  }
  return first ?? '1';
}

function named(statement: Statement, word: string, from: number): TypeSpec | null {
  const end = statement.keyword(word, from);
  if (end < 0 || statement.code[end] !== 40 || end >= statement.length) return null;
  const close = statement.match[end]!;
  if (close < 0) return null;
  const inside = statement.codeText(end + 1, close);
  const behind = behindBlank(statement, close + 1);
  return word === 'procedure'
    ? specOf('procedure', null, inside, undefined, behind)
    : specOf(`${word}(${inside})`, null, undefined, undefined, behind);
}

function digitsEnd(statement: Statement, from: number): number {
  let at = from;
  while (at < statement.length && statement.code[at]! >= 48 && statement.code[at]! <= 57) at++;
  return at;
}

function behindBlank(statement: Statement, at: number): number {
  return at < statement.length && statement.code[at] === 32 ? at + 1 : at;
}

export function kindBytes(kind: string, kindOf: KindOf): number | null {
  const first = kind.charCodeAt(0);
  if (first >= 48 && first <= 57) return /^\d+$/.test(kind) ? Number(kind) : null;
  const known = kindOf(kind);
  if (known !== null) return known;
  if (Object.hasOwn(KNOWN_KINDS, kind)) return KNOWN_KINDS[kind]!;
  return kind.includes('(') ? kindExpression(kind) : null;
}

/** `selected_real_kind(15, 307)`, `kind(1.d0)`, `selected_int_kind(9)`. */
export function kindExpression(text: string): number | null {
  if (!text.includes('(')) return null;
  const code = text.replace(/\s+/g, '').toLowerCase();
  const real = /^selected_real_kind\((?:p=)?(\d+)?(?:,?(?:r=)?(\d+))?\)$/.exec(code);
  if (real !== null) {
    const [digits, range] = [Number(real[1] ?? 0), Number(real[2] ?? 0)];
    return digits <= 6 && range <= 37 ? 4 : digits <= 15 && range <= 307 ? 8 : 16;
  }
  const integer = /^selected_int_kind\((?:r=)?(\d+)\)$/.exec(code);
  if (integer !== null) {
    const range = Number(integer[1]);
    return range <= 2 ? 1 : range <= 4 ? 2 : range <= 9 ? 4 : range <= 18 ? 8 : 16;
  }
  const of = /^kind\((.*)\)$/.exec(code)?.[1];
  if (of === undefined) return null;
  if (/^[\d.]+d[+-]?\d+$/.test(of)) return 8;
  if (/^\d+$/.test(of) || /^[\d.]+(e[+-]?\d+)?$/.test(of)) return 4;
  if (/^\.(true|false)\.$/.test(of)) return 4;
  if (/^(?:''|".?"|'.?')$/.test(of)) return 1;
  return null;
}
