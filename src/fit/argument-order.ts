/** The order of arguments on both sides of a joint, from what the manifests say and from the names that a call passes. */
import type { CallSite, Language, Procedure } from '../model/interface.ts';

/** Names under which something is known: the dummy argument and the quantity, spelled in the ways that codes spell it. */
export function aliases(quantity: string, argument: string): string[] {
  const words = quantity.split('-');
  const camel = words
    .map((word, index) => (index === 0 ? word : word.charAt(0).toUpperCase() + word.slice(1)))
    .join('');
  return [argument, quantity.replaceAll('-', '_'), camel, words.join('')];
}

/**
 * The quantities in the order in which a call passes them, read from the names of what it passes.
 *
 * @param byName  name, folded as the language compares it, to the quantity
 * @returns null when a name says nothing, or says one thing twice
 */
export function observedOrder(
  call: CallSite,
  byName: ReadonlyMap<string, string>,
  language: Language,
): readonly string[] | null {
  const order: string[] = [];
  for (const argument of call.args) {
    // A keyword call has no order to get wrong.
    if (argument.keyword !== undefined) return null;
    const quantity = argument.name === undefined ? undefined : byName.get(fold(argument.name, language));
    if (quantity !== undefined) order.push(quantity);
  }
  return new Set(order).size === order.length && order.length > 1 ? order : null;
}

/**
 * Positions, from 1, at which a call passes arguments of the procedure exchanged among themselves: what stands at each
 * bears the name of another of them. Only whole exchanges count; one name alone may be a coincidence.
 */
export function exchanged(call: CallSite, procedure: Procedure, language: Language): number[] {
  const dummies = procedure.args.map((one) => fold(one.name, language));
  const goesTo = new Map<number, number>();
  for (const [at, argument] of call.args.entries()) {
    if (argument.keyword !== undefined || argument.name === undefined) continue;
    const named = dummies.indexOf(fold(argument.name, language));
    if (named >= 0 && named !== at && at < dummies.length) goesTo.set(at, named);
  }
  const circles = [...goesTo.keys()].filter((start) => {
    let at: number | undefined = start;
    for (let steps = 0; steps <= goesTo.size; steps++) {
      at = goesTo.get(at!);
      if (at === undefined) return false;
      if (at === start) return true;
    }
    return false;
  });
  return circles.map((at) => at + 1).sort((a, b) => a - b);
}

export function fold(name: string, language: Language): string {
  return language === 'fortran' ? name.toLowerCase() : name;
}

/** `density, temperature, pressure` in two orders: true when those that both name stand in the same order. */
export function sameOrder(a: readonly string[], b: readonly string[]): boolean {
  const shared = a.filter((one) => b.includes(one));
  const other = b.filter((one) => a.includes(one));
  return shared.every((one, index) => one === other[index]);
}
