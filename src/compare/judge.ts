/** The class of what was measured, under everything that may be allowed: declared, noise of the code, error of the grid. */
import type { Tolerance } from '../model/deviation.ts';
import { type ArrayDeviation, classify } from './compare-arrays.ts';
import type { GridConvergence } from './grid-convergence.ts';
import type { Measured } from './measuring.ts';
import { type NoiseFloor, noiseTolerance } from './noise-floor.ts';
import { positionOf, type Series } from './series.ts';
import { tolerancesOf } from './tolerance.ts';

export interface Allowances {
  /** By quantity or feature: what repeated runs of the reference differ by. The larger of this and the declared is allowed. */
  readonly noise?: Readonly<Record<string, NoiseFloor>>;
  /** By quantity or feature: the error of the grid, so that what is beyond tolerance but below it is said as such. */
  readonly gridError?: Readonly<Record<string, GridConvergence>>;
}

/** The class under the larger of the declared tolerance and the noise floor, with a word on the error of the grid. */
export function judge(
  quantity: string,
  measured: Measured,
  declared: Tolerance | null,
  grain: number,
  options: Allowances,
): { deviation: ArrayDeviation; tolerance: Tolerance | null } {
  const noise = options.noise?.[quantity];
  const floor = noise === undefined ? null : noiseTolerance(noise);
  const byDeclared = classify(measured, declared, grain);
  const byNoise = floor === null ? null : classify(measured, floor, grain);
  const kinder =
    byNoise !== null &&
    (byNoise.tolerances ?? Number.POSITIVE_INFINITY) < (byDeclared.tolerances ?? Number.POSITIVE_INFINITY);
  const [deviation, tolerance] = kinder ? [byNoise, floor] : [byDeclared, declared];
  const grid = options.gridError?.[quantity];
  if (deviation.class !== 'beyond tolerance' || grid === undefined) return { deviation, tolerance };
  if (!grid.converging || !Number.isFinite(grid.fineIndex)) {
    const says = 'the three grids of its grid-error do not converge: the error of the grid is unknown';
    return { deviation: withNotes(deviation, [says]), tolerance };
  }
  const below = tolerancesOf(measured, { relative: grid.fineIndex, norm: 'Linf' }) <= 1;
  const share = `${(grid.fineIndex * 100).toPrecision(2)} %`;
  const says = below
    ? `beyond tolerance, but below the error of the grid (${share}): the reference itself is no more certain`
    : `beyond the error of the grid too (${share})`;
  return { deviation: withNotes(deviation, [says]), tolerance };
}

export function withNotes<T extends { readonly why?: string }>(deviation: T, notes: readonly string[]): T {
  const all = [...(deviation.why === undefined ? [] : [deviation.why]), ...notes];
  return all.length === 0 ? deviation : { ...deviation, why: all.join('; ') };
}

/** The worst element with its position along the axis. */
export function placed<T extends ArrayDeviation>(deviation: T, reference: Series): T {
  const { worst } = deviation.measures;
  const at = worst === null ? null : positionOf(reference, worst.index);
  if (worst === null || at === null) return deviation;
  const along = { value: at, unit: reference.along!.unit };
  return { ...deviation, measures: { ...deviation.measures, worst: { ...worst, along } } };
}
