/** How many terminal columns a text takes: two for wide characters, none for combining marks. Escape sequences are not expected here. */

const WIDE =
  /[\u1100-\u115f\u2e80-\u303e\u3041-\ua4cf\uac00-\ud7a3\uf900-\ufaff\ufe30-\ufe6f\uff00-\uff60\uffe0-\uffe6\u{1f300}-\u{1faff}\u{20000}-\u{3fffd}]/u;
const ZERO = /\p{Mark}|\u200b|\u200c|\u200d|\ufeff/u;

export default function textWidth(text: string): number {
  // The common case first: plain ASCII is as wide as it is long.
  if (/^[\x20-\x7e]*$/.test(text)) return text.length;
  let width = 0;
  for (const character of text) width += ZERO.test(character) ? 0 : WIDE.test(character) ? 2 : 1;
  return width;
}

/** Cut to a width, with an ellipsis when something was cut; never splits a wide character. */
export function cutToWidth(text: string, width: number, ellipsis = '…'): string {
  if (textWidth(text) <= width) return text;
  let kept = '';
  let used = 0;
  for (const character of text) {
    const next = textWidth(character);
    if (used + next > width - textWidth(ellipsis)) break;
    kept += character;
    used += next;
  }
  return width < textWidth(ellipsis) ? '' : kept + ellipsis;
}

/** Padded with spaces on the right, or cut, to exactly this width. */
export function fitToWidth(text: string, width: number): string {
  const cut = cutToWidth(text, width);
  return cut + ' '.repeat(Math.max(0, width - textWidth(cut)));
}
