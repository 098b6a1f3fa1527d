/** One page of explanation as terminal text. */
import type { Explanation } from './explanations/explanation.ts';
import type { TextOptions } from './finding-text.ts';
import { paint } from './style.ts';
import { wrap } from './wrap.ts';

const PARTS: readonly (readonly [keyof Explanation, string])[] = [
  ['means', 'What it means'],
  ['arises', 'How it arises'],
  ['mend', 'How to mend it'],
  ['accept', 'When to accept it'],
  ['example', 'An example'],
];

export function explanationText(kind: string, page: Explanation, options: TextOptions): string {
  const parts = PARTS.map(
    ([key, title]) => `${paint(title, 'strong', options.colour)}\n  ${wrap(page[key], options.width - 2, '  ')}\n`,
  );
  return `${paint(kind, 'strong', options.colour)}\n\n${parts.join('\n')}`;
}
