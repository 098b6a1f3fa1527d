/** Decimal digits of literals as written: which digits a literal carries, and how they agree with those of a published value. */

export interface Digits {
  readonly negative: boolean;
  /** Significant digits as written, without leading zeros and with trailing ones: `667430`. */
  readonly digits: string;
  /** Power of ten of the first digit: -11 for 6.67430e-11. */
  readonly exponent: number;
}

const LITERAL = /^([+-]?)(\d*)\.?(\d*)(?:[eEdDqQ]([+-]?\d{1,4}))?(?:_\w+|[fFlL])?$/;

/**
 * The digits of a numeric literal of Fortran, C, Python or TypeScript; null when the text is anything else, or zero.
 * @source Fortran 2018, 7.4.3.2 (d exponent, kind suffix); C17, 6.4.4.2
 */
export function digitsOf(text: string): Digits | null {
  const match = LITERAL.exec(plainLiteral(text));
  if (match === null || match[2]! + match[3]! === '') return null;
  const all = match[2]! + match[3]!;
  const first = all.search(/[1-9]/);
  if (first < 0) return null;
  return {
    negative: match[1] === '-',
    digits: all.slice(first),
    exponent: Number(match[4] ?? 0) + match[2]!.length - 1 - first,
  };
}

/** Digit separators out; `1.38 _d -23`, as some codes write a macro for the exponent letter, made `1.38d-23`. */
function plainLiteral(text: string): string {
  return text
    .replace(/(?<=\d)['_](?=\d{3})/g, '')
    .replace(/\s*_[dD]\s*(?=[+-]?\d)/, 'd')
    .trim();
}

/** The value of a literal as a double, whatever language wrote it; NaN when it is none. */
export function literalValue(text: string): number {
  return Number(
    plainLiteral(text)
      .replace(/_\w+$|[fFlL]$/, '')
      .replace(/[dDqQ]/, 'e'),
  );
}

export type Agreement = 'printed' | 'rounded' | 'extended' | 'truncated' | null;

/**
 * How the digits of a literal agree with a reference of the same magnitude:
 * `printed` equal digit for digit, `extended` with up to two digits more behind it (the uncertainty, most often), `rounded` or `truncated` when the reference was cut to the literal's digits, null when neither.
 */
export function agreement(literal: Digits, reference: Digits, shift = 0): Agreement {
  const written = literal.digits;
  const published = reference.digits;
  const sameMagnitude = literal.exponent === reference.exponent + shift;
  if (sameMagnitude && stripped(written) === stripped(published)) return 'printed';
  // The shortest text of a double, or one printed from binary, may differ in its last digits from the published ones.
  if (sameMagnitude && written.length >= 15 && Math.abs(mantissa(written) - mantissa(published)) < 4e-15)
    return 'rounded';
  // Old codes write the uncertainty behind the value: 6.6260689633 for 6.62606896(33).
  if (
    sameMagnitude &&
    published.length >= 6 &&
    written.length > published.length &&
    written.length <= published.length + 2 &&
    written.startsWith(published)
  )
    return 'extended';
  if (written.length >= published.length) return null;
  const cut = published.slice(0, written.length);
  if (published.charCodeAt(written.length) >= 53) {
    const up = String(BigInt(cut) + 1n);
    const carried = up.length > cut.length;
    if (literal.exponent === reference.exponent + shift + (carried ? 1 : 0) && stripped(up) === stripped(written))
      return 'rounded';
  } else if (sameMagnitude && stripped(cut) === stripped(written)) return 'rounded';
  return sameMagnitude && stripped(cut) === stripped(written) ? 'truncated' : null;
}

function mantissa(digits: string): number {
  return Number(`${digits[0]}.${digits.slice(1)}`);
}

function stripped(digits: string): string {
  return digits.replace(/0+$/, '');
}
