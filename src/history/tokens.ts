/** Cuts source text into tokens without understanding it: enough to tell layout from content in every language read here. Pure. */
import type { Language } from '../model/interface.ts';

const OFFSET = 0x811c9dc5;
const PRIME = 0x01000193;

/** What stands for every name that may have been changed. */
export const NAME_SYMBOL = hashText('name');

/** Words that stay themselves in fingerprints; every other name may have been renamed. */
const KEYWORDS = new Set(
  `if then else elseif endif do enddo while end continue goto go to call return stop where forall select case subroutine function
  module use only implicit none real integer logical complex character double precision dimension parameter data common save
  intent in out inout optional allocate deallocate exit cycle write read print open close format and or not eq ne lt le gt ge
  true false exp log log10 sqrt sin cos tan abs max min mod sum for switch break const static void int float return def class
  import from lambda elif try except raise with as yield pass let var new typeof`.split(/\s+/),
);

const KEYWORD_HASHES = new Set([...KEYWORDS].map(hashText));

/**
 * Hands over each token as two hashes: of the token as compared (names in the language's case, numbers by value), and the same with all
 * names that are no keyword made one, of which fingerprints are made. Fixed form is found by its comment letters and continuation
 * column when `form` does not say.
 */
export function eachToken(
  text: string,
  language: Language,
  form: 'fixed' | 'free' | undefined,
  take: (hash: number, symbol: number) => void,
): void {
  const fortran = language === 'fortran';
  const plain = fortran ? fortranText(text, form === 'fixed') : stripComments(text, language);
  const { length } = plain;
  for (let at = 0; at < length; ) {
    const code = plain.charCodeAt(at);
    if (code <= 32 || code === 0xa0 || code === 0xfeff) {
      at += 1;
    } else if (isLetter(code)) {
      let hash = OFFSET;
      let end = at;
      for (; end < length; end += 1) {
        const one = plain.charCodeAt(end);
        if (!isLetter(one) && !isDigit(one)) break;
        hash = Math.imul(hash ^ (fortran && one >= 65 && one <= 90 ? one + 32 : one), PRIME);
      }
      at = end;
      hash >>>= 0;
      take(hash, KEYWORD_HASHES.has(hash) ? hash : NAME_SYMBOL);
    } else if (isDigit(code) || (code === 46 && isDigit(plain.charCodeAt(at + 1)))) {
      const end = endOfNumber(plain, at);
      const hash = hashText(numberText(plain.slice(at, end)));
      at = end;
      take(hash, hash);
    } else {
      const end = code === 39 || code === 34 ? endOfQuoted(plain, at, code) : at + 1;
      if (code !== 59 && code !== 38) {
        let hash = OFFSET;
        for (let one = at; one < end; one += 1) hash = Math.imul(hash ^ plain.charCodeAt(one), PRIME);
        take(hash >>> 0, hash >>> 0);
      }
      at = end;
    }
  }
}

/** Behind digits, point, exponent and the suffix that tells the kind. */
function endOfNumber(text: string, from: number): number {
  let at = from;
  while (isDigit(text.charCodeAt(at))) at += 1;
  if (text.charCodeAt(at) === 46) {
    at += 1;
    while (isDigit(text.charCodeAt(at))) at += 1;
  }
  const letter = text.charCodeAt(at) | 32;
  if (letter === 100 || letter === 101) {
    const sign = text.charCodeAt(at + 1);
    let digit = sign === 43 || sign === 45 ? at + 2 : at + 1;
    if (isDigit(text.charCodeAt(digit))) {
      while (isDigit(text.charCodeAt(digit))) digit += 1;
      at = digit;
    }
  }
  if (text.charCodeAt(at) === 95) {
    let end = at + 1;
    while (isWord(text.charCodeAt(end))) end += 1;
    return end > at + 1 ? end : at;
  }
  for (let one = text.charCodeAt(at) | 32; one === 102 || one === 108 || one === 117; one = text.charCodeAt(at) | 32)
    at += 1;
  return at;
}

/** Behind the closing quote on the same line; a quote alone where there is none. */
function endOfQuoted(text: string, from: number, quote: number): number {
  for (let at = from + 1; at < text.length; at += 1) {
    const one = text.charCodeAt(at);
    if (one === quote) return at + 1;
    if (one === 10) break;
  }
  return from + 1;
}

/** `1`, `1.`, `1.0d0` and `1._r8` are one number. */
function numberText(piece: string): string {
  const plain = piece
    .toLowerCase()
    .replace(/_\w+$|[flu]+$/, '')
    .replace('d', 'e');
  const value = Number(plain);
  return Number.isNaN(value) ? piece : String(value);
}

/**
 * Comments go and continued lines are joined, so that both source forms read alike. Old spellings become the new ones:
 * `.gt.` is `>`, `end do` is `enddo`.
 */
function fortranText(text: string, fixed: boolean): string {
  const lines: string[] = [];
  for (const line of text.split(/\r\n|\r|\n/)) {
    if (fixed) {
      if (/^[cC*!dD]/.test(line) || line.startsWith('#')) continue;
      const continued = /^ {5}[^ 0]/.test(line) || /^\t[1-9]/.test(line);
      const body = cutComment(continued ? line.slice(line.startsWith('\t') ? 2 : 6) : line.slice(0, 132));
      if (continued && lines.length > 0) lines[lines.length - 1] += body;
      else if (body.trim() !== '') lines.push(body);
    } else {
      const body = cutComment(line);
      if (body.trim() === '' || body.startsWith('#')) continue;
      const joined = lines.length > 0 && /&\s*$/.test(lines.at(-1)!);
      if (joined) lines[lines.length - 1] = lines.at(-1)!.replace(/&\s*$/, '') + body.replace(/^\s*&/, ' ');
      else lines.push(body);
    }
  }
  return lines
    .join('\n')
    .replace(/\$(Id|Revision|Date|Author|Header)[^$\n]*\$/g, '')
    .replace(/\.(gt|ge|lt|le|eq|ne)\./gi, (_, word: string) => OPERATORS[word.toLowerCase()]!)
    .replace(/\b(end)\s+(do|if|where|select|subroutine|function|module|program)\b/gi, '$1$2')
    .replace(/\belse\s+if\b/gi, 'elseif')
    .replace(/\bgo\s+to\b/gi, 'goto');
}

const OPERATORS: Readonly<Record<string, string>> = { gt: '>', ge: '>=', lt: '<', le: '<=', eq: '==', ne: '/=' };

/** Cuts at the first `!` that stands in no text literal. */
function cutComment(line: string): string {
  let quote = '';
  for (let at = 0; at < line.length; at += 1) {
    const one = line[at]!;
    if (quote !== '') {
      if (one === quote) quote = '';
    } else if (one === '!') return line.slice(0, at);
    else if (one === "'" || one === '"') quote = one;
  }
  return line;
}

function stripComments(text: string, language: Language): string {
  if (language === 'python') return text.replace(/("""|''')[\s\S]*?\1|#[^\n]*/g, ' ');
  return text.replace(/\/\*[\s\S]*?\*\/|\/\/[^\n]*/g, ' ');
}

function isLetter(code: number): boolean {
  return (code >= 97 && code <= 122) || (code >= 65 && code <= 90) || code === 95 || code === 36 || code >= 128;
}

function isDigit(code: number): boolean {
  return code >= 48 && code <= 57;
}

function isWord(code: number): boolean {
  return isDigit(code) || code === 95 || (code >= 97 && code <= 122) || (code >= 65 && code <= 90);
}

/** FNV-1a over UTF-16 units. */
export function hashText(text: string): number {
  let hash = OFFSET;
  for (let at = 0; at < text.length; at += 1) hash = Math.imul(hash ^ text.charCodeAt(at), PRIME);
  return hash >>> 0;
}
