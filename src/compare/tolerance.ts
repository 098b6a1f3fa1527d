/** What a tolerance allows, and how a measured deviation stands to it. */
import type { Tolerance } from '../model/deviation.ts';
import type { Weighing } from './measure-block.ts';
import type { Measured } from './measuring.ts';

/** A declared tolerance with every part filled in; null when nothing is declared. */
export function completeTolerance(declared: Partial<Tolerance> | undefined): Tolerance | null {
  if (declared === undefined) return null;
  const { absolute, relative, ulp } = declared;
  if (absolute === undefined && relative === undefined && ulp === undefined) return null;
  return { ...declared, norm: declared.norm ?? 'pointwise' };
}

/** How elements are weighed against one another to find the worst. */
export function weighingOf(tolerance: Tolerance | null): Weighing {
  const absolute = tolerance?.absolute ?? 0;
  const relative = tolerance?.relative ?? 0;
  // Without an allowance in the quantity's own terms, the largest difference is the worst.
  return absolute === 0 && relative === 0 ? { absolute: 1, relative: 0 } : { absolute, relative };
}

/**
 * The measured deviation over the allowed one; 1 is just allowed, Infinity when nothing is allowed and something differs.
 * Pointwise: the worst element's |result - reference| over absolute + relative * |reference|, or its ULP distance over `ulp`,
 * whichever is kinder. L1, L2, Linf: the norm of the difference over relative * (norm of the reference) + absolute * (norm of
 * an array of ones), so that `absolute` stays in the unit of the quantity.
 */
export function tolerancesOf(measured: Measured, tolerance: Tolerance): number {
  if (measured.unlike > 0) return Number.POSITIVE_INFINITY;
  const { absolute = 0, relative = 0, ulp } = tolerance;
  const { maxAbsolute } = measured.measures;
  const count = measured.weightTotal ?? measured.measures.count;
  const { norms, maxReference } = measured;
  switch (tolerance.norm) {
    case 'L1':
      return over(norms.l1, relative * norms.l1Reference + absolute * count);
    case 'L2':
      return over(norms.l2, relative * norms.l2Reference + absolute * Math.sqrt(count));
    case 'Linf':
      return over(maxAbsolute, relative * maxReference + absolute);
    case 'pointwise': {
      const byUlp = ulp === undefined ? Number.POSITIVE_INFINITY : over(Number(measured.ulp), ulp);
      if (tolerance.absolute === undefined && tolerance.relative === undefined) return byUlp;
      const byValue = pointwise(measured, absolute, relative);
      return Math.min(byValue, byUlp);
    }
  }
}

/** Exact for the weighing that was measured, and for a purely absolute or relative tolerance; otherwise an upper bound. */
function pointwise(measured: Measured, absolute: number, relative: number): number {
  const { weighing, measures } = measured;
  if (weighing.absolute === absolute && weighing.relative === relative) return measured.worstRatio;
  return Math.min(over(measures.maxAbsolute, absolute), over(measures.maxRelative, relative));
}

function over(measured: number, allowed: number): number {
  return measured === 0 ? 0 : measured / allowed;
}

/** `absolute 1e-3 + relative 1e-6 (L2)`: a tolerance in words. */
export function toleranceText(tolerance: Tolerance | null): string {
  if (tolerance === null) return 'roundoff only';
  const parts = [
    tolerance.absolute === undefined ? null : `absolute ${tolerance.absolute}`,
    tolerance.relative === undefined ? null : `relative ${tolerance.relative}`,
  ].filter((part) => part !== null);
  const sum = parts.join(' + ');
  const ulp = tolerance.ulp === undefined ? '' : `${sum === '' ? '' : ' or '}${tolerance.ulp} ULP`;
  return `${sum}${ulp}${tolerance.norm === 'pointwise' ? '' : ` in ${tolerance.norm}`}`;
}
