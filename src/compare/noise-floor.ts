/** How far runs of one code lie apart that should agree: its noise floor, below which a deviation says nothing. */
import type { Norm, Tolerance } from '../model/deviation.ts';
import type { MeasureKernel } from './measure-block.ts';
import { measureArrays } from './measuring.ts';
import { studentQuantile, summarise } from './statistics.ts';

export interface NoiseFloor {
  readonly norm: Norm;
  /** Deviation of every usable run from the reference, sorted: the distribution itself, for whoever wants another limit. */
  readonly deviations: readonly number[];
  /** Runs left out: those with a NaN, an unlike infinity or another length. */
  readonly unusable: number;
  /** A further run lies below this with 99.5 % probability if deviations are normal; never below the largest seen. */
  readonly floor: number;
}

/** A limit one run in two hundred passes by chance. */
const PROBABILITY = 0.995;

/**
 * @param reference  shape (n,)
 * @param runs       the same quantity from runs with the last bit of the inputs, the order of sums, the optimisation or the
 *   number of ranks changed
 * @param norm       in which deviations are told; relative to the reference
 */
export function noiseFloor(
  reference: Float64Array,
  runs: readonly Float64Array[],
  norm: Norm,
  kernel: MeasureKernel,
): NoiseFloor {
  const deviations: number[] = [];
  for (const run of runs) {
    if (run.length !== reference.length) continue;
    const { measures, unlike } = measureArrays(reference, run, { absolute: 1, relative: 0 }, kernel);
    if (unlike > 0) continue;
    const key = { pointwise: 'maxRelative', L1: 'l1', L2: 'l2', Linf: 'linf' } as const;
    deviations.push(measures[key[norm]]);
  }
  return floorOf(norm, deviations, runs.length - deviations.length);
}

/** The same from deviations that were measured before, in any order. */
export function floorOf(norm: Norm, measured: readonly number[], unusable: number): NoiseFloor {
  const deviations = [...measured].sort((a, b) => a - b);
  return { norm, deviations, unusable, floor: upperLimit(deviations) };
}

/** Prediction limit for one more value: mean + t * s * sqrt(1 + 1/n). */
function upperLimit(deviations: readonly number[]): number {
  const largest = deviations.at(-1) ?? Number.NaN;
  if (deviations.length < 2) return largest;
  const { count, mean, deviation } = summarise(deviations);
  const limit = mean + studentQuantile(PROBABILITY, count - 1) * deviation * Math.sqrt(1 + 1 / count);
  return Math.max(largest, limit);
}

/** The noise floor as a tolerance; null when fewer than two runs were usable. */
export function noiseTolerance(noise: NoiseFloor): Tolerance | null {
  if (noise.deviations.length < 2 || !Number.isFinite(noise.floor)) return null;
  const runs = `${noise.deviations.length} repeated runs`;
  const left = noise.unusable === 0 ? '' : `, ${noise.unusable} more unusable`;
  return { relative: noise.floor, norm: noise.norm, reason: `the noise floor of ${runs}${left}` };
}
