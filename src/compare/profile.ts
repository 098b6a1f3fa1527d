/** The points of a deviation that a plot needs: thinned so that the extremes of either side and the worst elements stay. */
import type { Profile, Tolerance } from '../model/deviation.ts';
import type { Series } from './series.ts';

const MOST_POINTS = 2000;

/** @returns null for fields that are no profile: more than one dimension, or fewer than two elements */
export function profileOf(reference: Series, result: Series, tolerance: Tolerance | null): Profile | null {
  const count = reference.values.length;
  const along = reference.along !== null && reference.along.values.length === count ? reference.along : null;
  if (count < 2 || (reference.shape.length > 1 && along === null)) return null;
  const indices = thin(reference.values, result.values, MOST_POINTS);
  const at = (values: Float64Array) => indices.map((index) => values[index]!);
  const { absolute = 0, relative = 0 } = tolerance ?? {};
  return {
    along: {
      name: along?.name ?? 'element',
      unit: along?.unit ?? '',
      values: along === null ? indices : at(along.values),
    },
    reference: at(reference.values),
    result: at(result.values),
    band: at(reference.values).map((value) => absolute + relative * Math.abs(value)),
  };
}

/** Of each stretch of elements: its first, where either side is least and greatest, and where they are furthest apart. */
function thin(reference: Float64Array, result: Float64Array, most: number): number[] {
  const count = reference.length;
  if (count <= most) return Array.from({ length: count }, (_, index) => index);
  const stretches = Math.floor(most / 6);
  const kept = new Set<number>([count - 1]);
  for (let stretch = 0; stretch < stretches; stretch++) {
    const from = Math.floor((stretch * count) / stretches);
    const to = Math.floor(((stretch + 1) * count) / stretches);
    const best = [from, from, from, from, from];
    for (let i = from; i < to; i++) {
      if (reference[i]! < reference[best[0]!]!) best[0] = i;
      if (reference[i]! > reference[best[1]!]!) best[1] = i;
      if (result[i]! < result[best[2]!]!) best[2] = i;
      if (result[i]! > result[best[3]!]!) best[3] = i;
      if (apart(i) > apart(best[4]!)) best[4] = i;
    }
    kept.add(from);
    for (const index of best) kept.add(index);
  }
  return [...kept].sort((a, b) => a - b);

  function apart(i: number): number {
    const distance = Math.abs(result[i]! - reference[i]!);
    return Number.isNaN(distance) ? Number.POSITIVE_INFINITY : distance;
  }
}
