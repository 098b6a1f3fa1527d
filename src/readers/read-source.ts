/** Bytes of one source or table file come in, its interface goes out: finds the language and hands over to its reader. */
import { emptyInterface, type FileInterface, type Language } from '../model/interface.ts';
import type { ReadOptions } from './read-options.ts';

const LANGUAGES: Readonly<Record<string, Language>> = {
  f: 'fortran',
  for: 'fortran',
  ftn: 'fortran',
  f77: 'fortran',
  f90: 'fortran',
  f95: 'fortran',
  f03: 'fortran',
  f08: 'fortran',
  f18: 'fortran',
  fpp: 'fortran',
  fypp: 'fortran',
  cmn: 'fortran',
  fh: 'fortran',
  fi: 'fortran',
  cb: 'fortran',
  com: 'fortran',
  inc: 'fortran',
  finc: 'fortran',
  h90: 'fortran',
  pf: 'fortran',
  t: 'fortran',
  fortran: 'fortran',
  c: 'c',
  'c++': 'c++',
  cc: 'c++',
  cpp: 'c++',
  cxx: 'c++',
  hh: 'c++',
  hpp: 'c++',
  hxx: 'c++',
  'h++': 'c++',
  tcc: 'c++',
  tpp: 'c++',
  ipp: 'c++',
  inl: 'c++',
  cu: 'c++',
  cuh: 'c++',
  hip: 'c++',
  py: 'python',
  pyi: 'python',
  pyx: 'python',
  ts: 'typescript',
  tsx: 'typescript',
  mts: 'typescript',
  cts: 'typescript',
  js: 'javascript',
  jsx: 'javascript',
  mjs: 'javascript',
  cjs: 'javascript',
  h5: 'table',
  hdf5: 'table',
  hdf: 'table',
  he5: 'table',
  nc: 'table',
  nc4: 'table',
  cdf: 'table',
  npy: 'table',
  npz: 'table',
  fits: 'table',
  csv: 'table',
  tsv: 'table',
  dat: 'table',
  tab: 'table',
  tbl: 'table',
  table: 'table',
  meta: 'table',
};

/** Case tells C++ from C for these: `.C` and `.H`. */
const EXACT: Readonly<Record<string, Language>> = { C: 'c++', H: 'c++' };

/** Fortran codes keep declarations for INCLUDE in files without extension, in upper case (`SIZE`, `TOTAL`). */
const INCLUDE_NAME = /^[A-Z][A-Z0-9_]{1,15}$/;
const NEVER =
  /^(?:README|LICENSE|LICENCE|COPYING|AUTHORS|CHANGELOG|CHANGES|INSTALL|NEWS|TODO|VERSION|MANIFEST|CODEOWNERS|CONTRIBUTORS|MAINTAINERS|HISTORY|THANKS|NOTICE|BUGS|HEAD)$/;

/**
 * The language of a file by its name, and by its first bytes where a name says too little (`.h`, `.H`, `.inc`, no extension).
 *
 * @param firstBytes  the beginning, a few kilobytes; without them a doubtful name gets its likelier language
 * @returns null for what no reader takes
 */
export function languageOf(path: string, firstBytes?: Uint8Array): Language | null {
  const name = path.slice(path.lastIndexOf('/') + 1);
  const dot = name.lastIndexOf('.');
  if (dot <= 0) {
    if (!INCLUDE_NAME.test(name) || NEVER.test(name))
      return dot === 0 || firstBytes === undefined ? null : byContent(firstBytes);
    return firstBytes === undefined || looksLikeFortran(headOf(firstBytes)) ? 'fortran' : null;
  }
  let extension = name.slice(dot + 1);
  // `SIZE.template`, `config.h.in`: the name under the template's.
  if (/^(?:in|template|tmpl|example)$/.test(extension))
    return languageOf(path.slice(0, path.length - extension.length - 1), firstBytes);
  const exact = EXACT[extension];
  if (exact !== undefined)
    return exact === 'c++' && extension === 'H' && firstBytes !== undefined && isFortranHeader(headOf(firstBytes))
      ? 'fortran'
      : exact;
  extension = extension.toLowerCase();
  if (extension === 'h') return firstBytes === undefined ? 'c' : headerLanguage(headOf(firstBytes));
  if (extension === 'inc' && firstBytes !== undefined) {
    const head = headOf(firstBytes);
    return looksLikeFortran(head) || !/^\s*#|;\s*$/m.test(head) ? 'fortran' : headerLanguage(head);
  }
  if (
    (extension === 'com' || extension === 'cb' || extension === 'fi' || extension === 't') &&
    firstBytes !== undefined &&
    !looksLikeFortran(headOf(firstBytes))
  )
    return null;
  if (extension === 'ts' && firstBytes !== undefined && firstBytes[0] === 0x47) return null; // an MPEG transport stream
  const language = Object.hasOwn(LANGUAGES, extension) ? LANGUAGES[extension]! : null;
  // A text table is judged by its content once it is read; a `.meta` file may be anything.
  if (extension === 'meta' && firstBytes !== undefined && !/^\s*\[[\w-]+\]/m.test(headOf(firstBytes))) return null;
  return language;
}

/** True for a path whose bytes a reader may take; cheap, by the name alone. */
export function isSource(path: string): boolean {
  return languageOf(path) !== null;
}

/**
 * Reads a file. Readers of one language are loaded when the first such file comes.
 *
 * @returns its interface; no bytes whatever make it throw. A language that is not known gives an empty interface that says so.
 */
export async function readSource(path: string, bytes: Uint8Array, options: ReadOptions = {}): Promise<FileInterface> {
  const language = languageOf(path, bytes.subarray(0, 8192));
  try {
    switch (language) {
      case 'fortran':
        return (await import('./fortran/read-fortran.ts')).readFortran(path, bytes, options);
      case 'c':
      case 'c++':
        return (await import('./c/read-c.ts')).readC(path, bytes, { ...options, language });
      case 'python':
        return (await import('./python/read-python.ts')).readPython(path, bytes);
      case 'typescript':
      case 'javascript':
        return (await import('./typescript/read-typescript.ts')).readTypescript(path, decodeText(bytes));
      case 'table':
        return await (await import('./tables/read-table.ts')).readTable(path, bytes);
      default:
        return { ...emptyInterface('table'), incomplete: [{ line: 1, why: 'no reader takes this kind of file' }] };
    }
  } catch (error) {
    // A reader of its own must never be the reason why a whole history cannot be read.
    return {
      ...emptyInterface(language ?? 'table'),
      incomplete: [{ line: 1, why: `the reader failed: ${(error as Error).message.slice(0, 160)}` }],
    };
  }
}

/**
 * Reads a table in the work tree without taking all of it into memory.
 *
 * @param path  in the repository
 * @param file  the same, absolute
 */
export async function readSourceFile(path: string, file: string): Promise<FileInterface> {
  try {
    return await (await import('./tables/read-table.ts')).readTableFile(file);
  } catch (error) {
    return {
      ...emptyInterface('table'),
      incomplete: [{ line: 1, why: `the reader failed on ${path}: ${(error as Error).message.slice(0, 160)}` }],
    };
  }
}

/** UTF-8 where it is, Latin-1 where it is not: no byte is lost, and columns stay those of the editor. */
export function decodeText(bytes: Uint8Array): string {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
  }
}

function headOf(bytes: Uint8Array): string {
  return Buffer.from(bytes.buffer, bytes.byteOffset, Math.min(bytes.length, 8192)).toString('latin1');
}

function byContent(firstBytes: Uint8Array): Language | null {
  const head = headOf(firstBytes);
  if (/^#!.*\bpython/.test(head)) return 'python';
  if (/^#!.*\bnode\b/.test(head)) return 'javascript';
  return null;
}

function looksLikeFortran(head: string): boolean {
  return /^(?: {6,}|\t| *)(?:common\s*\/|parameter\s*\(|integer\b(?!.*;)|real(?:\*\d)?\s+[a-z]|real\s*\(|logical\b(?!.*;)|character\s*[*( ]|double precision\b|subroutine\b|module\s+\w+\s*$|dimension\b|include\s*'|implicit\b|complex\b|data\s+\w+\s*\/)/im.test(
    head,
  );
}

/** A header that is Fortran: Fortran statements, and none of what only C has. */
function isFortranHeader(head: string): boolean {
  return (
    looksLikeFortran(head) &&
    !/^\s*(?:typedef|extern|struct|class|namespace|template|static|inline|using)\b|[;{]\s*$/m.test(head)
  );
}

function headerLanguage(head: string): Language {
  if (isFortranHeader(head)) return 'fortran';
  // `#define` tables with Fortran comments: MITgcm's option files.
  if (/^[CcK*](?:\s|$|[-=*])/m.test(head) && !/[;{}]\s*$|\/\*/m.test(head)) return 'fortran';
  const bare = head
    .replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, '')
    .replace(/#\s*if(?:def)?\s+__cplusplus[\s\S]*?#\s*endif/g, '');
  return /\b(?:namespace|template\s*<|class\s+\w+\s*[{:;]|public:|private:|constexpr|using\s+\w+|std::|amrex::|operator\s*[=+\-*([])/.test(
    bare,
  )
    ? 'c++'
    : 'c';
}
