/** Two unit strings in, the factor (and offset) that carries a value from one to the other out; or why there is none. */
import type { Edition } from './constant-values.ts';
import { EQUIVALENCES, MASS_BASES } from './equivalence.ts';
import type { UnitProblem } from './parse-unit.ts';
import { add, multiply, power, type Rational, rational, toNumber } from './rational.ts';
import { type Reading, readUnit, sameUnits, type UnitReading, type UnitSyntax } from './read-unit.ts';
import {
  type Dimension,
  dimensionText,
  type Factor,
  factorText,
  factorValue,
  isExact,
  multiplyFactors,
  powerOfFactor,
  sameExponents,
  UNITY,
  type Unit,
} from './unit.ts';

export interface ConversionOptions {
  readonly syntax?: UnitSyntax;
  /** Name of the relation that may change the dimension, from EQUIVALENCES. */
  readonly equivalence?: string;
  /** Name of the mass of one counted thing, from MASS_BASES. */
  readonly massBasis?: string;
  /** CODATA edition of measured constants; 2022 when absent. */
  readonly edition?: Edition;
}

export interface Converted {
  /** value in `to` = factor * value in `from` + offset. */
  readonly factor: number;
  /** The exact factor where there is one: `0.01`, `250/9`, `pi/180`. */
  readonly factorText: string;
  readonly offset: number;
  /** True when factor and offset are exact: no measured constant, no irrational root. */
  readonly exact: boolean;
  /** Of `from`. */
  readonly dimension: Dimension;
  readonly counted: Readonly<Record<string, number>>;
  /** Of `from`. */
  readonly syntax: UnitSyntax;
  /** Constants with edition, and the equivalence or mass basis, that the factor rests on. */
  readonly uses?: readonly string[];
  /** Other ways of reading `from`, when it is ambiguous; the factor is for the first that fits `to`. */
  readonly readings?: readonly Reading[];
  /** Other ways of reading `to`. */
  readonly toReadings?: readonly Reading[];
}

export interface NotConverted {
  readonly error: UnitProblem;
  /** Which string cannot be read, or what keeps two readable ones apart. */
  readonly reason: 'unreadable-from' | 'unreadable-to' | 'dimension' | 'counted' | 'logarithm' | 'unknown-option';
  /** Both dimensions in words; present unless one cannot be read. */
  readonly dimensions?: { readonly from: string; readonly to: string };
  /** Named relations that would carry the one to the other. */
  readonly equivalences?: readonly string[];
  readonly readings?: readonly Reading[];
}

export type Conversion = Converted | NotConverted;

const cache = new Map<string, Conversion>();

/**
 * How a value in `from` becomes one in `to`. Never throws.
 * Where a string is ambiguous the first reading that fits the other side is taken, and all readings come back.
 * Counted things (baryon, photon, ...) must agree; a change of dimension needs `equivalence` or `massBasis`.
 */
export function conversion(from: string, to: string, options: ConversionOptions = {}): Conversion {
  const key = `${from}\0${to}\0${options.syntax ?? ''}\0${options.equivalence ?? ''}\0${options.massBasis ?? ''}\0${options.edition ?? ''}`;
  const known = cache.get(key);
  if (known !== undefined) return known;
  const answer = convert(from, to, options);
  if (cache.size > 20_000) cache.clear();
  cache.set(key, answer);
  return answer;
}

/** Exponents of the base units; null when the text is no unit. */
export function dimensionOf(text: string): Dimension | null {
  const reading = readUnit(text);
  return 'error' in reading ? null : reading.unit.dimension;
}

/** Whether two strings mean the same unit: `g/cm3` and `g cm^-3`. Strings that are no unit are the same only when equal. */
export function sameUnit(a: string, b: string): boolean {
  if (a === b) return true;
  const [first, second] = [readUnit(a), readUnit(b)];
  if ('error' in first || 'error' in second) return false;
  return unitsOf(first).some((one) => unitsOf(second).some((other) => sameUnits(one, other)));
}

function convert(from: string, to: string, options: ConversionOptions): Conversion {
  const reader = {
    ...(options.syntax === undefined ? {} : { syntax: options.syntax }),
    ...(options.edition === undefined ? {} : { edition: options.edition }),
  };
  const unknown = unknownOption(options);
  if (unknown !== null) return unknown;
  const source = readUnit(from, reader);
  if ('error' in source) return { error: source.error, reason: 'unreadable-from' };
  const target = readUnit(to, reader);
  if ('error' in target) return { error: target.error, reason: 'unreadable-to' };
  let first: Conversion | null = null;
  for (const one of unitsOf(source))
    for (const other of unitsOf(target)) {
      const answer = convertUnit(one, other, options);
      if (!('error' in answer))
        return {
          ...answer,
          syntax: source.syntax,
          ...(source.readings === undefined ? {} : { readings: source.readings }),
          ...(target.readings === undefined ? {} : { toReadings: target.readings }),
        };
      first ??= answer;
    }
  return source.readings === undefined ? first! : { ...(first as NotConverted), readings: source.readings };
}

function unitsOf(reading: Exclude<UnitReading, { error: UnitProblem }>): readonly Unit[] {
  return reading.readings?.flatMap(({ unit }) => (unit === null ? [] : [unit])) ?? [reading.unit];
}

function unknownOption({ equivalence, massBasis }: ConversionOptions): NotConverted | null {
  const [name, known, what] =
    equivalence !== undefined && !Object.hasOwn(EQUIVALENCES, equivalence)
      ? [equivalence, EQUIVALENCES, 'equivalence']
      : massBasis !== undefined && !Object.hasOwn(MASS_BASES, massBasis)
        ? [massBasis, MASS_BASES, 'mass basis']
        : [];
  if (name === undefined) return null;
  return {
    error: { says: `there is no ${what} "${name}"`, column: 1, width: 1, suggestion: Object.keys(known!).join(', ') },
    reason: 'unknown-option',
  };
}

function convertUnit(from: Unit, to: Unit, options: ConversionOptions): Conversion {
  const dimensions = { from: dimensionText(from), to: dimensionText(to) };
  if ((from.logarithm === undefined) !== (to.logarithm === undefined))
    return refuse('logarithm', 'one is the logarithm of a quantity, the other the quantity itself', dimensions);
  const edition = options.edition ?? '2022';
  let scale: Factor = UNITY;
  const named: string[] = [];
  let counted = from.counted;
  let dimension = from.dimension;

  if (options.massBasis !== undefined) {
    const mass = MASS_BASES[options.massBasis]!;
    // One mass for each thing that is counted in the one unit and weighed in the other.
    const times = (to.dimension.kg ?? 0) - (dimension.kg ?? 0);
    const weighed = Object.keys(counted).find((name) => counted[name] === times);
    if (times !== 0 && (weighed !== undefined || Object.keys(counted).length === 0)) {
      scale = multiplyFactors(scale, powerOfFactor(mass.factor(edition), times));
      dimension = withExponent(dimension, 'kg', times);
      if (weighed !== undefined) {
        const { [weighed]: _, ...rest } = counted;
        counted = rest;
      }
      named.push(`mass basis ${options.massBasis} (${mass.says})`);
    }
  }
  let stretched = options.equivalence === undefined ? null : powerBetween(dimension, to.dimension, options.equivalence);
  // MeV/c^2 is written as a mass on the strength of E = m c^2.
  if (stretched === null && options.equivalence !== undefined && sameExponents(dimension, to.dimension)) stretched = 0;
  if (stretched !== null && options.equivalence !== undefined) {
    const relation = EQUIVALENCES[options.equivalence]!;
    if (stretched !== 0) {
      scale = multiplyFactors(scale, powerOfFactor(relation.factor(edition), stretched));
      dimension = to.dimension;
      if (options.equivalence === 'per-mole' && !sameExponents(counted, to.counted)) counted = to.counted;
    }
    named.push(`equivalence ${options.equivalence} (${relation.says})`);
  }
  if (!sameExponents(dimension, to.dimension))
    return refuse('dimension', `${dimensions.from} cannot become ${dimensions.to}`, dimensions, helpful(from, to));
  if (!sameExponents(counted, to.counted))
    return refuse(
      'counted',
      `${dimensions.from} cannot become ${dimensions.to}: what is counted never cancels by itself`,
      dimensions,
      helpful(from, to),
    );
  if (from.takes !== undefined && from.takes !== to.takes && options.equivalence !== from.takes)
    return refuse(
      'dimension',
      `the unit is written with a power of c: name the equivalence ${from.takes} to use it as it stands`,
      dimensions,
      [from.takes],
    );

  const factor = multiplyFactors(multiplyFactors(from.factor, scale), powerOfFactor(to.factor, -1));
  const uses = [...factor.uses, ...named];
  const answer = {
    dimension: from.dimension,
    counted: from.counted,
    syntax: 'freehand' as const,
    ...(uses.length === 0 ? {} : { uses }),
  };
  if (from.logarithm !== undefined && to.logarithm !== undefined)
    return { ...answer, ...betweenLogarithms(from, to, factor) };
  return {
    ...answer,
    factor: factorValue(factor),
    factorText: factorText(factor),
    offset: offsetBetween(from, to, scale),
    exact: isExact(factor),
  };
}

/** v in `from` stands for base^(v / steps) units; in `to` the same quantity has another base, other steps, another unit. */
function betweenLogarithms(
  from: Unit,
  to: Unit,
  factor: Factor,
): Pick<Converted, 'factor' | 'factorText' | 'offset' | 'exact'> {
  const steps = multiply(to.logarithm!.steps, power(from.logarithm!.steps, -1));
  const same = from.logarithm!.base === to.logarithm!.base;
  const change = same ? 1 : from.logarithm!.base === 10 ? Math.LN10 : Math.LOG10E;
  const ratio = factorValue(factor);
  const logarithm = ratio === 1 ? 0 : to.logarithm!.base === 10 ? Math.log10(ratio) : Math.log(ratio);
  const slope: Factor = { ratio: steps, pi: 0, approximate: change, uses: [] };
  return {
    factor: factorValue(slope),
    factorText: factorText(slope),
    offset: toNumber(to.logarithm!.steps) * logarithm,
    exact: same && ratio === 1,
  };
}

function offsetBetween(from: Unit, to: Unit, scale: Factor): number {
  if (from.zero === undefined && to.zero === undefined) return 0;
  const zero: Rational = from.zero === undefined ? rational(0n) : multiply(from.zero, scale.ratio);
  const difference = to.zero === undefined ? zero : add(zero, multiply(to.zero, rational(-1n)));
  return toNumber(multiply(difference, power(to.factor.ratio, -1)));
}

function powerBetween(from: Dimension, to: Dimension, equivalence: string): number | null {
  const relation = EQUIVALENCES[equivalence]!.dimension;
  let found: number | null = null;
  for (const base of new Set([...Object.keys(from), ...Object.keys(to), ...Object.keys(relation)])) {
    const wanted = (to[base] ?? 0) - (from[base] ?? 0);
    const offered = relation[base] ?? 0;
    if (offered === 0) {
      if (wanted !== 0) return null;
      continue;
    }
    if (found !== null && found !== wanted / offered) return null;
    found = wanted / offered;
  }
  return found !== null && Math.abs(found) <= 12 ? found : null;
}

/** Named relations that would do it, to be offered in the message. */
function helpful(from: Unit, to: Unit): readonly string[] {
  const found: string[] = [];
  for (const name of Object.keys(EQUIVALENCES)) {
    const times = powerBetween(from.dimension, to.dimension, name);
    if (times !== null && times !== 0) found.push(name);
  }
  const mass = (to.dimension.kg ?? 0) - (from.dimension.kg ?? 0);
  if (mass !== 0 && sameExponents(withExponent(from.dimension, 'kg', mass), to.dimension))
    found.push(...Object.keys(MASS_BASES).map((name) => `mass basis ${name}`));
  return found;
}

function withExponent(dimension: Dimension, base: string, by: number): Dimension {
  const exponent = (dimension[base] ?? 0) + by;
  const { [base]: _, ...rest } = dimension;
  return exponent === 0 ? rest : { ...rest, [base]: exponent };
}

function refuse(
  reason: NotConverted['reason'],
  says: string,
  dimensions: NonNullable<NotConverted['dimensions']>,
  equivalences: readonly string[] = [],
): NotConverted {
  return {
    error: {
      says,
      column: 1,
      width: 1,
      ...(equivalences.length === 0 ? {} : { suggestion: `name what relates them: ${equivalences.join(', ')}` }),
    },
    reason,
    dimensions,
    ...(equivalences.length === 0 ? {} : { equivalences }),
  };
}
