/** Bytes of a manifest come in, its text or what is wrong with the encoding goes out. Manifests are UTF-8, with or without a byte order mark. */

/** Larger files are refused before anything is parsed: what is that large is a table, not a declaration. */
export const LARGEST_MANIFEST_BYTES = 1_000_000;

export type Decoded =
  | { readonly text: string }
  | {
      readonly text: null;
      readonly line: number;
      readonly column: number;
      readonly says: string;
      readonly next: string;
    };

export function decodeManifest(bytes: Uint8Array): Decoded {
  if (bytes.length > LARGEST_MANIFEST_BYTES) {
    return refused(
      1,
      1,
      `The manifest holds ${(bytes.length / 1e6).toFixed(1)} MB; the largest that is read is ${LARGEST_MANIFEST_BYTES / 1e6} MB.`,
      'keep data in a table of its own, name that table under "tables", and leave declarations in the manifest.',
    );
  }
  const wide = wideEncoding(bytes);
  if (wide !== null) {
    return refused(1, 1, `The manifest is written in ${wide}, not in UTF-8.`, 'save it as UTF-8.');
  }
  const body = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? bytes.subarray(3) : bytes;
  const broken = firstBadByte(body);
  if (broken !== null) {
    const { line, column } = positionOf(body, broken);
    const byte = `0x${body[broken]!.toString(16).padStart(2, '0')}`;
    return refused(
      line,
      column,
      `Byte ${byte} is not UTF-8; the file was probably saved in Latin-1 or another older encoding.`,
      'save it as UTF-8, or write that character in plain ASCII.',
    );
  }
  const text = new TextDecoder('utf-8').decode(body);
  // What YAML 1.2 calls printable (production [1], c-printable); everything else could steer a terminal or hide text.
  const control = /[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f-\u0084\u0086-\u009f\ufffe\uffff]/.exec(text);
  if (control !== null) {
    const { line, column } = positionOf(body, new TextEncoder().encode(text.slice(0, control.index)).length);
    const code = control[0].charCodeAt(0).toString(16).padStart(4, '0').toUpperCase();
    return refused(
      line,
      column,
      `The character U+${code} is not allowed in YAML.`,
      'remove it; a manifest is plain text.',
    );
  }
  return { text };
}

function refused(line: number, column: number, says: string, next: string): Decoded {
  return { text: null, line, column, says, next };
}

/** UTF-16 or UTF-32 by its byte order mark, or by the zero bytes that ASCII leaves in them. */
function wideEncoding(bytes: Uint8Array): string | null {
  const [a, b, c, d] = bytes;
  if (a === 0xff && b === 0xfe) return c === 0 && d === 0 ? 'UTF-32' : 'UTF-16';
  if (a === 0xfe && b === 0xff) return 'UTF-16';
  if (a === 0 && b === 0 && c === 0xfe && d === 0xff) return 'UTF-32';
  if (bytes.length < 4) return null;
  const zeros = [a, b, c, d].filter((byte) => byte === 0).length;
  if (zeros === 2 && ((a === 0 && c === 0) || (b === 0 && d === 0))) return 'UTF-16';
  return zeros === 3 ? 'UTF-32' : null;
}

/** Offset of the first byte that does not continue valid UTF-8, or null. */
function firstBadByte(bytes: Uint8Array): number | null {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes);
    return null;
  } catch {
    // The decoder does not say where; halve the file until one byte decides.
    let good = 0;
    let bad = bytes.length;
    while (bad - good > 1) {
      const middle = (good + bad) >> 1;
      if (decodes(bytes.subarray(0, middle))) good = middle;
      else bad = middle;
    }
    return startOfCharacter(bytes, good);
  }
}

/** A lead byte whose followers never come is itself the byte that is wrong. */
function startOfCharacter(bytes: Uint8Array, offset: number): number {
  for (let back = 1; back <= 3; back++) {
    const byte = bytes[offset - back];
    if (byte === undefined || byte < 0x80) return offset;
    if (byte >= 0xc0) return back < (byte >= 0xf0 ? 4 : byte >= 0xe0 ? 3 : 2) ? offset - back : offset;
  }
  return offset;
}

/** True when every byte is sound, an unfinished character at the end excepted. */
function decodes(bytes: Uint8Array): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes, { stream: true });
    return true;
  } catch {
    return false;
  }
}

function positionOf(bytes: Uint8Array, offset: number): { line: number; column: number } {
  let line = 1;
  let column = 1;
  for (let i = 0; i < offset; i++) {
    const byte = bytes[i]!;
    if (byte === 0x0a || (byte === 0x0d && bytes[i + 1] !== 0x0a)) {
      line++;
      column = 1;
    } else if ((byte & 0xc0) !== 0x80) {
      column++;
    }
  }
  return { line, column };
}
