/** Interfaces for tests, as a reader would give them. */
import {
  type Argument,
  type CallSite,
  emptyInterface,
  type FileInterface,
  type Language,
  type Procedure,
} from '../../src/model/interface.ts';

export function argument(name: string, more: Partial<Argument> = {}): Argument {
  return {
    name,
    type: 'real',
    bytes: 8,
    kind: 'dp',
    rank: 0,
    bounds: [],
    shape: [],
    attributes: [],
    intent: null,
    optional: false,
    line: 2,
    column: 1,
    ...more,
  };
}

export function procedure(
  name: string,
  args: readonly (string | Argument)[],
  more: Partial<Procedure> = {},
): Procedure {
  return {
    name,
    kind: 'subroutine',
    parent: null,
    line: 1,
    column: 1,
    endLine: 9,
    args: args.map((one) => (typeof one === 'string' ? argument(one) : one)),
    result: null,
    attributes: [],
    ...more,
  };
}

/** `call('eos', 'rho', 'temp')`: names passed by position. */
export function call(callee: string, ...names: string[]): CallSite {
  return {
    callee,
    how: 'subroutine',
    caller: 'step',
    line: 7,
    column: 3,
    args: names.map((text) => ({ text, form: 'name', name: text, line: 7, column: 3 })),
  };
}

export function file(language: Language, parts: Partial<FileInterface>): FileInterface {
  return { ...emptyInterface(language), ...parts };
}
