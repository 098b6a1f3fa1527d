/** The few ways in which words stand out on a terminal. Meaning never rests on them: the word itself always stands there. */

export type Style = 'strong' | 'faint' | 'alarm' | 'warm' | 'good';

const CODES: Readonly<Record<Style, string>> = { strong: '1', faint: '2', alarm: '1;31', warm: '33', good: '32' };

export function paint(text: string, style: Style, colour: boolean): string {
  return colour ? `\u001b[${CODES[style]}m${text}\u001b[0m` : text;
}

/** Colour only on a terminal, and never against NO_COLOR (no-color.org: any value that is not empty), TERM=dumb or --plain. */
export function wantsColour(
  env: Readonly<Record<string, string | undefined>>,
  stdoutIsTerminal: boolean,
  plain: boolean,
): boolean {
  return stdoutIsTerminal && !plain && (env.NO_COLOR ?? '') === '' && env.TERM !== 'dumb';
}
