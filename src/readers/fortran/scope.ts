/** A program unit while it is read: what was declared in it so far, and how its names are typed when nothing declares them. */
import type { Argument, Declared, Intent, Procedure } from '../../model/interface.ts';
import { type Branch, exclude } from './conditions.ts';

/** What is known of a name so far; statements add to it in any order. */
export class Draft {
  readonly name: string;
  line: number;
  column: number;
  type: string | null = null;
  bytes: number | null = null;
  kind: string | undefined = undefined;
  length: string | undefined = undefined;
  bounds: readonly string[] | null = null;
  attributes: string[] = [];
  intent: Intent | null = null;
  optional = false;
  external = false;
  value: string | undefined = undefined;
  /** The preprocessor branch of its declaration. */
  branch: Branch | null;
  /** Declarations in other branches that exclude this one. */
  variants: Draft[] | null = null;

  constructor(name: string, line: number, column: number, branch: Branch | null) {
    this.name = name;
    this.line = line;
    this.column = column;
    this.branch = branch;
  }

  add(attribute: string): void {
    if (!this.attributes.includes(attribute)) this.attributes.push(attribute);
  }
}

export interface Dummy {
  /** `*` for an alternate return. */
  readonly name: string;
  readonly line: number;
  readonly column: number;
}

/** A header of a procedure: its own, one of another preprocessor branch, or an ENTRY. */
export interface Header {
  readonly kind: 'subroutine' | 'function' | 'entry';
  readonly name: string;
  readonly line: number;
  readonly column: number;
  readonly branch: Branch | null;
  readonly dummies: readonly Dummy[];
  readonly resultName: string | null;
  readonly linkName: string | undefined;
  readonly attributes: readonly string[];
}

export interface ImplicitType {
  readonly type: string;
  readonly bytes: number | null;
  readonly kind: string | undefined;
  readonly length: string | undefined;
}

/** A COMMON statement's block while its members may still be declared. */
export interface CommonDraft {
  readonly name: string;
  readonly members: Draft[];
  readonly line: number;
  readonly column: number;
  readonly condition: string | null;
  /** Where it stands: members of an included file extend only what is theirs. */
  readonly own: boolean;
}

export type ScopeKind =
  | 'file'
  | 'program'
  | 'module'
  | 'submodule'
  | 'subroutine'
  | 'function'
  | 'block-data'
  | 'interface'
  | 'type'
  | 'enum'
  | 'separate';

export class Scope {
  readonly kind: ScopeKind;
  readonly name: string;
  readonly parent: Scope | null;
  readonly depth: number;
  /** Path of hosts, joined by `::`; null at file level. */
  readonly path: string | null;
  /** Its own path, by which what stands in it names it. */
  readonly own: string | null;
  readonly line: number;
  readonly column: number;
  branch: Branch | null;
  readonly drafts = new Map<string, Draft>();
  /** Types by first letter, a to z; null after IMPLICIT NONE. Shared with the host until one of them changes it. */
  implicit: readonly (ImplicitType | undefined)[] | null;
  /** Its header, then those of other branches. */
  readonly headers: Header[] = [];
  readonly entries: Header[] = [];
  prefixType: ImplicitType | null = null;
  linkName: string | undefined = undefined;
  attributes: string[] = [];
  /** Everything in it is private unless said otherwise. */
  isPrivate = false;
  readonly publicNames = new Set<string>();
  readonly privateNames = new Set<string>();
  /** Values of its constants; NaN where preprocessor branches give different ones. */
  values: Map<string, number> | null = null;
  /** Bytes that its constants stand for as kinds; NaN likewise. */
  kinds: Map<string, number> | null = null;
  /** By name, condition and whether it is the scope's own. */
  readonly commons = new Map<string, CommonDraft>();
  containing = false;
  /** An executable statement has been met: no statement function comes behind it. */
  executing = false;
  /** Names may be declared where this file does not show it: a module, or an include file that was not given. */
  openEnded = false;
  /** An END in a branch that its beginning does not stand in: it holds only for the lines of that branch. */
  endedIn: { branch: Branch; line: number } | null = null;
  bindings: { name: string; procedure: string; line: number }[] = [];
  /** For an interface: the procedures it gathers. */
  readonly gathers: string[] = [];
  isAbstract = false;
  extends: string | undefined = undefined;
  /** The comments above its header and inside it begin here. */
  firstComment = 0;
  /** Value of the last enumerator. */
  lastEnumerator: number | null = -1;

  constructor(
    kind: ScopeKind,
    name: string,
    parent: Scope | null,
    line: number,
    column: number,
    branch: Branch | null,
  ) {
    this.kind = kind;
    this.name = name;
    this.parent = parent;
    this.depth = parent === null ? 0 : parent.depth + 1;
    this.line = line;
    this.column = column;
    this.branch = branch;
    const host = parent === null || parent.kind === 'file' ? null : parent;
    this.path =
      host === null
        ? null
        : host.kind === 'interface' || host.kind === 'type' || host.kind === 'enum'
          ? host.path
          : host.own;
    this.own = kind === 'file' ? null : this.path === null ? name : `${this.path}::${name}`;
    // An interface body does not know its host.
    this.implicit = parent === null || kind === 'interface' || parent.kind === 'interface' ? [] : parent.implicit;
  }

  get condition(): string | null {
    return this.branch === null ? null : this.branch.whole;
  }

  setValue(name: string, value: number): void {
    this.values ??= new Map();
    keep(this.values, name, value);
  }

  setKind(name: string, bytes: number): void {
    this.kinds ??= new Map();
    keep(this.kinds, name, bytes);
  }

  draft(name: string, line: number, column: number, branch: Branch | null): Draft {
    const known = this.drafts.get(name);
    if (known !== undefined) return known;
    const draft = new Draft(name, line, column, branch);
    this.drafts.set(name, draft);
    return draft;
  }

  /** The draft that a type declaration fills: another one when the name was typed in a branch that excludes this. */
  typedDraft(name: string, line: number, column: number, branch: Branch | null): Draft {
    const known = this.draft(name, line, column, branch);
    if (known.type === null || branch === null || !exclude(known.branch, branch)) return known;
    const same = known.variants?.find((one) => !exclude(one.branch, branch));
    if (same !== undefined) return same;
    const variant = new Draft(name, line, column, branch);
    known.variants ??= [];
    known.variants.push(variant);
    return variant;
  }
}

/** A second value comes from another preprocessor branch: then none is known. */
function keep(values: Map<string, number>, name: string, value: number): void {
  const known = values.get(name);
  values.set(name, known === undefined || known === value ? value : Number.NaN);
}

/** The draft of a name in this scope or its hosts; null when it is declared in none of them. */
export function draftIn(scope: Scope, name: string): { scope: Scope; draft: Draft } | null {
  for (let at: Scope | null = scope; at !== null; at = at.parent) {
    const draft = at.drafts.get(name);
    if (draft !== undefined) return { scope: at, draft };
    if (at.parent?.kind === 'interface') return null;
  }
  return null;
}

/** The value of a constant, looked for outward through the hosts. */
export function valueIn(scope: Scope | null, name: string): number | null {
  for (let at = scope; at !== null; at = at.parent) {
    const value = at.values?.get(name);
    if (value !== undefined) return value;
  }
  return null;
}

export function kindIn(scope: Scope | null, name: string): number | null {
  for (let at = scope; at !== null; at = at.parent) {
    const kind = at.kinds?.get(name) ?? at.values?.get(name);
    if (kind !== undefined) return Number.isFinite(kind) ? kind : null;
  }
  return null;
}

const DEFAULT_INTEGER: ImplicitType = { type: 'integer', bytes: 4, kind: undefined, length: undefined };
const DEFAULT_REAL: ImplicitType = { type: 'real', bytes: 4, kind: undefined, length: undefined };
const UNTYPED: ImplicitType = { type: 'unknown', bytes: null, kind: undefined, length: undefined };
const PROCEDURE: ImplicitType = { type: 'procedure', bytes: null, kind: undefined, length: undefined };

/** The implicit rule of a scope: its IMPLICIT statements, else I to N. */
export function implicitType(scope: Scope, name: string): ImplicitType {
  if (scope.implicit === null) return UNTYPED;
  const letter = name.charCodeAt(0) - 97;
  return scope.implicit[letter] ?? (letter >= 8 && letter <= 13 ? DEFAULT_INTEGER : DEFAULT_REAL);
}

type Bound = (text: string) => number | null;
const NO_BOUNDS: readonly string[] = [];
const NO_SHAPE: readonly null[] = [];

/** A draft as the model has it; what nothing types is typed by the implicit rule. */
export function declaredFrom(scope: Scope, draft: Draft, bound: Bound, branch: Branch | null = draft.branch): Declared {
  const bounds = draft.bounds ?? NO_BOUNDS;
  const implicit = draft.type === null && !draft.external;
  const typed: ImplicitType =
    draft.type !== null
      ? { type: draft.type, bytes: draft.bytes, kind: draft.kind, length: draft.length }
      : draft.external
        ? PROCEDURE
        : implicitType(scope, draft.name);
  const declared: { -readonly [key in keyof Declared]: Declared[key] } = {
    name: draft.name,
    line: draft.line,
    column: draft.column,
    type: typed.type,
    bytes: typed.bytes,
    rank: rankOf(draft.bounds),
    bounds,
    shape: bounds.length === 0 || bounds[0] === '..' ? NO_SHAPE : bounds.map((one) => extentOf(one, bound)),
    attributes: draft.attributes,
  };
  if (typed.kind !== undefined) declared.kind = typed.kind;
  if (implicit) declared.implicit = true;
  const length = draft.length ?? typed.length;
  if (length !== undefined) declared.length = length;
  if (branch !== null) declared.condition = branch.whole;
  return declared;
}

/** How many dimensions; -1 for assumed rank. */
export function rankOf(bounds: readonly string[] | null): number {
  if (bounds === null) return 0;
  return bounds.length === 1 && bounds[0] === '..' ? -1 : bounds.length;
}

/** `(1)` as the last bound of an old array means that its length is not known. */
function extentOf(bound: string, evaluateBound: Bound): number | null {
  if (bound === '1' || bound === ':' || bound === '*' || bound === '..') return null;
  const last = bound.charCodeAt(bound.length - 1);
  if (last === 58 || last === 42) return null;
  const colon = bound.indexOf(':');
  if (colon < 0) return evaluateBound(bound);
  const [low, high] = [evaluateBound(bound.slice(0, colon) || '1'), evaluateBound(bound.slice(colon + 1))];
  return low === null || high === null ? null : high - low + 1;
}

/** Arguments of a header, declared as in the branch given. */
export function argumentsOf(scope: Scope, header: Header, bound: Bound, branch: Branch | null): Argument[] {
  const args: Argument[] = [];
  for (const dummy of header.dummies) {
    if (dummy.name === '*') {
      args.push({
        name: '*',
        line: dummy.line,
        column: dummy.column,
        type: 'alternate-return',
        bytes: null,
        rank: 0,
        bounds: NO_BOUNDS,
        shape: NO_SHAPE,
        attributes: [],
        intent: null,
        optional: false,
        passing: 'alternate-return',
      });
      continue;
    }
    const draft = chosen(scope.draft(dummy.name, dummy.line, dummy.column, null), branch);
    const declared = declaredFrom(scope, draft, bound, conditionBeside(draft, branch ?? scope.branch)) as Argument & {
      intent: Intent | null;
      optional: boolean;
    };
    declared.intent = draft.intent;
    declared.optional = draft.optional;
    args.push(declared);
  }
  return args;
}

/** A declaration in the procedure's own branch is not conditional beside it. */
function conditionBeside(draft: Draft, branch: Branch | null): Branch | null {
  for (let at = branch; at !== null; at = at.outer)
    if (draft.branch !== null && at.group === draft.branch.group && at.index === draft.branch.index) return null;
  return draft.branch;
}

/** Of the declarations of a name, the one that a build with this branch sees. */
export function chosen(draft: Draft, branch: Branch | null): Draft {
  if (draft.variants === null || branch === null || !exclude(draft.branch, branch)) return draft;
  return draft.variants.find((one) => !exclude(one.branch, branch)) ?? draft;
}

export function visibilityOf(scope: Scope, name: string): Procedure['visibility'] | undefined {
  if (scope.kind !== 'module' && scope.kind !== 'submodule') return undefined;
  if (scope.publicNames.has(name)) return 'public';
  if (scope.privateNames.has(name)) return 'private';
  return scope.isPrivate ? 'private' : 'public';
}
