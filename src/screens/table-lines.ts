/** Rows in columns under their heads, one of them chosen: what most screens list. */
import { type Line, row, type Span, span, widthsOf } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { listLines } from './list.ts';

type Cell = string | Span;

/**
 * @param flexible  columns that give way when the terminal is narrow, the widest first
 * @returns at most `room` lines, the heads included
 */
export function tableLines(
  heads: readonly string[],
  cells: readonly (readonly Cell[])[],
  chosen: number,
  place: { readonly columns: number; readonly room: number },
  flexible: readonly number[],
  glyphs: Glyphs,
): Line[] {
  const widths = widthsOf([heads, ...cells], place.columns - 2, flexible);
  const faint = heads.map((name) => span(name, 'faint'));
  return [
    [span('  '), ...row(faint, widths)],
    ...listLines(cells.length, chosen, Math.max(1, place.room - 1), glyphs, (index) => row(cells[index]!, widths)),
  ];
}
