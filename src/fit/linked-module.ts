/** A module that is plugged in, with the interfaces of its source files: what every check of a joint looks things up in. */
import type { Argument, CallSite, Declared, FileInterface, Language, Procedure } from '../model/interface.ts';
import type { Declaration, ModuleManifest, Offer } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';
import type { Carrier } from './joint.ts';

export type Promotion = Readonly<Record<string, number>>;

export interface FoundProcedure {
  readonly file: string;
  readonly procedure: Procedure;
}

export interface FoundCall {
  readonly file: string;
  readonly call: CallSite;
}

export class LinkedModule {
  readonly declaration: Declaration<ModuleManifest>;
  /** Source files that were read, in the order of the manifest. */
  readonly files: readonly (readonly [string, FileInterface])[];
  /** Source files that the manifest names and nobody found. */
  readonly missing: readonly string[];
  /** Tables that the module reads and that a reader could look into. */
  readonly tables: readonly (readonly [string, FileInterface])[];
  private readonly promotion: Promotion;
  private readonly revision: string | undefined;

  constructor(
    declaration: Declaration<ModuleManifest>,
    interfaces: ReadonlyMap<string, FileInterface>,
    promotion: Promotion,
  ) {
    this.declaration = declaration;
    this.promotion = promotion;
    this.revision = declaration.placeOf([]).revision;
    const { files } = declaration.value.source;
    const found = (file: string) => {
      const read = interfaces.get(file);
      return read === undefined ? [] : [[file, read] as const];
    };
    this.files = files.flatMap(found);
    this.tables = (declaration.value.tables ?? []).flatMap((table) => found(table.file));
    this.missing = files.filter((file) => !interfaces.has(file));
  }

  get name(): string {
    return this.declaration.value.module;
  }

  get language(): Language {
    return this.declaration.value.source.language;
  }

  /** False when a file is missing or a reader had to leave something out: what is not seen may then still be there. */
  get readCompletely(): boolean {
    return this.missing.length === 0 && this.files.every(([, read]) => read.incomplete.length === 0);
  }

  /** A definition is preferred to a prototype. `parent::name`, `parent.name` and the bare name all find it. */
  procedure(name: string): FoundProcedure | null {
    const [bare, parent] = splitName(name);
    let prototype: FoundProcedure | null = null;
    for (const [file, read] of this.files) {
      for (const procedure of read.procedures) {
        if (!sameName(procedure.name, bare, read.language)) continue;
        if (parent !== null && !sameName(lastPart(procedure.parent ?? ''), parent, read.language)) continue;
        if (procedure.prototype !== true) return { file, procedure };
        prototype ??= { file, procedure };
      }
    }
    return prototype ?? this.bound(bare);
  }

  /** The procedure behind a generic name or a type-bound name, when it is the only one. */
  private bound(name: string): FoundProcedure | null {
    for (const [, read] of this.files) {
      const generic = read.generics.find((one) => sameName(one.name, name, read.language));
      const binding = read.types
        .flatMap((type) => type.bindings)
        .find((one) => sameName(one.name, name, read.language));
      const target = generic?.procedures.length === 1 ? generic.procedures[0] : binding?.procedure;
      if (target !== undefined && !sameName(target, name, read.language)) return this.procedure(target);
    }
    return null;
  }

  procedureNames(): string[] {
    return this.files.flatMap(([, read]) => read.procedures.map((one) => one.name));
  }

  /** Every call of a procedure in the files of this module. */
  calls(callee: string): FoundCall[] {
    const [bare] = splitName(callee);
    return this.files.flatMap(([file, read]) =>
      read.calls.filter((call) => sameName(lastPart(call.callee), bare, read.language)).map((call) => ({ file, call })),
    );
  }

  /** What carries a quantity of an offer, by the name that the manifest gives; null when the code has no such thing. */
  carrier(offer: Offer, name: string): Carrier | null {
    const found = offer.procedure === undefined ? null : this.procedure(offer.procedure);
    return (
      (found === null ? null : (this.argument(found, name) ?? this.result(found, name))) ??
      this.field(name) ??
      this.common(name) ??
      this.datum(name)
    );
  }

  private argument({ file, procedure }: FoundProcedure, name: string): Carrier | null {
    const language = this.languageOf(file);
    const index = procedure.args.findIndex((one) => sameName(one.name, name, language));
    if (index >= 0) return this.carrierOf(file, procedure.args[index]!, 'argument', procedure.name, index + 1);
    // `state.rho`: a field of an argument that is a record.
    const [head, ...path] = name.split(/[.%]/);
    const holder = procedure.args.find((one) => sameName(one.name, head ?? '', language));
    const field = holder === undefined ? null : this.fieldOf(holder.type, path);
    return field === null ? null : this.carrierOf(field.file, field.declared, 'field', field.owner, null, name);
  }

  private result({ file, procedure }: FoundProcedure, name: string): Carrier | null {
    const { result } = procedure;
    const language = this.languageOf(file);
    const unseen = { how: 'result', name, owner: procedure.name, position: null, bytes: null, rank: null } as const;
    if (procedure.returns?.some((one) => sameName(one, name, language)) === true) {
      return { ...unseen, type: 'unknown', intent: 'out', place: this.place(file, procedure) };
    }
    if (result === null) return null;
    if (name === 'result' || sameName(result.name, name, language) || sameName(procedure.name, name, language)) {
      return this.carrierOf(file, result, 'result', procedure.name, null, name);
    }
    const field = this.fieldOf(result.type, name.split(/[.%]/));
    if (field !== null) return this.carrierOf(field.file, field.declared, 'result', field.owner, null, name);
    // `{ pressure: number; energy: number }` written out as the type of the result.
    const inline = result.type.startsWith('{') ? inlineField(result.type, name) : null;
    return inline === null ? null : { ...unseen, type: inline, intent: 'out', place: this.place(file, result) };
  }

  /** Follows a path of field names from a type that one of the files defines. */
  private fieldOf(type: string, path: readonly string[]): { file: string; owner: string; declared: Declared } | null {
    const bare = /^(?:type|class)\s*\(\s*(\w+)\s*\)$/i.exec(type)?.[1] ?? type.replace(/[^\w].*$/, '');
    if (path.length === 0 || bare === '') return null;
    for (const [file, read] of this.files) {
      const definition = read.types.find((one) => sameName(one.name, bare, read.language));
      const declared = definition?.fields.find((one) => sameName(one.name, path[0]!, read.language));
      if (declared === undefined) continue;
      return path.length === 1
        ? { file, owner: definition!.name, declared }
        : this.fieldOf(declared.type, path.slice(1));
    }
    return null;
  }

  /** True when one of the files defines the type, so that all of its fields are known. */
  definesType(type: string): boolean {
    return this.files.some(([, read]) =>
      read.types.some((one) => one.fields.length > 0 && sameName(one.name, type, read.language)),
    );
  }

  private field(name: string): Carrier | null {
    const [type, ...path] = name.split(/[.%]/);
    const field = path.length === 0 ? null : this.fieldOf(type ?? '', path);
    return field === null ? null : this.carrierOf(field.file, field.declared, 'field', field.owner, null, name);
  }

  /** `block/member`, or the member alone when one block has it. */
  private common(name: string): Carrier | null {
    const [member = name, block] = name
      .split('/')
      .filter((part) => part !== '')
      .reverse();
    for (const [file, read] of this.files) {
      for (const one of read.commons) {
        if (block !== undefined && !sameName(one.name, block, read.language)) continue;
        const declared = one.members.find((each) => sameName(each.name, member, read.language));
        if (declared !== undefined) return this.carrierOf(file, declared, 'common', one.name, null, name);
      }
    }
    return null;
  }

  private datum(name: string): Carrier | null {
    const bare = lastPart(name);
    for (const [file, read] of this.files) {
      const variable = read.variables.find((one) => sameName(one.name, bare, read.language));
      if (variable !== undefined) return this.carrierOf(file, variable, 'variable', variable.parent, null, name);
      const constant = read.constants.find((one) => sameName(one.name, bare, read.language));
      if (constant !== undefined) {
        const { type, bytes } = constant;
        const place = this.place(file, constant);
        return {
          how: 'constant',
          name,
          owner: constant.parent,
          position: null,
          type,
          bytes,
          rank: 0,
          intent: null,
          place,
        };
      }
      const dataset = read.datasets.find((one) => one.name.replace(/^\//, '') === name.replace(/^\//, ''));
      if (dataset !== undefined) {
        const { type, bytes } = dataset;
        const place = this.place(file, { line: 1, column: 1 });
        return {
          how: 'dataset',
          name,
          owner: null,
          position: null,
          type,
          bytes,
          rank: dataset.shape.length,
          intent: null,
          place,
        };
      }
    }
    return null;
  }

  private carrierOf(
    file: string,
    declared: Declared,
    how: Carrier['how'],
    owner: string | null,
    position: number | null,
    name = declared.name,
  ): Carrier {
    const intent = 'intent' in declared ? (declared as Argument).intent : how === 'result' ? 'out' : null;
    return {
      how,
      name,
      owner,
      position,
      type: declared.type,
      bytes: this.bytesOf(declared),
      // An array behind a type that is not spelled out (Float64Array, number[]) has no rank in the declaration.
      rank: declared.type === 'unknown' ? null : declared.rank,
      intent,
      place: this.place(file, declared),
    };
  }

  /** A declared default takes the bytes that the build's switches give it; a kind that was written keeps its own. */
  bytesOf(declared: { readonly type?: string; readonly kind?: string; readonly bytes?: number | null }): number | null {
    const promoted = declared.kind === undefined ? this.promotion[declared.type ?? ''] : undefined;
    return promoted ?? declared.bytes ?? null;
  }

  languageOf(file: string): Language {
    return this.files.find(([name]) => name === file)?.[1].language ?? this.language;
  }

  place(file: string, at: { readonly line: number; readonly column: number }): Place {
    const place = { file, line: at.line, column: at.column };
    return this.revision === undefined ? place : { ...place, revision: this.revision };
  }
}

/** The type of a member in an object type that is written out in one piece. */
function inlineField(type: string, name: string): string | null {
  for (const member of type.slice(1, -1).split(/[;,\n]/)) {
    const match = /^\s*(?:readonly\s+)?([\w$]+)\??\s*:\s*(.+?)\s*$/.exec(member);
    if (match?.[1] === name) return match[2]!;
  }
  return null;
}

/** Names as the language compares them: Fortran without regard to case. */
export function sameName(a: string, b: string, language: Language): boolean {
  return language === 'fortran' ? a.toLowerCase() === b.toLowerCase() : a === b;
}

/** `eos` of `gas::eos`, `gas.eos`, `gas%eos`. */
export function lastPart(name: string): string {
  return name.split(/::|[.%]/).at(-1) ?? name;
}

function splitName(name: string): [string, string | null] {
  const parts = name.split(/::|[.%]/);
  return [parts.at(-1) ?? name, parts.length > 1 ? parts.at(-2)! : null];
}
