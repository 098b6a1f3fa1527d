/** Whether two spellings mean the same unit. */
import { conversion } from '../units/conversion.ts';

const known = new Map<string, boolean>();

/** `g/cm3`, `g cm^-3` and `gram per cubic centimetre` are one; what is no unit is equal only to itself. */
export function sameUnit(a: string, b: string): boolean {
  if (a === b) return true;
  const key = `${a}\0${b}`;
  const before = known.get(key);
  if (before !== undefined) return before;
  const answer = conversion(a, b);
  const same = !('error' in answer) && answer.factor === 1 && (answer.offset ?? 0) === 0;
  known.set(key, same);
  return same;
}
