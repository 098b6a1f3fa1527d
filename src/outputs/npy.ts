/**
 * numpy's array files: a magic string, a header that is a Python dictionary, then the elements.
 * @source NumPy Enhancement Proposal 1, "A Simple File Format for NumPy Arrays", versions 1.0 to 3.0
 */
import { type ByteSource, readExactly } from './byte-source.ts';
import { type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';
import { BYTES_OF, partType, type StoredType, storedCursor } from './stored-numbers.ts';

export interface NpyHeader {
  readonly type: StoredType;
  readonly littleEndian: boolean;
  readonly fortranOrder: boolean;
  readonly shape: readonly number[];
  /** First byte of the elements. */
  readonly data: number;
}

export function openNpy(source: ByteSource): OutputFile {
  const header = npyHeader(source);
  const info: DatasetInfo = { name: 'array', shape: header.shape, type: header.type };
  const count = header.shape.reduce((product, extent) => product * extent, 1);
  const bytes = count * BYTES_OF[header.type];
  if (header.data + bytes > source.size) {
    throw new OutputProblem(
      'truncated',
      source.path,
      `ends at byte ${source.size}; its header declares ${header.shape.join(' x ') || '1'} elements of ${header.type}, which need ${header.data + bytes} bytes`,
    );
  }
  return outputFile({
    path: source.path,
    format: 'npy',
    datasets: [info],
    open: () =>
      storedCursor(source, {
        type: header.type,
        littleEndian: header.littleEndian,
        runs: [{ offset: header.data, count: bytes / BYTES_OF[partType(header.type)] }],
      }),
    close: () => source.close(),
  });
}

/** @throws {OutputProblem} `truncated`, `damaged`, or `unsupported` for objects, strings and records */
export function npyHeader(source: ByteSource): NpyHeader {
  const start = readExactly(source, 0, 12, 'the npy header');
  const view = new DataView(start.buffer);
  const long = start[6]! >= 2;
  const length = long ? view.getUint32(8, true) : view.getUint16(8, true);
  const begins = long ? 12 : 10;
  const text = Buffer.from(readExactly(source, begins, length, 'the npy header')).toString('latin1');
  const descr = /'descr'\s*:\s*'([^']*)'/.exec(text)?.[1];
  const order = /'fortran_order'\s*:\s*(True|False)/.exec(text)?.[1];
  const shape = /'shape'\s*:\s*\(([^)]*)\)/.exec(text)?.[1];
  if (order === undefined || shape === undefined || (descr === undefined && !text.includes("'descr'"))) {
    throw new OutputProblem('damaged', source.path, `its npy header cannot be read: ${text.slice(0, 120)}`);
  }
  const type = descr === undefined ? null : numpyType(descr);
  if (descr === undefined || type === null) {
    throw new OutputProblem('unsupported', source.path, `holds ${descr ?? 'records'}, not plain numbers`);
  }
  const extents = shape
    .split(',')
    .map((part) => part.trim())
    .filter((part) => part !== '')
    .map(Number);
  if (!extents.every((extent) => Number.isSafeInteger(extent) && extent >= 0)) {
    throw new OutputProblem('damaged', source.path, `has the shape (${shape}) in its npy header`);
  }
  return {
    type,
    littleEndian: !descr.startsWith('>'),
    fortranOrder: order === 'True',
    shape: extents,
    data: begins + length,
  };
}

/** `<f8` and the like; null for what is not a plain number. */
export function numpyType(descr: string): StoredType | null {
  const match = /^[<>|=]?([fiucb])(\d+)$/.exec(descr);
  if (match === null) return null;
  const bits = Number(match[2]) * 8;
  const name = { f: `float${bits}`, i: `int${bits}`, u: `uint${bits}`, c: `complex${bits}`, b: 'uint8' }[match[1]!]!;
  return name in BYTES_OF ? (name as StoredType) : null;
}
