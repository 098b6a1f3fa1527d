/** A literal and its name in; the physical or mathematical constant it carries, the editions whose digits those are, and the digits lost out. */
import { CONSTANTS, type ConstantRecord, MATHEMATICAL, type UnitSystem } from './constant-table.ts';
import { type Agreement, agreement, type Digits, digitsOf } from './digits.ts';

export interface Recognised {
  readonly symbol: string;
  readonly says: string;
  readonly of: 'physics' | 'mathematics';
  readonly system: string;
  readonly unit: string;
  /** Editions whose digits it carries; empty when it is near the constant and has the digits of none. */
  readonly editions: readonly string[];
  readonly agreement: Agreement;
  readonly significant: number;
  /** Digits of the edition that the literal does not carry. */
  readonly digitsLost: number;
  /** |literal - edition| / |edition|; of the nearest edition when it carries none. */
  readonly relativeError: number;
  /** Value in the first unit system of the table, so that places with other units compare. */
  readonly normalised: number;
  readonly named: boolean;
  /** Edition and digits of the nearest value, for messages. */
  readonly nearest: { readonly edition: string; readonly digits: string };
}

interface Candidate {
  readonly record: ConstantRecord;
  readonly system: UnitSystem;
  readonly references: readonly { readonly edition: string; readonly digits: Digits; readonly text: string }[];
}

let index: Map<string, Candidate[]> | undefined;

/** By magnitude and first digit, and the neighbours that rounding can reach: few candidates remain for any literal. */
function candidates(digits: Digits): readonly Candidate[] {
  if (index === undefined) {
    index = new Map();
    for (const record of CONSTANTS) {
      const references = Object.entries(record.values).map(([edition, text]) => ({
        edition,
        digits: digitsOf(text)!,
        text,
      }));
      for (const system of record.systems) {
        const keys = new Set(references.map(({ digits: own }) => `${own.exponent + system.shift}:${own.digits[0]}`));
        for (const key of keys) {
          const list = index.get(key);
          if (list === undefined) index.set(key, [{ record, system, references }]);
          else list.push({ record, system, references });
        }
      }
    }
  }
  return index.get(`${digits.exponent}:${digits.digits[0]}`) ?? [];
}

/** Digits that a literal without a telling name must have: 4 where its magnitude is unusual, 6 where any number might lie. */
function digitsAsked(exponent: number, named: boolean): number {
  if (named) return Math.abs(exponent) >= 5 ? 2 : 3;
  return exponent <= -8 || exponent >= 15 ? 3 : Math.abs(exponent) >= 5 ? 5 : 6;
}

/**
 * @param text  the literal as written: `6.67259d-8`
 * @param name  what it is given to, when anything; a telling name lets fewer digits do
 * @returns null for an ordinary number
 */
export function recognise(text: string, name: string | null): Recognised | null {
  const digits = digitsOf(text);
  if (digits === null) return null;
  const folded = name === null ? '' : fold(name);
  let best: Recognised | null = null;
  for (const candidate of candidates(digits)) {
    const found = match(digits, candidate, folded);
    if (found !== null && (best === null || rank(found) > rank(best))) best = found;
  }
  return best ?? mathematical(digits, folded);
}

/** `GSL_CONST_CGSM_BOLTZMANN`, `phys%kB_cgs`, `boltz_const` come down to the letters that tell. */
export function fold(name: string): string {
  const last = name.toLowerCase().split(/[%.:]/).at(-1)!;
  return last
    .replace(/(?:^|_)(?:gsl|const|constant|cgsm|mksa|cgs|si|phys|physical|codata)(?=_|$)/g, '')
    .replace(/_/g, '')
    .replace(/(?:const|cgs|si)$/, '');
}

function rank(found: Recognised): number {
  return (
    (found.editions.length > 0 ? 100 : 0) +
    (found.named ? 50 : 0) +
    (found.agreement === 'printed' ? 20 : 0) -
    found.relativeError
  );
}

function match(literal: Digits, { record, system, references }: Candidate, name: string): Recognised | null {
  const named = name !== '' && telling(record, name);
  const significant = trimmed(literal).length;
  const asked = digitsAsked(literal.exponent, named);
  const byAgreement = new Map<Agreement, string[]>();
  let nearest = { edition: '', text: '', error: Number.POSITIVE_INFINITY, digits: 0 };
  for (const { edition, digits, text } of references) {
    const agrees = agreement(literal, digits, system.shift);
    if (agrees !== null) byAgreement.set(agrees, [...(byAgreement.get(agrees) ?? []), edition]);
    const error = relativeDifference(literal, digits);
    if (error < nearest.error) nearest = { edition, text, error, digits: digits.digits.length };
  }
  // The oldest edition is named only where its own digits show: cut to few digits it agrees with the later ones.
  const editions = (agrees: Agreement) => {
    const all = byAgreement.get(agrees) ?? [];
    return all.length > 1 ? all.filter((edition) => edition !== '1973') : all;
  };
  const agrees =
    (['printed', 'rounded', 'extended', 'truncated'] as const).find((kind) => byAgreement.has(kind)) ?? null;
  if (agrees === null) {
    // Near a constant without the digits of any edition: a slip, a rounding of a rounding, or another constant.
    const near = named ? 2e-3 : 1e-5;
    if (!Object.keys(record.values).every((edition) => /^\d{4}$/.test(edition))) return null;
    if (
      nearest.error > near ||
      significant < Math.max(4, asked) ||
      (!named && (significant < 7 || Math.abs(literal.exponent) < 5))
    )
      return null;
  } else if (literal.digits.length < asked || (significant < 2 && !(named && record.symbol === 'c'))) return null;
  else if (significant < asked && !named && (agrees !== 'printed' || Math.abs(literal.exponent) < 8)) return null;
  const found = agrees === null ? [] : editions(agrees);
  return {
    symbol: record.symbol,
    says: record.says,
    of: 'physics',
    system: system.system,
    unit: system.unit,
    editions: found,
    agreement: agrees,
    significant,
    digitsLost:
      agrees === null || agrees === 'printed' || agrees === 'extended' || significant >= 15
        ? 0
        : Math.max(0, nearest.digits - significant),
    relativeError: nearest.error,
    normalised: Number(
      `${literal.negative ? '-' : ''}${literal.digits[0]}.${literal.digits.slice(1) || '0'}e${literal.exponent - system.shift}`,
    ),
    named,
    nearest: { edition: nearest.edition, digits: nearest.text },
  };
}

function telling(record: ConstantRecord, name: string): boolean {
  return record.names.test(name) || name.split('_').some((part) => part.length > 2 && record.names.test(part));
}

function mathematical(literal: Digits, name: string): Recognised | null {
  const significant = trimmed(literal).length;
  for (const { symbol, value, names } of MATHEMATICAL) {
    const reference = digitsOf(value)!;
    if (Math.abs(reference.exponent - literal.exponent) > 1) continue;
    const named = name !== '' && names.test(name);
    const agrees = agreement(literal, reference);
    if (agrees === null || significant < (named ? 3 : 6)) continue;
    const error = relativeDifference(literal, reference);
    return {
      symbol,
      says: symbol,
      of: 'mathematics',
      system: 'number',
      unit: '1',
      editions: ['exact'],
      agreement: agrees,
      significant,
      digitsLost: Math.max(0, 16 - significant),
      relativeError: error,
      normalised: Number(`${literal.digits[0]}.${literal.digits.slice(1) || '0'}e${literal.exponent}`),
      named,
      nearest: { edition: 'exact', digits: value.slice(0, 19) },
    };
  }
  return null;
}

function trimmed(literal: Digits): string {
  return literal.digits.replace(/0+$/, '');
}

/** Of the digits alone; the magnitudes are known to be the same. Eighteen digits are compared. */
function relativeDifference(a: Digits, b: Digits): number {
  const first = BigInt(a.digits.slice(0, 24).padEnd(24, '0'));
  const second = BigInt(b.digits.slice(0, 24).padEnd(24, '0'));
  return Math.abs(Number(first - second)) / Number(second);
}
