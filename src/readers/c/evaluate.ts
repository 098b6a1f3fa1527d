/** Evaluates constant expressions of C and C++ over literals and names that are known. */

export type ConstantValue =
  /** `single`: of single precision, and reckoned in it as long as it meets nothing wider. */
  | { readonly value: number; readonly integer: boolean; readonly single?: boolean }
  | { readonly value: string; readonly integer: false };

/** `1.5`, `0x1F`, `1'000`, `2.0f`, `1.0_rt`; null for what is no number. */
export function numberOf(written: string): { value: number; integer: boolean; bytes: number } | null {
  const text = written.replace(/'/g, '');
  const match =
    /^(0[xX][0-9a-fA-F]*\.?[0-9a-fA-F]*(?:[pP][+-]?\d+)?|0[bB][01]+|(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)(.*)$/.exec(
      text,
    );
  if (match === null) return null;
  const [, digits, suffix] = match as unknown as [string, string, string];
  const hexadecimal = /^0[xX]/.test(digits);
  const real = hexadecimal ? /[.pP]/.test(digits) : /^0[bB]/.test(digits) ? false : /[.eE]/.test(digits);
  let value: number;
  if (hexadecimal && real) {
    const [mantissa = '0', power = '0'] = digits.slice(2).split(/[pP]/);
    const [whole = '', fraction = ''] = mantissa.split('.');
    value =
      (Number.parseInt(whole || '0', 16) +
        (fraction === '' ? 0 : Number.parseInt(fraction, 16) / 16 ** fraction.length)) *
      2 ** Number(power);
  } else if (!real && !hexadecimal && /^0\d+$/.test(digits)) value = Number.parseInt(digits, 8);
  else value = Number(digits);
  if (Number.isNaN(value)) return null;
  if (real) return { value, integer: false, bytes: /^[fF]$/.test(suffix) ? 4 : /^[lL]$/.test(suffix) ? 16 : 8 };
  return {
    value,
    integer: !/^_?(?:rt|prt|_rt)$/i.test(suffix),
    bytes: /l/i.test(suffix) || Math.abs(value) > 0x7fffffff ? 8 : 4,
  };
}

const FUNCTIONS: Readonly<Record<string, (...of: number[]) => number>> = {
  sqrt: Math.sqrt,
  cbrt: Math.cbrt,
  pow: Math.pow,
  exp: Math.exp,
  log: Math.log,
  log10: Math.log10,
  log2: Math.log2,
  fabs: Math.abs,
  abs: Math.abs,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
  atan: Math.atan,
  acos: Math.acos,
  asin: Math.asin,
  atan2: Math.atan2,
  floor: Math.floor,
  ceil: Math.ceil,
  max: Math.max,
  min: Math.min,
  square: (x) => x * x,
};
const KNOWN: Readonly<Record<string, number>> = {
  M_PI: Math.PI,
  M_PI_2: Math.PI / 2,
  M_PI_4: Math.PI / 4,
  M_E: Math.E,
  M_LN2: Math.LN2,
  M_LN10: Math.LN10,
  M_SQRT2: Math.SQRT2,
  M_SQRT1_2: Math.SQRT1_2,
  M_1_PI: 1 / Math.PI,
  M_LOG10E: Math.LOG10E,
  M_LOG2E: Math.LOG2E,
  DBL_EPSILON: Number.EPSILON,
  DBL_MAX: Number.MAX_VALUE,
  DBL_MIN: 2.2250738585072014e-308,
  FLT_MAX: 3.4028234663852886e38,
  INT_MAX: 2147483647,
};

const TOKEN =
  /\s*(?:([A-Za-z_][\w]*(?:\s*::\s*[A-Za-z_]\w*)*)|((?:\d[\w.']*|\.\d[\w']*)(?:(?<=[eEpP])[+-]\w+)?)|("(?:[^"\\]|\\.)*")|(<<|>>|&&|\|\||[-+*/%()&|^~,<>?:!{}]))/y;
/** Expressions longer than this are tables, not constants. */
const LONGEST = 2000;

/**
 * @param known  value of another name, null where unknown; may evaluate it in turn
 * @returns null where anything is not known, or is no constant expression
 */
export function evaluate(text: string, known: (name: string) => ConstantValue | null): ConstantValue | null {
  if (text.length > LONGEST || text === '') return null;
  const words: string[] = [];
  TOKEN.lastIndex = 0;
  let end = 0;
  while (end < text.length) {
    TOKEN.lastIndex = end;
    const match = TOKEN.exec(text);
    if (match === null) {
      if (text.slice(end).trim() === '') break;
      return null;
    }
    end = TOKEN.lastIndex;
    words.push(match[0]!.trim());
  }
  let at = 0;
  let depth = 0;
  const result = binary(0);
  return at === words.length ? result : null;

  function binary(level: number): ConstantValue | null {
    if (level === LEVELS.length) return unary();
    let left = binary(level + 1);
    while (at < words.length && LEVELS[level]!.includes(words[at]!)) {
      const operator = words[at++]!;
      const right = binary(level + 1);
      if (left === null || right === null || typeof left.value !== 'number' || typeof right.value !== 'number')
        left = null;
      else left = combine(operator, left as NumberValue, right as NumberValue);
    }
    return left;
  }

  function unary(): ConstantValue | null {
    const word = words[at];
    if (word === undefined || ++depth > 100) return null;
    if (word === '-' || word === '+' || word === '~' || word === '!') {
      at++;
      const value = unary();
      depth--;
      if (value === null || typeof value.value !== 'number') return null;
      if (word === '-') return { ...value, value: -value.value } as NumberValue;
      if (word === '+') return value;
      return { value: word === '~' ? ~value.value : value.value === 0 ? 1 : 0, integer: true };
    }
    const value = primary();
    depth--;
    return value;
  }

  function primary(): ConstantValue | null {
    const word = words[at++]!;
    if (word === '(') {
      // A cast: `(double) x`
      const close = words.indexOf(')', at);
      const inside = close < 0 ? '' : words.slice(at, close).join(' ');
      if (
        /^(?:const )?(?:(?:amrex :: |amrex::)?Real|unsigned|signed|int|long|short|char|float|double|size_t|std::size_t|u?int\d+_t|integertime_t)(?: (?:int|long|double|char|short))*$/.test(
          inside,
        )
      ) {
        at = close + 1;
        return cast(inside, unary());
      }
      const value = binary(0);
      return words[at++] === ')' ? value : null;
    }
    if (word.startsWith('"')) {
      let value = word.slice(1, -1);
      while (words[at]?.startsWith('"')) value += words[at++]!.slice(1, -1);
      return { value, integer: false };
    }
    const number = /^[\d.]/.test(word) ? numberOf(word) : null;
    if (number !== null)
      return !number.integer && number.bytes === 4
        ? { value: Math.fround(number.value), integer: false, single: true }
        : { value: number.value, integer: number.integer };
    if (!/^[A-Za-z_]/.test(word)) return null;
    const name = word.replace(/\s+/g, '').replace(/^(?:std|amrex|Math)::/, '');
    if (name === 'true' || name === 'false') return { value: name === 'true' ? 1 : 0, integer: true };
    if (words[at] === '<' && /_cast$/.test(name)) {
      const close = words.indexOf('>', at);
      const type = words.slice(at + 1, close).join(' ');
      if (close < 0) return null;
      at = close + 1;
      return cast(type, unary());
    }
    if (words[at] === '(' || words[at] === '{') {
      const close = words[at++] === '(' ? ')' : '}';
      const args: (ConstantValue | null)[] = [];
      while (at < words.length && words[at] !== close) {
        args.push(binary(0));
        if (words[at] === ',') at++;
        else break;
      }
      if (words[at++] !== close) return null;
      const values = args.map((one) => (one === null || typeof one.value !== 'number' ? Number.NaN : one.value));
      if (values.some((one) => Number.isNaN(one))) return null;
      if (/^(?:Real|double|float|int|long|size_t|u?int\d+_t)$/.test(name)) return cast(name, args[0] ?? null);
      const call = Object.hasOwn(FUNCTIONS, name) ? FUNCTIONS[name] : undefined;
      return call === undefined
        ? null
        : { value: call(...values), integer: /^(?:max|min|abs)$/.test(name) && args.every((one) => one!.integer) };
    }
    const other = known(name);
    if (other !== null) return other;
    return Object.hasOwn(KNOWN, name) ? { value: KNOWN[name]!, integer: name === 'INT_MAX' } : null;
  }
}

const LEVELS = [['|'], ['^'], ['&'], ['<<', '>>'], ['+', '-'], ['*', '/', '%']];

function cast(type: string, value: ConstantValue | null): ConstantValue | null {
  if (value === null || typeof value.value !== 'number') return null;
  const integer = !/float|double|Real/i.test(type);
  const single = /^(?:const )?float$/.test(type.trim());
  return {
    value: integer ? Math.trunc(value.value) : single ? Math.fround(value.value) : value.value,
    integer,
    ...(single ? { single } : {}),
  };
}

type NumberValue = Extract<ConstantValue, { readonly value: number }>;

/** The usual arithmetic conversions: whole numbers stay whole, single precision stays single beside them. @source ISO/IEC 9899:2018, 6.3.1.8 */
function combine(operator: string, left: NumberValue, right: NumberValue): ConstantValue | null {
  const result = apply(operator, left.value, right.value, left.integer && right.integer);
  const single =
    (left.single === true && (right.single === true || right.integer)) || (right.single === true && left.integer);
  if (!single || result === null || typeof result.value !== 'number') return result;
  return { value: Math.fround(result.value), integer: false, single };
}

function apply(operator: string, a: number, b: number, integer: boolean): ConstantValue | null {
  switch (operator) {
    case '+':
      return { value: a + b, integer };
    case '-':
      return { value: a - b, integer };
    case '*':
      return { value: a * b, integer };
    case '/':
      return b === 0 && integer ? null : { value: integer ? Math.trunc(a / b) : a / b, integer };
    case '%':
      return b === 0 ? null : { value: a % b, integer };
    case '<<':
      return { value: a * 2 ** b, integer: true };
    case '>>':
      return { value: Math.floor(a / 2 ** b), integer: true };
    case '&':
      return { value: a & b, integer: true };
    case '|':
      return { value: a | b, integer: true };
    case '^':
      return { value: a ^ b, integer: true };
    default:
      return null;
  }
}
