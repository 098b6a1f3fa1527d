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
  /**
   * @param bytes   starts at the start of a line
   * @param final   true when the file ends with these bytes, so that the last line needs no line end
   * @param wanted  one entry a column; a column that is not wanted is passed over unread
   * @param into    rows one after another, a value for each wanted column
   */
  parse(bytes: Uint8Array, final: boolean, into: Float64Array): ParsedRows;
}

const NEWLINE = 10;

/** @param separator byte between columns; null for any run of blanks */
export function plainTextParser(separator: number | null, wanted: readonly boolean[]): TextParser {
  const marks = new Set([...REMARK_MARKS].map((mark) => mark.charCodeAt(0)));
  const width = wanted.filter(Boolean).length;

  return {
    parse(bytes, final, into) {
      let [rows, used, lines] = [0, 0, 0];
      const most = Math.floor(into.length / Math.max(1, width));
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
          let written = rows * width;
          while (at <= end) {
            let stopAt = at;
            if (separator === null) while (stopAt < end && !isBlank(bytes[stopAt]!)) stopAt++;
            else stopAt = cellEnd(bytes, at, end, separator);
            if (column >= wanted.length) return stop('ragged');
            if (wanted[column]) {
              const value = cellValue(bytes, at, stopAt);
              if (value === null) return stop('not-a-number');
              into[written++] = value;
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
