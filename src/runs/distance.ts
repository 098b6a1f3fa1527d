/** Deviations as one number: how many tolerances apart. */
import type { Deviation } from '../model/deviation.ts';

/**
 * 0 for bit-for-bit, Infinity for what is not comparable or was declared without tolerance and is beyond roundoff.
 *
 * @param exact  any bit counts: whatever is not bit-for-bit is Infinity
 */
export function tolerancesApart(deviation: Deviation, exact = false): number {
  if (deviation.class === 'bit-for-bit') return 0;
  if (exact || deviation.class === 'not comparable') return Number.POSITIVE_INFINITY;
  if (deviation.tolerances === null || Number.isNaN(deviation.tolerances)) {
    return deviation.class === 'beyond tolerance' ? Number.POSITIVE_INFINITY : 0;
  }
  return deviation.tolerances;
}

/** The same with the direction, where there is one: a feature or total that fell counts below zero. */
export function signedTolerances(deviation: Deviation): number {
  const apart = tolerancesApart(deviation);
  const worst = deviation.measures?.worst;
  if (deviation.of === 'field' || worst === null || worst === undefined) return apart;
  return worst.result < worst.reference ? -apart : apart;
}

/** A stretch of a profile where the result lies outside the band of its tolerance. */
export interface Stretch {
  readonly from: number;
  readonly to: number;
}

/** Where along the profile a quantity left its band, in the axis' unit; empty without a profile. */
export function stretchesBeyond(deviation: Deviation): Stretch[] {
  const { profile } = deviation;
  if (profile === undefined) return [];
  const stretches: Stretch[] = [];
  let from: number | null = null;
  for (const [i, at] of profile.along.values.entries()) {
    const beyond = !(Math.abs(profile.result[i]! - profile.reference[i]!) <= profile.band[i]!);
    if (beyond) from ??= at;
    const ends = from !== null && (!beyond || i === profile.along.values.length - 1);
    if (ends) {
      stretches.push({ from: from!, to: beyond ? at : profile.along.values[i - 1]! });
      from = null;
    }
  }
  return stretches;
}
