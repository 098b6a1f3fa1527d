/** The bytes of a file as text: slices and columns, counted in characters. */
import { isAscii, isUtf8 } from 'node:buffer';

/**
 * UTF-8 where the file is valid UTF-8, Latin-1 where it is not, so that no byte is lost and columns are those of the editor.
 */
export class SourceText {
  readonly bytes: Buffer;
  /** Characters of more than one byte may occur. */
  readonly wide: boolean;

  /** @param judged  the part whose encoding counts, so that a unit is read alike alone and in its file */
  constructor(bytes: Uint8Array, judged: Uint8Array = bytes) {
    this.bytes = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
    this.wide = !isAscii(judged) && isUtf8(judged);
  }

  slice(from: number, to: number): string {
    return this.wide ? this.bytes.utf8Slice(from, to) : this.bytes.latin1Slice(from, to);
  }

  /** Column of a byte on the line that begins at `lineStart`, from 1. */
  column(lineStart: number, offset: number): number {
    if (!this.wide) return offset - lineStart + 1;
    let column = 1;
    for (let at = lineStart; at < offset; at++) if ((this.bytes[at]! & 0xc0) !== 0x80) column++;
    return column;
  }
}

declare global {
  interface Buffer {
    latin1Slice(from: number, to: number): string;
    latin1Write(text: string): number;
    utf8Slice(from: number, to: number): string;
  }
}
