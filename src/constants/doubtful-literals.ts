/** Literals that lose what they say: a single-precision one given to a double, and integers divided where a fraction was meant. */
import type { Finding } from '../model/finding.ts';
import type { FileInterface, LiteralUse } from '../model/interface.ts';
import type { Place } from '../model/place.ts';
import { literalValue } from './digits.ts';

/** No finding lists more places than this; it says how many more there are. */
const MOST_PLACES = 12;

export function doubtfulLiterals(
  read: FileInterface,
  module: string,
  placed: (at: LiteralUse) => Place,
  promote: Readonly<Record<string, number>>,
): Finding[] {
  const single: LiteralUse[] = [];
  const divided: LiteralUse[] = [];
  for (const literal of read.literals) {
    if (literal.role === 'integer-division') divided.push(literal);
    else if (losesDigits(literal, read.language, promote)) single.push(literal);
  }
  return [
    ...byProcedure(single).map((own): Finding => {
      const worst = own.reduce((a, b) => (singleError(b.text) > singleError(a.text) ? b : a));
      const error = singleError(worst.text);
      return {
        kind: 'literal-single',
        gravity: 'caution',
        module,
        place: placed(worst),
        says: `${worst.text} is single precision and is given to ${worst.target ?? 'a double'} of 8 bytes: ${error.toExponential(1)} off${own.length > 1 ? `; ${own.length} such literals in ${worst.procedure ?? 'this file'}` : ''}`,
        evidence: own.slice(0, MOST_PLACES).map((literal) => ({
          says: `${literal.text} given to ${literal.target ?? 'a double'}`,
          place: placed(literal),
        })),
        next: 'Write it with a d exponent or the kind of the variable: 0.1d0, 0.1_dp. If the build promotes default reals, say so in the assembly.',
      };
    }),
    ...byProcedure(divided).map((own): Finding => {
      const first = own[0]!;
      return {
        kind: 'integer-division',
        gravity: own.some(({ text }) => lost(text)) ? 'caution' : 'note',
        module,
        place: placed(first),
        says: `${first.text} divides integers and drops the fraction${own.length > 1 ? `; ${own.length} such places in ${first.procedure ?? 'this file'}` : ''}`,
        evidence: own.slice(0, MOST_PLACES).map((literal) => ({ says: literal.text, place: placed(literal) })),
        next: 'Write one of the two as a real number, 2.0d0/3.0d0, unless the whole quotient is meant.',
      };
    }),
  ];
}

/** Relative error that binary32 makes of a literal. @source IEEE 754-2019 binary32; Fortran 2018, default real */
export function singleError(text: string): number {
  const value = literalValue(text);
  return value === 0 || !Number.isFinite(value) ? 0 : Math.abs(Math.fround(value) - value) / Math.abs(value);
}

function losesDigits(
  literal: LiteralUse,
  language: FileInterface['language'],
  promote: Readonly<Record<string, number>>,
): boolean {
  if ((literal.targetBytes ?? 0) < 8 || singleError(literal.text) === 0) return false;
  if (literal.role !== 'assigned' && literal.role !== 'mixed' && literal.role !== 'named') return false;
  // A constant that a double cannot hold in single range either is no slip of kind.
  if (language === 'fortran') return isDefaultReal(literal) && (promote.real ?? 4) < 8;
  return (language === 'c' || language === 'c++') && /[fF]$/.test(literal.text) && !/^0[xX]/.test(literal.text);
}

function isDefaultReal({ text, bytes }: LiteralUse): boolean {
  return (bytes === 4 || bytes === null) && /^[+-]?(?:\d+\.\d*|\.\d+|\d+(?=[eE]))(?:[eE][+-]?\d+)?$/.test(text);
}

/** `1/2` and `2/3` lose something; `4/2` does not. */
function lost(text: string): boolean {
  const match = /(\d+)\s*\/\s*(\d+)/.exec(text);
  return match !== null && Number(match[2]) !== 0 && Number(match[1]) % Number(match[2]) !== 0;
}

function byProcedure(literals: readonly LiteralUse[]): LiteralUse[][] {
  const groups = new Map<string, LiteralUse[]>();
  for (const literal of literals) {
    const key = literal.procedure ?? '';
    groups.set(key, [...(groups.get(key) ?? []), literal]);
  }
  return [...groups.values()];
}
