/** What bytes without a declared type are most likely to be. */
import { BYTES_OF, decode, type StoredType } from './stored-numbers.ts';

const CANDIDATES: readonly StoredType[] = ['float64', 'float32', 'int32'];

export interface GuessedType {
  readonly type: StoredType;
  readonly littleEndian: boolean;
}

/**
 * The type under which most of the bytes read as numbers that a simulation writes: zero, or a magnitude from 1e-60 to 1e60
 * (integers: below 2^24). Single precision is taken only where neighbours are of similar size: the lower halves of doubles
 * read as single-precision numbers of any size. Ties go to the wider type, and to the byte order given first.
 * Common practice, not a standard.
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
      // NaN and infinities tell nothing: any type has them.
      const finite = values.filter(Number.isFinite);
      const share = finite.filter((value) => isLikely(value, type)).length / finite.length;
      const singles = type === 'float32' && share > 0.9 && likeNeighbours(values);
      if (share > best.share || (singles && share >= best.share && best.littleEndian === littleEndian)) {
        if (type !== 'float32' || singles) best = { type, littleEndian, share };
      }
    }
  }
  return { type: best.type, littleEndian: best.littleEndian };
}

/** Zero beside zero, or numbers within four decades of their neighbours, nearly everywhere. */
function likeNeighbours(values: Float64Array): boolean {
  let alike = 0;
  for (let i = 1; i < values.length; i++) {
    const [a, b] = [Math.abs(values[i - 1]!), Math.abs(values[i]!)];
    if (a === b || (a > b / 1e4 && a < b * 1e4)) alike++;
  }
  return alike >= 0.8 * (values.length - 1);
}

function isLikely(value: number, type: StoredType): boolean {
  const size = Math.abs(value);
  if (value === 0) return true;
  if (type === 'int32') return size < 2 ** 24;
  return type === 'float32' ? size > 1e-30 && size < 1e30 : size > 1e-60 && size < 1e60;
}
