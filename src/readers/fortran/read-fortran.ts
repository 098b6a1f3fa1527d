/** One Fortran file, fixed or free form, to its interface. Bytes in, plain data out; nothing is resolved across files here. */
import type { FileInterface } from '../../model/interface.ts';
import { emptyInterface } from '../../model/interface.ts';
import type { ReadOptions } from '../read-options.ts';
import { FileReader } from './file-reader.ts';
import { sourceForm } from './source-form.ts';
import { partsOf } from './statements.ts';

export interface FortranOptions extends ReadOptions {
  /** When a build says otherwise than the name and the content. */
  readonly form?: 'fixed' | 'free';
}

/**
 * Reads a file. Never throws, whatever the bytes; what could not be read is told in `incomplete`.
 * A byte that is not ASCII counts as one column, as in Latin-1.
 */
export function readFortran(path: string, bytes: Uint8Array, options: FortranOptions = {}): FileInterface {
  const text = decode(bytes);
  const form = options.form ?? sourceForm(path, text);
  if (bytes.includes(0)) {
    return {
      ...emptyInterface('fortran'),
      form,
      incomplete: [{ line: 1, why: 'this file holds NUL bytes: it is no source text' }],
    };
  }
  const reader = new FileReader(path, options);
  for (const part of partsOf(text, form, options.define)) reader.take(part);
  return { ...reader.finish(), form };
}

function decode(bytes: Uint8Array): string {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  // UTF-8 only where it is valid and needed: columns of everything else are bytes.
  for (let at = 0; at < bytes.length; at++) {
    if (bytes[at]! < 128) continue;
    try {
      return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
    } catch {
      return buffer.toString('latin1');
    }
  }
  return buffer.toString('latin1');
}
