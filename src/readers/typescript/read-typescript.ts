/**
 * TypeScript and JavaScript through the TypeScript compiler, in the hands of ts-morph: text comes in, its interface goes out.
 * Types are those that are written or that follow from the file alone; nothing is imported, so that a file is read at any revision.
 */
import {
  type ArrowFunction,
  type ClassDeclaration,
  type FunctionDeclaration,
  type FunctionExpression,
  type JSDoc,
  type JSDocableNode,
  Node,
  type ParameterDeclaration,
  Project,
  type SourceFile,
  SyntaxKind,
  ts,
  type VariableStatement,
} from 'ts-morph';
import type {
  ActualArgument,
  Argument,
  CallSite,
  Claim,
  Declared,
  FileInterface,
  LiteralUse,
  ModuleVariable,
  NamedConstant,
  Procedure,
  ProcedureKind,
  TypeDefinition,
  Use,
} from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { claimsFromComment } from '../claims/claims-from-comment.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';

/** Larger files are made by programs; the compiler would need gigabytes for them. */
const LARGEST = 8_000_000;

/**
 * @param path  decides the dialect: `.ts`, `.tsx`, `.js`, `.jsx`, `.mjs`, `.cjs`, `.mts`, `.cts`
 * @returns the interface; syntax errors are entries of `incomplete`, never thrown
 */
export function readTypescript(path: string, text: string): FileInterface {
  const javascript = /\.[cm]?jsx?$/.test(path);
  const reader = new TypescriptReader(javascript ? 'javascript' : 'typescript');
  if (text.length > LARGEST) {
    reader.skip(`${text.length} characters are more than this reader takes (${LARGEST})`);
    return reader.finish();
  }
  try {
    const project = new Project({
      useInMemoryFileSystem: true,
      skipFileDependencyResolution: true,
      skipLoadingLibFiles: true,
      compilerOptions: { allowJs: true, checkJs: false, noLib: true, noResolve: true },
    });
    const extension = /\.[cm]?[jt]sx?$/.exec(path)?.[0] ?? '.ts';
    reader.read(project.createSourceFile(`/file${extension}`, text));
  } catch (error) {
    // Endless nesting overflows the compiler's stack; what was read until then stands.
    reader.skip(`the TypeScript compiler gave up: ${(error as Error).message.slice(0, 120)}`);
  }
  return reader.finish();
}

type Callable = FunctionDeclaration | FunctionExpression | ArrowFunction;
type MethodLike = {
  getParameters(): ParameterDeclaration[];
  getReturnTypeNode(): Node | undefined;
};

class TypescriptReader {
  private readonly language: 'typescript' | 'javascript';
  private readonly procedures: Procedure[] = [];
  private readonly types: TypeDefinition[] = [];
  private readonly variables: ModuleVariable[] = [];
  private readonly constants: NamedConstant[] = [];
  private readonly literals: LiteralUse[] = [];
  private readonly uses: Use[] = [];
  private readonly calls: CallSite[] = [];
  private readonly claims: Claim[] = [];
  private readonly incomplete: { line: number; why: string }[] = [];
  private source!: SourceFile;
  private readonly values = new Map<string, number | string | boolean>();

  constructor(language: 'typescript' | 'javascript') {
    this.language = language;
  }

  skip(why: string): void {
    this.incomplete.push({ line: 1, why });
  }

  finish(): FileInterface {
    return {
      language: this.language,
      procedures: this.procedures,
      commons: [],
      types: this.types,
      variables: this.variables,
      constants: this.constants,
      literals: this.literals,
      uses: this.uses,
      includes: [],
      generics: [],
      calls: this.calls,
      claims: this.claims,
      storage: [],
      externals: [],
      datasets: [],
      incomplete: this.incomplete,
    };
  }

  read(source: SourceFile): void {
    this.source = source;
    const diagnostics = (source.compilerNode as unknown as { parseDiagnostics?: readonly ts.Diagnostic[] })
      .parseDiagnostics;
    for (const one of (diagnostics ?? []).slice(0, 20)) {
      const line = ts.getLineAndCharacterOfPosition(source.compilerNode, one.start ?? 0).line + 1;
      this.incomplete.push({ line, why: `not read: ${ts.flattenDiagnosticMessageText(one.messageText, ' ')}` });
    }
    for (const one of source.getImportDeclarations()) {
      const named = one.getNamedImports().map((item) => ({
        local: item.getAliasNode()?.getText() ?? item.getName(),
        name: item.getName(),
      }));
      const standard = one.getDefaultImport();
      if (standard !== undefined) named.push({ local: standard.getText(), name: 'default' });
      const all = one.getNamespaceImport() !== undefined || named.length === 0;
      this.uses.push({
        module: one.getModuleSpecifierValue(),
        parent: null,
        ...this.at(one),
        ...(all ? {} : { only: named }),
      });
    }
    this.statements(source.getStatements(), null);
    this.walk(source.compilerNode, null, null);
  }

  private statements(statements: readonly Node[], parent: string | null): void {
    for (const one of statements) {
      if (Node.isFunctionDeclaration(one)) {
        this.procedure(one, one.getName() ?? 'default', 'function', parent, one, one);
      } else if (Node.isClassDeclaration(one)) this.classOf(one, parent);
      else if (Node.isVariableStatement(one)) this.variablesOf(one, parent);
      else if (Node.isModuleDeclaration(one)) {
        const body = one.getBody();
        if (body !== undefined && Node.isModuleBlock(body))
          this.statements(body.getStatements(), join(parent, one.getName()));
      } else if (Node.isInterfaceDeclaration(one)) {
        const fields = one
          .getProperties()
          .map((field) =>
            this.declared(field, field.getName(), field.getTypeNode(), field.hasQuestionToken() ? ['optional'] : []),
          );
        const extended = one.getExtends()[0]?.getText();
        this.types.push({
          name: one.getName(),
          kind: 'interface',
          parent,
          fields,
          bindings: [],
          attributes: exported(one),
          ...(extended === undefined ? {} : { extends: extended }),
          ...this.at(one),
        });
        for (const field of one.getProperties()) this.docClaims(field, [field.getName()], join(parent, one.getName()));
        for (const method of one.getMethods())
          this.procedure(method, method.getName(), 'method', join(parent, one.getName()), method, method, true);
      } else if (Node.isTypeAliasDeclaration(one)) {
        const node = one.getTypeNode();
        const members = node !== undefined && Node.isTypeLiteral(node) ? node.getProperties() : [];
        this.types.push({
          name: one.getName(),
          kind: 'alias',
          parent,
          bindings: [],
          attributes: exported(one),
          ...this.at(one),
          fields: members.map((field) => this.declared(field, field.getName(), field.getTypeNode(), [])),
        });
        for (const field of members) this.docClaims(field, [field.getName()], join(parent, one.getName()));
      } else if (Node.isEnumDeclaration(one)) {
        const owner = join(parent, one.getName());
        this.types.push({
          name: one.getName(),
          kind: 'enum',
          parent,
          fields: [],
          bindings: [],
          attributes: exported(one),
          ...this.at(one),
        });
        for (const member of one.getMembers()) {
          const value =
            member.getInitializer() === undefined ? null : this.evaluate(member.getInitializer()!.compilerNode);
          this.constants.push({
            name: member.getName(),
            parent: owner,
            type: one.getName(),
            bytes: null,
            text: member.getInitializer()?.getText() ?? '',
            value,
            ...this.at(member),
          });
        }
      } else if (Node.isExportAssignment(one)) {
        const expression = one.getExpression();
        if (Node.isArrowFunction(expression) || Node.isFunctionExpression(expression)) {
          this.procedure(expression, 'default', 'function', parent, one, null);
        }
      }
    }
  }

  private variablesOf(statement: VariableStatement, parent: string | null): void {
    const constant = statement.getDeclarationKind() === 'const';
    for (const one of statement.getDeclarations()) {
      const value = one.getInitializer();
      const bare =
        value !== undefined && (Node.isAsExpression(value) || Node.isSatisfiesExpression(value))
          ? value.getExpression()
          : value;
      if (bare !== undefined && (Node.isArrowFunction(bare) || Node.isFunctionExpression(bare))) {
        this.procedure(bare, one.getName(), 'function', parent, one, statement);
        continue;
      }
      if (!Node.isIdentifier(one.getNameNode())) continue;
      const name = one.getName();
      this.docClaims(statement, [name], parent);
      this.claims.push(...claimsFromName(name, this.at(one), parent));
      const known = bare === undefined ? null : this.evaluate(bare.compilerNode);
      const type = one.getTypeNode()?.getText() ?? (known === null ? kindOf(bare?.compilerNode) : typeof known);
      if (constant && bare !== undefined && (known !== null || isScalarExpression(bare.compilerNode))) {
        if (known !== null) this.values.set(name, known);
        this.constants.push({
          name,
          parent,
          type,
          bytes: type === 'number' ? 8 : null,
          text: fold(bare.getText()),
          value: known,
          ...this.at(one),
        });
      } else {
        this.variables.push({
          ...this.declared(one, name, one.getTypeNode(), constant ? ['const'] : []),
          type,
          parent,
          visibility: statement.hasExportKeyword() ? 'public' : 'private',
          ...(bare === undefined ? {} : { value: fold(bare.getText()) }),
        });
      }
    }
  }

  private classOf(node: ClassDeclaration, parent: string | null): void {
    const name = node.getName() ?? 'default';
    const owner = join(parent, name);
    const fields = node
      .getProperties()
      .map((field) =>
        this.declared(field, field.getName(), field.getTypeNode(), [
          ...(field.isReadonly() ? ['readonly'] : []),
          ...(field.isStatic() ? ['static'] : []),
        ]),
      );
    const extended = node.getExtends()?.getText();
    this.types.push({
      name,
      kind: 'class',
      parent,
      fields,
      bindings: [],
      attributes: exported(node),
      ...(extended === undefined ? {} : { extends: extended }),
      ...this.at(node),
    });
    for (const field of node.getProperties()) this.docClaims(field, [field.getName()], owner);
    for (const one of node.getConstructors()) this.procedure(one, 'constructor', 'constructor', owner, one, one);
    for (const one of node.getMethods()) this.procedure(one, one.getName(), 'method', owner, one, one);
    for (const one of node.getGetAccessors()) this.procedure(one, one.getName(), 'property', owner, one, one);
  }

  private procedure(
    node: MethodLike,
    name: string,
    kind: ProcedureKind,
    parent: string | null,
    at: Node,
    documented: (Node & JSDocableNode) | null,
    prototype = false,
  ): void {
    const documentation = documented === null ? [] : documented.getJsDocs();
    const fromDoc = this.language === 'javascript' ? docTypes(documentation) : new Map<string, string>();
    const args = node.getParameters().map((one): Argument => {
      const initializer = one.getInitializer()?.getText();
      const type = one.getTypeNode()?.getText() ?? fromDoc.get(one.getName());
      return {
        ...this.declared(one, one.getName(), one.getTypeNode(), []),
        type:
          type === undefined
            ? initializer === undefined
              ? 'unknown'
              : kindOf(one.getInitializer()?.compilerNode)
            : fold(type.replace(/=$/, '')),
        intent: null,
        optional: one.isOptional() || initializer !== undefined,
        passing: one.isRestParameter() ? 'variadic' : 'positional',
        ...(initializer === undefined ? {} : { default: fold(initializer) }),
      };
    });
    const returned = node.getReturnTypeNode();
    const result =
      returned === undefined || /^(?:void|never|undefined)$/.test(returned.getText())
        ? null
        : this.declared(at, name, returned, []);
    const names = returned === undefined ? [] : tupleNames(returned);
    const owner = join(parent, name);
    const template = (node as unknown as Callable)
      .getTypeParameters?.()
      .map((one) => one.getText())
      .join(', ');
    const scope = (node as unknown as { getScope?: () => string }).getScope?.();
    const shown =
      (at as unknown as { isExported?: () => boolean }).isExported?.() ??
      (documented as unknown as { hasExportKeyword?: () => boolean } | null)?.hasExportKeyword?.();
    const async = (node as unknown as { isAsync?: () => boolean }).isAsync?.() === true;
    const fixed = (node as unknown as { isStatic?: () => boolean }).isStatic?.() === true;
    const bodyless = prototype || (node as unknown as { getBody?: () => unknown }).getBody?.() === undefined;
    this.procedures.push({
      name,
      kind,
      parent,
      args,
      result,
      endLine: at.getEndLineNumber(),
      attributes: [...(async ? ['async'] : []), ...(fixed ? ['static'] : [])],
      visibility: scope === 'private' || scope === 'protected' || shown === false ? 'private' : 'public',
      ...(bodyless ? { prototype: true } : {}),
      ...(names.length > 0 ? { returns: names } : {}),
      ...(template === undefined || template === '' ? {} : { template }),
      ...this.at(at),
    });
    for (const one of args) this.claims.push(...claimsFromName(one.name, one, owner));
    if (documented !== null)
      this.docClaims(
        documented,
        args.map((one) => one.name),
        parent,
        owner,
        name,
      );
  }

  /** What documentation comments say, of parameters by their tags and of the thing itself by its text and `@returns`. */
  private docClaims(
    node: Node & JSDocableNode,
    names: readonly string[],
    parent: string | null,
    owner = parent,
    itself?: string,
  ): void {
    const documentation = node.getJsDocs();
    for (const one of documentation) this.docClaimsOf(one, names, parent, owner, itself);
    if (itself !== undefined) return;
    const start = node.getStart();
    const full = this.source.getFullText();
    const [before] = node.getLeadingCommentRanges().slice(-1);
    if (
      documentation.length === 0 &&
      before !== undefined &&
      full.slice(before.getEnd(), start).split('\n').length <= 2
    ) {
      this.claims.push(
        ...claimsFromComment(bare(before.getText()), names, this.place(before.getPos()), owner, {
          caseSensitive: true,
        }),
      );
    }
    for (const one of node.getTrailingCommentRanges()) {
      this.claims.push(
        ...claimsFromComment(bare(one.getText()), names, this.place(one.getPos()), owner, { caseSensitive: true }),
      );
    }
  }

  private docClaimsOf(
    doc: JSDoc,
    names: readonly string[],
    parent: string | null,
    owner: string | null,
    itself?: string,
  ): void {
    const options = { from: 'docstring', caseSensitive: true } as const;
    const known = new Set<string>();
    const push = (claims: readonly Claim[]) => {
      for (const one of claims) {
        const key = `${one.name}\0${one.what}`;
        if (!known.has(key)) this.claims.push(one);
        known.add(key);
      }
    };
    for (const tag of doc.getTags()) {
      const at = this.place(tag.getStart());
      const says = (tag.getCommentText() ?? '').trim();
      if (Node.isJSDocParameterTag(tag)) {
        const name = tag.getName().split('.')[0]!;
        if (names.includes(name)) push(claimsFromComment(says, [name], at, owner, options));
      } else if (Node.isJSDocReturnTag(tag) && itself !== undefined)
        push(claimsFromComment(says, [itself], at, parent, options));
      else if (/^units?$/i.test(tag.getTagName()))
        push(
          claimsFromComment(
            `unit: ${says}`,
            itself === undefined ? names : [itself],
            at,
            itself === undefined ? owner : parent,
            options,
          ),
        );
    }
    const text = doc.getDescription();
    const at = this.place(doc.getStart());
    if (itself === undefined) push(claimsFromComment(text, names, at, owner, options));
    else push(claimsFromComment(text, names, at, owner, { ...options, block: true }));
  }

  private declared(node: Node, name: string, typeNode: Node | undefined, attributes: readonly string[]): Declared {
    const type = typeNode === undefined ? 'unknown' : fold(typeNode.getText());
    const rank = /(?:\[\])+$/.exec(type)?.[0]?.length ?? 0;
    const dims =
      rank > 0
        ? rank / 2
        : /^(?:Float|Int|Uint|BigInt|BigUint)\d+(?:Clamped)?Array$|^(?:Readonly)?Array</.test(type)
          ? 1
          : 0;
    const bytes = /^(?:number|bigint)\b/.test(type)
      ? 8
      : Number(/^(?:Float|Int|Uint|BigInt|BigUint)(\d+)/.exec(type)?.[1] ?? Number.NaN) / 8;
    return {
      name,
      type,
      rank: dims,
      attributes,
      bytes: Number.isFinite(bytes) ? bytes : null,
      bounds: Array.from({ length: dims }, () => ':'),
      shape: Array.from({ length: dims }, () => null),
      ...this.at(node),
    };
  }

  /** Calls and literals, over the compiler's own nodes: wrapping each would cost more than all the rest. */
  private walk(root: ts.Node, caller: string | null, parent: string | null): void {
    // A stack of its own: nesting in generated code is deeper than that of calls may be.
    const open: [ts.Node, string | null, string | null][] = [[root, caller, parent]];
    for (let next = open.pop(); next !== undefined; next = open.pop()) {
      const [node, within, owner] = next;
      let [inside, holder] = [within, owner];
      if (ts.isClassDeclaration(node) || ts.isModuleDeclaration(node))
        holder = join(owner, node.name?.getText(this.source.compilerNode) ?? 'default');
      else if (within === null) {
        const name = procedureName(node);
        if (name !== null) inside = join(owner, name);
      }
      if (ts.isCallExpression(node) || ts.isNewExpression(node)) this.call(node, within);
      else if (ts.isNumericLiteral(node)) this.literal(node, within);
      const children: ts.Node[] = [];
      node.forEachChild((child) => void children.push(child));
      for (let index = children.length - 1; index >= 0; index--) open.push([children[index]!, inside, holder]);
    }
  }

  private call(node: ts.CallExpression | ts.NewExpression, caller: string | null): void {
    const source = this.source.compilerNode;
    const target = node.expression;
    const method = ts.isPropertyAccessExpression(target);
    if (!method && !ts.isIdentifier(target)) return;
    const callee = fold(target.getText(source));
    if (callee.length > 120) return;
    const unpacked = unpackedNames(node);
    this.calls.push({
      callee,
      caller,
      how: ts.isNewExpression(node) ? 'constructor' : method ? 'method' : 'function',
      args: (node.arguments ?? []).map((one) => this.actual(one)),
      ...(unpacked.length > 0 ? { unpacked } : {}),
      ...this.place(node.getStart(source)),
    });
  }

  private actual(node: ts.Expression): ActualArgument {
    const source = this.source.compilerNode;
    const text = fold(node.getText(source)).slice(0, 200);
    const at = this.place(node.getStart(source));
    if (ts.isIdentifier(node)) return { text, form: 'name', name: text, ...at };
    if (ts.isPropertyAccessExpression(node)) return { text, form: 'element', name: node.name.text, ...at };
    if (ts.isElementAccessExpression(node) && ts.isIdentifier(node.expression))
      return { text, form: 'element', name: node.expression.text, ...at };
    const value = this.evaluate(node);
    if (value !== null && isLiteral(node))
      return { text, form: 'literal', type: typeof value, bytes: typeof value === 'number' ? 8 : null, rank: 0, ...at };
    return {
      text,
      form: ts.isArrowFunction(node) || ts.isFunctionExpression(node) ? 'procedure' : 'expression',
      ...at,
    };
  }

  private literal(node: ts.NumericLiteral, procedure: string | null): void {
    const above = node.parent;
    const written = node.getText(this.source.compilerNode);
    // Small whole numbers count and index; they say nothing about physics.
    if (/^\d{1,2}$/.test(written)) return;
    const role = ts.isVariableDeclaration(above)
      ? 'named'
      : ts.isCallExpression(above) || ts.isNewExpression(above)
        ? 'argument'
        : ts.isBinaryExpression(above)
          ? above.operatorToken.kind === SyntaxKind.EqualsToken
            ? 'assigned'
            : above.operatorToken.kind === SyntaxKind.AsteriskAsteriskToken
              ? 'exponent'
              : 'plain'
          : 'plain';
    const target =
      ts.isVariableDeclaration(above) && ts.isIdentifier(above.name)
        ? above.name.text
        : ts.isPropertyAssignment(above)
          ? above.name.getText(this.source.compilerNode)
          : undefined;
    this.literals.push({
      text: written,
      value: Number(node.text),
      bytes: 8,
      role,
      procedure,
      ...(target === undefined ? {} : { target }),
      ...this.place(node.getStart(this.source.compilerNode)),
    });
  }

  /** Arithmetic over literals and constants of this file. */
  private evaluate(node: ts.Expression, depth = 0): number | string | boolean | null {
    if (depth > 200) return null;
    if (ts.isNumericLiteral(node)) return Number(node.text);
    if (ts.isStringLiteralLike(node)) return node.text;
    if (node.kind === SyntaxKind.TrueKeyword) return true;
    if (node.kind === SyntaxKind.FalseKeyword) return false;
    if (ts.isParenthesizedExpression(node) || ts.isAsExpression(node) || ts.isSatisfiesExpression(node))
      return this.evaluate(node.expression, depth + 1);
    if (ts.isIdentifier(node)) return this.values.get(node.text) ?? null;
    if (ts.isPropertyAccessExpression(node) && ts.isIdentifier(node.expression) && node.expression.text === 'Math') {
      const value = (Math as unknown as Record<string, unknown>)[node.name.text];
      return typeof value === 'number' ? value : null;
    }
    if (ts.isPrefixUnaryExpression(node)) {
      const value = this.evaluate(node.operand, depth + 1);
      if (typeof value !== 'number') return null;
      return node.operator === SyntaxKind.MinusToken ? -value : node.operator === SyntaxKind.PlusToken ? value : null;
    }
    if (ts.isBinaryExpression(node)) {
      const left = this.evaluate(node.left, depth + 1);
      const right = this.evaluate(node.right, depth + 1);
      if (typeof left !== 'number' || typeof right !== 'number') return null;
      switch (node.operatorToken.kind) {
        case SyntaxKind.PlusToken:
          return left + right;
        case SyntaxKind.MinusToken:
          return left - right;
        case SyntaxKind.AsteriskToken:
          return left * right;
        case SyntaxKind.SlashToken:
          return left / right;
        case SyntaxKind.AsteriskAsteriskToken:
          return left ** right;
        default:
          return null;
      }
    }
    if (
      ts.isCallExpression(node) &&
      ts.isPropertyAccessExpression(node.expression) &&
      node.expression.getText(this.source.compilerNode).startsWith('Math.')
    ) {
      const name = node.expression.name.text;
      const args = node.arguments.map((one) => this.evaluate(one, depth + 1));
      const apply = {
        sqrt: Math.sqrt,
        log: Math.log,
        log10: Math.log10,
        exp: Math.exp,
        pow: Math.pow,
        cbrt: Math.cbrt,
      }[name] as ((...of: number[]) => number) | undefined;
      if (apply !== undefined && args.every((one) => typeof one === 'number')) return apply(...(args as number[]));
    }
    return null;
  }

  private at(node: Node): Position {
    return this.place(node.getStart());
  }

  private place(offset: number): Position {
    const { line, character } = ts.getLineAndCharacterOfPosition(this.source.compilerNode, offset);
    return { line: line + 1, column: character + 1 };
  }
}

const join = (parent: string | null, name: string) => (parent === null ? name : `${parent}::${name}`);
const fold = (text: string) => (text.length > 400 ? `${text.slice(0, 400)}…` : text).replace(/\s+/g, ' ');
const exported = (node: { isExported(): boolean }) => (node.isExported() ? ['exported'] : []);
/** A comment without its marks, line by line, so that lines keep their numbers. */
const bare = (comment: string) => comment.replace(/^\/\*+|\*+\/$|^\/\/+/g, '  ').replace(/\n\s*\*+ ?/g, '\n ');

function kindOf(node: ts.Node | undefined): string {
  if (node === undefined) return 'unknown';
  if (ts.isNumericLiteral(node)) return 'number';
  if (ts.isStringLiteralLike(node)) return 'string';
  if (ts.isArrayLiteralExpression(node)) return 'array';
  if (ts.isObjectLiteralExpression(node)) return 'object';
  if (node.kind === SyntaxKind.TrueKeyword || node.kind === SyntaxKind.FalseKeyword) return 'boolean';
  if (ts.isNewExpression(node) && ts.isIdentifier(node.expression)) return node.expression.text;
  return 'unknown';
}

function isScalarExpression(node: ts.Node): boolean {
  return ts.isBinaryExpression(node) || ts.isPrefixUnaryExpression(node) || isLiteral(node);
}

function isLiteral(node: ts.Node): boolean {
  return (
    ts.isLiteralExpression(node) ||
    node.kind === SyntaxKind.TrueKeyword ||
    node.kind === SyntaxKind.FalseKeyword ||
    (ts.isPrefixUnaryExpression(node) && ts.isNumericLiteral(node.operand))
  );
}

function docTypes(documentation: readonly JSDoc[]): Map<string, string> {
  const types = new Map<string, string>();
  for (const doc of documentation) {
    for (const tag of doc.getTags()) {
      const type = Node.isJSDocParameterTag(tag) ? tag.getTypeExpression()?.getTypeNode()?.getText() : undefined;
      if (Node.isJSDocParameterTag(tag) && type !== undefined) types.set(tag.getName(), type);
    }
  }
  return types;
}

function tupleNames(node: Node): string[] {
  if (Node.isTupleTypeNode(node))
    return node.getElements().flatMap((one) => (Node.isNamedTupleMember(one) ? [one.getName()] : []));
  return [];
}

function procedureName(node: ts.Node): string | null {
  if (ts.isFunctionDeclaration(node)) return node.name?.text ?? 'default';
  if (ts.isMethodDeclaration(node) || ts.isGetAccessorDeclaration(node))
    return ts.isIdentifier(node.name) ? node.name.text : node.name.getText();
  if (ts.isConstructorDeclaration(node)) return 'constructor';
  if (
    ts.isVariableDeclaration(node) &&
    ts.isIdentifier(node.name) &&
    node.initializer !== undefined &&
    (ts.isArrowFunction(node.initializer) || ts.isFunctionExpression(node.initializer))
  )
    return node.name.text;
  return null;
}

/** `const [p, e] = eos(rho, t)`, `p = eos(rho, t)` */
function unpackedNames(node: ts.Node): string[] {
  let above = node.parent;
  if (above !== undefined && ts.isAwaitExpression(above)) above = above.parent;
  if (above !== undefined && ts.isVariableDeclaration(above)) {
    if (ts.isIdentifier(above.name)) return [above.name.text];
    return above.name.elements.map((one) => (ts.isOmittedExpression(one) ? '' : one.name.getText()));
  }
  if (above !== undefined && ts.isBinaryExpression(above) && above.operatorToken.kind === SyntaxKind.EqualsToken) {
    if (ts.isArrayLiteralExpression(above.left)) return above.left.elements.map((one) => one.getText());
    return [above.left.getText().slice(0, 80)];
  }
  return [];
}
