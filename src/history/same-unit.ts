/** Whether two spellings mean the same unit. */

/** Equal but for white space and `**` for `^`. */
export function sameUnit(a: string, b: string): boolean {
  return plain(a) === plain(b);
}

function plain(text: string): string {
  return text.replace(/\s+/g, ' ').replaceAll('**', '^').trim();
}
