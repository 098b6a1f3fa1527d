/** Cuts source text into tokens without understanding it: enough to tell layout from content in every language read here. Pure. */
import type { Language } from '../model/interface.ts';

export interface Token {
  /** Of the token as compared: names in the language's case, numbers by value. */
  readonly hash: number;
  /** The same for all names that are no keyword: what fingerprints are made of. */
  readonly symbol: number;
}

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

/** Fixed form is found by its comment letters and continuation column when `form` does not say. */
export function* tokens(text: string, language: Language, form?: 'fixed' | 'free'): Generator<Token> {
  const fortran = language === 'fortran';
  const plain = fortran ? fortranText(text, form === 'fixed') : stripComments(text, language);
  const pattern =
    /[A-Za-z_$\u0080-\uffff][\w$\u0080-\uffff]*|(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?(?:_\w+|[fFlLuU]+)?|'(?:[^'\n])*'|"(?:[^"\n])*"|\S/g;
  for (const [piece] of plain.matchAll(pattern)) {
    const first = piece.charCodeAt(0);
    if ((first >= 48 && first <= 57) || (first === 46 && piece.length > 1)) {
      const hash = hashText(numberText(piece));
      yield { hash, symbol: hash };
    } else if (isLetter(first)) {
      const name = fortran ? piece.toLowerCase() : piece;
      const hash = hashText(name);
      yield { hash, symbol: KEYWORDS.has(name) ? hash : NAME_SYMBOL };
    } else if (piece !== ';' && piece !== '&') {
      const hash = hashText(piece);
      yield { hash, symbol: hash };
    }
  }
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
  return (code >= 65 && code <= 90) || (code >= 97 && code <= 122) || code === 95 || code === 36 || code >= 128;
}

/** FNV-1a over UTF-16 units. */
export function hashText(text: string): number {
  let hash = 0x811c9dc5;
  for (let at = 0; at < text.length; at += 1) hash = Math.imul(hash ^ text.charCodeAt(at), 0x01000193);
  return hash >>> 0;
}
