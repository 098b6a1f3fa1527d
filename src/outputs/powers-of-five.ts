/** Powers of five to 128 bits, for turning decimals into doubles. */

export const SMALLEST_POWER = -342;
export const LARGEST_POWER = 308;

/**
 * 5^q for q from -342 to 308 as two 64-bit words each, the upper first, shifted so that the top bit is set: cut off for
 * q >= 0; for q < 0 the reciprocal, rounded up.
 *
 * @source D. Lemire, Number parsing at a gigabyte per second, Software: Practice and Experience 51 (2021) 1700, section 5
 */
export function powersOfFive(): BigUint64Array {
  const words = new BigUint64Array(2 * (LARGEST_POWER - SMALLEST_POWER + 1));
  for (let q = SMALLEST_POWER; q <= LARGEST_POWER; q++) {
    const value = q >= 0 ? normalised(5n ** BigInt(q)) : reciprocal(5n ** BigInt(-q), q);
    const at = 2 * (q - SMALLEST_POWER);
    words[at] = value >> 64n;
    words[at + 1] = value & 0xffffffffffffffffn;
  }
  return words;
}

const bitLength = (value: bigint) => value.toString(2).length;

function normalised(value: bigint): bigint {
  const shift = bitLength(value) - 128;
  return shift > 0 ? value >> BigInt(shift) : value << BigInt(-shift);
}

function reciprocal(power: bigint, q: number): bigint {
  // Bits of the smallest power of two that is not below it; a power of five is never a power of two itself.
  const z = BigInt(bitLength(power));
  if (q >= -27) return (1n << (z + 127n)) / power + 1n;
  return normalised((1n << (2n * z + 128n)) / power + 1n);
}
