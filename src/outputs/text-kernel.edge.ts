/** The WebAssembly text parser, or its plain twin where it was not built. */
import { type KernelModule, kernelModule, PAGE_BYTES, startKernel } from './kernel-module.edge.ts';
import { powersOfFive } from './powers-of-five.ts';
import { cellValue, plainTextParser, rowsAtOnce, type TextParser } from './text-parser.ts';

// In the order of the kernel's own list of places.
const USED = 32_768;
const LINES = 32_776;
const STOPPED = 32_784;
const FAULT = 32_792;
const TENS = 32_800;
const POWERS = PAGE_BYTES;
const WANTED = 2 * PAGE_BYTES;

/** Bytes given to the kernel at once; a longer line is left to the plain parser. */
const NEWLINE = 10;
const INPUT_BYTES = 1 << 19;
const INPUT = 3 * PAGE_BYTES;
const MOST_COLUMNS = PAGE_BYTES;

let powers: BigUint64Array | null = null;

export function textParser(separator: number | null, wanted: readonly boolean[]): TextParser {
  const module = kernelModule('text-parser');
  if (module === null || wanted.length > MOST_COLUMNS) return plainTextParser(separator, wanted);
  return vectorTextParser(module, separator, wanted);
}

/** @param module text-parser.wasm, compiled */
export function vectorTextParser(
  module: KernelModule,
  separator: number | null,
  wanted: readonly boolean[],
): TextParser {
  const width = wanted.filter(Boolean).length;
  const room = rowsAtOnce(width);
  // Room behind the input: the kernel looks eight bytes ahead.
  const output = INPUT + INPUT_BYTES + 64;
  const kernel = startKernel(module, output + width * room * 8, {
    cell: (at, end) => {
      const value = cellValue(bytes, at!, end!);
      if (value === null) view.setInt32(FAULT, 1, true);
      return value ?? Number.NaN;
    },
  });
  const bytes = new Uint8Array(kernel.memory);
  const view = new DataView(kernel.memory);
  const columns = Array.from(
    { length: width },
    (_, slot) => new Float64Array(kernel.memory, output + slot * room * 8, room),
  );
  powers ??= powersOfFive();
  new BigUint64Array(kernel.memory, POWERS, powers.length).set(powers);
  new BigUint64Array(kernel.memory, TENS, 8).set(Array.from({ length: 8 }, (_, i) => 10n ** BigInt(i)));
  bytes.set(
    wanted.map((is) => (is ? 1 : 0)),
    WANTED,
  );
  const parse = kernel.functions.parse!;
  const plain = plainTextParser(separator, wanted);
  const stops = [null, 'ragged', 'not-a-number'] as const;
  return {
    columns,
    parse(piece, final) {
      const part = piece.subarray(0, INPUT_BYTES);
      const isFinal = final && part.length === piece.length;
      bytes.set(part, INPUT);
      bytes[INPUT + part.length] = NEWLINE;
      const rows = parse(
        INPUT,
        part.length,
        isFinal ? 1 : 0,
        separator ?? -1,
        wanted.length,
        WANTED,
        POWERS,
        output,
        room,
      );
      const used = view.getInt32(USED, true);
      const stopped = stops[view.getInt32(STOPPED, true)]!;
      // A line longer than the kernel's memory, with more bytes at hand.
      if (used === 0 && stopped === null && part.length < piece.length) {
        const slow = plain.parse(piece, final);
        columns.forEach((column, slot) => {
          column.set(plain.columns[slot]!.subarray(0, slow.rows));
        });
        return slow;
      }
      return { rows, used, lines: view.getInt32(LINES, true), stopped };
    },
  };
}
