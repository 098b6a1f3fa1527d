/** A text input with its real numbers moved by one unit in the last place: an input that no physicist could tell from the first. */

/** A number with a point or an exponent (Fortran's `d` too) that stands by itself; whole numbers count things and stay. */
const REAL = /(?<![\w.+-])([+-]?(?:\d+\.\d*|\.\d+|\d+(?=[eEdD][+-]?\d))(?:([eEdD])([+-]?\d+))?)(?![\w.])/g;

/**
 * @param bytes  of a text file, any encoding that keeps ASCII
 * @param seed   which run this is: the same seed moves the same numbers the same way
 * @returns the bytes, every real number one double up or down, and how many were moved
 */
export function moveLastBits(bytes: Uint8Array, seed: number): { readonly bytes: Uint8Array; readonly moved: number } {
  let state = (seed * 0x9e3779b9 + 0x7f4a7c15) >>> 0;
  let moved = 0;
  const text = Buffer.from(bytes).toString('latin1');
  const changed = text.replace(REAL, (whole: string, _number: string, letter: string | undefined) => {
    // Marsaglia's xorshift, J. Stat. Soft. 8 (2003) 14: repeatable, and good enough to throw a coin.
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    const value = Number(whole.replace(/[dD]/, 'e'));
    if (!Number.isFinite(value) || value === 0) return whole;
    moved++;
    const next = neighbour(value, (state & 0x10000) !== 0 ? 1n : -1n);
    const said = next.toExponential();
    return letter === 'd' || letter === 'D' ? said.replace('e', letter) : said;
  });
  return { bytes: Buffer.from(changed, 'latin1'), moved };
}

/** The next double away from zero (1) or towards it (-1). @source IEEE Std 754-2019, 5.3.1: magnitudes are ordered as their bits */
function neighbour(value: number, step: 1n | -1n): number {
  const view = new DataView(new ArrayBuffer(8));
  view.setFloat64(0, value);
  view.setBigUint64(0, view.getBigUint64(0) + step);
  const next = view.getFloat64(0);
  return Number.isFinite(next) ? next : value;
}
