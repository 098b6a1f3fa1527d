/** Text from outside (names, comments, commit messages, tool output) made harmless for terminals, logs and reports. */

// C0 and C1 controls, the line and paragraph separators, and the marks that reorder text for display.
const HARMFUL = /[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u2028\u2029\u200e\u200f\u202a-\u202e\u2066-\u2069]/g;
// What JSON.stringify leaves as it is of those.
const HARMFUL_IN_JSON = /[\u007f-\u009f\u2028\u2029\u200e\u200f\u202a-\u202e\u2066-\u2069]/g;

/** The text on one line, tabs and line ends as spaces, every control character as `\xHH` or `\u{H}`. */
export function printable(text: string): string {
  return printableLines(text).replace(/\s*\n\s*/g, ' ');
}

/** The same, with line ends kept. */
export function printableLines(text: string): string {
  return text.replace(/\r\n?/g, '\n').replace(/\t/g, '  ').replace(HARMFUL, spell);
}

function spell(character: string): string {
  const code = character.charCodeAt(0);
  return code < 256 ? `\\x${code.toString(16).padStart(2, '0')}` : `\\u{${code.toString(16)}}`;
}

/** JSON text with the characters that act on a terminal as `\\uHHHH`: the document is the same, and harmless to look at. */
export function printableJson(text: string): string {
  return text.replace(HARMFUL_IN_JSON, (character) => `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`);
}
