/** Numbers as people read them in findings, reports and screens: few digits, powers of ten where they help. */

/** A number in few characters: `1e-26`, `3.2e4`, `0.5`, `12000`. */
export function shortNumber(value: number | null): string {
  if (value === null) return 'any';
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e-3 && size < 1e5) return String(Number(value.toPrecision(4)));
  const [mantissa, exponent] = value.toExponential(3).split('e') as [string, string];
  return `${Number(mantissa)}e${Number(exponent)}`;
}
