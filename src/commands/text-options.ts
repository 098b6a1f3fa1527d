/** How a command prints: the width and colour that suit where its output goes. */
import type { TextOptions } from '../report/finding-text.ts';
import { wantsColour } from '../report/style.ts';
import type { Invocation, Surroundings } from './command.ts';

export function textOptions(invocation: Invocation, surroundings: Surroundings): TextOptions {
  return {
    width: Math.max(40, Math.min(surroundings.columns, 120)),
    colour: wantsColour(surroundings.env, surroundings.stdoutIsTerminal, invocation.options.plain === true),
  };
}
