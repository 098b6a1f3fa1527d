/** How a value in the unit of one side of a joint becomes one in the unit of the other. */
import { conversion } from '../units/conversion.ts';

export type UnitRelation =
  | { readonly is: 'same' }
  /** value in `to` = factor * value in `from` + offset */
  | { readonly is: 'scale'; readonly factor: number; readonly offset: number }
  /** The dimensions, and what is counted, in words; relations of physics that would lead from one to the other. */
  | { readonly is: 'dimension'; readonly from: string; readonly to: string; readonly equivalences: readonly string[] }
  /** One of them is no unit; that is reported where it was written. */
  | { readonly is: 'unknown' };

export function relateUnits(from: string, to: string): UnitRelation {
  if (from === to) return { is: 'same' };
  const answer = conversion(from, to);
  if ('error' in answer) {
    return answer.dimensions === undefined
      ? { is: 'unknown' }
      : { is: 'dimension', ...answer.dimensions, equivalences: answer.equivalences ?? [] };
  }
  return answer.factor === 1 && answer.offset === 0
    ? { is: 'same' }
    : { is: 'scale', factor: answer.factor, offset: answer.offset };
}
