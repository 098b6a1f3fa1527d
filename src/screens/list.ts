/** A long list in few rows: only the part around the chosen row is made, whatever the length. */
import { type Line, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';

/** First row shown so that the chosen one is in sight, about a third from the top. */
export function firstShown(chosen: number, count: number, rows: number): number {
  return Math.max(0, Math.min(count - rows, chosen - Math.floor(rows / 3)));
}

/** `rows` lines at most; the chosen row is marked with a sign, not by style alone. */
export function listLines(
  count: number,
  chosen: number,
  rows: number,
  glyphs: Glyphs,
  draw: (index: number) => Line,
): Line[] {
  const first = firstShown(chosen, count, rows);
  const shown = Math.max(0, Math.min(rows, count - first));
  return Array.from({ length: shown }, (_, offset) => {
    const index = first + offset;
    const mark = index === chosen ? span(`${glyphs.chosen} `, 'strong') : span('  ');
    return [mark, ...draw(index)];
  });
}

/** The rows that hold every word typed, whatever the case. */
export function matching<T>(all: readonly T[], typed: string, textOf: (one: T) => string): readonly T[] {
  const words = typed
    .toLowerCase()
    .split(/\s+/)
    .filter((word) => word !== '');
  if (words.length === 0) return all;
  return all.filter((one) => {
    const text = textOf(one).toLowerCase();
    return words.every((word) => text.includes(word));
  });
}
