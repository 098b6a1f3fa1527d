/** What function-like macros make, as far as it decides how a line with their name is read. */
import type { Macro } from './tokens.ts';

/** `function`: its text holds the body of one; `code`: statements; `plain`: an expression or a declaration's part. */
export type MacroKind = 'function' | 'code' | 'plain';

export function functionMacros(macros: readonly Macro[]): Readonly<Record<string, MacroKind>> {
  const kinds: Record<string, MacroKind> = {};
  for (const { name, params, body } of macros) {
    if (params === null) continue;
    const kind = /\)\s*(?:const\s*)?(?:noexcept\s*)?\{/.test(body) ? 'function' : /[{;]/.test(body) ? 'code' : 'plain';
    // Defined twice, in branches of an #if: what makes the most decides.
    if (!Object.hasOwn(kinds, name) || kinds[name] === 'plain' || kind === 'function') kinds[name] = kind;
  }
  return kinds;
}
