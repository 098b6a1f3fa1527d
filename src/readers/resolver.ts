/** Which definitions a call can mean: hosts, modules in sight, the nearest file, the same program. Pure. */
import type { CallSite, FileInterface, Procedure } from '../model/interface.ts';
import { folderOf, Programs } from './programs.ts';

export interface Provider {
  readonly file: string;
  readonly procedure: Procedure;
}

interface GenericName {
  readonly file: string;
  readonly parent: string | null;
  readonly procedures: readonly string[];
  /** A name bound to a type: reached through an object only. */
  readonly bound: boolean;
}

export class Resolver {
  private readonly files: ReadonlyMap<string, FileInterface>;
  private readonly providers: ReadonlyMap<string, readonly Provider[]>;
  private readonly generics = new Map<string, GenericName[]>();
  /** Arrays and texts of modules: `name(i)` is an element of one, whatever procedure has that name elsewhere. */
  private readonly arrays = new Map<string, Set<string>>();
  /** Modules that a module uses. */
  private readonly uses = new Map<string, string[]>();
  private readonly seen = new Map<string, ReadonlySet<string>>();
  private readonly hosts = new Map<string, ReadonlyMap<string, readonly Procedure[]>>();
  private readonly macros = new Map<string, ReadonlySet<string>>();
  readonly programs: Programs;

  constructor(files: ReadonlyMap<string, FileInterface>, providers: ReadonlyMap<string, readonly Provider[]>) {
    this.files = files;
    this.providers = providers;
    this.programs = new Programs(files);
    for (const [file, read] of files) {
      for (const use of read.uses) if (use.parent !== null) push(this.uses, use.parent, use.module);
      for (const { name, parent, rank, type } of read.variables)
        if (parent !== null && (rank !== 0 || type === 'character')) {
          const known = this.arrays.get(parent);
          if (known === undefined) this.arrays.set(parent, new Set([name]));
          else known.add(name);
        }
      for (const { name, parent, procedures } of read.generics)
        push(this.generics, name, { file, parent, procedures, bound: false });
      for (const type of read.types)
        for (const { name, procedure } of type.bindings)
          push(this.generics, name, { file, parent: type.parent, procedures: [procedure], bound: true });
    }
  }

  /** Definitions that a call can mean, nearest first; several: one of these. None where nobody knows. */
  resolve(file: string, call: CallSite): readonly Provider[] {
    if (!this.providers.has(call.callee) && !this.generics.has(call.callee) && !call.callee.endsWith('_')) return [];
    const caller = this.files.get(file)!;
    // A dummy procedure is whatever is passed for it.
    const host = this.hostOf(file, call);
    if (host?.args.some((one) => one.name === call.callee)) return [];
    if (caller.language !== 'fortran') return this.elsewhere(file, caller, call);
    const hosts = call.caller === null ? [] : call.caller.split('::');
    const all = this.named(call.callee, call).filter(({ file: at, procedure }) =>
      isSpelled(procedure, call.callee, this.files.get(at)!.language),
    );
    const used = this.modulesSeen(file, call.caller);
    // An internal procedure, then one of the same module; a generic name may be that of one of its procedures.
    for (let depth = hosts.length; depth > 0; depth--) {
      const path = hosts.slice(0, depth).join('::');
      const own = all.filter((one) => one.file === file && one.procedure.parent === path);
      const behind = this.specifics(file, call, path, used);
      if (own.length + behind.length > 0) return compatible([...new Set([...own, ...behind])], call);
    }
    const ofModules = [
      ...this.specifics(file, call, null, used),
      ...all.filter((one) => one.procedure.parent !== null && used.has(one.procedure.parent)),
    ];
    if (ofModules.length > 0) return compatible([...new Set(ofModules)], call);
    // What stands in a module or a host that is not in sight can not be meant.
    const open = all.filter((one) => one.procedure.parent === null || this.files.get(one.file)!.language !== 'fortran');
    return this.nearest(file, compatible(open, call));
  }

  /** True for what looks like a function reference in one file, and is an element of an array that a module in sight holds. */
  isElement(file: string, call: CallSite): boolean {
    if (call.how !== 'function' || this.arrays.size === 0) return false;
    const hosts = call.caller === null ? [] : call.caller.split('::');
    if (hosts.length > 0 && this.arrays.get(hosts[0]!)?.has(call.callee)) return true;
    for (const module of this.modulesSeen(file, call.caller))
      if (this.arrays.get(module)?.has(call.callee)) return true;
    return false;
  }

  private named(name: string, call: CallSite): readonly Provider[] {
    return (this.providers.get(name) ?? []).filter((one) => one.procedure.kind !== 'method' || call.how === 'method');
  }

  /** C calls by the exact name, a Fortran procedure by the linker's; a macro of that name hides what it stands for. */
  private elsewhere(file: string, caller: FileInterface, call: CallSite): readonly Provider[] {
    if (caller.language === 'python')
      return this.named(call.callee, call).filter(
        (one) => one.file === file || isImported(caller, call.callee, one.file),
      );
    if (caller.language !== 'c' && caller.language !== 'c++') return this.named(call.callee, call);
    if (this.macrosOf(file).has(call.callee)) return [];
    const exact = this.named(call.callee, call).filter(({ file: at, procedure }) =>
      procedure.name === call.callee ? this.files.get(at)!.language !== 'fortran' : procedure.linkName === call.callee,
    );
    if (exact.length > 0 || !call.callee.endsWith('_')) return this.nearest(file, exact);
    const fortran = this.named(call.callee.replace(/_$/, '').toLowerCase(), call).filter(
      ({ file: at, procedure }) =>
        this.files.get(at)!.language === 'fortran' && procedure.parent === null && procedure.linkName === undefined,
    );
    return this.nearest(file, fortran);
  }

  /** The procedures behind a generic name of one host of the caller; without a host, of modules used and of the file. */
  private specifics(file: string, call: CallSite, host: string | null, used: ReadonlySet<string>): Provider[] {
    const found = new Set<Provider>();
    for (const generic of this.generics.get(call.callee) ?? []) {
      if (generic.bound !== (call.how === 'method')) continue;
      const { parent } = generic;
      const inSight = parent === host ? generic.file === file : host === null && used.has(parent!);
      if (!generic.bound && !inSight) continue;
      for (const name of generic.procedures)
        for (const one of this.providers.get(name) ?? [])
          if (one.procedure.parent === parent || one.procedure.parent === null || used.has(one.procedure.parent))
            found.add(one);
    }
    return [...found];
  }

  /** Of the same file, else of the same folder, else of the same program; what is left of other programs comes alone. */
  private nearest(file: string, all: readonly Provider[]): readonly Provider[] {
    if (all.length < 2) return all;
    const same = all.filter((one) => one.file === file);
    if (same.length > 0) return same;
    const folder = folderOf(file);
    const beside = all.filter((one) => folderOf(one.file) === folder);
    if (beside.length > 0) return beside;
    const together = all.filter((one) => this.programs.together(file, one.file));
    return together.length > 0 ? together : all;
  }

  private hostOf(file: string, call: CallSite): Procedure | undefined {
    if (call.caller === null) return undefined;
    let byName = this.hosts.get(file);
    if (byName === undefined) {
      const made = new Map<string, Procedure[]>();
      for (const one of this.files.get(file)!.procedures) push(made, one.name, one);
      byName = made;
      this.hosts.set(file, byName);
    }
    const name = call.caller.slice(call.caller.lastIndexOf(':') + 1);
    return byName.get(name)?.find((one) => one.line <= call.line && call.line <= one.endLine);
  }

  private macrosOf(file: string): ReadonlySet<string> {
    let known = this.macros.get(file);
    if (known === undefined) {
      known = new Set(
        this.files
          .get(file)!
          .constants.filter((one) => one.type === 'macro')
          .map((one) => one.name),
      );
      this.macros.set(file, known);
    }
    return known;
  }

  /** Modules that a caller uses itself or through its hosts, and those that these use in turn. */
  private modulesSeen(file: string, caller: string | null): ReadonlySet<string> {
    const key = `${file} ${caller ?? ''}`;
    const known = this.seen.get(key);
    if (known !== undefined) return known;
    const uses = this.files.get(file)?.uses ?? [];
    const open = uses
      .filter((use) => use.parent === null || caller === null || isWithin(caller, use.parent))
      .map((use) => use.module);
    const seen = new Set(open);
    for (let module = open.pop(); module !== undefined; module = open.pop()) {
      for (const next of this.uses.get(module) ?? []) {
        if (seen.has(next)) continue;
        seen.add(next);
        open.push(next);
      }
    }
    this.seen.set(key, seen);
    return seen;
  }
}

/** Whether a file of Python takes a name from another one: by name, or with all that its module holds. */
function isImported(caller: FileInterface, name: string, from: string): boolean {
  const module = from.slice(from.lastIndexOf('/') + 1).replace(/\.py$/, '');
  return caller.uses.some(
    (use) =>
      use.module.split('.').at(-1) === module &&
      (use.only === undefined || use.only.some((one) => one.local === name || one.name === '*')),
  );
}

function isWithin(path: string | null, host: string): boolean {
  return path === host || (path?.startsWith(`${host}::`) ?? false);
}

/** Fortran calls by its own name; C by `name_` or by the name that the source gives the linker. */
function isSpelled(procedure: Procedure, callee: string, language: string): boolean {
  return language === 'fortran'
    ? procedure.name === callee
    : procedure.name !== callee || procedure.linkName === callee;
}

/** Without definitions whose preprocessor branch rules the call's out. */
function compatible(all: readonly Provider[], call: CallSite): readonly Provider[] {
  if (call.condition === undefined) return all;
  return all.filter(({ procedure }) => !exclusive(procedure.condition, call.condition));
}

/** True where one condition holds a term that the other denies. */
export function exclusive(a: string | undefined, b: string | undefined): boolean {
  if (a === undefined || b === undefined) return false;
  const [one, other] = [terms(a), terms(b)];
  return one.some((term) => other.includes(term.startsWith('!') ? term.slice(1) : `!${term}`));
}

function terms(condition: string): string[] {
  return condition.split('&&').map((one) => one.trim());
}

export function push<T>(into: Map<string, T[]>, key: string, value: T): void {
  const known = into.get(key);
  if (known === undefined) into.set(key, [value]);
  else known.push(value);
}
