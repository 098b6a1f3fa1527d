/** Rows of numbers out of bytes: the plain TypeScript parser, which judges the WebAssembly one and stands in for it. */
import { readDecimal } from './decimal.ts';
import { REMARK_MARKS } from './text-layout.ts';

export interface ParsedRows {
  readonly rows: number;
  /** Bytes used up; always whole lines, except at the end of the file. */
  readonly used: number;
  /** Lines used up. */
  readonly lines: number;
  /** The first line that is no row, and why; parsing stopped before it. */
  readonly stopped: 'ragged' | 'not-a-number' | null;
}

export interface TextParser {
  /** The values last parsed, an array for each wanted column; as long as the rows that are parsed at once. */
  readonly columns: readonly Float64Array[];
  /**
   * Parses rows into `columns`, from their start.
   *
   * @param bytes starts at the start of a line
   * @param final true when the file ends with these bytes, so that the last line needs no line end
   */
  parse(bytes: Uint8Array, final: boolean): ParsedRows;
}

const VALUES_AT_ONCE = 1 << 16;

/** Rows parsed at once into so many columns: few for wide tables, so that memory stays bounded. */
export function rowsAtOnce(columns: number): number {
  return Math.max(16, Math.min(8192, Math.floor(VALUES_AT_ONCE / Math.max(1, columns))));
}

const NEWLINE = 10;

/**
 * @param separator byte between columns; null for any run of blanks
 * @param wanted    one entry a column; a column that is not wanted is passed over unread
 */
export function plainTextParser(separator: number | null, wanted: readonly boolean[]): TextParser {
  const marks = new Set([...REMARK_MARKS].map((mark) => mark.charCodeAt(0)));
  const width = wanted.filter(Boolean).length;
  const most = rowsAtOnce(width);
  const columns = Array.from({ length: width }, () => new Float64Array(most));

  return {
    columns,
    parse(bytes, final) {
      let [rows, used, lines] = [0, 0, 0];
      const stop = (stopped: ParsedRows['stopped']) => ({ rows, used, lines, stopped });
      while (used < bytes.length && rows < most) {
        let end = bytes.indexOf(NEWLINE, used);
        if (end < 0 && !final) break;
        const after = end < 0 ? bytes.length : end + 1;
        if (end < 0) end = bytes.length;
        let at = used;
        while (at < end && isBlank(bytes[at]!)) at++;
        if (at < end && !marks.has(bytes[at]!)) {
          let column = 0;
          let slot = 0;
          while (at <= end) {
            let stopAt = at;
            if (separator === null) while (stopAt < end && !isBlank(bytes[stopAt]!)) stopAt++;
            else stopAt = cellEnd(bytes, at, end, separator);
            if (column >= wanted.length) return stop('ragged');
            if (wanted[column]) {
              const value = cellValue(bytes, at, stopAt);
              if (value === null) return stop('not-a-number');
              columns[slot++]![rows] = value;
            }
            column++;
            at = stopAt + 1;
            if (separator === null) {
              while (at < end && isBlank(bytes[at]!)) at++;
              if (at >= end) break;
            }
          }
          if (column !== wanted.length) return stop('ragged');
          rows++;
        }
        used = after;
        lines++;
      }
      return stop(null);
    },
  };
}

const isBlank = (byte: number) => byte === 32 || byte === 9 || byte === 13;

/** The number in a cell, blanks and quotes around it taken off; NaN for an empty cell, null for a word. */
export function cellValue(bytes: Uint8Array, from: number, to: number): number | null {
  let [start, end] = [from, to];
  while (start < end && isBlank(bytes[start]!)) start++;
  while (end > start && isBlank(bytes[end - 1]!)) end--;
  if (end - start >= 2 && bytes[start] === 34 && bytes[end - 1] === 34) {
    start++;
    end--;
  }
  return start === end
    ? Number.NaN
    : readDecimal(String.fromCharCode(...bytes.subarray(start, Math.min(end, start + 4000))));
}

function cellEnd(bytes: Uint8Array, from: number, end: number, separator: number): number {
  let quoted = false;
  for (let at = from; at < end; at++) {
    if (bytes[at] === 34) quoted = !quoted;
    else if (bytes[at] === separator && !quoted) return at;
  }
  return end;
}
