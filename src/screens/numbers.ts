/** Numbers in few characters, as screens show them. */

/** A number in few characters: `1e-26`, `3.2e4`, `0.5`, `12000`. */
export function shortNumber(value: number | null): string {
  if (value === null) return 'any';
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e-3 && size < 1e5) return String(Number(value.toPrecision(4)));
  const [mantissa, exponent] = value.toExponential(2).split('e') as [string, string];
  return `${Number(mantissa)}e${Number(exponent)}`;
}

/** How many tolerances were used up: `0.12 of 1`, `37 of 1`. */
export function tolerancesText(tolerances: number | null): string {
  if (tolerances === null) return '';
  return `${tolerances >= 100 ? tolerances.toExponential(1) : Number(tolerances.toPrecision(2))} of 1`;
}
