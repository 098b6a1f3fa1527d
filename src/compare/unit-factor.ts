/** What a value is changed by to be in another unit. */
import { conversion } from '../units/conversion.ts';

/** value in the other unit = factor * value + offset */
export interface UnitChange {
  readonly factor: number;
  readonly offset: number;
}

export interface NoUnitChange {
  readonly why: string;
  /** True when one of the two is no unit at all, so that it says nothing either way. */
  readonly unreadable: boolean;
}

export const NO_CHANGE: UnitChange = { factor: 1, offset: 0 };

/** Where either side says nothing, nothing is changed. */
export function unitChange(from: string | undefined, to: string | undefined): UnitChange | NoUnitChange {
  if (from === undefined || to === undefined || from === to) return NO_CHANGE;
  const found = conversion(from || '1', to || '1');
  if ('error' in found) {
    const unreadable = found.reason === 'unreadable-from' || found.reason === 'unreadable-to';
    return { why: `${from || 'a plain number'} cannot be brought to ${to || 'a plain number'}`, unreadable };
  }
  return { factor: found.factor, offset: found.offset };
}

/** For differences and products, which know no offset. @returns a sentence when a factor alone does not do */
export function unitFactor(from: string | undefined, to: string | undefined): number | string {
  const change = unitChange(from, to);
  if ('why' in change) return change.why;
  return change.offset === 0 ? change.factor : `${from} and ${to} differ by an offset`;
}

/** Changes values where they are. */
export function applyChange(values: Float64Array, change: UnitChange, count = values.length): void {
  const { factor, offset } = change;
  if (factor === 1 && offset === 0) return;
  for (let i = 0; i < count; i++) values[i] = values[i]! * factor + offset;
}
