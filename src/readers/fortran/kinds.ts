/** Types and kinds as Fortran writes them, to a type and bytes. Pure. */

export interface TypeSpec {
  readonly type: string;
  /** null where only something outside this file knows. */
  readonly bytes: number | null;
  readonly kind?: string;
  readonly length?: string;
  /** Where the specification ends in the text. */
  readonly end: number;
}

const DEFAULT_BYTES: Readonly<Record<string, number>> = {
  real: 4,
  integer: 4,
  logical: 4,
  complex: 8,
  character: 1,
  byte: 1,
};

/** Kind names that the language itself or common modules define, as bytes of one real or integer. */
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

const START =
  /^(double\s*precision|double\s*complex|real|integer|logical|complex|character|byte|type|class|procedure|_r[48ls]|_rs|_i)(?![a-z0-9_])/;

/**
 * The type at the beginning of a statement; null when it begins with none.
 *
 * @param code  lower case, character constants blanked
 * @param kindOf  bytes that a kind name stands for, as far as the file knows
 */
export function typeSpecAt(code: string, kindOf: (name: string) => number | null): TypeSpec | null {
  const match = START.exec(code);
  if (match === null) return null;
  const word = match[1]!.replace(/\s+/g, '');
  let end = match[0].length;
  if (word === 'doubleprecision') return { type: 'real', bytes: 8, kind: 'double precision', end };
  if (word === 'doublecomplex') return { type: 'complex', bytes: 16, kind: 'double complex', end };
  if (word.startsWith('_')) return { type: word === '_i' ? 'integer' : 'real', bytes: null, kind: word, end };
  const rest = /^\s*/.exec(code.slice(end))![0].length;
  const next = code[end + rest];
  if (word === 'type' || word === 'class' || word === 'procedure') {
    if (next !== '(') return null;
    const close = closing(code, end + rest);
    if (close < 0) return null;
    const inside = code.slice(end + rest + 1, close).trim();
    return {
      type: word === 'procedure' ? 'procedure' : `${word}(${inside})`,
      bytes: null,
      end: close + 1,
      ...(word === 'procedure' ? { kind: inside } : {}),
    };
  }
  const plain = DEFAULT_BYTES[word]!;
  if (next === '*') {
    const star = /^\s*\*\s*(\d+|\()/.exec(code.slice(end))!;
    if (star === null) return null;
    if (star[1] === '(') {
      const open = end + star[0].length - 1;
      const close = closing(code, open);
      if (close < 0) return null;
      return { type: word, bytes: plain, length: code.slice(open + 1, close).trim(), end: close + 1 };
    }
    end += star[0].length;
    if (word === 'character') return { type: word, bytes: 1, length: star[1]!, end };
    return { type: word, bytes: Number(star[1]), kind: star[1]!, end };
  }
  if (next === '(') {
    const close = closing(code, end + rest);
    if (close < 0) return null;
    const inside = code.slice(end + rest + 1, close);
    if (word === 'character') return { type: word, bytes: 1, ...lengthOf(inside), end: close + 1 };
    const kind = inside.replace(/^\s*kind\s*=\s*/, '').trim();
    const unit = kindBytes(kind, kindOf);
    return { type: word, bytes: unit === null ? null : word === 'complex' ? 2 * unit : unit, kind, end: close + 1 };
  }
  return { type: word, bytes: plain, end, ...(word === 'character' ? { length: '1' } : {}) };
}

function lengthOf(inside: string): { length?: string } {
  const parts = splitTop(inside);
  const named = parts.find((part) => /^\s*len\s*=/.test(part.text));
  const first = named ?? parts.find((part) => !/^\s*kind\s*=/.test(part.text));
  return first === undefined ? { length: '1' } : { length: first.text.replace(/^\s*len\s*=\s*/, '').trim() };
}

export function kindBytes(kind: string, kindOf: (name: string) => number | null): number | null {
  if (/^\d+$/.test(kind)) return Number(kind);
  return kindOf(kind) ?? KNOWN_KINDS[kind] ?? kindExpression(kind);
}

/** `selected_real_kind(15, 307)`, `kind(1.d0)`, `selected_int_kind(9)`. */
export function kindExpression(text: string): number | null {
  const code = text.replace(/\s+/g, '').toLowerCase();
  const real = /^selected_real_kind\((?:p=)?(\d+)?(?:,(?:r=)?(\d+))?\)$/.exec(code);
  if (real !== null) {
    const [digits, range] = [Number(real[1] ?? 0), Number(real[2] ?? 0)];
    return digits <= 6 && range <= 37 ? 4 : digits <= 15 && range <= 307 ? 8 : 16;
  }
  const integer = /^selected_int_kind\((?:r=)?(\d+)\)$/.exec(code);
  if (integer !== null) {
    const range = Number(integer[1]);
    return range <= 2 ? 1 : range <= 4 ? 2 : range <= 9 ? 4 : 8;
  }
  const of = /^kind\((.*)\)$/.exec(code)?.[1];
  if (of === undefined) return null;
  if (/^[\d.]+d[+-]?\d+$/.test(of)) return 8;
  if (/^[\d.]+(e[+-]?\d+)?$/.test(of)) return 4;
  if (/^\.(true|false)\.$/.test(of)) return 4;
  return null;
}

/** The index of the parenthesis that closes the one at `open`; -1 when none does. */
export function closing(code: string, open: number): number {
  let depth = 0;
  for (let at = open; at < code.length; at++) {
    const one = code.charCodeAt(at);
    if (one === 40 || one === 91) depth++;
    else if (one === 41 || one === 93) {
      depth--;
      if (depth === 0) return at;
    }
  }
  return -1;
}

/** Parts between commas that stand in no parentheses, with where each begins. */
export function splitTop(text: string): { text: string; offset: number }[] {
  const parts: { text: string; offset: number }[] = [];
  let depth = 0;
  let quote = '';
  let begin = 0;
  for (let at = 0; at < text.length; at++) {
    const one = text[at]!;
    if (quote !== '') {
      if (one === quote) quote = '';
    } else if (one === "'" || one === '"') quote = one;
    else if (one === '(' || one === '[') depth++;
    else if (one === ')' || one === ']') depth--;
    else if (one === ',' && depth <= 0) {
      parts.push({ text: text.slice(begin, at), offset: begin });
      begin = at + 1;
    }
  }
  if (begin < text.length || parts.length > 0) parts.push({ text: text.slice(begin), offset: begin });
  return parts;
}
