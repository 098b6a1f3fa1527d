/** The characters that screens draw with: one set for UTF-8 terminals, one of ASCII only. A word always stands beside a sign that carries meaning. */

export interface Glyphs {
  readonly rule: string;
  readonly seam: Readonly<Record<'fits' | 'adapter' | 'unfit', string>>;
  readonly chosen: string;
  readonly barOffer: string;
  readonly barExpect: string;
  readonly barFootprint: string;
  readonly unbounded: readonly [string, string];
  readonly full: string;
  readonly empty: string;
  readonly point: string;
  /** A step on a time line that stays inside its module. */
  readonly slight: string;
  /** A step on a time line whose change was not declared. */
  readonly undeclared: string;
  /** Below the chosen step of a time line. */
  readonly here: string;
  readonly steps: readonly string[];
  readonly worst: string;
  readonly braille: boolean;
  readonly times: string;
  readonly ellipsis: string;
  readonly keys: Readonly<Record<'up' | 'down' | 'left' | 'right' | 'enter', string>>;
}

export const UNICODE: Glyphs = {
  rule: '─',
  seam: { fits: '▌▐', adapter: '▌≈▐', unfit: '▌ ╱ ▐' },
  chosen: '▶',
  barOffer: '▀',
  barExpect: '▄',
  barFootprint: '━',
  unbounded: ['‹', '›'],
  full: '▰',
  empty: '▱',
  point: '●',
  slight: '┼',
  undeclared: '╳',
  here: '┴',
  steps: ['▁', '▂', '▃', '▄', '▅', '▆', '▇', '█'],
  worst: '▼',
  braille: true,
  times: '×',
  ellipsis: '…',
  keys: { up: '↑', down: '↓', left: '←', right: '→', enter: 'Enter' },
};

export const ASCII: Glyphs = {
  rule: '-',
  seam: { fits: '][', adapter: ']~[', unfit: '] / [' },
  chosen: '>',
  barOffer: '=',
  barExpect: '-',
  barFootprint: '#',
  unbounded: ['<', '>'],
  full: '#',
  empty: '.',
  point: 'o',
  slight: '+',
  undeclared: 'X',
  here: '^',
  steps: ['.', '.', ':', ':', '|', '|', '#', '#'],
  worst: 'v',
  braille: false,
  times: 'x',
  ellipsis: '~',
  keys: { up: 'Up', down: 'Down', left: 'Left', right: 'Right', enter: 'Enter' },
};

/** ASCII when asked for, or when the locale's character set is not UTF-8. */
export function glyphsFor(env: Readonly<Record<string, string | undefined>>, ascii: boolean): Glyphs {
  const locale = [env.LC_ALL, env.LC_CTYPE, env.LANG].find((value) => (value ?? '') !== '') ?? '';
  return ascii || !/utf-?8/i.test(locale) ? ASCII : UNICODE;
}
