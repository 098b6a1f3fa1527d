/** A program unit while it is read: what was declared in it so far, and how its names are typed when nothing declares them. */
import type { Argument, Declared, Intent, Procedure } from '../../model/interface.ts';

export interface Draft {
  name: string;
  line: number;
  column: number;
  type: string | null;
  bytes: number | null;
  kind?: string;
  length?: string;
  bounds: string[] | null;
  attributes: Set<string>;
  intent: Intent | null;
  optional: boolean;
  external: boolean;
  condition: string | null;
}

export interface Scope {
  readonly kind:
    | 'file'
    | 'program'
    | 'module'
    | 'submodule'
    | 'subroutine'
    | 'function'
    | 'block-data'
    | 'interface'
    | 'type'
    | 'separate';
  readonly name: string;
  /** Path of hosts, joined by `::`; null at file level. */
  readonly path: string | null;
  readonly parent: Scope | null;
  readonly line: number;
  readonly column: number;
  readonly condition: string | null;
  readonly drafts: Map<string, Draft>;
  /** Types by first letter; null after IMPLICIT NONE. */
  implicit: Map<string, { type: string; bytes: number | null; kind?: string }> | null;
  /** Dummies in order; `*` for an alternate return. */
  dummies: { name: string; line: number; column: number }[];
  resultName: string | null;
  readonly attributes: string[];
  prefixType: { type: string; bytes: number | null; kind?: string; length?: string } | null;
  linkName?: string;
  /** Everything in it is private unless said otherwise. */
  isPrivate: boolean;
  readonly publicNames: Set<string>;
  readonly privateNames: Set<string>;
  /** Values of its constants, and of its hosts'. */
  readonly values: Map<string, number>;
  readonly kinds: Map<string, number>;
  containing: boolean;
  readonly bindings: { name: string; procedure: string; line: number }[];
  /** For an interface: its name, and the procedures it gathers. */
  readonly gathers: string[];
  isAbstract: boolean;
  extends?: string;
  readonly fields: Declared[];
}

export function newScope(
  kind: Scope['kind'],
  name: string,
  parent: Scope | null,
  at: { line: number; column: number },
  condition: string | null,
): Scope {
  const host =
    parent === null || parent.kind === 'file'
      ? null
      : parent.kind === 'interface' || parent.kind === 'type'
        ? parent.path
        : parent.path === null
          ? parent.name
          : `${parent.path}::${parent.name}`;
  return {
    kind,
    name,
    path: host,
    parent,
    line: at.line,
    column: at.column,
    condition,
    drafts: new Map(),
    implicit:
      parent === null || kind === 'interface' || parent.kind === 'interface'
        ? new Map()
        : parent.implicit === null
          ? null
          : new Map(parent.implicit),
    dummies: [],
    resultName: null,
    attributes: [],
    prefixType: null,
    isPrivate: false,
    publicNames: new Set(),
    privateNames: new Set(),
    values: new Map(),
    kinds: new Map(),
    containing: false,
    bindings: [],
    gathers: [],
    isAbstract: false,
    fields: [],
  };
}

export function draftOf(
  scope: Scope,
  name: string,
  at: { line: number; column: number },
  condition: string | null,
): Draft {
  const known = scope.drafts.get(name);
  if (known !== undefined) return known;
  const draft: Draft = {
    name,
    line: at.line,
    column: at.column,
    type: null,
    bytes: null,
    bounds: null,
    attributes: new Set(),
    intent: null,
    optional: false,
    external: false,
    condition,
  };
  scope.drafts.set(name, draft);
  return draft;
}

/** The value of a constant, looked for outward through the hosts. */
export function valueIn(scope: Scope | null, name: string): number | null {
  for (let at = scope; at !== null; at = at.parent) {
    const value = at.values.get(name);
    if (value !== undefined) return value;
  }
  return null;
}

export function kindIn(scope: Scope | null, name: string): number | null {
  for (let at = scope; at !== null; at = at.parent) {
    const kind = at.kinds.get(name) ?? at.values.get(name);
    if (kind !== undefined) return kind;
  }
  return null;
}

/** A draft as the model has it; what nothing types is typed by the implicit rule. */
export function declaredFrom(scope: Scope, draft: Draft, evaluateBound: (text: string) => number | null): Declared {
  const bounds = draft.bounds ?? [];
  let { type, bytes, kind } = draft as { type: string | null; bytes: number | null; kind?: string | undefined };
  let implicit = false;
  if (type === null && draft.external) [type, bytes] = ['procedure', null];
  if (type === null) {
    implicit = true;
    const rule = scope.implicit?.get(draft.name[0]!);
    if (rule !== undefined) ({ type, bytes, kind } = rule);
    else if (scope.implicit === null) [type, bytes] = ['unknown', null];
    else [type, bytes] = /^[i-n]/.test(draft.name) ? ['integer', 4] : ['real', 4];
  }
  return {
    name: draft.name,
    line: draft.line,
    column: draft.column,
    type: type!,
    bytes,
    ...(kind === undefined ? {} : { kind }),
    ...(implicit ? { implicit: true } : {}),
    rank: bounds.length,
    bounds,
    shape: bounds.map((bound) => extentOf(bound, evaluateBound)),
    ...(draft.length === undefined ? {} : { length: draft.length }),
    attributes: [...draft.attributes],
    ...(draft.condition === null ? {} : { condition: draft.condition }),
  };
}

/** `(1)` as the last bound of an old array means that its length is not known. */
function extentOf(bound: string, evaluateBound: (text: string) => number | null): number | null {
  if (/^[:*.]+$|:$|\*$/.test(bound) || bound === '1') return null;
  const colon = bound.indexOf(':');
  if (colon < 0) return evaluateBound(bound);
  const [low, high] = [evaluateBound(bound.slice(0, colon) || '1'), evaluateBound(bound.slice(colon + 1))];
  return low === null || high === null ? null : high - low + 1;
}

export function argumentsOf(scope: Scope, evaluateBound: (text: string) => number | null): Argument[] {
  return scope.dummies.map((dummy): Argument => {
    if (dummy.name === '*') {
      return {
        ...dummy,
        type: 'alternate-return',
        bytes: null,
        rank: 0,
        bounds: [],
        shape: [],
        attributes: [],
        intent: null,
        optional: false,
        passing: 'alternate-return',
      };
    }
    const draft = scope.drafts.get(dummy.name) ?? draftOf(scope, dummy.name, dummy, null);
    return { ...declaredFrom(scope, draft, evaluateBound), intent: draft.intent, optional: draft.optional };
  });
}

export function visibilityOf(scope: Scope, name: string): Procedure['visibility'] | undefined {
  if (scope.kind !== 'module' && scope.kind !== 'submodule') return undefined;
  if (scope.publicNames.has(name)) return 'public';
  if (scope.privateNames.has(name)) return 'private';
  return scope.isPrivate ? 'private' : 'public';
}
