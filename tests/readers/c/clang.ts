/** What clang sees in a source, from its own dump of the syntax tree: the judge of the reader of C and C++. */
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';

export interface ClangArgument {
  readonly name: string;
  /** As clang writes it: `const double *`. */
  readonly type: string;
  readonly hasDefault: boolean;
}

export interface ClangFunction {
  readonly name: string;
  /** Namespaces and classes around it, joined by `::`. */
  readonly scope: string;
  readonly file: string;
  readonly line: number;
  readonly column: number;
  readonly args: readonly ClangArgument[];
  readonly variadic: boolean;
  /** Type of the function: `double (double, int)`. */
  readonly type: string;
  readonly constructs: boolean;
  readonly hasBody: boolean;
  /** True when a macro made its name. */
  readonly fromMacro: boolean;
}

export interface ClangCall {
  readonly callee: string;
  readonly file: string;
  /** Where the name ends that is called; `line` is where what it is called on begins. */
  readonly lastLine: number;
  readonly line: number;
  readonly column: number;
  readonly nargs: number;
  /** True for what only looks like a call to a scanner: a cast or an object made in place. */
  readonly constructs: boolean;
  readonly fromMacro: boolean;
}

export interface ClangRecord {
  readonly name: string;
  readonly kind: string;
  readonly scope: string;
  readonly file: string;
  readonly line: number;
  readonly column: number;
  readonly fields: readonly { readonly name: string; readonly type: string }[];
}

export interface ClangConstant {
  readonly name: string;
  readonly scope: string;
  readonly line: number;
  readonly value: number | null;
}

export interface ClangSays {
  readonly functions: readonly ClangFunction[];
  readonly calls: readonly ClangCall[];
  readonly records: readonly ClangRecord[];
  readonly enumerators: readonly ClangConstant[];
  readonly aliases: readonly { readonly name: string; readonly file: string; readonly line: number }[];
  readonly diagnostics: string;
}

interface Node {
  readonly kind?: string;
  readonly name?: string;
  readonly loc?: Loc;
  readonly range?: { readonly begin?: Loc; readonly end?: Loc };
  readonly type?: { readonly qualType: string };
  readonly inner?: readonly Node[];
  readonly isImplicit?: boolean;
  readonly variadic?: boolean;
  readonly init?: string;
  readonly tagUsed?: string;
  readonly completeDefinition?: boolean;
  readonly referencedDecl?: { readonly name?: string };
  readonly member?: string;
  readonly value?: string;
  readonly parentDeclContextId?: string;
  readonly id?: string;
  readonly opcode?: string;
}
interface Loc {
  file?: string;
  line?: number;
  col?: number;
  offset?: number;
  spellingLoc?: Loc;
  expansionLoc?: Loc;
  isMacroArgExpansion?: boolean;
}

const FUNCTIONS = new Set([
  'FunctionDecl',
  'CXXMethodDecl',
  'CXXConstructorDecl',
  'CXXDestructorDecl',
  'CXXConversionDecl',
]);
const HOLDERS = new Set([
  'NamespaceDecl',
  'CXXRecordDecl',
  'ClassTemplateDecl',
  'RecordDecl',
  'ClassTemplatePartialSpecializationDecl',
  'ClassTemplateSpecializationDecl',
  'EnumDecl',
]);

/**
 * @param file   path of a source that clang parses, or of one whose errors do not matter
 * @param flags  `-std=c++17`, `-I...`
 */
export function askClang(file: string, flags: readonly string[]): ClangSays {
  const answer = spawnSync(
    'clang',
    ['-Xclang', '-ast-dump=json', '-fsyntax-only', '-w', '-ferror-limit=0', ...flags, file],
    { maxBuffer: 1 << 30 },
  );
  const says = new Walk();
  for (const node of topLevel(answer.stdout)) says.declaration(node, '');
  return { ...says, diagnostics: answer.stderr.toString('utf8') };
}

/** A dump is larger than one string may be: each declaration at the top is parsed by itself. */
function* topLevel(out: Buffer): Generator<Node> {
  let start = -1;
  for (let at = 0; at < out.length; ) {
    let end = out.indexOf(10, at);
    if (end < 0) end = out.length;
    if (end - at <= 6 && out[at + 4] !== 32) {
      const line = out.toString('latin1', at, end);
      if (line === '    {') start = at;
      else if (start >= 0 && (line === '    }' || line === '    },')) {
        yield JSON.parse(out.toString('utf8', start, at + 5)) as Node;
        start = -1;
      }
    }
    at = end + 1;
  }
}

class Walk {
  readonly functions: ClangFunction[] = [];
  readonly calls: ClangCall[] = [];
  readonly records: ClangRecord[] = [];
  readonly enumerators: ClangConstant[] = [];
  readonly aliases: { name: string; file: string; line: number }[] = [];
  private file = '';
  private line = 0;
  /** Above zero inside a function: what is declared there is its own matter. */
  private inside = 0;
  private readonly templates = new Set<string>();

  declaration(node: Node, scope: string): void {
    this.places(node);
    this.look(node, scope);
  }

  /** clang leaves out a file or line that is the one it gave last: all places are filled in, in the order of the text. */
  private places(node: object): void {
    for (const [key, value] of Object.entries(node)) {
      if (typeof value !== 'object' || value === null) continue;
      if (key === 'includedFrom') continue;
      this.places(value);
    }
    const loc = node as Loc;
    if (typeof loc.offset === 'number' && typeof loc.col === 'number') {
      if (loc.file !== undefined) this.file = loc.file;
      if (loc.line !== undefined) this.line = loc.line;
      loc.file = this.file;
      loc.line = this.line;
    }
  }

  private look(node: Node, scope: string): void {
    const kind = node.kind ?? '';
    if (kind === 'FunctionTemplateDecl') {
      // The template itself; what was made of it is a copy.
      const own = node.inner?.find((one) => FUNCTIONS.has(one.kind ?? ''));
      if (own !== undefined) this.look(own, scope);
      return;
    }
    if (kind === 'ClassTemplateDecl') {
      const own = node.inner?.find((one) => one.kind === 'CXXRecordDecl');
      if (own !== undefined) this.look(own, scope);
      this.templates.add(placeText(node.loc));
      return;
    }
    // What was made of a template stands where the template stands; a specialisation has a place of its own.
    if (kind === 'ClassTemplateSpecializationDecl' && this.templates.has(placeText(node.loc))) return;
    if (kind === 'ClassTemplatePartialSpecializationDecl') this.templates.add(placeText(node.loc));
    const isFunction = FUNCTIONS.has(kind);
    if (isFunction && node.isImplicit !== true && node.name !== undefined) {
      if (this.inside === 0) this.fn(node, scope);
      this.inside++;
      for (const one of node.inner ?? []) this.look(one, scope);
      this.inside--;
      return;
    }
    if (isFunction) return;
    if (/^(?:CXX)?RecordDecl$/.test(kind) && node.completeDefinition === true && node.isImplicit !== true)
      this.record(node, scope);
    else if (kind === 'EnumDecl') this.enumeration(node, scope);
    else if (
      (kind === 'TypedefDecl' || kind === 'TypeAliasDecl') &&
      node.isImplicit !== true &&
      node.name !== undefined
    )
      this.aliases.push({ name: node.name, ...placeOf(node.loc) });
    // A friend is declared where it stands, and belongs elsewhere.
    if (kind === 'FriendDecl' && !(node.inner ?? []).some((one) => hasBody(one))) return;
    // What stands in a type is never run.
    if (kind === 'TypedefDecl' || kind === 'TypeAliasDecl') return;
    if (/CallExpr$|CXXNewExpr$|ConstructExpr$|ScalarValueInitExpr$|TemporaryObjectExpr$|FunctionalCastExpr$/.test(kind))
      this.call(node);
    const inner =
      HOLDERS.has(kind) && node.name !== undefined ? (scope === '' ? node.name : `${scope}::${node.name}`) : scope;
    if (node.isImplicit !== true) for (const one of node.inner ?? []) this.look(one, inner);
  }

  private fn(node: Node, scope: string): void {
    const args = (node.inner ?? []).filter((one) => one.kind === 'ParmVarDecl');
    this.functions.push({
      name: node.name!,
      scope,
      ...placeOf(node.loc),
      args: args.map((one) => ({
        name: one.name ?? '',
        type: one.type?.qualType ?? '',
        hasDefault: one.init !== undefined,
      })),
      variadic: node.variadic === true,
      type: node.type?.qualType ?? '',
      constructs: /Constructor|Destructor/.test(node.kind!),
      hasBody: (node.inner ?? []).some((one) => one.kind === 'CompoundStmt' || one.kind === 'CXXTryStmt'),
      fromMacro: isMacro(node.loc),
    });
  }

  private record(node: Node, scope: string): void {
    const fields = (list: readonly Node[]) =>
      list
        .filter((one) => one.kind === 'FieldDecl' && one.name !== undefined)
        .map((one) => ({ name: one.name!, type: one.type?.qualType ?? '' }));
    this.records.push({
      name: node.name ?? '',
      kind: node.tagUsed ?? '',
      scope,
      ...placeOf(node.loc),
      fields: fields(node.inner ?? []),
    });
  }

  private enumeration(node: Node, scope: string): void {
    let next: number | null = 0;
    for (const one of node.inner ?? []) {
      if (one.kind !== 'EnumConstantDecl') continue;
      const given = one.inner?.find((each) => /Expr|Literal|Operator/.test(each.kind ?? ''));
      const value: number | null = given === undefined ? next : constantValue(given);
      this.enumerators.push({ name: one.name ?? '', scope, line: placeOf(one.loc).line, value });
      next = value === null ? null : value + 1;
    }
  }

  private call(node: Node): void {
    const kind = node.kind!;
    const inner = node.inner ?? [];
    const begin = node.range?.begin;
    if (kind === 'CXXOperatorCallExpr') {
      // `f(x)` on an object is written as a call; `a + b` is not.
      const callee = named(inner[0]);
      if (callee?.name !== 'operator()') return;
      const object = named(inner[1]);
      if (object === null) return;
      this.calls.push({
        callee: object.name,
        ...placeOf(object.at),
        lastLine: placeOf(object.last).line,
        nargs: inner.slice(2).filter((one) => one.kind !== 'CXXDefaultArgExpr').length,
        constructs: false,
        fromMacro: isMacro(begin),
      });
      return;
    }
    if (/^(?:CallExpr|CXXMemberCallExpr|CUDAKernelCallExpr)$/.test(kind)) {
      const callee = named(inner[0]);
      if (callee === null) return;
      this.calls.push({
        callee: callee.name,
        ...placeOf(callee.at),
        lastLine: placeOf(callee.last).line,
        nargs: inner.slice(1).filter((one) => one.kind !== 'CXXDefaultArgExpr').length,
        constructs: false,
        fromMacro: isMacro(begin),
      });
      return;
    }
    this.calls.push({
      callee: (node.type?.qualType ?? '')
        .replace(/<[\s\S]*$/, '')
        .split('::')
        .at(-1)!
        .replace(/^.* /, ''),
      ...placeOf(begin),
      lastLine: placeOf(begin).line,
      nargs: inner.filter((one) => one.kind !== 'CXXDefaultArgExpr').length,
      constructs: true,
      fromMacro: isMacro(begin),
    });
  }
}

/** The value that clang found for an expression that has to be constant. */
function constantValue(node: Node): number | null {
  if (node.kind === 'ConstantExpr' && node.value !== undefined) return Number(node.value);
  for (const one of node.inner ?? []) {
    const value = constantValue(one);
    if (value !== null) return value;
  }
  return null;
}

/** The name that is called, below casts and brackets. */
function named(node: Node | undefined): { name: string; at: Loc | undefined; last: Loc | undefined } | null {
  let at = node;
  const said = (name: string, one: Node) => ({ name, at: one.range?.begin, last: one.range?.end });
  while (at !== undefined) {
    if (at.kind === 'DeclRefExpr') return said(at.referencedDecl?.name ?? '', at);
    if (at.kind === 'MemberExpr') return said((at.name ?? '').replace(/^->|^\./, ''), at);
    if (at.name !== undefined && /Unresolved|Dependent/.test(at.kind ?? '')) return said(at.name, at);
    if (at.member !== undefined) return said(at.member, at);
    // What depends on a template parameter has no name in the dump; the text has it.
    if (/^(?:DependentScopeDeclRef|UnresolvedMember|CXXDependentScopeMember)Expr$/.test(at.kind ?? ''))
      return said(textAt(at.range?.end), at);
    if (!/ImplicitCastExpr|ParenExpr|ConstantExpr|CXXBindTemporaryExpr/.test(at.kind ?? '')) return null;
    at = at.inner?.[0];
  }
  return null;
}

const texts = new Map<string, Buffer>();

/** The word at a place; `?` where it is none. */
function textAt(loc: Loc | undefined): string {
  const at = loc?.spellingLoc ?? loc;
  if (at?.file === undefined || at.offset === undefined) return '?';
  let text = texts.get(at.file);
  if (text === undefined) {
    text = readFileSync(at.file);
    texts.set(at.file, text);
  }
  return /^~?\w+/.exec(text.toString('latin1', at.offset, at.offset + 200))?.[0] ?? '?';
}

function placeOf(loc: Loc | undefined): { file: string; line: number; column: number } {
  const at = loc?.expansionLoc ?? loc;
  return { file: at?.file ?? '', line: at?.line ?? 0, column: at?.col ?? 0 };
}

function hasBody(node: Node): boolean {
  return (node.inner ?? []).some(
    (one) => one.kind === 'CompoundStmt' || (FUNCTIONS.has(one.kind ?? '') && hasBody(one)),
  );
}

function placeText(loc: Loc | undefined): string {
  const at = loc?.expansionLoc ?? loc;
  return `${at?.file}:${at?.offset}`;
}

function isMacro(loc: Loc | undefined): boolean {
  return loc?.expansionLoc !== undefined;
}
