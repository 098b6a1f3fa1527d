/**
 * What a reader sees in one source file, in words that fit every language.
 * Readers make it; constants, fit, history, review and `mortise interface` use it.
 * Names are spelled as the language compares them (Fortran in lower case). Everything is plain data that survives JSON.
 */
import type { ReadStatement } from './expression.ts';
import type { Position } from './place.ts';

export type Language = 'fortran' | 'c' | 'c++' | 'python' | 'typescript' | 'javascript' | 'table';

export interface FileInterface {
  readonly language: Language;
  /** Source form of a Fortran file. */
  readonly form?: 'fixed' | 'free';
  readonly procedures: readonly Procedure[];
  readonly commons: readonly CommonBlock[];
  readonly types: readonly TypeDefinition[];
  /** Variables of modules, namespaces, files; not those local to a procedure. */
  readonly variables: readonly ModuleVariable[];
  readonly constants: readonly NamedConstant[];
  readonly literals: readonly LiteralUse[];
  /** USE, import, using. */
  readonly uses: readonly Use[];
  /** INCLUDE and #include. */
  readonly includes: readonly Include[];
  readonly generics: readonly Generic[];
  readonly calls: readonly CallSite[];
  readonly claims: readonly Claim[];
  /** EQUIVALENCE, SAVE, DATA, NAMELIST: statements that bind storage. */
  readonly storage: readonly StorageStatement[];
  /** Files and environment variables that the code reads, where a literal names them. */
  readonly externals: readonly External[];
  /** Data sets of a table. */
  readonly datasets: readonly Dataset[];
  /** Executable statements of the procedures asked about; absent when none was. */
  readonly statements?: readonly ReadStatement[];
  /** What could not be read, and why; empty when everything was. */
  readonly incomplete: readonly Incomplete[];
}

/** What a declaration says of one thing that holds a value. */
export interface Declared extends Position {
  readonly name: string;
  /** `real`, `integer`, `logical`, `complex`, `character`, `type(x)`, `class(x)`, `procedure`; in other languages the type without qualifiers; `unknown`. */
  readonly type: string;
  /** Bytes of one element; null where not knowable from this file and what it was linked with. */
  readonly bytes: number | null;
  /** The kind as written (`dp`, `8`, `kind_phys`); absent for a declared default, which a build may promote. */
  readonly kind?: string;
  /** True when no declaration gives the type, only the implicit rule. */
  readonly implicit?: boolean;
  /** Number of dimensions; -1 for assumed rank (`..`), which takes every one. */
  readonly rank: number;
  /** Bounds as written, an entry a dimension: `n`, `0:nz`, `:`, `*`, `..`. */
  readonly bounds: readonly string[];
  /** Extents evaluated; null where unknown, assumed, or the `(1)` that means "unknown length". */
  readonly shape: readonly (number | null)[];
  /** Character length as written. */
  readonly length?: string;
  /** `allocatable`, `pointer`, `target`, `value`, `const`, ... */
  readonly attributes: readonly string[];
  /** The preprocessor condition under which it stands, as written; absent when unconditional. */
  readonly condition?: string;
}

export type Intent = 'in' | 'out' | 'inout';

export interface Argument extends Declared {
  /** null where nothing declares it. */
  readonly intent: Intent | null;
  readonly optional: boolean;
  /** Default value as written. */
  readonly default?: string;
  /** How a caller may pass it; `either` unless the language says otherwise. */
  readonly passing?: 'positional' | 'keyword' | 'either' | 'variadic' | 'variadic-keyword' | 'alternate-return';
}

export type ProcedureKind =
  | 'function'
  | 'subroutine'
  | 'program'
  | 'method'
  | 'constructor'
  | 'property'
  | 'entry'
  | 'block-data'
  | 'statement-function'
  | 'separate-module-procedure';

export interface Procedure extends Position {
  readonly name: string;
  readonly kind: ProcedureKind;
  /** Module, class, namespace or host procedure; nested ones joined by `::`; null at file level. */
  readonly parent: string | null;
  readonly endLine: number;
  readonly args: readonly Argument[];
  /** null for a subroutine. Several when the language returns tuples. */
  readonly result: Declared | null;
  /** Names of what a tuple return holds, in order, where the code says. */
  readonly returns?: readonly string[];
  readonly attributes: readonly string[];
  readonly visibility?: 'public' | 'private';
  /** True for an interface body, prototype or forward declaration: the definition stands elsewhere. */
  readonly prototype?: boolean;
  /** The linker's name when the source sets it (`bind(C, name=)`, `extern "C"`). */
  readonly linkName?: string;
  readonly condition?: string;
  /** Template parameters or type parameters as written. */
  readonly template?: string;
}

export interface CommonBlock extends Position {
  /** Empty for blank COMMON. */
  readonly name: string;
  /** The program unit it stands in; null in an include file. */
  readonly parent: string | null;
  /** In storage order. */
  readonly members: readonly Declared[];
  readonly condition?: string;
}

export interface TypeDefinition extends Position {
  readonly name: string;
  readonly kind: 'type' | 'struct' | 'class' | 'union' | 'enum' | 'interface' | 'alias';
  readonly parent: string | null;
  readonly extends?: string;
  readonly fields: readonly Declared[];
  /** Type-bound procedures: binding name and the procedure it names. */
  readonly bindings: readonly { readonly name: string; readonly procedure: string; readonly line: number }[];
  readonly attributes: readonly string[];
}

export interface ModuleVariable extends Declared {
  readonly parent: string | null;
  readonly visibility?: 'public' | 'private';
  readonly value?: string;
}

export interface NamedConstant extends Position {
  readonly name: string;
  readonly parent: string | null;
  readonly type: string;
  readonly bytes: number | null;
  /** The expression as written. */
  readonly text: string;
  /** Evaluated; null when it rests on something this file does not hold, or is not a number or text. */
  readonly value: number | string | boolean | null;
  readonly condition?: string;
}

/** A numeric literal whose kind or form matters: assigned to or mixed with another kind, integer division, a physics value. */
export interface LiteralUse extends Position {
  readonly text: string;
  readonly value: number;
  readonly bytes: number | null;
  /** `argument`: passed in a call; `named`: initialises a constant. */
  readonly role: 'assigned' | 'mixed' | 'exponent' | 'integer-division' | 'argument' | 'named' | 'plain';
  /** The thing it is given to or mixed with. */
  readonly target?: string;
  /** Bytes of that thing. */
  readonly targetBytes?: number | null;
  readonly procedure: string | null;
}

export interface Use extends Position {
  readonly module: string;
  readonly parent: string | null;
  /** Absent when everything is taken; `local` differs from `name` for a rename. */
  readonly only?: readonly { readonly local: string; readonly name: string }[];
  readonly renames?: readonly { readonly local: string; readonly name: string }[];
  readonly condition?: string;
}

export interface Include extends Position {
  readonly path: string;
  readonly how: 'include' | '#include';
  /** The program unit it stands in. */
  readonly parent: string | null;
  readonly condition?: string;
}

export interface Generic extends Position {
  readonly name: string;
  readonly parent: string | null;
  readonly procedures: readonly string[];
  readonly kind: 'generic' | 'operator' | 'assignment' | 'abstract';
}

export interface ActualArgument extends Position {
  /** As written, white space folded, cut at 200 characters. */
  readonly text: string;
  readonly form:
    | 'name'
    | 'element'
    | 'section'
    | 'literal'
    | 'expression'
    | 'procedure'
    | 'alternate-return'
    | 'absent';
  /** The bare name for `name`, `element`, `section`. */
  readonly name?: string;
  readonly keyword?: string;
  /** Where knowable. */
  readonly type?: string;
  readonly bytes?: number | null;
  readonly rank?: number;
  /** Declared without a kind: a build may promote it. */
  readonly declaredDefault?: boolean;
}

export interface CallSite extends Position {
  readonly callee: string;
  /** `subroutine`: CALL statement; `function`: in an expression. */
  readonly how: 'subroutine' | 'function' | 'method' | 'constructor';
  /** The procedure that calls, `parent::name` where nested; null at file level. */
  readonly caller: string | null;
  readonly args: readonly ActualArgument[];
  /** Names that a tuple result is unpacked into, or the name that a function result is given to. */
  readonly unpacked?: readonly string[];
  readonly condition?: string;
}

export type ClaimSubject =
  | 'unit'
  | 'basis'
  | 'sign'
  | 'log-base'
  | 'angle'
  | 'reference-state'
  | 'shape'
  | 'index-order'
  | 'frame';

/** What a comment, docstring, bracket, attribute, metadata table or name says about a thing; never taken for a declaration. */
export interface Claim extends Position {
  /** The thing it is about, as the language spells it. */
  readonly name: string;
  /** The procedure, type or module that the thing belongs to; null at file level. */
  readonly parent: string | null;
  readonly what: ClaimSubject;
  /** The claim itself: `g/cm3`, `dry`, `positive down`, `10`, `degrees`. */
  readonly value: string;
  /** The text it was read from, cut at 200 characters. */
  readonly text: string;
  readonly from: 'comment' | 'docstring' | 'bracket' | 'attribute' | 'metadata' | 'name';
}

export interface StorageStatement extends Position {
  readonly kind: 'equivalence' | 'save' | 'data' | 'namelist';
  readonly parent: string | null;
  readonly names: readonly string[];
  readonly text: string;
}

export interface External extends Position {
  readonly kind: 'file' | 'environment';
  readonly name: string;
}

export interface Dataset {
  readonly name: string;
  /** `float64`, `int32`, `complex128`, ...; `decimal` for numbers written as text; `text`, `record`, ... for what holds none. */
  readonly type: string;
  readonly bytes: number | null;
  readonly shape: readonly number[];
  readonly unit?: string;
  readonly attributes: Readonly<Record<string, string | number>>;
  /** For a monotonic data set of one dimension that serves as an axis, or a column of a flattened table that runs over one. */
  readonly axis?: TableAxisRead;
}

export interface TableAxisRead {
  /** As stored: where the values are logarithms these are logarithms. */
  readonly first: number;
  readonly last: number;
  readonly spacing: 'linear' | 'log' | 'uneven';
  /** Distinct points along the axis. */
  readonly points: number;
  /** Base of the logarithms that are stored, where name, unit or attributes say so: `10`, `e`, `2`. */
  readonly logBase?: string;
}

export interface Incomplete {
  readonly line: number;
  readonly why: string;
}

/** A file of which nothing is known yet; readers fill in what they see. */
export function emptyInterface(language: Language): FileInterface {
  return {
    language,
    procedures: [],
    commons: [],
    types: [],
    variables: [],
    constants: [],
    literals: [],
    uses: [],
    includes: [],
    generics: [],
    calls: [],
    claims: [],
    storage: [],
    externals: [],
    datasets: [],
    incomplete: [],
  };
}
