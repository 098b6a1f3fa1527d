/** One number written in decimal, as any code of the trade writes it. */

const DECIMAL = /^([+-]?(?:\d+\.?\d*|\.\d+))(?:[eEdDqQ]([+-]?\d+)|([+-]\d+))?(?:_[A-Za-z]\w*)?$/;
const SPECIAL = /^([+-]?)(nan(?:\(\w*\))?|inf(?:inity)?)$/i;
/** A Fortran field too narrow for its value is filled with asterisks: the value is lost, so it is no number. */
const OVERFLOWN = /^\*+$/;

/**
 * The double nearest to a number as C, Fortran or Python writes it: exponents by e, d or q, and Fortran's three-digit
 * exponents without a letter (`1.5-110`); `NaN`, `Inf`; a field of asterisks is NaN.
 *
 * @returns null when the text is no number
 * @source Fortran 2018 (ISO/IEC 1539-1), 13.7.2.3: forms of numeric output
 */
export function readDecimal(text: string): number | null {
  const match = DECIMAL.exec(text);
  if (match !== null) return Number(`${match[1]}e${match[2] ?? match[3] ?? '0'}`);
  const special = SPECIAL.exec(text);
  if (special !== null) {
    if (special[2]!.toLowerCase().startsWith('nan')) return Number.NaN;
    return special[1] === '-' ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  }
  return OVERFLOWN.test(text) ? Number.NaN : null;
}
