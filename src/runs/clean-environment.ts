/** The variables a build or run sees: PATH and HOME, those declared to be passed on, those declared to be set, and nothing else. */

/** @param caller  the variables of whoever called Mortise */
export function cleanEnvironment(
  caller: Readonly<Record<string, string | undefined>>,
  pass: readonly string[],
  set: Readonly<Record<string, string>>,
): Record<string, string> {
  const clean: Record<string, string> = {};
  for (const name of ['PATH', 'HOME', ...pass]) {
    const value = caller[name];
    if (value !== undefined) clean[name] = value;
  }
  // Sorting and number formats of tools must not depend on who calls; a declared LC_ALL goes before.
  return { LC_ALL: 'C', ...clean, ...set };
}
