/** One thing put in another's place: a module, a value the build selects, or a variable such as the compiler or its flags. */

export interface Exchange {
  readonly of: 'module' | 'select' | 'environment';
  /** The component, the select name, or the variable. */
  readonly name: string;
  /** The module or the value that comes in. */
  readonly to: string;
}

/** A word of the command line that is no exchange. */
export class NoExchange extends Error {
  override readonly name = 'NoExchange';
}

/**
 * Reads `COMPONENT=MODULE`, `select.NAME=VALUE` or `set.VARIABLE=VALUE`.
 *
 * @throws {NoExchange} for anything else
 */
export function readExchange(word: string): Exchange {
  const at = word.indexOf('=');
  const [left, to] = at < 0 ? [word, ''] : [word.slice(0, at), word.slice(at + 1)];
  if (at < 1)
    throw new NoExchange(`"${word}" is no exchange: write COMPONENT=MODULE, select.NAME=VALUE or set.VARIABLE=VALUE`);
  if (left.startsWith('select.')) return named('select', left.slice(7), to, word);
  if (left.startsWith('set.')) return named('environment', left.slice(4), to, word);
  if (to === '') throw new NoExchange(`"${word}" names no module: write ${left}=MODULE`);
  return named('module', left, to, word);
}

function named(of: Exchange['of'], name: string, to: string, word: string): Exchange {
  if (!/^[A-Za-z_][\w-]*$/.test(name)) throw new NoExchange(`"${word}" does not say what is exchanged before the =`);
  return { of, name, to };
}

/** As it is written on the command line. */
export function printExchange(exchange: Exchange): string {
  const prefix = { module: '', select: 'select.', environment: 'set.' }[exchange.of];
  return `${prefix}${exchange.name}=${exchange.to}`;
}
