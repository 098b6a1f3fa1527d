/** What exchanges do to a quantity, alone and together, as lines of text. */
import type { Effect } from '../runs/swap.ts';
import { figure } from './deviation-text.ts';

/** @param words  the exchanges, in the order of `effect.alone` */
export function effectLines(effect: Effect, words: readonly string[]): string[] {
  const lines: string[] = [];
  if (effect.stretches.length > 0) {
    const places = effect.stretches
      .slice(0, 5)
      .map(({ from, to }) => (from === to ? figure(from) : `${figure(from)} to ${figure(to)}`));
    const more = effect.stretches.length > 5 ? ` and ${effect.stretches.length - 5} more stretches` : '';
    lines.push(`${effect.quantity} leaves its band at ${places.join(', ')}${more}`);
  }
  if (words.length < 2 || effect.together === 0) return lines;
  const each = words.map((word, i) => {
    const alone = effect.alone[i];
    const share = effect.shares?.[i];
    const parts = [alone === null || alone === undefined ? 'no result alone' : `alone ${figure(alone)}`];
    if (share !== undefined) {
      const error = effect.shareErrors?.[i];
      parts.push(`share ${figure(share)}${error === undefined ? '' : ` ± ${figure(error)}`}`);
    }
    return `${word} ${parts.join(', ')}`;
  });
  lines.push(`${effect.quantity}, in tolerances: together ${figure(effect.together)}; ${each.join('; ')}`);
  for (const one of effect.interactions.slice(0, 3)) {
    lines.push(`${effect.quantity}: ${one.exchanges.join(' with ')} adds ${figure(one.tolerances)} beyond its parts`);
  }
  return lines;
}
