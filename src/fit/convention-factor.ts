/** Conventions that a factor can bridge. Most cannot: an energy zero, a mass basis or a frame needs physics, not arithmetic. */

const LOG_BASES: Readonly<Record<string, number>> = { ln: Math.E, log10: 10, log2: 2 };

/**
 * The factor that turns a value under one choice of a convention into the other, or null when no factor does.
 * A sign convention with two choices is bridged by -1; one base of logarithm by another through the logarithm of the bases.
 *
 * @param name  the convention: `sign` and names that end in `-sign` are signs
 * @param open  every choice that the contract leaves
 */
export function conventionFactor(name: string, open: readonly string[], from: string, to: string): number | null {
  if (from === to) return 1;
  if (/(^|-)sign$/.test(name)) return open.length === 2 && open.includes(from) && open.includes(to) ? -1 : null;
  if (name === 'log-base' && Object.hasOwn(LOG_BASES, from) && Object.hasOwn(LOG_BASES, to)) {
    // log_to(x) = log_from(x) * ln(from) / ln(to)
    return Math.log(LOG_BASES[from]!) / Math.log(LOG_BASES[to]!);
  }
  return null;
}
