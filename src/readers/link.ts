/**
 * Interfaces of many files to one code: kinds resolved through USE, macros that are types, defaults that the build promotes,
 * and who provides each name. Pure; files that are not given are simply not known.
 */
import type { CallSite, Declared, FileInterface, NamedConstant, Procedure, Use } from '../model/interface.ts';
import { type Provider, push, Resolver } from './resolver.ts';

export interface LinkOptions {
  /** Bytes that the build gives a declared default, as `{real: 8}`. */
  readonly promote?: Readonly<Record<string, number>>;
}

export interface LinkedCode {
  /** Path to interface, with bytes filled in as far as they could be, and without calls that are elements of a module's arrays. */
  readonly files: ReadonlyMap<string, FileInterface>;
  /** Definitions by name as callers spell it; Fortran calls a C function `name_` by `name`. */
  readonly providers: ReadonlyMap<string, readonly Provider[]>;
  /** Interface bodies and prototypes by name. */
  readonly prototypes: ReadonlyMap<string, readonly Provider[]>;
  /**
   * Definitions that a call can mean: of the same host, of modules used (those behind a generic name too), else of files,
   * the nearest. More than one: one of these.
   */
  resolve(file: string, call: CallSite): readonly Provider[];
  /** False where two files belong to different main programs of the checkout. */
  together(one: string, other: string): boolean;
  /** The folder of the main program that a file belongs to; null where it may belong to any. */
  homeOf(file: string): string | null;
}

export function linkInterfaces(files: ReadonlyMap<string, FileInterface>, options: LinkOptions = {}): LinkedCode {
  const kinds = new Kinds(files);
  const linked = new Map<string, FileInterface>();
  for (const [path, read] of files)
    linked.set(path, read.language === 'fortran' ? withBytes(read, kinds, options) : read);
  const providers = new Map<string, Provider[]>();
  const prototypes = new Map<string, Provider[]>();
  for (const [file, read] of linked) {
    for (const procedure of read.procedures) {
      if (
        procedure.kind === 'program' ||
        procedure.kind === 'block-data' ||
        procedure.kind === 'separate-module-procedure'
      )
        continue;
      const into = procedure.prototype === true ? prototypes : providers;
      for (const name of namesOf(procedure, read)) push(into, name, { file, procedure });
    }
  }
  const resolver = new Resolver(linked, providers);
  for (const [file, read] of linked) {
    if (read.language !== 'fortran') continue;
    const calls = read.calls.filter((call) => !resolver.isElement(file, call));
    if (calls.length < read.calls.length) linked.set(file, { ...read, calls });
  }
  return {
    files: linked,
    providers,
    prototypes,
    resolve: (file, call) => resolver.resolve(file, call),
    together: (one, other) => resolver.programs.together(one, other),
    homeOf: (file) => resolver.programs.homeOf(file),
  };
}

function namesOf(procedure: Procedure, read: FileInterface): string[] {
  const names = new Set([procedure.name]);
  if (procedure.linkName !== undefined) names.add(procedure.linkName);
  if (read.language === 'c' && procedure.name.endsWith('_')) names.add(procedure.name.replace(/_+$/, '').toLowerCase());
  return [...names];
}

class Kinds {
  private readonly modules = new Map<string, { constants: NamedConstant[]; uses: Use[] }>();
  private readonly macros = new Map<string, string | null>();
  private readonly known = new Map<string, number | null>();

  constructor(files: ReadonlyMap<string, FileInterface>) {
    for (const read of files.values()) {
      for (const constant of read.constants) {
        if (constant.type === 'macro' || read.language === 'c') {
          const before = this.macros.get(constant.name);
          this.macros.set(constant.name, before === undefined || before === constant.text ? constant.text : null);
        } else if (constant.parent !== null) this.module(constant.parent).constants.push(constant);
      }
      for (const use of read.uses) if (use.parent !== null) this.module(use.parent).uses.push(use);
    }
  }

  private module(name: string) {
    const known = this.modules.get(name);
    if (known !== undefined) return known;
    const made = { constants: [] as NamedConstant[], uses: [] as Use[] };
    this.modules.set(name, made);
    return made;
  }

  /** Bytes that a kind name stands for inside a unit, looked for outward and through USE. */
  bytesOf(unit: string | null, uses: readonly Use[], name: string): number | null {
    const key = `${unit ?? ''} ${name}`;
    const before = this.known.get(key);
    if (before !== undefined) return before;
    this.known.set(key, null);
    let found: number | null = null;
    for (
      let at = unit;
      at !== null && found === null;
      at = at.includes('::') ? at.slice(0, at.lastIndexOf('::')) : null
    ) {
      found = this.inUnit(at, name, 0);
      for (const use of uses) if (found === null && use.parent === at) found = this.through(use, name, 0);
    }
    for (const use of uses) if (found === null && use.parent === null) found = this.through(use, name, 0);
    this.known.set(key, found);
    return found;
  }

  macro(name: string): string | null {
    return this.macros.get(name) ?? this.macros.get(name.toUpperCase()) ?? null;
  }

  private inUnit(unit: string, name: string, depth: number): number | null {
    if (depth > 16) return null;
    const module = this.modules.get(unit);
    const constant = module?.constants.find((one) => one.name === name);
    if (typeof constant?.value === 'number') return constant.value;
    if (constant !== undefined && /^[a-z_]\w*$/i.test(constant.text.trim())) {
      const other = constant.text.trim().toLowerCase();
      return STANDARD_KINDS[other] ?? (other === name ? null : this.inUnit(unit, other, depth + 1));
    }
    for (const use of module?.uses ?? []) {
      const found = this.through(use, name, depth + 1);
      if (found !== null) return found;
    }
    return null;
  }

  private through(use: Use, name: string, depth: number): number | null {
    const renamed = [...(use.only ?? []), ...(use.renames ?? [])].find((one) => one.local === name);
    if (use.only !== undefined && renamed === undefined) return null;
    const there = renamed?.name ?? name;
    return STANDARD_KINDS[there] ?? this.inUnit(use.module, there, depth);
  }
}

/** ISO_FORTRAN_ENV and ISO_C_BINDING, Fortran 2018, 16.10.2 and 18.2. */
const STANDARD_KINDS: Readonly<Record<string, number>> = {
  real32: 4,
  real64: 8,
  real128: 16,
  int8: 1,
  int16: 2,
  int32: 4,
  int64: 8,
  c_int: 4,
  c_short: 2,
  c_long: 8,
  c_long_long: 8,
  c_size_t: 8,
  c_float: 4,
  c_double: 8,
  c_bool: 1,
  c_char: 1,
};

function withBytes(read: FileInterface, kinds: Kinds, options: LinkOptions): FileInterface {
  const resolved = <T extends Declared>(one: T, unit: string | null): T => {
    if (one.kind !== undefined && one.bytes === null) {
      const macro = one.kind.startsWith('_') ? kinds.macro(one.kind) : null;
      if (macro !== null) return { ...one, bytes: macroBytes(macro, options) };
      const bytes = kinds.bytesOf(unit, read.uses, one.kind);
      return bytes === null ? one : { ...one, bytes: one.type === 'complex' ? 2 * bytes : bytes };
    }
    const promoted = one.kind === undefined ? options.promote?.[one.type] : undefined;
    return promoted === undefined ? one : { ...one, bytes: promoted };
  };
  return {
    ...read,
    procedures: read.procedures.map((one) => {
      const unit = one.parent === null ? one.name : `${one.parent}::${one.name}`;
      return {
        ...one,
        args: one.args.map((arg) => resolved(arg, unit)),
        result: one.result === null ? null : resolved(one.result, unit),
      };
    }),
    commons: read.commons.map((one) => ({
      ...one,
      members: one.members.map((member) => resolved(member, one.parent)),
    })),
    variables: read.variables.map((one) => resolved(one, one.parent)),
    types: read.types.map((one) => ({ ...one, fields: one.fields.map((field) => resolved(field, one.parent)) })),
  };
}

function macroBytes(text: string, options: LinkOptions): number | null {
  const code = text.trim().toLowerCase();
  if (/^double\s*precision$/.test(code)) return 8;
  const star = /^(?:real|integer|logical)\s*(?:\*\s*|\(\s*(?:kind\s*=\s*)?)(\d+)\s*\)?$/.exec(code);
  if (star !== null) return Number(star[1]);
  return /^real$/.test(code)
    ? (options.promote?.real ?? 4)
    : /^integer$/.test(code)
      ? (options.promote?.integer ?? 4)
      : null;
}
