/** A name as written in, the units it may stand for out: by syntax, with prefixes, plurals and the readings of ambiguous names. */

import { nearest } from '../model/nearest.ts';
import { constantFactor, type Edition } from './constant-values.ts';
import { multiply, parseRational, power, type Rational } from './rational.ts';
import { DIMENSIONLESS, type Factor, powerOfFactor, product, UNITY, type Unit } from './unit.ts';
import { AMBIGUOUS, READING_UNITS, UNIT_TABLE } from './unit-table.ts';

export type UnitSyntax = 'ucum' | 'vounits' | 'udunits' | 'freehand';

/** One unit that a name may stand for. `unit` is null for a reading that is no unit; `says` names it. */
export interface Meaning {
  readonly unit: Unit | null;
  readonly says: string;
}

/**
 * What a name may stand for, likeliest first; empty when it is no unit in this syntax.
 * A name that stands as it is wins over one taken apart into prefix and unit.
 */
export function meanings(name: string, syntax: UnitSyntax, edition: Edition): readonly Meaning[] {
  const key = `${syntax} ${edition} ${name}`;
  const known = cache.get(key);
  if (known !== undefined) return known;
  const found = syntax === 'freehand' ? freehandMeanings(name, edition) : strictMeanings(name, syntax, edition);
  if (cache.size > 20_000) cache.clear();
  cache.set(key, found);
  return found;
}

/** The name that was probably meant, or null. */
export function suggestName(name: string): string | null {
  const table = names();
  const lower = name.toLowerCase();
  for (const known of table.freehand.keys()) if (known.toLowerCase() === lower) return known;
  for (const prefix of ['k', 'm', 'M', 'c', 'G'])
    if (lower.startsWith(prefix.toLowerCase()) && table.freehand.get(lower.slice(1))?.some((entry) => entry.prefixes))
      return prefix === 'M' || prefix === 'G' ? prefix.toLowerCase() + lower.slice(1) : prefix + lower.slice(1);
  return name.length < 3
    ? null
    : nearest(
        name,
        [...table.freehand.keys()].filter((known) => known.length > 1),
      );
}

interface Entry {
  readonly id: string;
  readonly prefixes: boolean;
  /** Written in the column of spellings that comments use: settled, whatever the standards' tables say. */
  readonly settled: boolean;
}

type Names = ReadonlyMap<string, readonly Entry[]>;

let tables: { readonly definitions: Map<string, string> } & Record<UnitSyntax, Names>;
const cache = new Map<string, readonly Meaning[]>();
const units = new Map<string, Unit>();

/** Split on first use: a command that reads no unit does not pay for the table. */
function names(): typeof tables {
  if (tables !== undefined) return tables;
  const definitions = new Map<string, string>();
  const maps = { ucum: new Map(), vounits: new Map(), udunits: new Map(), freehand: new Map() } as Record<
    UnitSyntax,
    Map<string, Entry[]>
  >;
  for (const line of `${UNIT_TABLE}${READING_UNITS}`.split('\n')) {
    const at = line.indexOf(' := ');
    if (at < 0) continue;
    const id = line.slice(0, at);
    const columns = line.slice(at + 4).split(' |');
    definitions.set(id, columns[0]!.trim());
    for (const [index, syntax] of (['ucum', 'vounits', 'udunits', 'freehand'] as const).entries()) {
      for (const word of (columns[index + 1] ?? '').split(' ')) {
        if (word === '') continue;
        const prefixes = word.endsWith('*') && word !== '10*';
        const name = prefixes ? word.slice(0, -1) : word;
        const entry = { id, prefixes, settled: syntax === 'freehand' };
        enter(maps[syntax], name, entry);
        if (syntax !== 'freehand' && !/[[*^']/.test(name)) enter(maps.freehand, name, entry);
      }
    }
    if (!columns.slice(1).some((column) => column.trim() !== ''))
      enter(maps.freehand, id, { id, prefixes: false, settled: true });
  }
  for (const id of ['julianyear', 'julianmonth', 'tropicalyear', 'gregorianyear', 'siderealyear', 'udyear', 'gnuyear'])
    enter(maps.freehand, id, { id, prefixes: false, settled: true });
  tables = { definitions, ...maps };
  return tables;
}

function enter(map: Map<string, Entry[]>, name: string, entry: Entry): void {
  const entries = map.get(name);
  if (entries === undefined) map.set(name, [entry]);
  else if (!entries.some(({ id }) => id === entry.id)) entries.push(entry);
  else if (entry.prefixes) entries[entries.findIndex(({ id }) => id === entry.id)] = entry;
}

function strictMeanings(name: string, syntax: UnitSyntax, edition: Edition): readonly Meaning[] {
  const table = names()[syntax];
  const whole = table.get(name);
  if (whole !== undefined) return whole.map((entry) => meaning('', entry.id, edition));
  const prefixed = splitPrefix(name, table, syntax === 'udunits', syntax === 'udunits');
  if (prefixed.length > 0) return [meaning(...prefixed[0]!, edition)];
  // UDUNITS takes plurals of names, not of symbols.
  if (syntax === 'udunits' && name.length > 3 && name.endsWith('s'))
    return strictMeanings(name.slice(0, -1), syntax, edition);
  return [];
}

function freehandMeanings(name: string, edition: Edition): readonly Meaning[] {
  const listed = Object.hasOwn(AMBIGUOUS, name) ? AMBIGUOUS[name] : undefined;
  if (listed !== undefined)
    return listed.map((reading) => {
      if (reading.startsWith('?')) return { unit: null, says: reading.slice(1) };
      const [prefix, id] = reading.includes(':') ? reading.split(':') : ['', reading];
      return meaning(prefix!, id!, edition);
    });
  const table = names().freehand;
  const whole = table.get(name);
  if (whole !== undefined) {
    const settled = whole.filter((entry) => entry.settled);
    return distinct((settled.length > 0 ? settled : whole).map((entry) => meaning('', entry.id, edition)));
  }
  const prefixed = splitPrefix(name, table, true);
  if (prefixed.length > 0) return distinct(prefixed.map(([prefix, id]) => meaning(prefix, id, edition)));
  if (name.length > 3 && name.endsWith('s')) {
    const singular = freehandMeanings(name.slice(0, -1), edition);
    if (singular.length > 0) return singular;
  }
  // Old codes shout: MEV, CM, SEC, Kelvin, Gram. A word of a letter or two is left alone: case tells k from K.
  const lower = name.toLowerCase();
  if (lower !== name && (name.length > 2 || (name.length === 2 && name === name.toUpperCase() && table.has(lower))))
    return freehandMeanings(lower, edition);
  return [];
}

/** Readings of one value are one: tables that differ in the seventh digit mean the same unit. */
export function distinct(readings: readonly Meaning[]): readonly Meaning[] {
  if (readings.length < 2) return readings;
  const kept: Meaning[] = [];
  for (const reading of readings)
    if (!kept.some((other) => other.unit !== null && reading.unit !== null && nearlySame(other.unit, reading.unit)))
      kept.push(reading);
  return kept;
}

function nearlySame(a: Unit, b: Unit): boolean {
  if (a === b) return true;
  const same = (x: Readonly<Record<string, number>>, y: Readonly<Record<string, number>>) =>
    Object.keys(x).length === Object.keys(y).length && Object.keys(x).every((key) => x[key] === y[key]);
  if (!same(a.dimension, b.dimension) || !same(a.counted, b.counted)) return false;
  if ((a.zero === undefined) !== (b.zero === undefined) || (a.logarithm === undefined) !== (b.logarithm === undefined))
    return false;
  const ratio = value(a.factor) / value(b.factor);
  return Math.abs(ratio - 1) < 2e-6;
}

function value(factor: Factor): number {
  return (
    (Number(factor.ratio.numerator) / Number(factor.ratio.denominator)) * Math.PI ** factor.pi * factor.approximate
  );
}

const PREFIXES: Readonly<Record<string, number>> = {
  Q: 30,
  R: 27,
  Y: 24,
  Z: 21,
  E: 18,
  P: 15,
  T: 12,
  G: 9,
  M: 6,
  k: 3,
  h: 2,
  da: 1,
  d: -1,
  c: -2,
  m: -3,
  u: -6,
  µ: -6,
  μ: -6,
  n: -9,
  p: -12,
  f: -15,
  a: -18,
  z: -21,
  y: -24,
  r: -27,
  q: -30,
};
const LONG_PREFIXES: Readonly<Record<string, number>> = {
  quetta: 30,
  ronna: 27,
  yotta: 24,
  zetta: 21,
  exa: 18,
  peta: 15,
  tera: 12,
  giga: 9,
  mega: 6,
  kilo: 3,
  hecto: 2,
  deka: 1,
  deca: 1,
  deci: -1,
  centi: -2,
  milli: -3,
  micro: -6,
  nano: -9,
  pico: -12,
  femto: -15,
  atto: -18,
  zepto: -21,
  yocto: -24,
};
const BINARY_PREFIXES: Readonly<Record<string, number>> = { Ki: 10, Mi: 20, Gi: 30, Ti: 40, Pi: 50, Ei: 60 };

function splitPrefix(name: string, table: Names, long: boolean, strict = false): [string, string][] {
  const found: [string, string][] = [];
  const tryPrefix = (prefix: string) => {
    for (const entry of table.get(name.slice(prefix.length)) ?? []) if (entry.prefixes) found.push([prefix, entry.id]);
  };
  if (long) for (const prefix in LONG_PREFIXES) if (name.startsWith(prefix)) tryPrefix(prefix);
  if (found.length > 0) return found;
  // UDUNITS takes the longest prefix: `da` is deka without a unit, not a deci-are.
  for (const length of strict && name.startsWith('da') ? [2] : [1, 2]) {
    const prefix = name.slice(0, length);
    if (name.length > length && (Object.hasOwn(PREFIXES, prefix) || Object.hasOwn(BINARY_PREFIXES, prefix)))
      tryPrefix(prefix);
  }
  return found;
}

function meaning(prefix: string, id: string, edition: Edition): Meaning {
  const base = unitOf(id, edition);
  const says = prefix + id;
  if (prefix === '') return { unit: base, says };
  const exponent = PREFIXES[prefix] ?? LONG_PREFIXES[prefix];
  const scale: Rational =
    exponent === undefined ? power(parseRational('2'), BINARY_PREFIXES[prefix]!) : power(parseRational('10'), exponent);
  // A prefix on a logarithmic unit scales its steps: a decibel is a tenth of a bel.
  if (base.logarithm !== undefined)
    return {
      unit: { ...base, logarithm: { ...base.logarithm, steps: multiply(base.logarithm.steps, power(scale, -1)) } },
      says,
    };
  return { unit: { ...base, factor: { ...base.factor, ratio: multiply(base.factor.ratio, scale) } }, says };
}

const BASES = new Set(['m', 'kg', 's', 'A', 'K', 'mol', 'cd']);

/** The unit that a line of the table defines, worked out on first use. */
function unitOf(id: string, edition: Edition): Unit {
  const key = `${edition} ${id}`;
  const known = units.get(key);
  if (known !== undefined) return known;
  const unit = define(id, edition);
  units.set(key, unit);
  return unit;
}

function define(id: string, edition: Edition): Unit {
  const words = names().definitions.get(id)!.split(' ');
  if (BASES.has(id))
    return id === 'kg' || words.length === 2 ? { ...DIMENSIONLESS, dimension: { [id]: 1 } } : DIMENSIONLESS;
  let factor: Factor = { ...UNITY, ratio: parseRational(words[0]!) };
  const parts: { unit: Unit; exponent: number }[] = [];
  let more: Partial<Unit> = {};
  let steps = '1';
  for (const word of words.slice(1)) {
    const match = /^([$#!~]?)(.*?)(-?\d+)?$/.exec(word)!;
    const exponent = Number(match[3] ?? 1);
    const name = match[2]!;
    if (word === 'nothing') more = { notAQuantity: true };
    else if (word.startsWith('zero=')) more = { zero: parseRational(word.slice(5)) };
    else if (word.startsWith('steps=')) steps = word.slice(6);
    else if (word === 'log10' || word === 'ln')
      more = { logarithm: { base: word === 'ln' ? 'e' : 10, steps: parseRational('1') } };
    else if (name === 'pi^') factor = { ...factor, pi: factor.pi + exponent };
    else if (match[1] === '~') factor = { ...factor, uses: [...factor.uses, `${id} (CODATA ${match[3]})`] };
    else if (match[1] === '#') parts.push({ unit: { ...DIMENSIONLESS, counted: { [name]: 1 } }, exponent });
    else if (match[1] === '!') parts.push({ unit: { ...DIMENSIONLESS, dimension: { [name]: 1 } }, exponent });
    else if (match[1] === '$') {
      // The unit c of MeV/c^2 and G of a solar mass: the constant as a factor, its dimension written out beside it.
      const constant = powerOfFactor(constantFactor(name, edition), exponent);
      parts.push({
        unit: {
          ...DIMENSIONLESS,
          factor: constant,
          ...(CONSTANT_DIMENSIONS[name] === undefined ? {} : raised(name, exponent)),
        },
        exponent: 1,
      });
    } else parts.push({ unit: unitOf(name, edition), exponent });
  }
  const unit = product([{ unit: { ...DIMENSIONLESS, factor, dimension: {} }, exponent: 1 }, ...parts]);
  if (more.logarithm !== undefined) more = { logarithm: { ...more.logarithm, steps: parseRational(steps) } };
  return { ...unit, ...more, ...(id === 'c' ? { takes: 'mass-energy' } : {}) };
}

/** Constants whose dimension the table leaves to them; the others stand beside units that are written out. */
const CONSTANT_DIMENSIONS: Readonly<Record<string, Readonly<Record<string, number>>>> = {
  m_u: { kg: 1 },
  m_e: { kg: 1 },
  m_p: { kg: 1 },
};

function raised(name: string, exponent: number): { dimension: Record<string, number> } {
  return {
    dimension: Object.fromEntries(
      Object.entries(CONSTANT_DIMENSIONS[name]!).map(([base, power]) => [base, power * exponent]),
    ),
  };
}
