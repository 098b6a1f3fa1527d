/** Which format a file has, by its first bytes; its name decides only where bytes cannot. */
import type { OutputFormat } from './output-file.ts';

export type Recognised = OutputFormat | 'text' | 'binary';

const startsWith = (head: Uint8Array, ...bytes: number[]) => bytes.every((byte, index) => head[index] === byte);
const text = (head: Uint8Array, length: number) => Buffer.from(head.subarray(0, length)).toString('latin1');

/**
 * @param head at least the first 4096 bytes, or the whole file
 * @source the magic numbers of: HDF5 File Format Specification III.A; NetCDF Classic Format Specification;
 *   NumPy Enhancement Proposal 1; FITS Standard 4.0, 4.4.1; PKZIP APPNOTE 4.3.7
 */
export function recognise(head: Uint8Array, size: number): Recognised {
  // An HDF5 file may have a block of user data before its signature, at 512, 1024, 2048, ...
  for (let at = 0; at + 8 <= head.length; at = at === 0 ? 512 : at * 2) {
    if (startsWith(head.subarray(at), 0x89, 0x48, 0x44, 0x46, 0x0d, 0x0a, 0x1a, 0x0a)) return 'hdf5';
  }
  if (text(head, 3) === 'CDF' && (head[3] === 1 || head[3] === 2 || head[3] === 5)) return 'netcdf-classic';
  if (startsWith(head, 0x93) && text(head.subarray(1), 5) === 'NUMPY') return 'npy';
  if (startsWith(head, 0x50, 0x4b, 0x03, 0x04) || startsWith(head, 0x50, 0x4b, 0x05, 0x06)) return 'npz';
  if (/^SIMPLE {2}= {20}T/.test(text(head, 30))) return 'fits';
  if (isText(head)) return /^\s*[[{]/.test(text(head, 4096).replace(/^\u00ef\u00bb\u00bf/, '')) ? 'json' : 'text';
  return isFortranRecord(head, size) ? 'fortran-records' : 'binary';
}

/** Control characters other than white space do not stand in text; bytes above 127 may (Latin-1 remarks). */
function isText(head: Uint8Array): boolean {
  return head.every((byte) => byte >= 32 || (byte >= 9 && byte <= 13) || byte === 27 || byte === 26);
}

/** A first record whose length stands before and behind it, within what can be seen. */
function isFortranRecord(head: Uint8Array, size: number): boolean {
  const view = new DataView(head.buffer, head.byteOffset, head.length);
  for (const little of [true, false]) {
    for (const bytes of [4, 8] as const) {
      if (head.length < 2 * bytes) continue;
      const at = (offset: number) =>
        bytes === 4 ? view.getInt32(offset, little) : Number(view.getBigInt64(offset, little));
      const length = Math.abs(at(0));
      if (length === 0 || length + 2 * bytes > size) continue;
      if (length + 2 * bytes > head.length) return true;
      if (Math.abs(at(bytes + length)) === length) return true;
    }
  }
  return false;
}
