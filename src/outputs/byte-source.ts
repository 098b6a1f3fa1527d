/** Bytes at any place of a file, so that decoders need not know where the bytes live. */
import { OutputProblem } from './output-file.ts';

export interface ByteSource {
  readonly path: string;
  readonly size: number;
  /** Copies up to `into.length` bytes from `offset`; returns how many there were. */
  readAt(offset: number, into: Uint8Array): number;
  close(): void;
  /** All of it, where it lies in memory and in no file. */
  readonly inMemory?: Uint8Array;
}

/** The bytes asked for, all of them. @throws {OutputProblem} `truncated` when the file ends before */
export function readExactly(source: ByteSource, offset: number, length: number, what: string): Uint8Array {
  const bytes = new Uint8Array(length);
  if (offset + length > source.size || source.readAt(offset, bytes) < length) {
    throw new OutputProblem(
      'truncated',
      source.path,
      `ends at byte ${source.size}, inside ${what}, which needs bytes ${offset} to ${offset + length}`,
    );
  }
  return bytes;
}

/** A file held in memory. */
export function bytesInMemory(bytes: Uint8Array, path = 'memory'): ByteSource {
  return {
    path,
    size: bytes.length,
    inMemory: bytes,
    readAt(offset, into) {
      const part = bytes.subarray(offset, offset + into.length);
      into.set(part);
      return part.length;
    },
    close() {},
  };
}
