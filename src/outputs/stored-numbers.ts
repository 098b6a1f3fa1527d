/** Numbers as bytes: every element type and byte order that the binary formats use, decoded to double precision. */
import type { ByteSource } from './byte-source.ts';
import { type ArrayCursor, OutputProblem } from './output-file.ts';

export const STORED_TYPES = [
  'float64',
  'float32',
  'float16',
  'int8',
  'uint8',
  'int16',
  'uint16',
  'int32',
  'uint32',
  'int64',
  'uint64',
  'complex64',
  'complex128',
] as const;
export type StoredType = (typeof STORED_TYPES)[number];

export const BYTES_OF: Readonly<Record<StoredType, number>> = {
  float64: 8,
  float32: 4,
  float16: 2,
  int8: 1,
  uint8: 1,
  int16: 2,
  uint16: 2,
  int32: 4,
  uint32: 4,
  int64: 8,
  uint64: 8,
  complex64: 8,
  complex128: 16,
};

/** The real type that a complex one is a pair of; any other type itself. */
export function partType(type: StoredType): StoredType {
  if (type === 'complex64') return 'float32';
  return type === 'complex128' ? 'float64' : type;
}

export const MACHINE_IS_LITTLE_ENDIAN = new Uint8Array(new Uint16Array([1]).buffer)[0] === 1;

/** One run of equal elements in a file. */
export interface StoredRun {
  readonly offset: number;
  /** Values; two for a complex element. */
  readonly count: number;
}

export interface StoredArray {
  readonly type: StoredType;
  readonly littleEndian: boolean;
  readonly runs: Iterable<StoredRun>;
  /** value = stored * scale + zero, as FITS and packed NetCDF store it. */
  readonly scale?: number;
  readonly zero?: number;
}

const PIECE_BYTES = 1 << 19;

/** Reads the runs one after another; doubles of the machine's byte order go straight into the caller's memory. */
export function storedCursor(source: ByteSource, array: StoredArray): ArrayCursor {
  const type = partType(array.type);
  const bytes = BYTES_OF[type];
  const plain = array.scale === undefined && array.zero === undefined && type === 'float64';
  const direct = plain && array.littleEndian === MACHINE_IS_LITTLE_ENDIAN;
  const runs = array.runs[Symbol.iterator]();
  let run: StoredRun | null = null;
  let done = 0;
  let piece: Uint8Array | null = null;

  return {
    fill(into) {
      let filled = 0;
      while (filled < into.length) {
        while (run === null || done === run.count) {
          const next = runs.next();
          if (next.done === true) return filled;
          run = next.value;
          done = 0;
        }
        let count = Math.min(into.length - filled, run.count - done);
        const offset = run.offset + done * bytes;
        if (direct) {
          const target = new Uint8Array(into.buffer, into.byteOffset + filled * 8, count * 8);
          whole(source, offset, target, source.readAt(offset, target));
        } else {
          count = Math.min(count, PIECE_BYTES / bytes);
          piece ??= new Uint8Array(PIECE_BYTES);
          const target = piece.subarray(0, count * bytes);
          whole(source, offset, target, source.readAt(offset, target));
          decode(target, type, array.littleEndian, into, filled, count);
          scaleValues(array, into, filled, count);
        }
        filled += count;
        done += count;
      }
      return filled;
    },
    skip(count) {
      let left = count;
      while (left > 0) {
        if (run === null || done === run.count) {
          const next = runs.next();
          if (next.done === true) return;
          run = next.value;
          done = 0;
        }
        const step = Math.min(left, run.count - done);
        done += step;
        left -= step;
      }
    },
    close() {},
  };
}

/** Elements at equal distances, as columns of a binary table or variables along records have them. */
export interface StridedArray extends Omit<StoredArray, 'runs'> {
  readonly offset: number;
  readonly stride: number;
  readonly rows: number;
  /** Values side by side in each row; two for a complex element. */
  readonly perRow: number;
}

/** Long rows are read one by one; short ones together with what lies between them, since a read costs more than the bytes. */
export function stridedCursor(source: ByteSource, array: StridedArray): ArrayCursor {
  const type = partType(array.type);
  const rowBytes = array.perRow * BYTES_OF[type];
  if (rowBytes > PIECE_BYTES / 8 || rowBytes === array.stride)
    return storedCursor(source, { ...array, runs: runsOf(array) });
  const rowsAtOnce = Math.max(1, Math.floor(PIECE_BYTES / array.stride));
  const values = new Float64Array(rowsAtOnce * array.perRow);
  const piece = new Uint8Array(rowsAtOnce * array.stride);
  const packed = new Uint8Array(rowsAtOnce * rowBytes);
  let row = 0;
  let [taken, ready] = [0, 0];

  const refill = (): boolean => {
    const count = Math.min(rowsAtOnce, array.rows - row);
    if (count <= 0) return false;
    // The last row may end with the file, short of a whole stride.
    const target = piece.subarray(0, (count - 1) * array.stride + rowBytes);
    const offset = array.offset + row * array.stride;
    whole(source, offset, target, source.readAt(offset, target));
    for (let i = 0; i < count; i++) {
      packed.set(piece.subarray(i * array.stride, i * array.stride + rowBytes), i * rowBytes);
    }
    ready = count * array.perRow;
    taken = 0;
    decode(packed, type, array.littleEndian, values, 0, ready);
    scaleValues(array, values, 0, ready);
    row += count;
    return true;
  };

  return {
    fill(into) {
      let filled = 0;
      while (filled < into.length && (taken < ready || refill())) {
        const count = Math.min(into.length - filled, ready - taken);
        into.set(values.subarray(taken, taken + count), filled);
        taken += count;
        filled += count;
      }
      return filled;
    },
    skip(count) {
      const inHand = Math.min(count, ready - taken);
      taken += inHand;
      const left = count - inHand;
      row += Math.floor(left / array.perRow);
      const within = left % array.perRow;
      if (within > 0 && refill()) taken += within;
    },
    close() {},
  };
}

function* runsOf(array: StridedArray): Generator<StoredRun> {
  const rowBytes = array.perRow * BYTES_OF[partType(array.type)];
  if (rowBytes === array.stride) yield { offset: array.offset, count: array.rows * array.perRow };
  else
    for (let row = 0; row < array.rows; row++) yield { offset: array.offset + row * array.stride, count: array.perRow };
}

function whole(source: ByteSource, offset: number, target: Uint8Array, count: number): void {
  if (count === target.length) return;
  throw new OutputProblem(
    'truncated',
    source.path,
    `ends at byte ${source.size}, inside an array that needs bytes ${offset} to ${offset + target.length}`,
  );
}

function scaleValues(
  array: Pick<StoredArray, 'scale' | 'zero'>,
  into: Float64Array,
  from: number,
  count: number,
): void {
  const { scale = 1, zero = 0 } = array;
  if (scale === 1 && zero === 0) return;
  for (let i = from; i < from + count; i++) into[i] = into[i]! * scale + zero;
}

/** Decodes `count` numbers of a real or integer type to doubles; may turn the bytes around in place. 64-bit integers beyond 2^53 are rounded to the nearest double. */
export function decode(
  bytes: Uint8Array,
  type: StoredType,
  littleEndian: boolean,
  into: Float64Array,
  at: number,
  count: number,
): void {
  const size = BYTES_OF[type];
  if (size > 1 && littleEndian !== MACHINE_IS_LITTLE_ENDIAN) swapBytes(bytes, size, count);
  const aligned = bytes.byteOffset % size === 0 ? bytes : bytes.slice();
  const { byteOffset } = aligned;
  const buffer = aligned.buffer as ArrayBuffer;
  if (type in PLAIN_VIEWS) {
    into.set(new PLAIN_VIEWS[type as keyof typeof PLAIN_VIEWS](buffer, byteOffset, count), at);
  } else if (type === 'float16') {
    const halves = new Uint16Array(buffer, byteOffset, count);
    for (let i = 0; i < count; i++) into[at + i] = halfToDouble(halves[i]!);
  } else {
    const View = type === 'int64' ? BigInt64Array : BigUint64Array;
    const longs = new View(buffer, byteOffset, count);
    for (let i = 0; i < count; i++) into[at + i] = Number(longs[i]!);
  }
}

const PLAIN_VIEWS = {
  float64: Float64Array,
  float32: Float32Array,
  int8: Int8Array,
  uint8: Uint8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
} as const;

function swapBytes(bytes: Uint8Array, size: number, count: number): void {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, count * size);
  if (size === 2) buffer.swap16();
  else if (size === 4) buffer.swap32();
  else buffer.swap64();
}

/** @source IEEE Std 754-2019, binary16 */
function halfToDouble(bits: number): number {
  const sign = bits & 0x8000 ? -1 : 1;
  const exponent = (bits >> 10) & 31;
  const fraction = bits & 1023;
  if (exponent === 31) return fraction === 0 ? sign * Number.POSITIVE_INFINITY : Number.NaN;
  return exponent === 0 ? sign * fraction * 2 ** -24 : sign * (1024 + fraction) * 2 ** (exponent - 25);
}
