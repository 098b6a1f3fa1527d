/** What all calls of one procedure pass for each of its arguments: names, types, and whether it serves as plain storage. Pure. */
import type { ActualArgument, Argument, CallSite } from '../../model/interface.ts';
import { classOf, formalOf } from './misfit.ts';

interface Passed {
  /** Name to the callers that pass it. */
  readonly names: Map<string, Set<string>>;
  readonly types: Set<string>;
}

export class Usage {
  private readonly byName = new Map<string, Passed>();

  add(file: string, call: CallSite, formals: readonly Argument[]): void {
    const caller = `${file} ${call.caller ?? ''}`;
    for (let index = 0; index < call.args.length; index++) {
      const actual = call.args[index]!;
      const formal = formalOf(actual, index, formals);
      if (formal === undefined) continue;
      let passed = this.byName.get(formal.name);
      if (passed === undefined) {
        passed = { names: new Map(), types: new Set() };
        this.byName.set(formal.name, passed);
      }
      const type = classOf(actual.type);
      if (type !== null && actual.form !== 'literal') passed.types.add(type);
      if (actual.name === undefined) continue;
      const name = actual.name.toLowerCase();
      const callers = passed.names.get(name);
      if (callers === undefined) passed.names.set(name, new Set([caller]));
      else callers.add(caller);
    }
  }

  /** True for an array that is given values of several types: bytes to be copied, sent or written, whatever they are. */
  isStorage(formal: Argument): boolean {
    const types = this.byName.get(formal.name)?.types;
    return formal.rank !== 0 && types !== undefined && types.size > 1;
  }

  /** How many callers pass a variable of this name for an argument. */
  callersPassing(name: string, formal: Argument): number {
    return this.byName.get(formal.name)?.names.get(name.toLowerCase())?.size ?? 0;
  }

  /** The part of the callers that pass a variable for an argument who pass one of this name: small where anything is passed. */
  shareOf(name: string, formal: Argument): number {
    const passed = this.byName.get(formal.name);
    if (passed === undefined) return 0;
    let all = 0;
    for (const callers of passed.names.values()) all += callers.size;
    return this.callersPassing(name, formal) / Math.max(1, all);
  }
}

export function plainName(actual: ActualArgument): string | null {
  if (actual.keyword !== undefined) return null;
  return actual.form === 'name' || actual.form === 'element' || actual.form === 'section'
    ? (actual.name ?? null)
    : null;
}
