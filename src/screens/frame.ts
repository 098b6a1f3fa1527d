/**
 * What a screen draws: lines of styled spans, no terminal in sight. Screens make frames; the terminal, the plain printer and the
 * tests each turn them into text their own way.
 */
import { paint, type Style } from '../report/style.ts';
import textWidth, { cutToWidth, fitToWidth } from '../report/text-width.ts';

export interface Span {
  readonly text: string;
  readonly style?: Style;
}

export type Line = readonly Span[];

export interface Frame {
  readonly lines: readonly Line[];
}

export interface Size {
  readonly columns: number;
  readonly rows: number;
}

export function span(text: string, style?: Style): Span {
  return style === undefined ? { text } : { text, style };
}

export function line(...parts: readonly (string | Span)[]): Line {
  return parts.map((part) => (typeof part === 'string' ? { text: part } : part));
}

export function lineText(of: Line): string {
  return of.map((one) => one.text).join('');
}

/** Cut or padded to exactly this width; styles keep to their characters. */
export function fitLine(of: Line, columns: number): Line {
  const fitted: Span[] = [];
  let left = columns;
  for (const one of of) {
    if (left <= 0) break;
    const text = cutToWidth(one.text, left);
    fitted.push({ ...one, text });
    left -= textWidth(text);
  }
  if (left > 0) fitted.push({ text: ' '.repeat(left) });
  return fitted;
}

/** Left and right ends of one line; the right end gives way last. */
export function spread(left: Line, right: Line, columns: number): Line {
  const rightWidth = Math.min(columns, textWidth(lineText(right)));
  return [...fitLine(left, columns - rightWidth), ...fitLine(right, rightWidth)];
}

export function cellText(cell: string | Span): string {
  return typeof cell === 'string' ? cell : cell.text;
}

const GAP = '  ';

/** A row of columns, each cut or padded to its width, with a gap between. */
export function row(cells: readonly (string | Span)[], widths: readonly number[]): Line {
  return cells.map((cell, index) => {
    const one = typeof cell === 'string' ? { text: cell } : cell;
    const text = fitToWidth(one.text, widths[index] ?? textWidth(one.text));
    return { ...one, text: index === cells.length - 1 ? text : text + GAP };
  });
}

/** Widths that hold every cell if the columns allow it; else the columns named flexible give way, the widest first. */
export function widthsOf(
  rows: readonly (readonly (string | Span)[])[],
  columns: number,
  flexible: readonly number[],
): number[] {
  const widths: number[] = [];
  for (const cells of rows) {
    cells.forEach((cell, index) => {
      widths[index] = Math.max(widths[index] ?? 0, textWidth(cellText(cell)));
    });
  }
  let over = widths.reduce((sum, width) => sum + width + GAP.length, -GAP.length) - columns;
  while (over > 0) {
    const widest = flexible.reduce((a, b) => ((widths[b] ?? 0) > (widths[a] ?? 0) ? b : a), flexible[0] ?? 0);
    if ((widths[widest] ?? 0) <= 6) break;
    widths[widest] = (widths[widest] ?? 0) - 1;
    over--;
  }
  return widths;
}

/** The frame as text for a pipe, a file or a screen reader: no styles, no trailing blanks. */
export function frameText(frame: Frame): string {
  return `${frame.lines.map((one) => lineText(one).trimEnd()).join('\n')}\n`;
}

/** The frame with styles as escape sequences, each line cut to the width, exactly `rows` lines. */
export function frameAnsi(frame: Frame, size: Size, colour: boolean): string {
  const lines = Array.from({ length: size.rows }, (_, index) => frame.lines[index] ?? []);
  return lines
    .map((one) =>
      fitLine(one, size.columns)
        .map((part) => (part.style === undefined ? part.text : paint(part.text, part.style, colour)))
        .join('')
        .trimEnd(),
    )
    .join('\n');
}
