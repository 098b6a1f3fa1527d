/** Evaluates constant expressions of Python over numbers, text and names that are known. */

const TOKEN =
  /\s*(?:([A-Za-z_]\w*(?:\.[A-Za-z_]\w*)*)|((?:\d[\w.]*|\.\d\w*)(?:(?<=[eE])[+-]\d+)?)|([rRbBuU]{0,2}(?:"(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*'))|(\*\*|\/\/|[-+*/%()]))/y;
const LONGEST = 1000;

const FUNCTIONS: Readonly<Record<string, (...of: number[]) => number>> = {
  sqrt: Math.sqrt,
  exp: Math.exp,
  log: Math.log,
  log10: Math.log10,
  log2: Math.log2,
  cbrt: Math.cbrt,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
  pow: Math.pow,
  float: (x) => x,
  int: Math.trunc,
  abs: Math.abs,
  radians: (x) => (x * Math.PI) / 180,
  deg2rad: (x) => (x * Math.PI) / 180,
  float64: (x) => x,
};
const KNOWN: Readonly<Record<string, number>> = {
  pi: Math.PI,
  e: Math.E,
  inf: Number.POSITIVE_INFINITY,
  tau: 2 * Math.PI,
};
const MODULES = /^(?:math|np|numpy|m|cmath|sp|scipy)\./;

export function numberOfPython(written: string): number | null {
  const text = written.replace(/_/g, '');
  if (/^0[oO][0-7]+$/.test(text)) return Number.parseInt(text.slice(2), 8);
  const value = /^(?:0[xX][0-9a-fA-F]+|0[bB][01]+|(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)$/.test(text)
    ? Number(text)
    : Number.NaN;
  return Number.isNaN(value) ? null : value;
}

/** @returns null where anything is not known, or is no constant expression */
export function evaluatePython(
  text: string,
  known: (name: string) => number | string | boolean | null,
): number | string | boolean | null {
  if (text.length > LONGEST) return null;
  const words: string[] = [];
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
  const value = sum();
  return at === words.length ? value : null;

  type Value = number | string | boolean | null;
  function sum(): Value {
    let left = product();
    while (words[at] === '+' || words[at] === '-') {
      const minus = words[at++] === '-';
      const right = product();
      if (typeof left === 'string' && typeof right === 'string' && !minus) left += right;
      else left = typeof left === 'number' && typeof right === 'number' ? (minus ? left - right : left + right) : null;
    }
    return left;
  }
  function product(): Value {
    let left = signed();
    while (words[at] === '*' || words[at] === '/' || words[at] === '//' || words[at] === '%') {
      const operator = words[at++];
      const right = signed();
      if (typeof left !== 'number' || typeof right !== 'number' || (operator !== '*' && right === 0)) left = null;
      else
        left =
          operator === '*'
            ? left * right
            : operator === '/'
              ? left / right
              : operator === '//'
                ? Math.floor(left / right)
                : left - right * Math.floor(left / right);
    }
    return left;
  }
  function signed(): Value {
    if (words[at] === '-' || words[at] === '+') {
      const minus = words[at++] === '-';
      if (++depth > 100) return null;
      const of = signed();
      depth--;
      return typeof of === 'number' ? (minus ? -of : of) : null;
    }
    const base = primary();
    if (words[at] !== '**') return base;
    at++;
    if (++depth > 100) return null;
    const power = signed();
    depth--;
    return typeof base === 'number' && typeof power === 'number' ? base ** power : null;
  }
  function primary(): Value {
    const word = words[at++];
    if (word === undefined || ++depth > 100) return null;
    try {
      if (word === '(') {
        const inner = sum();
        return words[at++] === ')' ? inner : null;
      }
      if (/^[\d.]/.test(word)) return numberOfPython(word);
      if (/^[rRbBuU]{0,2}["']/.test(word)) {
        let joined = inside(word);
        while (/^[rRbBuU]{0,2}["']/.test(words[at] ?? '')) joined += inside(words[at++]!);
        return joined;
      }
      if (word === 'True' || word === 'False') return word === 'True';
      if (!/^[A-Za-z_]/.test(word)) return null;
      const bare = word.replace(MODULES, '');
      if (words[at] === '(') {
        at++;
        const of = sum();
        if (words[at++] !== ')') return null;
        const call = Object.hasOwn(FUNCTIONS, bare) ? FUNCTIONS[bare] : undefined;
        return call === undefined || typeof of !== 'number' ? null : call(of);
      }
      const own = known(word);
      if (own !== null) return own;
      return (bare !== word || word === 'pi') && Object.hasOwn(KNOWN, bare) ? KNOWN[bare]! : null;
    } finally {
      depth--;
    }
  }
}

const inside = (text: string) => text.replace(/^[rRbBuU]*["']|["']$/g, '');
