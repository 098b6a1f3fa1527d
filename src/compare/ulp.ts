/** Distances between doubles counted in representable numbers. */

const bits = new BigInt64Array(1);
const double = new Float64Array(bits.buffer);
const SIGN = 1n << 63n;

/**
 * How many representable doubles lie between two: 0 for equal ones and for zeros of either sign, 1 for neighbours.
 * Exact, in 64-bit integers: through doubles it would be wrong above 2^53.
 *
 * @returns null when either is NaN
 * @source IEEE Std 754-2019, 5.10: the encodings of binary64 are ordered like sign-magnitude integers
 */
export function ulpDistance(a: number, b: number): bigint | null {
  if (Number.isNaN(a) || Number.isNaN(b)) return null;
  const distance = orderedEncoding(a) - orderedEncoding(b);
  return distance < 0n ? -distance : distance;
}

function orderedEncoding(value: number): bigint {
  double[0] = value;
  const encoding = bits[0]!;
  return encoding < 0n ? -(encoding + SIGN) : encoding;
}

/** Distance from |x| to the next larger magnitude. NaN for NaN and the infinities. */
export function spacing(x: number): number {
  if (!Number.isFinite(x)) return Number.NaN;
  double[0] = Math.abs(x);
  bits[0] = bits[0]! + 1n;
  return double[0]! - Math.abs(x);
}

/** True when both have the same 64 bits: zeros of unlike sign differ, a NaN equals itself. */
export function sameBits(a: number, b: number): boolean {
  return Object.is(a, b);
}
