/** Text tables (columns set apart by blanks, CSV): bytes in, columns out, a piece of the file at a time. */
import { type ByteSource, readExactly } from './byte-source.ts';
import {
  type ArrayCursor,
  type DatasetInfo,
  type OutputFile,
  OutputProblem,
  outputFile,
  type TableCursor,
} from './output-file.ts';
import { splitRow, type TextLayout, textLayout } from './text-layout.ts';
import { plainTextParser, type TextParser } from './text-parser.ts';

export type MakeTextParser = (separator: number | null, wanted: readonly boolean[]) => TextParser;

/** Enough for any preamble met; a table whose first row comes later is not recognised. */
export const HEAD_BYTES = 1 << 16;
const PIECE_BYTES = 1 << 20;
const LONGEST_LINE = 1 << 26;

/** The layout found in the first bytes of a file; null when it is no table. */
export function layoutOf(source: ByteSource): TextLayout | null {
  const head = readExactly(source, 0, Math.min(HEAD_BYTES, source.size), 'the head');
  const text = Buffer.from(head)
    .toString('utf8')
    .replace(/^\ufeff/, '');
  // The last line of a cut head may be half a row.
  const cut = source.size > HEAD_BYTES ? text.slice(0, text.lastIndexOf('\n') + 1) : text;
  return textLayout(cut);
}

export function openTextTable(
  source: ByteSource,
  layout: TextLayout,
  makeParser: MakeTextParser = plainTextParser,
): OutputFile {
  const datasets = layout.columns
    .map((column, index) => ({ column, index }))
    .filter(({ column }) => column.numeric)
    .map(({ column, index }) => ({
      index,
      info: {
        name: uniqueName(layout, index),
        shape: [null],
        type: 'decimal',
        ...(column.unit === undefined ? {} : { unit: column.unit }),
      } satisfies DatasetInfo,
    }));
  const indexOf = (info: DatasetInfo) => datasets.find((one) => one.info.name === info.name)!.index;
  const table = (infos: readonly DatasetInfo[]) => tableCursor(source, layout, infos.map(indexOf), makeParser);
  return outputFile({
    path: source.path,
    format: layout.separator === null ? 'columns' : 'csv',
    datasets: datasets.map((one) => one.info),
    open: (info) => oneColumn(table([info])),
    table,
    close: () => source.close(),
  });
}

function uniqueName(layout: TextLayout, index: number): string {
  const name = layout.columns[index]!.name;
  const first = layout.columns.findIndex((column) => column.name === name);
  return first === index ? name : `${name} (column ${index + 1})`;
}

function oneColumn(table: TableCursor): ArrayCursor {
  return { fill: (into) => table.fill([into]), close: () => table.close() };
}

function tableCursor(
  source: ByteSource,
  layout: TextLayout,
  columns: readonly number[],
  make: MakeTextParser,
): TableCursor {
  const distinct = [...new Set(columns)].sort((a, b) => a - b);
  const parser = make(
    layout.separator,
    layout.columns.map((_, index) => distinct.includes(index)),
  );
  const slots = columns.map((column) => distinct.indexOf(column));
  let piece = new Uint8Array(PIECE_BYTES);
  let [start, end, offset, line] = [0, 0, 0, 0];
  let [ready, taken] = [0, 0];
  let ended = false;

  const load = () => {
    if (start > 0) piece.copyWithin(0, start, end);
    end -= start;
    start = 0;
    if (end === piece.length) {
      if (piece.length >= LONGEST_LINE) {
        throw new OutputProblem('damaged', source.path, `has a line ${line + 1} of more than ${LONGEST_LINE} bytes`);
      }
      const larger = new Uint8Array(piece.length * 2);
      larger.set(piece);
      piece = larger;
    }
    const count = source.readAt(offset, piece.subarray(end));
    offset += count;
    end += count;
    ended = offset >= source.size || count === 0;
  };

  const skipPreamble = () => {
    while (line < layout.preamble) {
      const newline = piece.subarray(start, end).indexOf(10);
      if (newline >= 0) {
        start += newline + 1;
        line++;
      } else if (ended) return;
      else load();
    }
  };

  /** Parses the next rows; false at the end of the file. */
  const refill = (): boolean => {
    if (offset === 0) {
      load();
      skipPreamble();
    }
    for (;;) {
      const got = parser.parse(piece.subarray(start, end), ended);
      start += got.used;
      line += got.lines;
      ready = got.rows;
      taken = 0;
      if (got.rows > 0) return true;
      if (got.stopped !== null) passOver(got.stopped);
      else if (ended) return false;
      else load();
    }
  };

  /** A heading repeated after a restart is passed over; any other line that is no row is an error. */
  const passOver = (why: 'ragged' | 'not-a-number') => {
    const newline = piece.subarray(start, end).indexOf(10);
    const stop = newline < 0 ? end : start + newline;
    const text = Buffer.from(piece.subarray(start, stop)).toString('utf8').trim();
    if (layout.heading !== null && text === layout.heading) {
      start = newline < 0 ? end : stop + 1;
      line++;
      return;
    }
    const cells = splitRow(text, layout.separator === null ? null : String.fromCharCode(layout.separator));
    const last = ended && newline < 0;
    if (last && (why === 'ragged' || cells.length < layout.columns.length)) {
      throw new OutputProblem(
        'truncated',
        source.path,
        `ends in the middle of line ${line + 1}: "${text.slice(0, 60)}" has ${cells.length} of ${layout.columns.length} columns`,
      );
    }
    throw new OutputProblem(
      'damaged',
      source.path,
      why === 'ragged'
        ? `has ${cells.length} columns in line ${line + 1} where the first row has ${layout.columns.length}: "${text.slice(0, 60)}"`
        : `has a line ${line + 1} that is no row of numbers: "${text.slice(0, 60)}"`,
    );
  };

  return {
    fill(into) {
      const asked = into[0]?.length ?? 0;
      let filled = 0;
      while (filled < asked) {
        if (taken === ready && !refill()) break;
        const count = Math.min(asked - filled, ready - taken);
        for (let slot = 0; slot < slots.length; slot++) {
          into[slot]!.set(parser.columns[slots[slot]!]!.subarray(taken, taken + count), filled);
        }
        taken += count;
        filled += count;
      }
      return filled;
    },
    close() {},
  };
}
