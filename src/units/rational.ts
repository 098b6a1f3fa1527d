/** Exact fractions: the factors of units that are exact stay exact through every product and power. */

export interface Rational {
  readonly numerator: bigint;
  /** Always above 0; the fraction is in lowest terms. */
  readonly denominator: bigint;
}

export const ONE: Rational = { numerator: 1n, denominator: 1n };

export function rational(numerator: bigint, denominator = 1n): Rational {
  if (denominator < 0n) return rational(-numerator, -denominator);
  const divisor = greatestCommonDivisor(numerator < 0n ? -numerator : numerator, denominator);
  return divisor === 1n
    ? { numerator, denominator }
    : { numerator: numerator / divisor, denominator: denominator / divisor };
}

/**
 * The exact value of a decimal number or a fraction of two: `1e-7`, `.5`, `5/9`.
 * @throws {RangeError} when it is no number, or its exponent is beyond 400
 */
export function parseRational(text: string): Rational {
  const [above, below] = text.split('/');
  if (below !== undefined) return multiply(parseRational(above!), power(parseRational(below), -1));
  const match = /^([+-]?)(\d*)\.?(\d*)(?:[eEdD]([+-]?\d{1,4}))?$/.exec(text);
  if (match === null || match[2]! + match[3]! === '') throw new RangeError(`"${text}" is no number`);
  const exponent = Number(match[4] ?? 0) - match[3]!.length;
  if (Math.abs(exponent) > 400) throw new RangeError(`the exponent of "${text}" is out of range`);
  const digits = BigInt(match[2]! + match[3]!) * (match[1] === '-' ? -1n : 1n);
  return exponent >= 0 ? rational(digits * 10n ** BigInt(exponent)) : rational(digits, 10n ** BigInt(-exponent));
}

export function multiply(a: Rational, b: Rational): Rational {
  if (a === ONE) return b;
  if (b === ONE) return a;
  return rational(a.numerator * b.numerator, a.denominator * b.denominator);
}

export function add(a: Rational, b: Rational): Rational {
  return rational(a.numerator * b.denominator + b.numerator * a.denominator, a.denominator * b.denominator);
}

/** To a whole power. @throws {RangeError} for 0 to a negative one */
export function power(base: Rational, exponent: number): Rational {
  if (exponent === 1) return base;
  if (exponent >= 0)
    return { numerator: base.numerator ** BigInt(exponent), denominator: base.denominator ** BigInt(exponent) };
  if (base.numerator === 0n) throw new RangeError('0 has no inverse');
  return rational(base.denominator ** BigInt(-exponent), base.numerator ** BigInt(-exponent));
}

/** The `degree`-th root where it is a fraction again; null where it is irrational. */
export function exactRoot(of: Rational, degree: number): Rational | null {
  const above = wholeRoot(of.numerator, degree);
  const below = wholeRoot(of.denominator, degree);
  return above === null || below === null ? null : { numerator: above, denominator: below };
}

export function isOne(a: Rational): boolean {
  return a.numerator === 1n && a.denominator === 1n;
}

export function equals(a: Rational, b: Rational): boolean {
  return a.numerator === b.numerator && a.denominator === b.denominator;
}

const SAFE = BigInt(Number.MAX_SAFE_INTEGER);

/** The nearest double (numbers below 2.2e-308 may be off by one unit in the last place). */
export function toNumber({ numerator, denominator }: Rational): number {
  if (numerator < 0n) return -toNumber({ numerator: -numerator, denominator });
  if (numerator <= SAFE && denominator <= SAFE) return Number(numerator) / Number(denominator);
  // A quotient of at least 66 bits with a sticky last bit rounds to the same double as the true one.
  const shift = bits(denominator) - bits(numerator) + 66;
  const [above, below] =
    shift >= 0 ? [numerator << BigInt(shift), denominator] : [numerator, denominator << BigInt(-shift)];
  const quotient = above / below;
  const value = Number(quotient * below === above ? quotient : quotient | 1n);
  // Two steps, since 2^-shift alone may not be a double.
  const half = Math.trunc(-shift / 2);
  return value * 2 ** half * 2 ** (-shift - half);
}

/** A short decimal where there is one (`0.01`, `1e-10`), else the fraction (`250/9`). */
export function toText(value: Rational): string {
  let rest = value.denominator;
  let decimals = 0;
  while (rest % 10n === 0n) {
    rest /= 10n;
    decimals++;
  }
  let scale = 1n;
  while (rest % 2n === 0n) {
    rest /= 2n;
    scale *= 5n;
    decimals++;
  }
  while (rest % 5n === 0n) {
    rest /= 5n;
    scale *= 2n;
    decimals++;
  }
  if (rest !== 1n || decimals > 330) return `${value.numerator}/${value.denominator}`;
  const sign = value.numerator < 0n ? '-' : '';
  let digits = String((value.numerator < 0n ? -value.numerator : value.numerator) * scale);
  let exponent = digits.length - 1 - decimals;
  digits = digits.replace(/0+$/, '') || '0';
  if (digits === '0') exponent = 0;
  if (exponent >= 0 && exponent < 7)
    return sign + digits.slice(0, exponent + 1).padEnd(exponent + 1, '0') + fraction(digits.slice(exponent + 1));
  if (exponent < 0 && exponent > -5) return `${sign}0.${'0'.repeat(-exponent - 1)}${digits}`;
  return `${sign}${digits[0]}${fraction(digits.slice(1))}e${exponent}`;
}

function fraction(digits: string): string {
  return digits === '' ? '' : `.${digits}`;
}

function bits(value: bigint): number {
  return value.toString(16).length * 4;
}

function greatestCommonDivisor(a: bigint, b: bigint): bigint {
  while (b !== 0n) [a, b] = [b, a % b];
  return a === 0n ? 1n : a;
}

function wholeRoot(value: bigint, degree: number): bigint | null {
  if (value < 2n) return value < 0n ? null : value;
  // Newton's method from above never passes below the root.
  const n = BigInt(degree);
  let guess = 1n << BigInt(Math.ceil(bits(value) / degree) + 1);
  while (true) {
    const next = ((n - 1n) * guess + value / guess ** (n - 1n)) / n;
    if (next >= guess) break;
    guess = next;
  }
  return guess ** n === value ? guess : null;
}
