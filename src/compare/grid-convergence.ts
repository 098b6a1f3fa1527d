/** How large the error of the grid is, from the same quantity on three grids: observed order, extrapolated value, GCI. */
import type { Tolerance } from '../model/deviation.ts';

export interface GridConvergence {
  /** Observed order of accuracy; NaN when the three values do not tell (two are equal). */
  readonly order: number;
  /** True when the values come nearer from alternating sides. */
  readonly oscillating: boolean;
  /** True when the differences shrink from coarse to fine; without it nothing below means anything. */
  readonly converging: boolean;
  /** Richardson's estimate of the value on an infinitely fine grid. */
  readonly extrapolated: number;
  /** |(fine - middle) / fine| */
  readonly relativeError: number;
  /** |(extrapolated - fine) / extrapolated| */
  readonly extrapolatedError: number;
  /** Grid convergence index of the two finer grids, a fraction of the fine value. */
  readonly fineIndex: number;
  /** The same of the two coarser grids, a fraction of the middle value. */
  readonly coarseIndex: number;
  /** coarseIndex / (r^order * fineIndex): near 1 in the asymptotic range. */
  readonly asymptoticRatio: number;
}

/** The safety factor for three grids. @source P. J. Roache, J. Fluids Eng. 116 (1994) 405 */
export const SAFETY_FACTOR = 1.25;

/**
 * @param values  the quantity on the fine, the middle and the coarse grid
 * @param ratios  spacing of the middle grid over the fine one, and of the coarse over the middle one; both > 1
 * @source I. B. Celik et al., Procedure for Estimation and Reporting of Uncertainty Due to Discretization in CFD
 *   Applications, J. Fluids Eng. 130 (2008) 078001: equations 3 to 7
 */
export function gridConvergence(
  values: readonly [number, number, number],
  ratios: readonly [number, number],
  safety = SAFETY_FACTOR,
): GridConvergence {
  const [fine, middle, coarse] = values;
  const [r21, r32] = ratios;
  const [e21, e32] = [middle - fine, coarse - middle];
  const sign = Math.sign(e32 / e21);
  const order = observedOrder(Math.abs(e32 / e21), sign, r21, r32);
  const growth = r21 ** order - 1;
  const extrapolated = fine - e21 / growth;
  const relativeError = Math.abs(e21 / fine);
  const fineIndex = (safety * relativeError) / growth;
  const coarseIndex = (safety * Math.abs(e32 / middle)) / (r32 ** order - 1);
  return {
    order,
    oscillating: sign < 0,
    converging: Math.abs(e21) < Math.abs(e32),
    extrapolated,
    relativeError,
    extrapolatedError: Math.abs((extrapolated - fine) / extrapolated),
    fineIndex,
    coarseIndex,
    asymptoticRatio: coarseIndex / (r21 ** order * fineIndex),
  };
}

/** Fixed-point iteration of p = |ln|e32/e21| + ln((r21^p - s) / (r32^p - s))| / ln r21, from the value for equal ratios. */
function observedOrder(quotient: number, sign: number, r21: number, r32: number): number {
  let order = Math.abs(Math.log(quotient)) / Math.log(r21);
  if (r21 === r32) return order;
  for (let round = 0; round < 200; round++) {
    const correction = Math.log((r21 ** order - sign) / (r32 ** order - sign));
    const next = Math.abs(Math.log(quotient) + correction) / Math.log(r21);
    if (Math.abs(next - order) <= 1e-14 * Math.abs(next)) return next;
    order = next;
  }
  return order;
}

/** Richardson's extrapolation where the order is known. */
export function extrapolate(fine: number, coarse: number, ratio: number, order: number): number {
  return fine + (fine - coarse) / (ratio ** order - 1);
}

/** Representative ratio of the spacings of two grids of so many cells. @source Celik et al. 2008, equation 1 */
export function spacingRatio(fineCells: number, coarseCells: number, dimensions: number): number {
  return (fineCells / coarseCells) ** (1 / dimensions);
}

/** The error of the grid as a tolerance: what a result may differ by and still be as good as its reference. */
export function gridTolerance(convergence: GridConvergence): Tolerance | null {
  if (!convergence.converging || !Number.isFinite(convergence.fineIndex)) return null;
  return {
    relative: convergence.fineIndex,
    norm: 'pointwise',
    reason: `the grid convergence index at an observed order of ${convergence.order.toFixed(2)}`,
  };
}
