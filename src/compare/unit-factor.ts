/** What a result is multiplied by to be in its reference's unit. */

/** @returns 1 when neither says otherwise; a sentence when the units cannot be brought together */
export function unitFactor(from: string | undefined, to: string | undefined): number | string {
  if (from === undefined || to === undefined || from === to) return 1;
  return `the reference is in ${to}, the result in ${from}`;
}
