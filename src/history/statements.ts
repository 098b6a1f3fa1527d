/**
 * Cuts source text into statements and tokens with their lines, without understanding it: enough to put two states of one
 * procedure beside each other statement by statement. Comments, continuation, layout and the spelling of numbers are gone.
 */
import type { Language } from '../model/interface.ts';

export interface StatementToken {
  readonly kind: 'name' | 'number' | 'text' | 'mark';
  /** As compared: Fortran names in lower case, text without its quotes. */
  readonly text: string;
  /** Of a number. */
  readonly value?: number;
  /** Whether a number is written with a point or an exponent. */
  readonly real?: boolean;
}

export interface Statement {
  /** Where it begins, counted from 1. */
  readonly line: number;
  readonly tokens: readonly StatementToken[];
  /** Equal when two statements differ in layout only. */
  readonly key: string;
}

/** One run of tokens that went while another came; either may be empty. */
export interface Edit {
  readonly gone: readonly StatementToken[];
  readonly come: readonly StatementToken[];
  /** The token in front of it and the one behind, after the change. */
  readonly previous?: StatementToken;
  readonly next?: StatementToken;
}

/** @param firstLine  the line that the text begins at, in its file */
export function statementsOf(
  text: string,
  language: Language,
  form: 'fixed' | 'free' | undefined,
  firstLine = 1,
): Statement[] {
  if (language === 'fortran') return fortranStatements(text, form === 'fixed', firstLine);
  return language === 'python' ? pythonStatements(text, firstLine) : bracedStatements(text, firstLine);
}

const PIECES =
  /[A-Za-z_$\u0080-\uffff][\w$\u0080-\uffff]*|(?:\d+\.?\d*|\.\d+)(?:[eEdDqQ][+-]?\d+)?(?:_\w+|[fFlLuU]+)?|"""[\s\S]*?"""|'''[\s\S]*?'''|'(?:[^'\\\n]|\\.)*'|"(?:[^"\\\n]|\\.)*"|\*\*|\/\/|->|::|\+\+|--|<<|>>|=>|&&|\|\||[-+*/=!<>]=|\S|\n/g;

function token(piece: string, fortran: boolean): StatementToken {
  const first = piece.charCodeAt(0);
  if ((first >= 48 && first <= 57) || (first === 46 && piece.length > 1)) {
    const plain = piece.replace(/_\w+$|(?<![\dA-Fa-f]x[\dA-Fa-f]*)[fFlLuU]+$/, '').replace(/[dDqQ]/, 'e');
    return { kind: 'number', text: piece, value: Number(plain), real: /[.eE]/.test(plain) };
  }
  if (first === 34 || first === 39) return { kind: 'text', text: piece.replace(/^("""|'''|['"])([\s\S]*)\1$/, '$2') };
  if (/^[A-Za-z_$\u0080-\uffff]/.test(piece)) return { kind: 'name', text: fortran ? piece.toLowerCase() : piece };
  return { kind: 'mark', text: piece };
}

function statement(line: number, tokens: readonly StatementToken[]): Statement {
  const key = tokens.map((one) => (one.kind === 'number' ? String(one.value) : one.text)).join(' ');
  return { line, tokens, key };
}

function fortranStatements(text: string, fixed: boolean, firstLine: number): Statement[] {
  const found: { line: number; text: string }[] = [];
  let open = false;
  for (const [index, line] of text.split(/\r\n|\r|\n/).entries()) {
    if (line.startsWith('#')) continue;
    if (fixed) {
      if (/^[cC*!dD]/.test(line)) continue;
      const continued = /^ {5}[^ 0]/.test(line) || /^\t[1-9]/.test(line);
      const body = cutComment(continued ? line.slice(line.startsWith('\t') ? 2 : 6) : line);
      if (body.trim() === '') continue;
      if (continued && found.length > 0) found.at(-1)!.text += ` ${body}`;
      else found.push({ line: firstLine + index, text: body });
    } else {
      const body = cutComment(line);
      if (body.trim() === '') continue;
      const plain = body.replace(/&\s*$/, '');
      if (open && found.length > 0) found.at(-1)!.text += plain.replace(/^\s*&/, ' ');
      else found.push({ line: firstLine + index, text: plain });
      open = plain !== body;
    }
  }
  return found.flatMap(({ line, text: body }) => {
    const plain = body
      .replace(/([\d.])\s+_d\s+([+-]?\d+)/gi, '$1d$2')
      .replace(/\.(gt|ge|lt|le|eq|ne)\./gi, (_, word: string) => OPERATORS[word.toLowerCase()]!);
    const statements: Statement[] = [];
    let tokens: StatementToken[] = [];
    for (const [piece] of plain.matchAll(PIECES)) {
      if (piece === ';') {
        if (tokens.length > 0) statements.push(statement(line, tokens));
        tokens = [];
      } else if (piece !== '\n') tokens.push(token(piece, true));
    }
    if (tokens.length > 0) statements.push(statement(line, tokens));
    return statements;
  });
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

function pythonStatements(text: string, firstLine: number): Statement[] {
  const statements: Statement[] = [];
  let tokens: StatementToken[] = [];
  let line = firstLine;
  let start = firstLine;
  let depth = 0;
  const end = () => {
    // A lone text is a docstring.
    if (tokens.length > 1 || (tokens.length === 1 && tokens[0]!.kind !== 'text'))
      statements.push(statement(start, tokens));
    tokens = [];
  };
  const plain = text.replace(/\\\r?\n/g, ' \u0000\n');
  let joined = false;
  for (const [piece] of plain.matchAll(PYTHON)) {
    if (piece.startsWith('#')) continue;
    if (piece === '\u0000') {
      joined = true;
    } else if (piece === '\n') {
      line += 1;
      if (depth === 0 && !joined) end();
      joined = false;
    } else {
      if (tokens.length === 0) start = line;
      if (piece === '(' || piece === '[' || piece === '{') depth += 1;
      else if (piece === ')' || piece === ']' || piece === '}') depth = Math.max(0, depth - 1);
      tokens.push(token(piece, false));
      line += piece.split('\n').length - 1;
    }
  }
  end();
  return statements;
}

const PYTHON = new RegExp(
  `"""[\\s\\S]*?"""|'''[\\s\\S]*?'''|'(?:[^'\\\\\\n]|\\\\.)*'|"(?:[^"\\\\\\n]|\\\\.)*"|#[^\\n]*|\\u0000|${PIECES.source}`,
  'g',
);

/** C and its kin: a statement ends at `;`, `{` or `}` outside parentheses; an initialiser in braces is part of its statement. */
function bracedStatements(text: string, firstLine: number): Statement[] {
  const plain = text.replace(COMMENTS, (piece) => (/^["']/.test(piece) ? piece : piece.replace(/[^\n]+/g, ' ')));
  const statements: Statement[] = [];
  let tokens: StatementToken[] = [];
  let line = firstLine;
  let start = firstLine;
  let depth = 0;
  let braces = 0;
  const end = () => {
    if (tokens.length > 0) statements.push(statement(start, tokens));
    tokens = [];
    depth = 0;
    braces = 0;
  };
  for (const [piece] of plain.matchAll(PIECES)) {
    if (piece === '\n') {
      line += 1;
      continue;
    }
    if (depth === 0 && braces === 0 && (piece === ';' || piece === '}')) end();
    else if (piece === ';' && depth === 0) end();
    else if (piece === '{' && depth === 0 && braces === 0 && !/^(?:=|,|return)$/.test(tokens.at(-1)?.text ?? '')) end();
    else {
      if (piece === '{') braces += 1;
      if (piece === '}') braces -= 1;
      if (piece === '(' || piece === '[') depth += 1;
      if (piece === ')' || piece === ']') depth = Math.max(0, depth - 1);
      // A brace inside parentheses opens the body of a lambda: what follows are statements of their own.
      if (piece === '{' && depth > 0 && tokens.at(-1)?.text === ')') {
        end();
        continue;
      }
      if (tokens.length === 0) start = line;
      tokens.push(token(piece, false));
      if (tokens.length > LONGEST) end();
      // What a condition or a loop governs is a statement of its own, with braces or without.
      const head = tokens[0]?.text;
      if (depth === 0 && (head === 'else' || (piece === ')' && /^(?:if|for|while|switch)$/.test(head ?? '')))) end();
    }
  }
  end();
  return statements;
}

/** Text literals are matched so that what looks like a comment in them stays; preprocessor lines go. */
const COMMENTS =
  /"(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*'|\/\*[\s\S]*?\*\/|\/\/[^\n]*|^[ \t]*#(?:[^\n]*\\\r?\n)*[^\n]*/gm;
const LONGEST = 4000;
