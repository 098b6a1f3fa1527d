/** Lines of either source form to whole statements: comments taken off, continuations joined, `;` split, preprocessor branches named. Pure. */

export interface Statement {
  /** The code, continuation lines joined, without comments; character constants as written. */
  readonly text: string;
  /** The same length in lower case with the inside of character constants blanked: what patterns are matched against. */
  readonly code: string;
  readonly label: string | null;
  /** Where each stretch of the text stands. */
  readonly pieces: readonly Piece[];
  readonly line: number;
  readonly endLine: number;
  /** Comments on its own lines. */
  readonly comments: readonly Comment[];
  /** The preprocessor condition it stands under; null when none. */
  readonly condition: string | null;
}

interface Piece {
  readonly offset: number;
  readonly line: number;
  readonly column: number;
}

export interface Comment {
  readonly line: number;
  readonly column: number;
  readonly text: string;
}

/** What the file is made of, in order. */
export type Part =
  | { readonly is: 'statement'; readonly statement: Statement }
  | { readonly is: 'comment'; readonly comment: Comment }
  | { readonly is: 'directive'; readonly line: number; readonly text: string; readonly condition: string | null };

/** Line and column of a character of a statement's text. */
export function positionIn(statement: Statement, offset: number): { line: number; column: number } {
  let found = statement.pieces[0]!;
  for (const piece of statement.pieces) {
    if (piece.offset > offset) break;
    found = piece;
  }
  return { line: found.line, column: found.column + offset - found.offset };
}

const LONGEST_STATEMENT = 200_000;

export function partsOf(
  text: string,
  form: 'fixed' | 'free',
  define: Readonly<Record<string, string>> | undefined,
): Part[] {
  const reader = new PartReader(form, define);
  let line = 0;
  for (let at = 0; at <= text.length; ) {
    let end = text.indexOf('\n', at);
    if (end < 0) end = text.length;
    const to = end > at && text.charCodeAt(end - 1) === 13 ? end - 1 : end;
    reader.line(text.slice(at, to), ++line);
    at = end + 1;
  }
  return reader.finish();
}

class PartReader {
  private readonly parts: Part[] = [];
  private readonly form: 'fixed' | 'free';
  private readonly define: Readonly<Record<string, string>> | undefined;
  private readonly conditions: { text: string; off: boolean }[] = [];
  private open: {
    text: string;
    pieces: Piece[];
    label: string | null;
    line: number;
    endLine: number;
    comments: Comment[];
    condition: string | null;
  } | null = null;
  /** A character constant runs on over the line end. */
  private quote: string | null = null;
  private continues = false;
  /** Comments met while a statement may still be continued. */
  private waiting: Part[] = [];

  constructor(form: 'fixed' | 'free', define: Readonly<Record<string, string>> | undefined) {
    this.form = form;
    this.define = define;
  }

  line(text: string, number: number): void {
    if (text.startsWith('#')) this.directive(text, number);
    else if (this.conditions.some((one) => one.off)) return;
    else if (this.form === 'free') this.free(text, number);
    else this.fixed(text, number);
  }

  finish(): Part[] {
    this.close();
    return this.parts;
  }

  private directive(text: string, number: number): void {
    const match = /^#\s*(\w+)\s*(.*)$/.exec(text);
    const word = match?.[1] ?? '';
    const rest = (match?.[2] ?? '').trim();
    if (word === 'if') this.conditions.push(this.condition(rest));
    else if (word === 'ifdef') this.conditions.push(this.condition(`defined(${rest})`));
    else if (word === 'ifndef') this.conditions.push(this.condition(`!defined(${rest})`));
    else if (word === 'elif' || word === 'else') {
      const last = this.conditions.pop();
      if (last !== undefined) {
        const not = `!(${last.text})`;
        const next = this.condition(word === 'else' ? not : `${not} && ${rest}`);
        this.conditions.push(next);
      }
    } else if (word === 'endif') this.conditions.pop();
    else this.emit({ is: 'directive', line: number, text, condition: this.conditionText() });
  }

  private condition(text: string): { text: string; off: boolean } {
    const simple = /^(!*)\s*\(?\s*(!?)\s*defined\s*\(?\s*(\w+)\s*\)?\s*\)?$/.exec(text);
    if (this.define === undefined || simple === null) return { text, off: false };
    const negated = ((simple[1] ?? '').length + (simple[2] ?? '').length) % 2 === 1;
    const defined = Object.hasOwn(this.define, simple[3]!);
    return { text, off: negated ? defined : !defined };
  }

  private conditionText(): string | null {
    return this.conditions.length === 0 ? null : this.conditions.map((one) => one.text).join(' && ');
  }

  private free(text: string, number: number): void {
    let from = 0;
    while (from < text.length && (text[from] === ' ' || text[from] === '\t')) from++;
    const joining = this.continues && this.open !== null;
    if (from === text.length) return;
    if (text[from] === '!' && this.quote === null) {
      const comment: Part = { is: 'comment', comment: { line: number, column: from + 1, text: text.slice(from) } };
      if (joining) this.open!.comments.push(comment.comment);
      else {
        this.close();
        this.parts.push(comment);
      }
      return;
    }
    if (joining) {
      if (text[from] === '&') from++;
    } else {
      this.close();
    }
    this.take(text, from, text.length, number, joining);
  }

  private fixed(text: string, number: number): void {
    const first = text[0];
    if (first === undefined) return;
    if (
      first === 'c' ||
      first === 'C' ||
      first === '*' ||
      first === '!' ||
      ((first === 'd' || first === 'D') && !/^[dD][a-zA-Z0-9_]*[a-zA-Z]/.test(text))
    ) {
      this.emit({ is: 'comment', comment: { line: number, column: 1, text } });
      return;
    }
    let code = text;
    const tab = code.indexOf('\t');
    let mark: string;
    let start: number;
    if (tab >= 0 && tab < 6 && /^\s*\d*$/.test(code.slice(0, tab))) {
      // Tab form: a digit from 1 behind the tab continues.
      mark = /[1-9]/.test(code[tab + 1] ?? '') ? code[tab + 1]! : ' ';
      start = mark === ' ' ? tab + 1 : tab + 2;
    } else {
      code = code.length > 72 ? code.slice(0, 72) : code;
      mark = code.length > 5 ? code[5]! : ' ';
      start = 6;
    }
    const label = /^[ \d]*/.exec(code.slice(0, Math.min(5, start)))?.[0].replace(/ /g, '') ?? '';
    const blank = /^\s*$/.test(code);
    if (blank) return;
    const lead = code.search(/\S/);
    if (code[lead] === '!' && lead !== 5) {
      this.emit({ is: 'comment', comment: { line: number, column: lead + 1, text: code.slice(lead) } });
      return;
    }
    const continuing = mark !== ' ' && mark !== '0' && label === '' && this.open !== null;
    if (!continuing) {
      this.close();
      if (/[A-Za-z]/.test(code.slice(0, Math.min(5, start)))) start = lead;
    }
    this.continues = continuing;
    this.take(code, start, code.length, number, continuing);
    if (!continuing && this.open !== null && label !== '') this.open.label = label;
  }

  private take(text: string, from: number, to: number, number: number, joining: boolean): void {
    // Scan for the comment, the continuation mark and the statement ends, minding character constants.
    let quote = joining ? this.quote : null;
    let begin = from;
    let end = to;
    let at = from;
    let continued = false;
    for (; at < to; at++) {
      const one = text[at]!;
      if (quote !== null) {
        if (one === quote) quote = null;
        else if (one === '&' && this.form === 'free' && /^&\s*$/.test(text.slice(at, to))) {
          continued = true;
          end = at;
          break;
        }
        continue;
      }
      if (one === "'" || one === '"') quote = one;
      else if (one === '!') {
        end = at;
        break;
      } else if (one === '&' && this.form === 'free' && /^&\s*(!.*)?$/.test(text.slice(at, to))) {
        continued = true;
        end = at;
        break;
      } else if (one === ';') {
        this.append(text, begin, at, number);
        this.close();
        begin = at + 1;
      }
    }
    this.append(text, begin, end, number);
    const bang = quote === null ? text.indexOf('!', end) : -1;
    if (bang >= 0 && this.open !== null)
      this.open.comments.push({ line: number, column: bang + 1, text: text.slice(bang) });
    this.quote = this.form === 'free' && !continued ? null : quote;
    if (this.form === 'free') this.continues = continued;
    else this.quote = quote;
  }

  private append(text: string, from: number, to: number, number: number): void {
    if (this.open === null) {
      let begin = from;
      while (begin < to && (text[begin] === ' ' || text[begin] === '\t')) begin++;
      if (begin >= to) return;
      const label = this.form === 'free' ? /^\d+(?=\s)/.exec(text.slice(begin, to)) : null;
      if (label !== null) {
        begin += label[0].length;
        while (begin < to && text[begin] === ' ') begin++;
      }
      this.open = {
        text: text.slice(begin, to),
        pieces: [{ offset: 0, line: number, column: begin + 1 }],
        label: label?.[0] ?? null,
        line: number,
        endLine: number,
        comments: [],
        condition: this.conditionText(),
      };
      return;
    }
    if (this.open.text.length > LONGEST_STATEMENT) return;
    this.open.pieces.push({ offset: this.open.text.length, line: number, column: from + 1 });
    this.open.text += text.slice(from, to);
    this.open.endLine = number;
  }

  private emit(part: Part): void {
    if (this.open === null) this.parts.push(part);
    else this.waiting.push(part);
  }

  private close(): void {
    if (this.open !== null) {
      const { text } = this.open;
      if (text.trim() !== '') this.parts.push({ is: 'statement', statement: { ...this.open, code: blanked(text) } });
      this.open = null;
    }
    this.quote = null;
    this.continues = false;
    if (this.waiting.length > 0) {
      this.parts.push(...this.waiting);
      this.waiting = [];
    }
  }
}

/** Lower case; the inside of character constants becomes blanks, so that no pattern sees it. */
export function blanked(text: string): string {
  const low = text.toLowerCase();
  if (!low.includes("'") && !low.includes('"')) return low;
  return low.replace(/'[^']*'|"[^"]*"/g, (one) => one[0] + ' '.repeat(one.length - 2) + one[0]);
}
