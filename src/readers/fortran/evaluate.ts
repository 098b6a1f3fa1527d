/** Constant expressions of Fortran to numbers, as far as names are known. Pure. */

/** null where the expression rests on something unknown or is none. */
export function evaluate(text: string, known: (name: string) => number | null): number | null {
  // Most bounds and many values are a number or a name and nothing else.
  const first = text.charCodeAt(0);
  if (first >= 48 && first <= 57 && text.length < 16 && DIGITS.test(text)) return Number(text);
  if (((first >= 97 && first <= 122) || first === 95) && NAME.test(text)) {
    const value = known(text);
    return value !== null && Number.isFinite(value) ? value : null;
  }
  const parser = new Expression(text.length > LONGEST ? '' : text.toLowerCase(), known);
  return parser.whole();
}

const DIGITS = /^\d+$/;
const NAME = /^[a-z_]\w*$/;
/** A longer expression is a table, not a value. */
const LONGEST = 2000;

class Expression {
  private readonly text: string;
  private readonly known: (name: string) => number | null;
  private at = 0;
  private depth = 0;

  constructor(text: string, known: (name: string) => number | null) {
    this.text = text;
    this.known = known;
  }

  whole(): number | null {
    const value = this.sum();
    this.blank();
    return this.at === this.text.length && value !== null && Number.isFinite(value) ? value : null;
  }

  private sum(): number | null {
    if (++this.depth > 100) return null;
    this.blank();
    let sign = 1;
    if (this.text[this.at] === '-' || this.text[this.at] === '+') sign = this.text[this.at++] === '-' ? -1 : 1;
    let value = this.product();
    if (value !== null) value *= sign;
    for (;;) {
      this.blank();
      const one = this.text[this.at];
      if (one !== '+' && one !== '-') break;
      this.at++;
      const other = this.product();
      value = value === null || other === null ? null : one === '+' ? value + other : value - other;
    }
    this.depth--;
    return value;
  }

  private isInteger = true;

  private product(): number | null {
    let value = this.power();
    let integer = this.isInteger;
    for (;;) {
      this.blank();
      const one = this.text[this.at];
      if ((one !== '*' && one !== '/') || this.text[this.at + 1] === one) break;
      this.at++;
      const other = this.power();
      integer &&= this.isInteger;
      if (value === null || other === null) value = null;
      else if (one === '*') value *= other;
      else value = integer ? Math.trunc(value / other) : value / other;
    }
    this.isInteger = integer;
    return value;
  }

  private power(): number | null {
    const base = this.primary();
    this.blank();
    if (this.text[this.at] !== '*' || this.text[this.at + 1] !== '*') return base;
    this.at += 2;
    this.blank();
    let sign = 1;
    if (this.text[this.at] === '-' || this.text[this.at] === '+') sign = this.text[this.at++] === '-' ? -1 : 1;
    const integer = this.isInteger;
    const exponent = this.power();
    this.isInteger = integer && this.isInteger;
    return base === null || exponent === null ? null : base ** (sign * exponent);
  }

  private primary(): number | null {
    this.blank();
    const rest = this.text.slice(this.at);
    const number = /^(\d+\.?\d*|\.\d+)(?:([ed])([+-]?\d+))?(?:_\w+)?/.exec(rest);
    if (number !== null) {
      this.at += number[0].length;
      this.isInteger = /^\d+$/.test(number[1]!) && number[2] === undefined;
      return Number(`${number[1]}${number[2] === undefined ? '' : `e${number[3]}`}`);
    }
    if (rest[0] === '(') {
      this.at++;
      const value = this.sum();
      this.blank();
      if (this.text[this.at] !== ')') return null;
      this.at++;
      return value;
    }
    const name = /^[a-z]\w*/.exec(rest)?.[0];
    if (name === undefined) {
      this.at = this.text.length + 1;
      return null;
    }
    this.at += name.length;
    this.blank();
    if (this.text[this.at] === '(') return this.intrinsic(name);
    this.isInteger = /^[i-n]/.test(name);
    const value = this.known(name);
    if (value !== null && !Number.isInteger(value)) this.isInteger = false;
    return value;
  }

  private intrinsic(name: string): number | null {
    this.at++;
    const args: (number | null)[] = [];
    for (;;) {
      args.push(this.sum());
      this.blank();
      if (this.text[this.at] === ',') this.at++;
      else break;
    }
    if (this.text[this.at] !== ')') return null;
    this.at++;
    const [a, b] = args;
    if (args.some((one) => one === null)) return null;
    this.isInteger = name === 'int' || name === 'max0' || name === 'min0';
    switch (name.replace(/^d(?=sqrt|exp|log|sin|cos|atan|acos|asin|abs|max1|min1|ble)/, '')) {
      case 'sqrt':
        return Math.sqrt(a!);
      case 'exp':
        return Math.exp(a!);
      case 'log':
        return Math.log(a!);
      case 'log10':
        return Math.log10(a!);
      case 'sin':
        return Math.sin(a!);
      case 'cos':
        return Math.cos(a!);
      case 'atan':
        return Math.atan(a!);
      case 'acos':
        return Math.acos(a!);
      case 'asin':
        return Math.asin(a!);
      case 'abs':
        return Math.abs(a!);
      case 'max':
      case 'max0':
        return Math.max(...(args as number[]));
      case 'min':
      case 'min0':
        return Math.min(...(args as number[]));
      case 'real':
      case 'ble':
      case 'dble':
      case 'float':
        return a!;
      case 'int':
        return Math.trunc(a!);
      case 'mod':
        return b === undefined ? null : a! % b!;
      default:
        return null;
    }
  }

  private blank(): void {
    while (this.text[this.at] === ' ' || this.text[this.at] === '\t') this.at++;
  }
}
