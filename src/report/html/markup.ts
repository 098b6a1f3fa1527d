/** HTML made from values: text is always escaped, so nothing from a repository becomes markup. */
import { printableLines } from '../../model/printable.ts';

/** Markup that is already safe. Only `html` makes it. */
export class Markup {
  readonly text: string;
  constructor(text: string) {
    this.text = text;
  }
}

type Part = string | number | Markup | readonly Part[] | null | undefined | false;

/** A template whose values are escaped unless they are markup themselves. */
export function html(fixed: TemplateStringsArray, ...parts: readonly Part[]): Markup {
  let text = fixed[0]!;
  parts.forEach((part, index) => {
    text += partText(part) + fixed[index + 1]!;
  });
  return new Markup(text);
}

function partText(part: Part): string {
  if (part === null || part === undefined || part === false) return '';
  if (part instanceof Markup) return part.text;
  if (typeof part === 'number') return String(part);
  if (typeof part === 'string') return escapeHtml(part);
  return part.map(partText).join('');
}

export function escapeHtml(text: string): string {
  return printableLines(text).replace(/[&<>"'`]/g, (one) => `&#${one.charCodeAt(0)};`);
}
