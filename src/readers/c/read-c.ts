/** C and C++: bytes come in, the interface goes out. */
import { emptyInterface, type FileInterface } from '../../model/interface.ts';
import type { ReadOptions } from '../read-options.ts';

export function readC(
  _path: string,
  _bytes: Uint8Array,
  options: ReadOptions & { language: 'c' | 'c++' },
): FileInterface {
  return { ...emptyInterface(options.language), incomplete: [{ line: 1, why: 'this language is not read yet' }] };
}
