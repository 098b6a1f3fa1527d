/**
 * One statement: continuation lines joined, comments and meaningless blanks taken out, lower case. Bytes, not strings: most
 * statements yield nothing. One object is used again and again.
 */
import type { Branch } from './conditions.ts';
import type { Names } from './names.ts';
import { LOWER, WORD } from './names.ts';
import type { SourceText } from './source-text.ts';

/** A stretch of one source line. */
export interface Piece {
  /** Index in `code` of its first byte. */
  index: number;
  /** Bytes of the source that it was taken from. */
  from: number;
  to: number;
  lineStart: number;
  line: number;
  branch: Branch | null;
}

export class Statement {
  /**
   * The code. In fixed form without blanks, in free form with one blank between two words. A character constant is two quotes,
   * `source` of which says where it begins and ends.
   */
  code: Uint8Array = new Uint8Array(1 << 12);
  /** Offset in the source of each byte of `code`. */
  source: Int32Array = new Int32Array(1 << 12);
  /** At an opening parenthesis, the index of the one that closes it; -1 when none does. */
  match: Int32Array = new Int32Array(1 << 12);
  length = 0;
  /** Indices of opening parentheses. */
  opens: Int32Array = new Int32Array(1 << 8);
  openCount = 0;
  /** Index of the first `=` outside parentheses that assigns or points; -1 when there is none. */
  equal = -1;
  /** A comma stands outside parentheses behind that `=`. */
  commaBehind = false;
  label = '';
  line = 0;
  endLine = 0;
  readonly pieces: Piece[] = [];
  pieceCount = 0;
  /** Comments on its own lines: begin, end, line of each, `commentCount` numbers in all. */
  readonly comments: number[] = [];
  commentCount = 0;
  /** It holds a character constant. */
  quoted = false;
  /** The branch that it begins in. */
  branch: Branch | null = null;
  /** Lines of it stand in other branches than its first. */
  divided = false;
  /** Blanks do not separate words. */
  fixed: boolean;
  text: SourceText;
  names: Names;

  constructor(text: SourceText, names: Names, fixed: boolean) {
    this.text = text;
    this.names = names;
    this.fixed = fixed;
  }

  addComment(from: number, to: number, line: number): void {
    this.comments[this.commentCount++] = from;
    this.comments[this.commentCount++] = to;
    this.comments[this.commentCount++] = line;
  }

  clear(): void {
    this.length = 0;
    this.openCount = 0;
    this.equal = -1;
    this.commaBehind = false;
    this.label = '';
    this.pieceCount = 0;
    this.commentCount = 0;
    this.quoted = false;
    this.divided = false;
  }

  get condition(): string | null {
    return this.branch === null ? null : this.branch.whole;
  }

  reserve(more: number): void {
    const least = this.length + more + 4;
    if (least <= this.code.length) return;
    const size = Math.max(least, this.code.length * 2);
    const code = new Uint8Array(size);
    code.set(this.code.subarray(0, this.length));
    const source = new Int32Array(size);
    source.set(this.source.subarray(0, this.length));
    const match = new Int32Array(size);
    match.set(this.match.subarray(0, this.length));
    [this.code, this.source, this.match] = [code, source, match];
  }

  addOpen(index: number): void {
    if (this.openCount === this.opens.length) {
      const larger = new Int32Array(this.openCount * 2);
      larger.set(this.opens);
      this.opens = larger;
    }
    this.opens[this.openCount++] = index;
  }

  addPiece(from: number, to: number, lineStart: number, line: number, branch: Branch | null): void {
    const known = this.pieces[this.pieceCount];
    if (known === undefined) this.pieces.push({ index: this.length, from, to, lineStart, line, branch });
    else {
      known.index = this.length;
      known.from = from;
      known.to = to;
      known.lineStart = lineStart;
      known.line = line;
      known.branch = branch;
    }
    if (this.pieceCount > 0 && branch !== this.branch) this.divided = true;
    this.pieceCount++;
    this.endLine = line;
  }

  // Places

  pieceAt(index: number): Piece {
    return this.pieceCount === 1 ? this.pieces[0]! : this.pieces[this.pieceIndexAt(index)]!;
  }

  private pieceIndexAt(index: number): number {
    const { pieces, pieceCount } = this;
    let low = 0;
    let high = pieceCount - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (pieces[middle]!.index <= index) low = middle;
      else high = middle - 1;
    }
    return low;
  }

  lineAt(index: number): number {
    return this.pieceAt(index).line;
  }

  columnAt(index: number): number {
    const piece = this.pieceAt(index);
    return this.text.column(piece.lineStart, this.source[index]!);
  }

  position(index: number): { line: number; column: number } {
    const piece = this.pieceAt(index);
    return { line: piece.line, column: this.text.column(piece.lineStart, this.source[index]!) };
  }

  conditionAt(index: number): string | null {
    if (!this.divided) return this.condition;
    const { branch } = this.pieceAt(index);
    return branch === null ? null : branch.whole;
  }

  // Reading

  /** Behind a run of letters, digits and underscores. */
  wordEnd(from: number): number {
    const { code, length } = this;
    let at = from;
    while (at < length && WORD[code[at]!] === 1) at++;
    return at;
  }

  /** Where a name begins at `from`, behind it; `from` itself when none does. */
  nameEnd(from: number): number {
    if (from >= this.length) return from;
    const first = this.code[from]!;
    return (first >= 97 && first <= 122) || first === 95 ? this.wordEnd(from) : from;
  }

  name(from: number, to: number): string {
    return this.names.name(this.code, from, to);
  }

  /** Behind a keyword that stands at `from`, and behind the blank that ends it; -1 when it does not stand there. */
  keyword(word: string, from: number): number {
    const { code } = this;
    const end = from + word.length;
    if (end > this.length) return -1;
    for (let at = from, index = 0; at < end; at++, index++) if (code[at] !== word.charCodeAt(index)) return -1;
    if (end === this.length) return end;
    if (code[end] === 32) return end + 1;
    return !this.fixed && WORD[code[end]!] === 1 ? -1 : end;
  }

  /** The same for a keyword of two words that may be written as one. */
  keywords(first: string, second: string, from: number): number {
    const together = this.keyword(first + second, from);
    if (together >= 0 || this.fixed) return together;
    const behind = this.keyword(first, from);
    return behind < 0 ? -1 : this.keyword(second, behind);
  }

  /** The code itself. */
  codeText(from: number, to: number): string {
    const { code } = this;
    return to - from <= 64
      ? this.names.name(code, from, to)
      : Buffer.from(code.buffer, code.byteOffset, code.length).latin1Slice(from, to);
  }

  /** As the source writes it, lines of it joined. */
  original(from: number, to: number): string {
    if (to <= from) return '';
    const first = this.source[from]!;
    const last = this.source[to - 1]! + 1;
    const begin = this.pieceIndexAt(from);
    const end = this.pieceIndexAt(to - 1);
    if (begin === end) return this.text.slice(first, last);
    let joined = this.text.slice(first, this.pieces[begin]!.to);
    for (let at = begin + 1; at < end; at++) joined += this.text.slice(this.pieces[at]!.from, this.pieces[at]!.to);
    return joined + this.text.slice(this.pieces[end]!.from, last);
  }

  /** As written, with every stretch of white space as one blank, cut at `longest` characters. */
  folded(from: number, to: number, longest: number): string {
    const { code, source } = this;
    if (to - from <= 64 && source[to - 1]! - source[from]! === to - from - 1) {
      // Small letters without blanks are the code itself, which is a string already as a rule.
      const { bytes } = this.text;
      let same = true;
      for (let at = from, place = source[from]!; at < to; at++, place++)
        if (bytes[place] !== code[at]) {
          same = false;
          break;
        }
      if (same) return this.names.name(code, from, to);
      return this.text.slice(source[from]!, source[to - 1]! + 1);
    }
    // A call may hold calls that hold calls: each is shown by its beginning, or the whole would be copied at every level.
    const text = this.original(from, Math.min(to, from + 2 * longest))
      .replace(/\s+/g, ' ')
      .trim();
    return text.length > longest ? text.slice(0, longest) : text;
  }

  /** The inside of the character constant whose first quote is at `index`, doubled quotes single; of a Hollerith constant what follows the `h`. */
  constant(index: number): string {
    const quote = String.fromCharCode(this.text.bytes[this.source[index]!]!);
    const whole = this.original(index, index + 2);
    if (quote >= '0' && quote <= '9') return whole.replace(/^[\d\s]*h/i, '');
    return whole.slice(1, -1).replaceAll(quote + quote, quote);
  }

  /** The index of the next comma outside parentheses, or `to`. */
  comma(from: number, to: number): number {
    const { code, match } = this;
    for (let at = from; at < to; at++) {
      const byte = code[at]!;
      if (byte === 44) return at;
      if ((byte === 40 || byte === 91) && match[at]! > at) at = match[at]!;
    }
    return to;
  }
}

/** Bytes of the source, lower case. */
export function lower(byte: number): number {
  return LOWER[byte]!;
}
