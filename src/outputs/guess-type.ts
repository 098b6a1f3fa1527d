/** What bytes without a declared type are most likely to be. */
import { BYTES_OF, decode, type StoredType } from './stored-numbers.ts';

const CANDIDATES: readonly StoredType[] = ['float64', 'float32', 'int32'];

export interface GuessedType {
  readonly type: StoredType;
  readonly littleEndian: boolean;
}

/**
 * The type under which most of the bytes read as numbers that a simulation writes: zero, or a magnitude from 1e-60 to 1e60
 * (integers: below 2^24). Ties go to the wider type, and to the byte order given first. Common practice, not a standard.
 */
export function guessType(bytes: Uint8Array, orders: readonly boolean[] = [true, false]): GuessedType {
  let best: GuessedType & { readonly share: number } = { type: 'uint8', littleEndian: true, share: 0.5 };
  for (const type of CANDIDATES) {
    const size = BYTES_OF[type];
    if (bytes.length === 0 || bytes.length % size !== 0) continue;
    for (const littleEndian of orders) {
      const count = Math.min(512, bytes.length / size);
      const values = new Float64Array(count);
      decode(bytes.slice(0, count * size), type, littleEndian, values, 0, count);
      const share = values.filter((value) => isLikely(value, type)).length / count;
      if (share > best.share) best = { type, littleEndian, share };
    }
  }
  return { type: best.type, littleEndian: best.littleEndian };
}

function isLikely(value: number, type: StoredType): boolean {
  const size = Math.abs(value);
  if (value === 0) return true;
  if (type === 'int32') return size < 2 ** 24;
  return type === 'float32' ? size > 1e-30 && size < 1e30 : size > 1e-60 && size < 1e60;
}
