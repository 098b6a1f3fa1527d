/** The text of one manifest file: offsets come in, lines, columns and excerpts go out. */
import type { Excerpt } from '../model/finding.ts';
import type { Place } from '../model/place.ts';

/** Offsets into the text in UTF-16 code units, the end not included. */
export interface Span {
  readonly start: number;
  readonly end: number;
}

/** Excerpts are cut at this length, so that a file of one endless line does not fill a report. */
const LONGEST_LINE = 400;

export class ManifestText {
  readonly file: string;
  readonly text: string;
  readonly revision: string | undefined;
  private readonly starts: number[];

  constructor(file: string, text: string, revision?: string) {
    this.file = file;
    this.text = text;
    this.revision = revision;
    this.starts = [0];
    // YAML 1.2 ends a line at LF, CR LF, or a lone CR.
    for (const match of text.matchAll(/\r\n?|\n/g)) this.starts.push(match.index + match[0].length);
  }

  /** Line and column both from 1; a character outside the basic plane counts as one. */
  placeAt(offset: number): Place {
    const line = this.lineOf(offset);
    const before = this.text.slice(this.starts[line - 1], Math.min(offset, this.text.length));
    const place = { file: this.file, line, column: [...before].length + 1 };
    return this.revision === undefined ? place : { ...place, revision: this.revision };
  }

  /** The text of a line, from 1, without its line end; empty for a line that does not exist. */
  lineText(line: number): string {
    const start = this.starts[line - 1];
    if (start === undefined) return '';
    return this.text.slice(start, this.starts[line] ?? this.text.length).replace(/[\r\n]+$/, '');
  }

  /** The line on which a span begins, with as much of the span as stands on it. */
  excerpt(span: Span): Excerpt {
    const line = this.lineOf(span.start);
    const text = this.lineText(line);
    const at = Math.min(span.start - this.starts[line - 1]!, text.length);
    const width = Math.max(1, Math.min(span.end - span.start, text.length - at));
    const skip = at > LONGEST_LINE / 2 ? at - LONGEST_LINE / 2 : 0;
    return {
      line,
      text: text.slice(skip, skip + LONGEST_LINE),
      column: at - skip + 1,
      width: Math.min(width, LONGEST_LINE - (at - skip)),
    };
  }

  /** Binary search for the last line that starts at or before the offset. */
  private lineOf(offset: number): number {
    let low = 0;
    let high = this.starts.length - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.starts[middle]! <= offset) low = middle;
      else high = middle - 1;
    }
    return low + 1;
  }
}
