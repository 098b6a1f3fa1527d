/** Numbers in few characters, as screens show them. */

/** How many tolerances were used up: `0.12 of 1`, `37 of 1`. */
export function tolerancesText(tolerances: number | null): string {
  if (tolerances === null) return '';
  return `${tolerances >= 100 ? tolerances.toExponential(1) : Number(tolerances.toPrecision(2))} of 1`;
}
