/** Lines of either source form to statements, comments and directives, in the order of the file. Bytes in, callbacks out. */
import type { Conditions } from './conditions.ts';
import { LOWER, type Names, WORD } from './names.ts';
import type { SourceText } from './source-text.ts';
import { Statement } from './statement.ts';

export interface ScanHandler {
  /** The statement is used again as soon as this returns. */
  statement(statement: Statement): void;
  /** A comment that has a line of its own: its bytes from the mark to the end of the line. */
  comment(from: number, to: number, line: number): void;
  /** `#include`, `#define` and whatever else does not choose branches. */
  directive(text: string, line: number, condition: string | null): void;
  /** A statement whose lines stand in several branches; the places of its lines, for `scanAlternative`. */
  divided(statement: Statement): void;
}

/** Longer statements are cut: tables of data have been written so. */
const LONGEST_STATEMENT = 4_000_000;

const LONGEST_DIRECTIVE = 4000;

const BLANK = 0;
const PLAIN = 1;
const SPECIAL = 2;
/** What a byte does outside character constants. */
const CLASS = new Uint8Array(256).fill(PLAIN);
for (const byte of [32, 9, 13, 12, 11]) CLASS[byte] = BLANK;
for (const mark of '!&;\'"()[]=,') CLASS[mark.charCodeAt(0)] = SPECIAL;
/** Statements whose scanner has done: their buffers serve the next. */
const POOL: Statement[] = [];
/** A statement grown beyond that is left to the collector. */
const LARGE_STATEMENT = 1 << 20;

/** In fixed form also the `h` of a Hollerith constant, and the underscore of an exponent behind a macro. */
const FIXED_CLASS = Uint8Array.from(CLASS);
for (const mark of 'hH_') FIXED_CLASS[mark.charCodeAt(0)] = SPECIAL;

export class StatementScanner {
  private readonly bytes: Uint8Array;
  private readonly conditions: Conditions;
  private readonly handler: ScanHandler;
  private readonly columns: number;
  private readonly fixed: boolean;
  private readonly statement: Statement;
  private isOpen = false;
  /** The quote of a character constant that runs on over the line end; 0 for none. */
  private quote = 0;
  /** Characters of a Hollerith constant still to come on a continuation line. */
  private hollerith = 0;
  private continues = false;
  /** A blank was seen before the next character. */
  private gap = false;
  private depth = 0;
  /** Indices of the parentheses that are open, `depth` of them. */
  private readonly stack: number[] = [];
  /** Comments and directives behind an open statement of fixed form, which may still be continued. */
  private readonly waitingComments: number[] = [];
  private waitingDirectives: { text: string; line: number; condition: string | null; after: number }[] = [];

  constructor(
    text: SourceText,
    names: Names,
    form: 'fixed' | 'free',
    columns: number,
    conditions: Conditions,
    handler: ScanHandler,
  ) {
    this.bytes = text.bytes;
    this.conditions = conditions;
    this.handler = handler;
    this.columns = columns;
    this.fixed = form === 'fixed';
    this.statement = POOL.pop() ?? new Statement(text, names, this.fixed);
    this.statement.text = text;
    this.statement.names = names;
    this.statement.fixed = this.fixed;
  }

  /** Scans bytes `from` to `to`, which begin a line, numbered `firstLine`, to their end; a scanner is used once. */
  scan(from: number, to: number, firstLine: number): void {
    const { bytes } = this;
    let line = firstLine;
    for (let start = from; start < to; ) {
      let end = bytes.indexOf(10, start);
      if (end < 0 || end > to) end = to;
      if (bytes[start] === 35) {
        const first = line;
        while (end < to && (bytes[end - 1] === 92 || (bytes[end - 1] === 13 && bytes[end - 2] === 92))) {
          const next = bytes.indexOf(10, end + 1);
          end = next < 0 || next > to ? to : next;
          line++;
        }
        this.directive(start, end, first);
      } else if (!this.conditions.off) this.line(start, end > start && bytes[end - 1] === 13 ? end - 1 : end, line);
      line++;
      start = end + 1;
    }
    this.close();
    if (this.statement.code.length < LARGE_STATEMENT) POOL.push(this.statement);
  }

  /** One line that chooses no branch. */
  line(start: number, end: number, line: number): void {
    if (this.fixed) this.fixedLine(start, end, line);
    else this.freeLine(start, end, line);
  }

  private directive(start: number, end: number, line: number): void {
    const text = Buffer.from(this.bytes.buffer, this.bytes.byteOffset, this.bytes.length)
      .latin1Slice(start, Math.min(end, start + LONGEST_DIRECTIVE))
      .replace(/\\\r?\n/g, ' ')
      .replace(/\r$/, '');
    const { off, branch } = this.conditions;
    if (this.conditions.take(text) || off) return;
    const condition = branch === null ? null : branch.whole;
    if (this.isOpen) this.waitingDirectives.push({ text, line, condition, after: this.waitingComments.length });
    else this.handler.directive(text, line, condition);
  }

  private comment(from: number, to: number, line: number): void {
    if (this.isOpen) this.waitingComments.push(from, to, line);
    else this.handler.comment(from, to, line);
  }

  // Free form

  private freeLine(start: number, end: number, line: number): void {
    const { bytes, statement } = this;
    let from = start;
    while (from < end && (bytes[from] === 32 || bytes[from] === 9)) from++;
    if (from === end) return;
    const joining = this.continues && this.isOpen;
    if (bytes[from] === 33 && this.quote === 0) {
      if (joining) statement.addComment(from, end, line);
      else this.handler.comment(from, end, line);
      return;
    }
    if (joining) {
      if (bytes[from] === 38) {
        from++;
      } else this.gap = true;
    } else {
      if (this.isOpen) this.close();
      this.begin(line);
      if (bytes[from]! >= 48 && bytes[from]! <= 57) from = this.freeLabel(from, end);
    }
    this.takeFree(from, end, start, line);
    if (!this.continues) this.close();
  }

  private freeLabel(from: number, end: number): number {
    const { bytes } = this;
    let at = from;
    while (at < end && bytes[at]! >= 48 && bytes[at]! <= 57) at++;
    if (at < end && bytes[at] !== 32 && bytes[at] !== 9) return from;
    this.statement.label = this.statement.text.slice(from, at);
    while (at < end && (bytes[at] === 32 || bytes[at] === 9)) at++;
    return at;
  }

  private begin(line: number): void {
    const { statement } = this;
    statement.clear();
    statement.line = line;
    statement.endLine = line;
    statement.branch = this.conditions.branch;
    this.isOpen = true;
    this.quote = 0;
    this.hollerith = 0;
    this.gap = false;
    this.depth = 0;
  }

  private takeFree(from: number, end: number, lineStart: number, line: number): void {
    const { bytes, statement } = this;
    statement.addPiece(from, end, lineStart, line, this.conditions.branch);
    statement.reserve(2 * (end - from));
    let { code, source } = statement;
    let n = statement.length;
    let at = from;
    let { gap } = this;
    this.continues = false;
    if (this.quote !== 0) {
      statement.length = n;
      at = this.restOfConstant(at, end);
      n = statement.length;
      if (at < 0) return;
    }
    while (at < end) {
      const byte = bytes[at]!;
      const kind = CLASS[byte]!;
      if (kind === BLANK) {
        gap = true;
        at++;
        continue;
      }
      if (gap) {
        gap = false;
        if (n > 0 && WORD[byte] === 1 && WORD[code[n - 1]!] === 1) {
          code[n] = 32;
          source[n++] = at;
        }
      }
      if (kind === PLAIN) {
        code[n] = LOWER[byte]!;
        source[n++] = at++;
        continue;
      }
      switch (byte) {
        case 33: // !
          statement.addComment(at, end, line);
          statement.pieces[statement.pieceCount - 1]!.to = at;
          statement.length = n;
          return;
        case 38: {
          let next = at + 1;
          while (next < end && CLASS[bytes[next]!] === BLANK) next++;
          if (next < end && bytes[next] !== 33) {
            code[n] = 38;
            source[n++] = at++;
            continue;
          }
          if (next < end) statement.addComment(next, end, line);
          statement.pieces[statement.pieceCount - 1]!.to = at;
          this.continues = n < LONGEST_STATEMENT;
          this.gap = bytes[at - 1] === 32 || bytes[at - 1] === 9;
          statement.length = n;
          return;
        }
        case 59: {
          statement.pieces[statement.pieceCount - 1]!.to = at;
          statement.length = n;
          this.close();
          this.begin(line);
          at++;
          while (at < end && CLASS[bytes[at]!] === BLANK) at++;
          statement.addPiece(at, end, lineStart, line, this.conditions.branch);
          ({ code, source } = statement);
          n = 0;
          gap = false;
          continue;
        }
        case 39:
        case 34: {
          code[n] = 39;
          source[n++] = at;
          statement.length = n;
          this.quote = byte;
          at = this.restOfConstant(at + 1, end);
          n = statement.length;
          if (at < 0) return;
          continue;
        }
        default:
          n = this.mark(byte, n, at);
          at++;
      }
    }
    statement.length = n;
  }

  /** The rest of a character constant; -1 when the line ends first, and the statement goes on, or is over. */
  private restOfConstant(from: number, end: number): number {
    const { bytes, statement, quote } = this;
    let at = from;
    while (at < end) {
      if (bytes[at] !== quote) {
        at++;
        continue;
      }
      if (bytes[at + 1] === quote && at + 1 < end) {
        at += 2;
        continue;
      }
      this.endConstant(at);
      return at + 1;
    }
    if (this.fixed) return -1;
    let last = end - 1;
    while (last >= from && CLASS[bytes[last]!] === BLANK) last--;
    if (last >= from && bytes[last] === 38) {
      statement.pieces[statement.pieceCount - 1]!.to = last;
      this.continues = true;
    } else this.endConstant(Math.max(from, end) - 1);
    return -1;
  }

  private endConstant(at: number): void {
    const { statement } = this;
    statement.code[statement.length] = 39;
    statement.source[statement.length++] = at;
    statement.quoted = true;
    this.quote = 0;
  }

  /** A parenthesis, `=` or comma outside character constants. */
  private mark(byte: number, index: number, at: number): number {
    const { statement } = this;
    const { code } = statement;
    switch (byte) {
      case 40:
      case 91:
        statement.match[index] = -1;
        this.stack[this.depth++] = index;
        statement.addOpen(index);
        break;
      case 41:
      case 93: {
        if (this.depth > 0) statement.match[this.stack[--this.depth]!] = index;
        break;
      }
      case 61:
        if (this.depth === 0) {
          const before = index > 0 ? code[index - 1]! : 0;
          if (before === 61) {
            if (statement.equal === index - 1) statement.equal = -1;
          } else if (before !== 47 && before !== 60 && before !== 62 && statement.equal < 0) statement.equal = index;
        }
        break;
      case 44:
        if (this.depth === 0 && statement.equal >= 0) statement.commaBehind = true;
        break;
      default:
        break;
    }
    code[index] = LOWER[byte]!;
    statement.source[index] = at;
    return index + 1;
  }

  // Fixed form

  private fixedLine(start: number, lineEnd: number, line: number): void {
    const { bytes } = this;
    if (lineEnd === start) return;
    const first = bytes[start]!;
    // A comment, or a debug line; `d` may also begin a statement that was not moved to column 7.
    if (
      first === 99 ||
      first === 67 ||
      first === 42 ||
      first === 33 ||
      ((first === 100 || first === 68) && !isLetter(bytes[start + 1] ?? 0))
    ) {
      this.comment(start, lineEnd, line);
      return;
    }
    let at = start;
    let label = -1;
    let labelEnd = start;
    const field = Math.min(lineEnd, start + 5);
    for (; at < field; at++) {
      const byte = bytes[at]!;
      if (byte === 32) continue;
      if (byte < 48 || byte > 57) break;
      if (label < 0) label = at;
      labelEnd = at + 1;
    }
    let end = Math.min(lineEnd, start + this.columns);
    let continuing = false;
    if (at < field && bytes[at] === 9) {
      // Tab form: a digit from 1 behind the tab continues, and columns do not count.
      at++;
      end = lineEnd;
      if (at < end && bytes[at]! >= 49 && bytes[at]! <= 57) {
        continuing = true;
        at++;
      }
    } else if (at === start + 5) {
      if (at < end && bytes[at] === 9) at++;
      else if (at < end) {
        const mark = bytes[at]!;
        if (mark !== 32 && mark !== 48) {
          continuing = label < 0;
          if (!continuing) at--;
        }
        at++;
      }
    }
    if (!continuing) {
      while (at < end && CLASS[bytes[at]!] === BLANK) at++;
      if (at >= end) return;
      if (bytes[at] === 33) {
        this.comment(at, lineEnd, line);
        return;
      }
    }
    if (continuing && this.isOpen) {
      // Comments between the lines of a statement are comments on it.
      if (this.waitingComments.length > 0) {
        const waiting = this.waitingComments.splice(0);
        for (let one = 0; one < waiting.length; one += 3)
          this.statement.addComment(waiting[one]!, waiting[one + 1]!, waiting[one + 2]!);
      }
    } else {
      this.close();
      this.begin(line);
      if (label >= 0 && labelEnd > label) this.statement.label = this.statement.text.slice(label, labelEnd);
    }
    if (this.statement.length < LONGEST_STATEMENT) this.takeFixed(at, end, lineEnd, start, line);
  }

  private takeFixed(from: number, end: number, lineEnd: number, lineStart: number, line: number): void {
    const { bytes, statement } = this;
    statement.addPiece(from, end, lineStart, line, this.conditions.branch);
    statement.reserve(2 * (end - from));
    let { code, source } = statement;
    let n = statement.length;
    let at = from;
    if (this.quote !== 0) {
      at = this.restOfConstant(at, end);
      n = statement.length;
      if (at < 0) return;
    } else if (this.hollerith > 0) {
      const taken = Math.min(this.hollerith, end - at);
      this.hollerith -= taken;
      at += taken;
    }
    // A macro in front (`_RL x`) is a word of its own for the preprocessor.
    const macro = n > 0 ? code[0] === 95 : bytes[at] === 95;
    while (at < end) {
      const byte = bytes[at]!;
      const kind = FIXED_CLASS[byte]!;
      if (kind === BLANK) {
        if (macro && n > 0 && WORD[code[n - 1]!] === 1 && at + 1 < end && WORD[bytes[at + 1]!] === 1) {
          code[n] = 32;
          source[n++] = at;
        }
        at++;
        continue;
      }
      if (kind === PLAIN) {
        code[n] = LOWER[byte]!;
        source[n++] = at++;
        continue;
      }
      switch (byte) {
        case 33:
          statement.addComment(at, lineEnd, line);
          statement.pieces[statement.pieceCount - 1]!.to = at;
          statement.length = n;
          return;
        case 59: {
          statement.pieces[statement.pieceCount - 1]!.to = at;
          statement.length = n;
          this.close();
          this.begin(line);
          at++;
          while (at < end && CLASS[bytes[at]!] === BLANK) at++;
          statement.addPiece(at, end, lineStart, line, this.conditions.branch);
          ({ code, source } = statement);
          n = 0;
          continue;
        }
        case 39:
        case 34: {
          code[n] = 39;
          source[n++] = at;
          statement.length = n;
          this.quote = byte;
          at = this.restOfConstant(at + 1, end);
          n = statement.length;
          if (at < 0) return;
          continue;
        }
        case 72:
        case 104: {
          const count = n > 0 ? this.hollerithCount(n) : 0;
          if (count > 0) {
            while (n > 0 && code[n - 1]! >= 48 && code[n - 1]! <= 57) n--;
            code[n] = 39;
            n++;
            const taken = Math.min(count, end - at - 1);
            this.hollerith = count - taken;
            at += taken;
            code[n] = 39;
            source[n++] = at++;
            statement.quoted = true;
            continue;
          }
          code[n] = 104;
          source[n++] = at++;
          continue;
        }
        case 95:
          // `1.5 _d 0`: a macro that is the letter of the exponent. A kind stands right behind its number.
          if (n > 0 && this.isExponent(at, end, code[n - 1]!)) {
            code[n] = LOWER[bytes[at + 1]!]!;
            source[n++] = at;
            at += 2;
            continue;
          }
          code[n] = 95;
          source[n++] = at++;
          continue;
        case 38:
          code[n] = 38;
          source[n++] = at++;
          continue;
        default:
          n = this.mark(byte, n, at);
          at++;
      }
    }
    statement.length = n;
  }

  private isExponent(at: number, end: number, before: number): boolean {
    const { bytes } = this;
    if (CLASS[bytes[at - 1]!] !== BLANK || at + 2 >= end) return false;
    if (!(before === 46 || (before >= 48 && before <= 57))) return false;
    const letter = bytes[at + 1]! | 32;
    return (letter === 100 || letter === 101) && WORD[bytes[at + 2]!] !== 1;
  }

  /** The count of a Hollerith constant (`3habc`) when digits that can begin one stand before the `h`; else 0. */
  private hollerithCount(n: number): number {
    const { code } = this.statement;
    let at = n;
    let count = 0;
    let scale = 1;
    while (at > 0 && code[at - 1]! >= 48 && code[at - 1]! <= 57 && n - at < 5) {
      count += (code[--at]! - 48) * scale;
      scale *= 10;
    }
    if (at === n || at === 0) return 0;
    const before = code[at - 1]!;
    // `real*8 height` is none; a repeat in DATA (`3*4habcd`) is.
    if (before === 42) return code[0] === 100 && code[1] === 97 && code[2] === 116 && code[3] === 97 ? count : 0;
    return before === 40 || before === 44 || before === 47 || before === 61 ? count : 0;
  }

  private close(): void {
    if (!this.isOpen) return;
    const { statement } = this;
    this.isOpen = false;
    this.continues = false;
    if (this.quote !== 0) {
      statement.reserve(2);
      const piece = statement.pieces[statement.pieceCount - 1]!;
      this.endConstant(Math.max(piece.from, piece.to - 1));
    }
    if (statement.length > 0) {
      // What stood in the buffer before must not be seen by who looks one character too far.
      statement.reserve(2);
      const { code, length } = statement;
      code[length] = 0;
      code[length + 1] = 0;
      code[length + 2] = 0;
      code[length + 3] = 0;
      if (statement.divided) this.handler.divided(statement);
      else this.handler.statement(statement);
    }
    if (this.waitingComments.length > 0 || this.waitingDirectives.length > 0) this.flush();
  }

  private flush(): void {
    const comments = this.waitingComments.splice(0);
    const directives = this.waitingDirectives;
    this.waitingDirectives = [];
    let next = 0;
    for (let at = 0; at <= comments.length; at += 3) {
      while (next < directives.length && directives[next]!.after <= at) {
        const { text, line, condition } = directives[next++]!;
        this.handler.directive(text, line, condition);
      }
      if (at < comments.length) this.handler.comment(comments[at]!, comments[at + 1]!, comments[at + 2]!);
    }
    for (; next < directives.length; next++) {
      const { text, line, condition } = directives[next]!;
      this.handler.directive(text, line, condition);
    }
  }
}

function isLetter(byte: number): boolean {
  const small = byte | 32;
  return small >= 97 && small <= 122;
}
