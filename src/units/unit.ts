/** What a unit is: its factor to SI base units, its dimension, what it counts, its zero and its logarithm. Products and powers of units. */
import { add, exactRoot, isOne, multiply, ONE, power, type Rational, toNumber, toText } from './rational.ts';

/** Exponents of m, kg, s, A, K, mol and cd, and of arbitrary units such as the international one; what is not named has exponent 0. */
export type Dimension = Readonly<Record<string, number>>;

/** A factor: fraction x pi^pi x approximate. */
export interface Factor {
  readonly ratio: Rational;
  readonly pi: number;
  /** 1 unless a root is irrational or the definition is not exact. */
  readonly approximate: number;
  /** Constants that it rests on, with their edition: `G (CODATA 2022)`. */
  readonly uses: readonly string[];
}

export const UNITY: Factor = { ratio: ONE, pi: 0, approximate: 1, uses: [] };

export interface Unit {
  /** Value in SI base units of one of this unit. */
  readonly factor: Factor;
  readonly dimension: Dimension;
  /** Exponents of counted things: `{baryon: -1}` for "per baryon". They have no dimension and yet never cancel silently. */
  readonly counted: Readonly<Record<string, number>>;
  /** Zero of the scale in SI base units: 273.15 for the degree Celsius. Absent for 0. */
  readonly zero?: Rational;
  /** For logarithms: a value v stands for base^(v / steps) of the unit described by the other members. */
  readonly logarithm?: { readonly base: 10 | 'e'; readonly steps: Rational };
  /** The equivalence that its writing takes for granted: `mass-energy` for MeV/c^2. */
  readonly takes?: string;
  /** Said of `flag`, `index`, `count`, `none`: the value is no physical quantity. */
  readonly notAQuantity?: true;
}

export const DIMENSIONLESS: Unit = { factor: UNITY, dimension: {}, counted: {} };

/**
 * The product of powers of units. A zero or a logarithm survives only where the unit stands alone:
 * `degC/m` is a difference of temperature per metre.
 */
export function product(parts: readonly { readonly unit: Unit; readonly exponent: number }[]): Unit {
  if (parts.length === 1 && parts[0]!.exponent === 1) return parts[0]!.unit;
  let factor = UNITY;
  const dimension: Record<string, number> = {};
  const counted: Record<string, number> = {};
  let takes: string | undefined;
  let scaled: Unit | undefined;
  let others = 0;
  for (const { unit, exponent } of parts) {
    if (unit.zero !== undefined || unit.logarithm !== undefined) scaled = exponent === 1 ? unit : undefined;
    if (unit.zero !== undefined || unit.logarithm !== undefined || unit.dimension !== DIMENSIONLESS.dimension) others++;
    factor = multiplyFactors(factor, powerOfFactor(unit.factor, exponent));
    accumulate(dimension, unit.dimension, exponent);
    accumulate(counted, unit.counted, exponent);
    takes ??= unit.takes;
  }
  const alone = scaled !== undefined && others === 1 ? scaled : undefined;
  return {
    factor,
    dimension,
    counted,
    ...(alone?.zero === undefined ? {} : { zero: alone.zero }),
    ...(alone?.logarithm === undefined ? {} : { logarithm: alone.logarithm }),
    ...(takes === undefined ? {} : { takes }),
  };
}

export function multiplyFactors(a: Factor, b: Factor): Factor {
  if (a === UNITY) return b;
  if (b === UNITY) return a;
  return {
    ratio: multiply(a.ratio, b.ratio),
    pi: snap(a.pi + b.pi),
    approximate: a.approximate * b.approximate,
    uses: b.uses.length === 0 ? a.uses : [...new Set([...a.uses, ...b.uses])],
  };
}

/** To a whole or fractional power; a root that is irrational makes the factor approximate. */
export function powerOfFactor(factor: Factor, exponent: number): Factor {
  if (exponent === 1) return factor;
  const degree = denominatorOf(exponent);
  const raised = power(factor.ratio, Math.round(exponent * degree));
  const root = degree === 1 ? raised : exactRoot(raised, degree);
  return {
    ratio: root ?? ONE,
    pi: snap(factor.pi * exponent),
    approximate: factor.approximate ** exponent * (root === null ? toNumber(raised) ** (1 / degree) : 1),
    uses: factor.uses,
  };
}

export function factorValue({ ratio, pi, approximate }: Factor): number {
  const value = toNumber(ratio);
  return pi === 0 && approximate === 1 ? value : value * Math.PI ** pi * approximate;
}

/** `0.01`, `250/9`, `pi/180`, or 17 digits where no exact text exists. */
export function factorText(factor: Factor): string {
  if (factor.approximate !== 1) return String(factorValue(factor));
  const text = toText(factor.ratio);
  if (factor.pi === 0) return text;
  const symbol = Math.abs(factor.pi) === 1 ? 'pi' : `pi^${Math.abs(factor.pi)}`;
  if (factor.pi < 0) return `${text}/${symbol}`;
  const [above, below] = text.split('/');
  const front = above === '1' ? symbol : `${above} ${symbol}`;
  return below === undefined ? front : `${front}/${below}`;
}

export function isExact(factor: Factor): boolean {
  return factor.approximate === 1 && !factor.uses.some((use) => use.includes('CODATA'));
}

/** The same exponents, whatever their order. */
export function sameExponents(a: Dimension, b: Dimension): boolean {
  const names = Object.keys(a);
  return names.length === Object.keys(b).length && names.every((name) => a[name] === b[name]);
}

/** `kg m2 s-2`, `1` for none. */
export function exponentsText(exponents: Dimension): string {
  const parts = Object.keys(exponents)
    .sort((a, b) => BASES.indexOf(a) - BASES.indexOf(b))
    .map((name) => (exponents[name] === 1 ? name : `${name}${exponentText(exponents[name]!)}`));
  return parts.join(' ') || '1';
}

/** Dimension and what is counted, in words for messages: `kg m2 s-2, per baryon`. */
export function dimensionText(unit: Unit): string {
  const counted = Object.entries(unit.counted).map(([name, exponent]) =>
    exponent === -1 ? `per ${name}` : exponent === 1 ? `of ${name}s` : `${name}^${exponent}`,
  );
  return [exponentsText(unit.dimension), ...counted].join(', ');
}

/** Whole and fractional exponents with small denominators compare equal after any arithmetic. */
export function snap(exponent: number): number {
  return Math.round(exponent * 5040) / 5040;
}

export function addZero(unit: Unit, zero: Rational): Unit {
  return { ...unit, zero: unit.zero === undefined ? zero : add(unit.zero, zero) };
}

export function isPlainOne(unit: Unit): boolean {
  return Object.keys(unit.dimension).length === 0 && isOne(unit.factor.ratio);
}

const BASES = ['kg', 'm', 's', 'A', 'K', 'mol', 'cd'];

function exponentText(exponent: number): string {
  const degree = denominatorOf(exponent);
  return degree === 1 ? String(exponent) : `^(${Math.round(exponent * degree)}/${degree})`;
}

function denominatorOf(exponent: number): number {
  for (let degree = 1; degree <= 10; degree++)
    if (Math.abs(exponent * degree - Math.round(exponent * degree)) < 1e-9) return degree;
  return 5040;
}

function accumulate(sum: Record<string, number>, exponents: Dimension, times: number): void {
  for (const name in exponents) {
    const exponent = snap((sum[name] ?? 0) + exponents[name]! * times);
    if (exponent === 0) delete sum[name];
    else sum[name] = exponent;
  }
}
