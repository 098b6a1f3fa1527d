/** How a text table is laid out, judged from its first lines: separator, comments, headings with units, columns. */
import { readDecimal } from './decimal.ts';

export interface TextLayout {
  /** Byte that separates columns; null for any run of blanks. */
  readonly separator: number | null;
  readonly columns: readonly TextColumn[];
  /** The heading line, so that one repeated after a restart is skipped; null without headings. */
  readonly heading: string | null;
  /** Lines before the first row. */
  readonly preamble: number;
}

export interface TextColumn {
  readonly name: string;
  readonly unit?: string;
  /** False for a column of words. */
  readonly numeric: boolean;
}

/** Lines that start with one of these are remarks. */
export const REMARK_MARKS = '#!%';
const SEPARATORS = [',', ';', '\t'];

/** @returns null when no line reads as a row of numbers */
export function textLayout(head: string): TextLayout | null {
  const lines = head.split('\n').map((line) => line.replace(/\r$/, ''));
  const rows = lines.map((text, index) => ({ text, index })).filter(({ text }) => text.trim() !== '');
  const plain = rows.filter(({ text }) => !isRemark(text));
  const separator = separatorOf(plain.map(({ text }) => text));
  const first = firstRow(plain, separator);
  if (first === null) return null;
  const cells = splitRow(first.text, separator);
  const before = rows.filter(({ index }) => index < first.index);
  const heading = before.findLast(({ text }) => headings(text, separator, cells.length) !== null) ?? null;
  const names = heading === null ? null : headings(heading.text, separator, cells.length)!;
  const sample = plain.filter(({ index }) => index >= first.index).slice(0, 50);
  return {
    separator: separator === null ? null : separator.charCodeAt(0),
    columns: cells.map((_, column) => ({
      ...(names?.[column] ?? { name: `column ${column + 1}` }),
      numeric: sample.some(({ text }) => readDecimal(splitRow(text, separator)[column] ?? '') !== null),
    })),
    heading: heading === null || isRemark(heading.text) ? null : heading.text.trim(),
    preamble: first.index,
  };
}

function isRemark(line: string): boolean {
  return REMARK_MARKS.includes(line.trimStart()[0] ?? ' ');
}

/** The separator that stands equally often in at least half of the first lines; null for blanks. */
function separatorOf(lines: readonly string[]): string | null {
  const sample = lines.slice(0, 12);
  for (const separator of SEPARATORS) {
    const counts = sample.map((line) => line.split(separator).length).filter((count) => count > 1);
    const alike = Math.max(0, ...counts.map((count) => counts.filter((other) => other === count).length));
    if (alike === 0 || alike < sample.length / 2) continue;
    // Tabs are blanks like others, unless cells are empty or hold blanks themselves.
    const isBlank = separator === '\t' && !sample.some((line) => /\t\s*\t|\S [^\t]*\t|\t[^\t]*\S \S/.test(line.trim()));
    if (!isBlank) return separator;
  }
  return null;
}

interface Line {
  readonly text: string;
  readonly index: number;
}

/** The first line of numbers only; failing that, the first with a number in it that most later lines match cell by cell. */
function firstRow(lines: readonly Line[], separator: string | null): Line | null {
  const cells = (line: Line) => splitRow(line.text, separator);
  const isNumber = (cell: string) => readDecimal(cell) !== null;
  const blank = (cell: string) => cell === '';
  const all = lines.find(
    (line) =>
      cells(line).some(isNumber) && cells(line).every((cell) => isNumber(cell) || (separator !== null && blank(cell))),
  );
  if (all !== undefined) return all;
  const mixed = lines.find((line, at) => {
    if (cells(line).length < 2) return false;
    const numbers = cells(line).map(isNumber);
    const share = numbers.filter(Boolean).length / numbers.length;
    const alike = (other: Line) => cells(other).map(isNumber).join() === numbers.join();
    const after = lines.slice(at + 1, at + 50).filter((other) => cells(other).some(isNumber));
    // Most of what follows has to look the same, or it is a log.
    const isTable = after.length > 0 && after.filter(alike).length >= after.length * 0.7;
    return share >= (separator === null ? 0.5 : 0.01) && isTable;
  });
  return mixed ?? null;
}

export function splitRow(line: string, separator: string | null): string[] {
  if (separator === null) return line.trim().split(/\s+/);
  const cells: string[] = [];
  let rest = line;
  for (;;) {
    const quoted = /^\s*"((?:[^"]|"")*)"\s*/.exec(rest);
    if (quoted !== null && (rest.length === quoted[0].length || rest[quoted[0].length] === separator)) {
      cells.push(quoted[1]!.replaceAll('""', '"'));
      if (rest.length === quoted[0].length) return cells;
      rest = rest.slice(quoted[0].length + 1);
      continue;
    }
    const end = rest.indexOf(separator);
    cells.push((end < 0 ? rest : rest.slice(0, end)).trim());
    if (end < 0) return cells;
    rest = rest.slice(end + 1);
  }
}

type Heading = Pick<TextColumn, 'name' | 'unit'>;

/** One heading a column, or null when the line is none. Units stand in brackets, attached or apart: `x[cm]`, `T (K)`. */
function headings(line: string, separator: string | null, columns: number): Heading[] | null {
  const text = line.trim().replace(/^[#!%]+\s*/, '');
  const cells = separator === null ? joinUnits(text) : splitRow(text, separator);
  if (cells.length !== columns || cells.some((cell) => readDecimal(cell) !== null)) return null;
  return cells.map((cell, column) => {
    // Brackets of another kind may stand inside: `T [log10(K)]`.
    const match = /^(.*?)\s*(?:\[([^\]]*)\]|\(((?:[^()]|\([^()]*\))*)\))$/.exec(cell);
    const name = (match === null || match[1] === '' ? cell : match[1]!).trim() || `column ${column + 1}`;
    return match === null || match[1] === '' ? { name } : { name, unit: (match[2] ?? match[3])!.trim() };
  });
}

function joinUnits(text: string): string[] {
  return text.match(/[^\s[(]+(?:\s*(?:\[[^\]]*\]|\([^)]*\)))?|\S+/g) ?? [];
}
