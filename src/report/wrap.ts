/** Words onto lines of a given width. */
import textWidth from './text-width.ts';

/** Folds text at spaces; a word longer than a line stands on a line of its own. `indent` goes before every line but the first. */
export function wrap(text: string, width: number, indent = ''): string {
  const lines: string[] = [];
  for (const paragraph of text.split('\n')) {
    const [, start = '', words = ''] = /^( *)(.*)$/s.exec(paragraph) ?? [];
    let line = start;
    for (const word of words.split(/ +/)) {
      const joined = line === start ? start + word : `${line} ${word}`;
      const room = width - (lines.length === 0 ? 0 : indent.length);
      if (line !== start && textWidth(joined) > room) {
        lines.push(line);
        line = word;
      } else {
        line = joined;
      }
    }
    lines.push(line);
  }
  return lines.join(`\n${indent}`);
}
