/** Interfaces written by hand, as a Fortran reader would give them. */
import {
  type Argument,
  type Claim,
  type CommonBlock,
  type Declared,
  emptyInterface,
  type FileInterface,
  type LiteralUse,
  type NamedConstant,
  type Procedure,
} from '../../src/model/interface.ts';

export function real(name: string, more: Partial<Argument> = {}): Argument {
  return {
    name,
    type: 'real',
    bytes: 8,
    rank: 0,
    bounds: [],
    shape: [],
    attributes: [],
    intent: null,
    optional: false,
    line: 1,
    column: 1,
    ...more,
  };
}

export function subroutine(name: string, args: readonly Argument[], more: Partial<Procedure> = {}): Procedure {
  return {
    name,
    kind: 'subroutine',
    parent: null,
    line: 1,
    column: 1,
    endLine: 9,
    args,
    result: null,
    attributes: [],
    ...more,
  };
}

export function common(name: string, members: readonly Declared[], parent: string | null = 'eos'): CommonBlock {
  return { name, parent, members, line: 2, column: 1 };
}

export function constant(
  name: string,
  text: string,
  value: number,
  bytes: number,
  parent: string | null = 'constants',
): NamedConstant {
  return { name, parent, type: 'real', bytes, text, value, line: 3, column: 1 };
}

export function literal(text: string, value: number, bytes: number, procedure = 'eos'): LiteralUse {
  return { text, value, bytes, role: 'mixed', procedure, line: 4, column: 1 };
}

export function claim(name: string, what: Claim['what'], value: string, parent = 'eos'): Claim {
  return { name, parent, what, value, text: `! ${name} [${value}]`, from: 'comment', line: 5, column: 1 };
}

export function fortran(parts: Partial<FileInterface>): FileInterface {
  return { ...emptyInterface('fortran'), form: 'free', ...parts };
}
