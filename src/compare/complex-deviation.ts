/** Complex fields: parts are told apart for bits and norms, but how far a value moved is the distance in the plane. */

import type { Weighing } from './measure-block.ts';
import type { Measured } from './measuring.ts';

/**
 * The same measurement with the pointwise measures taken from |z' - z| and |z|: a tiny imaginary part that turns its sign
 * is no large relative deviation.
 *
 * @param reference real and imaginary parts in turn
 */
export function asComplex(
  measured: Measured,
  reference: Float64Array,
  result: Float64Array,
  weighing: Weighing,
): Measured {
  if (measured.unlike > 0) return measured;
  let [maxAbsolute, maxRelative, maxReference, worstRatio, worstAt, identical] = [0, 0, 0, 0, -1, 0];
  for (let i = 0; i + 1 < reference.length; i += 2) {
    const [x, y, u, v] = [reference[i]!, reference[i + 1]!, result[i]!, result[i + 1]!];
    if (Object.is(x, u) && Object.is(y, v)) identical++;
    const size = Math.hypot(x, y);
    if (Number.isFinite(size)) maxReference = Math.max(maxReference, size);
    const d = x === u && y === v ? 0 : Math.hypot(u - x, v - y);
    if (d === 0) continue;
    maxAbsolute = Math.max(maxAbsolute, d);
    maxRelative = Math.max(maxRelative, d / size);
    const allowed = weighing.absolute + weighing.relative * size;
    if (d / allowed > worstRatio) [worstRatio, worstAt] = [d / allowed, i];
  }
  const worst =
    worstAt < 0
      ? null
      : {
          index: worstAt / 2,
          reference: Math.hypot(reference[worstAt]!, reference[worstAt + 1]!),
          result: Math.hypot(result[worstAt]!, result[worstAt + 1]!),
        };
  const linf = maxAbsolute === 0 ? 0 : maxAbsolute / maxReference;
  const measures = {
    ...measured.measures,
    count: reference.length / 2,
    identical,
    maxAbsolute,
    maxRelative,
    linf,
    worst,
  };
  return { ...measured, measures, worstRatio, maxReference };
}
