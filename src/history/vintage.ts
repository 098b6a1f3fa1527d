/** When a source file may have been written, from the dialect it is written in. Pure. */
import type { FileInterface } from '../model/interface.ts';

export interface Vintage {
  /** Written in or after this year; null when nothing tells. */
  readonly notBefore: number | null;
  /** Rarely written like this after this year; null when nothing tells. */
  readonly likelyBefore: number | null;
  readonly evidence: readonly string[];
}

interface Mark {
  readonly pattern: RegExp;
  readonly says: string;
  readonly notBefore?: number;
  readonly likelyBefore?: number;
}

/**
 * Years of the standards: ANSI X3.9-1966, ANSI X3.9-1978 (FORTRAN 77), ISO/IEC 1539:1991 (Fortran 90), 1539-1:1997 (95),
 * 1539-1:2004 (2003), 1539-1:2010 (2008). That old forms are rarely written after the next standard settled is common practice.
 */
const FORTRAN_MARKS: readonly Mark[] = [
  { pattern: /\b\d+h[^\n]{2,}/i, says: 'Hollerith constants, dropped by FORTRAN 77', likelyBefore: 1985 },
  { pattern: /^\s{0,5}\d*\s*if\s*\([^\n]*\)\s*\d+\s*,\s*\d+\s*,\s*\d+/im, says: 'arithmetic IF', likelyBefore: 1995 },
  { pattern: /\bgo\s*to\s*\(\s*\d+\s*,/i, says: 'computed GO TO', likelyBefore: 1995 },
  { pattern: /\bassign\s+\d+\s+to\b/i, says: 'ASSIGN, deleted by Fortran 95', likelyBefore: 1997 },
  { pattern: /^\s+entry\s+\w+/im, says: 'ENTRY', likelyBefore: 2000 },
  {
    pattern: /^\s+(if\s*\(.*\)\s*then|character\s*\*)/im,
    says: 'block IF or CHARACTER, new with FORTRAN 77',
    notBefore: 1978,
  },
  {
    pattern: /^\s*(module\s+(?!procedure)\w+|interface\b|allocate\s*\(|type\s*(::|\()|real\s*\(\s*kind)/im,
    says: 'modules, ALLOCATE, derived types or kinds, new with Fortran 90',
    notBefore: 1991,
  },
  {
    pattern: /^\s*(pure|elemental|forall)\b/im,
    says: 'PURE, ELEMENTAL or FORALL, new with Fortran 95',
    notBefore: 1997,
  },
  {
    pattern: /\b(iso_c_binding|bind\s*\(\s*c|class\s*\(|abstract\s+interface|procedure\s*\()|^\s*import\b/im,
    says: 'C interoperability or classes, new with Fortran 2003',
    notBefore: 2004,
  },
  {
    pattern: /\b(iso_fortran_env|do\s+concurrent|submodule|error\s+stop|codimension|block\s*$)\b/im,
    says: 'SUBMODULE, DO CONCURRENT or ISO_FORTRAN_ENV, as Fortran 2008 has them',
    notBefore: 2010,
  },
];

/** @param text  the whole file */
export function vintageOf(code: FileInterface, text: string): Vintage {
  if (code.language !== 'fortran') return { notBefore: null, likelyBefore: null, evidence: [] };
  const evidence: string[] = [];
  let notBefore: number | null = null;
  let likelyBefore: number | null = null;
  const plain = text.replace(/^[cC*!].*$/gm, '').replace(/!.*$/gm, '');
  for (const mark of FORTRAN_MARKS) {
    if (!mark.pattern.test(plain)) continue;
    evidence.push(mark.says);
    if (mark.notBefore !== undefined) notBefore = Math.max(notBefore ?? 0, mark.notBefore);
    if (mark.likelyBefore !== undefined) likelyBefore = Math.min(likelyBefore ?? 9999, mark.likelyBefore);
  }
  if (code.form === 'fixed') {
    evidence.push('fixed form');
    likelyBefore ??= 2000;
  }
  if (code.commons.length > 0) evidence.push(`${code.commons.length} COMMON statements`);
  const letters = plain.replace(/[^A-Za-z]/g, '');
  const capitals = letters.replace(/[^A-Z]/g, '').length;
  if (letters.length > 200 && capitals > 0.9 * letters.length) {
    evidence.push('written in capitals throughout');
    likelyBefore = Math.min(likelyBefore ?? 9999, 1990);
  }
  // Old parts live on in newer files: what is certainly newer wins over what is only rarely newer.
  if (notBefore !== null && likelyBefore !== null && likelyBefore < notBefore) likelyBefore = null;
  return { notBefore, likelyBefore, evidence };
}
