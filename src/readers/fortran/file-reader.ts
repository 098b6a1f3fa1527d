/** Statements in order to program units, declarations, calls and claims. One reader a file. */
import type {
  CallSite,
  Claim,
  CommonBlock,
  Declared,
  External,
  FileInterface,
  Generic,
  Include,
  Incomplete,
  LiteralUse,
  ModuleVariable,
  NamedConstant,
  Procedure,
  StorageStatement,
  TypeDefinition,
  Use,
} from '../../model/interface.ts';
import { claimsFromComment } from '../claims/claims-from-comment.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import type { ReadOptions } from '../read-options.ts';
import { evaluate } from './evaluate.ts';
import { callsIn, type KnownType, literalsIn } from './executable.ts';
import { closing, kindBytes, kindExpression, splitTop, type TypeSpec, typeSpecAt } from './kinds.ts';
import {
  argumentsOf,
  type Draft,
  declaredFrom,
  draftOf,
  kindIn,
  newScope,
  type Scope,
  valueIn,
  visibilityOf,
} from './scope.ts';
import { sourceForm } from './source-form.ts';
import { type Comment, type Part, partsOf, positionIn, type Statement } from './statements.ts';

const UNIT =
  /^(?:(?:(?:pure|impure|elemental|recursive|non_recursive|module|attributes\s*\([a-z, ]*\))\s+)*)(?:(double\s*precision|double\s*complex|(?:real|integer|logical|complex|character|byte)\s*(?:\*\s*(?:\d+|\(\s*[*\d]+\s*\))|\((?:[^()]|\([^()]*\))*\))?|type\s*\([^()]*\)|class\s*\([^()]*\)|_r[48ls])\s*)?(?:(?:pure|impure|elemental|recursive|module)\s+)*(subroutine|function)\s*([a-z_]\w*)\s*(.*)$/s;

const DEPTH_OF_INCLUDES = 12;

export class FileReader {
  private readonly path: string;
  private readonly options: ReadOptions;
  private readonly file: Scope;
  private scope: Scope;
  private readonly procedures: Procedure[] = [];
  private readonly commons: {
    name: string;
    parent: string | null;
    members: Draft[];
    scope: Scope;
    line: number;
    column: number;
    condition: string | null;
  }[] = [];
  private readonly doneCommons: CommonBlock[] = [];
  private readonly types: TypeDefinition[] = [];
  private readonly variables: ModuleVariable[] = [];
  private readonly constants: NamedConstant[] = [];
  private readonly literals: LiteralUse[] = [];
  private readonly uses: Use[] = [];
  private readonly includes: Include[] = [];
  private readonly generics: Generic[] = [];
  private readonly calls: CallSite[] = [];
  private readonly claims: Claim[] = [];
  private readonly storage: StorageStatement[] = [];
  private readonly externals: External[] = [];
  private readonly incomplete: Incomplete[] = [];
  /** Above zero while an included file is read: it types and dimensions, and is told by its own reading. */
  private inside = 0;
  private readonly comments: Comment[] = [];
  /** Names of the last declaration, for comments on the lines after it. */
  private lastNames: string[] = [];
  private lastLine = 0;
  /** Comment blocks that wait for the procedure whose arguments they speak of. */
  private blockFor: { comments: Comment[]; scope: Scope }[] = [];

  constructor(path: string, options: ReadOptions) {
    this.path = path;
    this.options = options;
    this.file = newScope('file', '', null, { line: 1, column: 1 }, null);
    this.scope = this.file;
  }

  take(part: Part): void {
    if (part.is === 'comment') this.comment(part.comment);
    else if (part.is === 'directive') this.directive(part);
    else this.statement(part.statement);
  }

  finish(): Omit<FileInterface, 'form'> {
    while (this.scope.parent !== null) {
      if (this.scope.kind !== 'program')
        this.incomplete.push({ line: this.scope.line, why: `${this.scope.kind} ${this.scope.name} has no end` });
      this.close(this.scope.line);
    }
    this.endUnit(this.file);
    return {
      language: 'fortran',
      procedures: this.procedures.sort((a, b) => a.line - b.line || a.column - b.column),
      commons: this.doneCommons,
      types: this.types,
      variables: this.variables,
      constants: this.constants,
      literals: this.literals,
      uses: this.uses,
      includes: this.includes,
      generics: this.generics,
      calls: this.calls,
      claims: this.claims,
      storage: this.storage,
      externals: this.externals,
      datasets: [],
      incomplete: this.incomplete,
    };
  }

  // Comments

  private comment(comment: Comment): void {
    if (this.inside > 0) return;
    const text = stripMark(comment.text);
    // `!!` lines right below a declaration go on about it.
    if (/^!!|^!</.test(comment.text) && this.lastNames.length > 0 && comment.line === this.lastLine + 1) {
      this.claims.push(...claimsFromComment(text.replace(/^[!<>\s]+/, ''), this.lastNames, comment, this.ownPath()));
      this.lastLine = comment.line;
      return;
    }
    this.comments.push(comment);
    if (this.comments.length > 2000) this.comments.splice(0, 1000);
  }

  private claimNames(names: readonly string[], statement: Statement): void {
    if (this.inside > 0) return;
    this.lastNames = [...names];
    this.lastLine = statement.endLine;
    for (const comment of statement.comments) {
      // A comment on a continued line is about what stands on that line.
      const onLine =
        statement.endLine === statement.line ? names : names.filter((name) => lineHolds(statement, comment.line, name));
      this.claims.push(
        ...claimsFromComment(stripMark(comment.text), onLine.length > 0 ? onLine : names, comment, this.ownPath()),
      );
    }
  }

  private ownPath(): string | null {
    const { scope } = this;
    if (scope.kind === 'file') return null;
    return scope.path === null ? scope.name : `${scope.path}::${scope.name}`;
  }

  /** Comment blocks above and inside a procedure speak of its arguments by name. */
  private claimBlocks(scope: Scope, comments: readonly Comment[]): void {
    const names = [
      ...scope.dummies.map((one) => one.name),
      ...scope.drafts.keys(),
      ...(scope.kind === 'function' ? [scope.name] : []),
    ];
    const candidates = [...new Set(names.filter((name) => name !== '*'))];
    if (candidates.length === 0 || comments.length === 0) return;
    const parent = scope.path === null ? scope.name : `${scope.path}::${scope.name}`;
    let block: Comment[] = [];
    const flush = () => {
      if (block.length === 0) return;
      const text = block.map((one) => stripMark(one.text)).join('\n');
      this.claims.push(
        ...claimsFromComment(text, candidates, { line: block[0]!.line, column: 2 }, parent, { block: true }),
      );
      block = [];
    };
    for (const comment of comments) {
      if (block.length > 0 && comment.line !== block.at(-1)!.line + 1) flush();
      block.push(comment);
    }
    flush();
  }

  // Directives and includes

  private directive({ line, text, condition }: Extract<Part, { is: 'directive' }>): void {
    const include = /^#\s*include\s*["<]([^">]+)[">]/.exec(text);
    if (include !== null) {
      this.include(include[1]!, '#include', line, 1, condition);
      return;
    }
    const define = /^#\s*define\s+([A-Za-z_]\w*)(?:\s+(.+?))?\s*$/.exec(text);
    if (define === null || this.inside > 0) return;
    const value = define[2] === undefined ? null : evaluate(define[2], (name) => valueIn(this.scope, name));
    this.constants.push({
      name: define[1]!,
      parent: null,
      type: 'macro',
      bytes: null,
      text: define[2] ?? '',
      value,
      line,
      column: text.indexOf(define[1]!) + 1,
      ...(condition === null ? {} : { condition }),
    });
  }

  private include(path: string, how: Include['how'], line: number, column: number, condition: string | null): void {
    if (this.inside === 0)
      this.includes.push({
        path,
        how,
        parent: this.ownPath(),
        line,
        column,
        ...(condition === null ? {} : { condition }),
      });
    if (this.inside >= DEPTH_OF_INCLUDES) return;
    const bytes = this.options.include?.(path, this.path) ?? null;
    if (bytes === null) return;
    const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
    this.inside++;
    for (const part of partsOf(text, sourceForm(path, text), this.options.define)) this.take(part);
    this.inside--;
  }

  // Statements

  private statement(statement: Statement): void {
    const { code } = statement;
    const first = code.charCodeAt(0);
    // What begins with no letter or underscore declares nothing.
    if (!((first >= 97 && first <= 122) || first === 95)) return;
    if (this.ends(statement) || this.begins(statement)) return;
    if (this.scope.kind === 'type' && this.inType(statement)) return;
    if (this.scope.kind === 'interface' && this.inInterface(statement)) return;
    if (this.declares(statement)) return;
    this.executes(statement);
  }

  private at(statement: Statement, offset = 0) {
    return positionIn(statement, offset);
  }

  private ends(statement: Statement): boolean {
    const match =
      /^end\s*(?:(program|module|submodule|subroutine|function|block\s*data|interface|type|procedure)\b\s*([a-z_]\w*|operator.*|assignment.*)?)?\s*$/.exec(
        statement.code,
      );
    if (match === null) return false;
    if (match[1] === undefined && statement.code.trim() !== 'end') return false;
    const kind = match[1]?.replace(/\s+/g, '');
    // An END of another kind closes what was left open inside.
    while (
      kind !== undefined &&
      this.scope.parent !== null &&
      !closes(kind, this.scope.kind) &&
      enclosed(this.scope, kind)
    )
      this.close(statement.line);
    if (this.scope.parent !== null) this.close(statement.endLine);
    return true;
  }

  private begins(statement: Statement): boolean {
    const { code } = statement;
    const unit = UNIT.exec(code);
    if (unit !== null && !/^\s*=|^%/.test(unit[4]!)) return this.procedure(statement, unit);
    const named = /^(program|module|submodule|block\s*data)\b\s*(\([^)]*\))?\s*([a-z_]\w*)?\s*$/.exec(code);
    if (named !== null) {
      const word = named[1]!.replace(/\s+/g, '');
      if (word === 'module' && named[3] === undefined) return false;
      const kind = word === 'blockdata' ? 'block-data' : (word as Scope['kind']);
      const scope = newScope(
        kind,
        named[3] ?? '',
        this.scope,
        this.at(statement, Math.max(0, code.lastIndexOf(named[3] ?? code))),
        statement.condition,
      );
      if (kind === 'submodule') scope.extends = named[2]?.replace(/[()\s]/g, '') ?? '';
      this.open(scope);
      return true;
    }
    const separate = /^module\s+procedure\s+([a-z_]\w*)\s*$/.exec(code);
    if (separate !== null && this.scope.kind !== 'interface') {
      this.open(
        newScope(
          'separate',
          separate[1]!,
          this.scope,
          this.at(statement, code.indexOf(separate[1]!)),
          statement.condition,
        ),
      );
      return true;
    }
    const interfaces = /^(abstract\s+)?interface\b\s*(.*)$/.exec(code);
    if (interfaces !== null && !/^\s*[=(%]/.test(interfaces[2]!)) {
      const scope = newScope(
        'interface',
        interfaces[2]!.replace(/\s+/g, ''),
        this.scope,
        this.at(statement),
        statement.condition,
      );
      scope.isAbstract = interfaces[1] !== undefined;
      this.open(scope);
      return true;
    }
    const type = /^type\b\s*(?:,([^:]*))?(?:::)?\s*([a-z_]\w*)\s*(\(.*\))?\s*$/.exec(code);
    if (type !== null && !/^type\s*\(/.test(code) && type[2] !== 'is') {
      const scope = newScope(
        'type',
        type[2]!,
        this.scope,
        this.at(statement, code.lastIndexOf(type[2]!)),
        statement.condition,
      );
      for (const attribute of splitTop(type[1] ?? '')) {
        const text = attribute.text.trim();
        const parent = /^extends\s*\(\s*(\w+)\s*\)$/.exec(text);
        if (parent !== null) scope.extends = parent[1]!;
        if (text !== '') scope.attributes.push(text);
      }
      this.open(scope);
      return true;
    }
    return false;
  }

  private procedure(statement: Statement, unit: RegExpExecArray): boolean {
    const { code } = statement;
    const kind = unit[2] as 'subroutine' | 'function';
    const name = unit[3]!;
    const rest = unit[4]!;
    if (kind === 'function' && rest !== '' && !rest.startsWith('(')) return false;
    this.closeUnended(statement);
    const nameAt = code.lastIndexOf(name, code.length - rest.length);
    const scope = newScope(kind, name, this.scope, this.at(statement, nameAt), statement.condition);
    for (const word of ['pure', 'impure', 'elemental', 'recursive', 'module']) {
      if (new RegExp(`\\b${word}\\b`).test(code.slice(0, nameAt))) scope.attributes.push(word);
    }
    if (unit[1] !== undefined) {
      const spec = typeSpecAt(unit[1].trim(), (kindName) => kindIn(this.scope, kindName));
      if (spec !== null) scope.prefixType = spec;
    }
    if (rest.startsWith('(')) {
      const close = closing(rest, 0);
      const inside = rest.slice(1, close < 0 ? undefined : close);
      const begin = code.length - rest.length + 1;
      for (const { text, offset } of splitTop(inside)) {
        const dummy = text.trim();
        if (dummy === '') continue;
        const at = this.at(statement, begin + offset + text.search(/\S/));
        scope.dummies.push({ name: dummy === '*' || dummy === '&' ? '*' : dummy, ...at });
      }
      const behind = close < 0 ? '' : rest.slice(close + 1);
      scope.resultName = /\bresult\s*\(\s*(\w+)\s*\)/.exec(behind)?.[1] ?? null;
      this.bind(scope, behind, statement);
    } else this.bind(scope, rest, statement);
    const above = this.comments.splice(0);
    this.open(scope);
    for (const dummy of scope.dummies) if (dummy.name !== '*') draftOf(scope, dummy.name, dummy, null);
    if (this.inside === 0) {
      this.blockFor.push({ comments: above.slice(-200), scope });
      this.claimNames(
        scope.dummies.map((one) => one.name).filter((one) => one !== '*'),
        statement,
      );
    }
    return true;
  }

  /** A procedure inside another comes after CONTAINS; without it the one before has lost its END, or is another branch of the preprocessor. */
  private closeUnended(statement: Statement): void {
    while ((this.scope.kind === 'subroutine' || this.scope.kind === 'function') && !this.scope.containing) {
      const alternative = this.scope.condition !== statement.condition;
      if (!alternative)
        this.incomplete.push({ line: this.scope.line, why: `${this.scope.kind} ${this.scope.name} has no end` });
      this.close(statement.line - 1);
    }
  }

  private bind(scope: Scope, text: string, statement: Statement): void {
    const bind = /\bbind\s*\(\s*c\b([^)]*)\)/.exec(text);
    if (bind === null) return;
    scope.attributes.push('bind(c)');
    const quoted = /bind\s*\(\s*c\s*,\s*name\s*=\s*(['"])([^'"]*)\1/i.exec(statement.text);
    scope.linkName = quoted?.[2] ?? scope.name;
  }

  private open(scope: Scope): void {
    this.scope = scope;
  }

  private close(endLine: number): void {
    const { scope } = this;
    this.scope = scope.parent ?? this.file;
    this.endUnit(scope, endLine);
    this.lastNames = [];
  }

  // Declarations

  private declares(statement: Statement): boolean {
    const { code } = statement;
    const spec = typeSpecAt(code, (name) => kindIn(this.scope, name));
    if (spec !== null && this.typed(statement, spec)) return true;
    const word = /^[a-z_]+/.exec(code)?.[0] ?? '';
    switch (word) {
      case 'use':
        return this.use(statement);
      case 'include': {
        const path = /^include\s*(['"])(.*?)\1/i.exec(statement.text)?.[2];
        if (path === undefined) return false;
        this.include(path, 'include', statement.line, this.at(statement).column, statement.condition);
        return true;
      }
      case 'implicit':
        return this.implicit(code);
      case 'parameter':
        return this.parameter(statement);
      case 'common':
        return this.common(statement);
      case 'dimension':
      case 'allocatable':
      case 'pointer':
      case 'target':
      case 'save':
      case 'external':
      case 'intrinsic':
      case 'optional':
      case 'intent':
      case 'value':
      case 'volatile':
      case 'asynchronous':
      case 'contiguous':
      case 'protected':
        return this.attributeStatement(word, statement);
      case 'public':
      case 'private':
        return this.access(word, code);
      case 'equivalence':
      case 'data':
      case 'namelist':
        return this.storing(word, statement);
      case 'contains':
        if (code.trim() !== 'contains') return false;
        this.scope.containing = true;
        return true;
      case 'entry':
        return this.entry(statement);
      case 'generic':
        return false;
      default:
        return false;
    }
  }

  private typed(statement: Statement, spec: TypeSpec): boolean {
    const { code } = statement;
    let at = spec.end;
    const separator = code.indexOf('::', at);
    const attributes: string[] = [];
    let intent: Draft['intent'] = null;
    let dimension: string[] | null = null;
    const rest = code.slice(at);
    if (/^\s*,/.test(rest) && separator >= 0) {
      for (const { text } of splitTop(code.slice(at, separator)).slice(1)) {
        const attribute = text.trim();
        const between = /^intent\s*\(\s*(in\s*out|in|out)\s*\)$/.exec(attribute);
        if (between !== null) intent = between[1]!.replace(/\s+/g, '') as Draft['intent'];
        else if (/^dimension\s*\(/.test(attribute))
          dimension = boundsOf(attribute.slice(attribute.indexOf('(') + 1, closing(attribute, attribute.indexOf('('))));
        else if (attribute !== '') attributes.push(attribute);
      }
      at = separator + 2;
    } else if (/^\s*::/.test(rest)) at = separator + 2;
    else {
      if (/^\s*,/.test(rest)) at += rest.indexOf(',') + 1;
      if (!/^\s*[a-z_]/.test(code.slice(at)) || /^\s*\w+\s*=[^>]/.test(code.slice(at))) return false;
    }
    const names: string[] = [];
    for (const { text, offset } of splitTop(code.slice(at))) {
      const entity = /^(\s*)([a-z_]\w*)\s*/.exec(text);
      if (entity === null) continue;
      const name = entity[2]!;
      const begin = at + offset + entity[1]!.length;
      let position = entity[0].length;
      let bounds: string[] | null = dimension;
      let { length } = spec;
      let { bytes } = spec;
      let kind = spec.kind;
      for (let more = true; more; ) {
        more = false;
        if (text[position] === '(') {
          const close = closing(text, position);
          if (close < 0) break;
          bounds = boundsOf(text.slice(position + 1, close));
          position = close + 1;
          more = true;
        }
        const star = /^\s*\*\s*(\d+|\([^)]*\)|\*)/.exec(text.slice(position));
        if (star !== null) {
          if (spec.type === 'character') length = star[1]!.replace(/[()]/g, '').trim();
          else if (/^\d+$/.test(star[1]!)) [bytes, kind] = [Number(star[1]), star[1]!];
          position += star[0].length;
          more = true;
        }
      }
      const draft = draftOf(this.scope, name, this.at(statement, begin), statement.condition);
      Object.assign(draft, {
        ...this.at(statement, begin),
        type: spec.type,
        bytes,
        ...(kind === undefined ? {} : { kind }),
        ...(length === undefined ? {} : { length }),
      });
      if (bounds !== null) draft.bounds = bounds;
      if (intent !== null) draft.intent = intent;
      draft.condition ??= statement.condition;
      for (const attribute of attributes) {
        if (attribute === 'optional') draft.optional = true;
        else if (attribute === 'external') draft.external = true;
        else if (attribute === 'public') this.scope.publicNames.add(name);
        else if (attribute === 'private') this.scope.privateNames.add(name);
        else draft.attributes.add(attribute);
      }
      names.push(name);
      const initial = /^\s*=>?\s*(.*)$/s.exec(text.slice(position));
      if (initial !== null) {
        const from = at + offset + text.length - initial[1]!.length;
        const value = statement.text.slice(from, from + initial[1]!.length).trim();
        if (attributes.includes('parameter')) this.constant(name, value, spec, statement, begin);
        else {
          (draft as Draft & { value?: string }).value = value.slice(0, 200);
          this.literal(value, name, bytes, spec.type, statement, from);
        }
      }
    }
    if (names.length === 0) return false;
    this.claimNames(names, statement);
    return true;
  }

  private constant(
    name: string,
    text: string,
    spec: { type: string; bytes: number | null },
    statement: Statement,
    offset: number,
  ): void {
    const value = /^['"]/.test(text) ? text.slice(1, -1) : evaluate(text, (other) => valueIn(this.scope, other));
    if (typeof value === 'number') this.scope.values.set(name, spec.type === 'integer' ? Math.trunc(value) : value);
    const kind = kindExpression(text) ?? kindBytes(text.trim().toLowerCase(), (other) => kindIn(this.scope, other));
    if (kind !== null && spec.type === 'integer') {
      this.scope.kinds.set(name, kind);
      if (typeof value !== 'number') this.scope.values.set(name, kind);
    }
    if (this.inside > 0) return;
    const shown = typeof value === 'number' ? value : kind !== null && spec.type === 'integer' ? kind : value;
    this.constants.push({
      name,
      parent: this.ownPath(),
      type: spec.type,
      bytes: spec.bytes,
      text: text.slice(0, 400),
      value: shown,
      ...this.at(statement, offset),
      ...(statement.condition === null ? {} : { condition: statement.condition }),
    });
    this.literal(
      text,
      name,
      spec.bytes,
      spec.type,
      statement,
      Math.max(0, statement.text.indexOf(text, offset)),
      'named',
    );
  }

  private literal(
    text: string,
    target: string,
    targetBytes: number | null,
    type: string,
    statement: Statement,
    offset: number,
    role: LiteralUse['role'] = 'assigned',
  ): void {
    if (this.inside > 0 || (type !== 'real' && type !== 'complex')) return;
    const single = type === 'complex' && targetBytes !== null ? targetBytes / 2 : targetBytes;
    for (const literal of literalsIn(text)) {
      const at = this.at(statement, offset + literal.offset);
      this.literals.push({
        text: literal.text,
        value: literal.value,
        bytes: literalBytes(literal.kind, (name) => kindIn(this.scope, name)),
        role: literal.alone ? role : (literal.role ?? (role === 'named' ? 'named' : 'mixed')),
        target,
        targetBytes: single,
        procedure: this.procedurePath(),
        ...at,
      });
    }
  }

  private procedurePath(): string | null {
    return this.scope.kind === 'file' || this.scope.kind === 'module' ? null : this.ownPath();
  }

  private use(statement: Statement): boolean {
    const match = /^use\b\s*(?:,\s*(?:non_)?intrinsic\s*)?(?:::)?\s*([a-z_]\w*)\s*(?:,\s*(.*))?$/s.exec(statement.code);
    if (match === null) return false;
    if (this.inside > 0) return true;
    const rest = match[2] ?? '';
    const only = /^only\s*:\s*(.*)$/s.exec(rest.trim());
    const names = splitTop(only?.[1] ?? rest).flatMap(({ text }) => {
      const rename = /^\s*([a-z_]\w*)\s*=>\s*([a-z_]\w*)\s*$/.exec(text);
      if (rename !== null) return [{ local: rename[1]!, name: rename[2]! }];
      const name = text.replace(/\s+/g, '');
      return name === '' ? [] : [{ local: name, name }];
    });
    this.uses.push({
      module: match[1]!,
      parent: this.ownPath(),
      ...(only !== null ? { only: names } : names.length > 0 ? { renames: names } : {}),
      ...this.at(statement),
      ...(statement.condition === null ? {} : { condition: statement.condition }),
    });
    return true;
  }

  private implicit(code: string): boolean {
    if (/^implicit\s+none\b/.test(code)) {
      this.scope.implicit = null;
      return true;
    }
    let rest = code.replace(/^implicit\s*/, '');
    this.scope.implicit ??= new Map();
    for (
      let spec = typeSpecOfImplicit(rest, (name) => kindIn(this.scope, name));
      spec !== null;
      spec = typeSpecOfImplicit(rest, (name) => kindIn(this.scope, name))
    ) {
      for (const { text } of splitTop(spec.letters)) {
        const range = /^\s*([a-z])\s*(?:-\s*([a-z]))?\s*$/.exec(text);
        if (range === null) continue;
        for (let letter = range[1]!.charCodeAt(0); letter <= (range[2] ?? range[1])!.charCodeAt(0); letter++) {
          this.scope.implicit.set(String.fromCharCode(letter), {
            type: spec.type,
            bytes: spec.bytes,
            ...(spec.kind === undefined ? {} : { kind: spec.kind }),
          });
        }
      }
      rest = spec.rest.replace(/^\s*,\s*/, '');
    }
    return true;
  }

  private parameter(statement: Statement): boolean {
    const { code } = statement;
    const open = code.indexOf('(');
    if (open < 0 || !/^parameter\s*\($/.test(code.slice(0, open + 1))) return false;
    const close = closing(code, open);
    if (close < 0) return false;
    for (const { text, offset } of splitTop(code.slice(open + 1, close))) {
      const match = /^(\s*)([a-z_]\w*)\s*=\s*/.exec(text);
      if (match === null) continue;
      const begin = open + 1 + offset;
      const value = statement.text.slice(begin + match[0].length, begin + text.length).trim();
      const draft = draftOf(this.scope, match[2]!, this.at(statement, begin + match[1]!.length), statement.condition);
      draft.attributes.add('parameter');
      const declared = declaredFrom(this.scope, draft, () => null);
      this.constant(match[2]!, value, declared, statement, begin + match[1]!.length);
    }
    this.claimNames([], statement);
    return true;
  }

  private common(statement: Statement): boolean {
    const { code } = statement;
    const rest = code.slice(6);
    if (!/^\s*[/a-z_]/.test(rest) || /^\s*=/.test(rest)) return false;
    const pattern = /\/\s*([a-z_]\w*)?\s*\//g;
    let name = '';
    let at = 6;
    const take = (from: number, to: number) => {
      const members: Draft[] = [];
      for (const { text, offset } of splitTop(code.slice(from, to))) {
        const entity = /^(\s*)([a-z_]\w*)\s*(\(.*\))?\s*$/s.exec(text);
        if (entity === null) continue;
        const draft = draftOf(
          this.scope,
          entity[2]!,
          this.at(statement, from + offset + entity[1]!.length),
          statement.condition,
        );
        if (entity[3] !== undefined) draft.bounds = boundsOf(entity[3].slice(1, -1));
        members.push(draft);
      }
      if (members.length === 0) return;
      // One block may be written over several statements: its storage goes on.
      const known = this.commons.find((one) => one.name === name && one.scope === this.scope);
      if (known !== undefined) known.members.push(...members);
      else if (this.inside === 0)
        this.commons.push({
          name,
          parent: this.ownPath(),
          members,
          scope: this.scope,
          ...this.at(statement, Math.max(0, code.indexOf(name, 6))),
          condition: statement.condition,
        });
      this.claimNames(
        members.map((one) => one.name),
        statement,
      );
    };
    for (let match = pattern.exec(code); match !== null; match = pattern.exec(code)) {
      take(at, match.index);
      name = match[1] ?? '';
      at = match.index + match[0].length;
    }
    take(at, code.length);
    return true;
  }

  private attributeStatement(word: string, statement: Statement): boolean {
    const { code } = statement;
    let rest = code.slice(word.length);
    let intent: Draft['intent'] = null;
    if (word === 'intent') {
      const match = /^\s*\(\s*(in\s*out|in|out)\s*\)/.exec(rest);
      if (match === null) return false;
      intent = match[1]!.replace(/\s+/g, '') as Draft['intent'];
      rest = rest.slice(match[0].length);
    }
    if (/^\s*[=(%]/.test(rest) || /^\w/.test(rest)) return false;
    rest = rest.replace(/^\s*::/, '');
    const begin = code.length - rest.length;
    const names: string[] = [];
    for (const { text, offset } of splitTop(rest)) {
      const entity = /^(\s*)([a-z_]\w*)\s*(\(.*\))?\s*$/s.exec(text);
      if (entity === null) continue;
      const draft = draftOf(
        this.scope,
        entity[2]!,
        this.at(statement, begin + offset + entity[1]!.length),
        statement.condition,
      );
      if (entity[3] !== undefined) draft.bounds = boundsOf(entity[3].slice(1, -1));
      if (intent !== null) draft.intent = intent;
      else if (word === 'optional') draft.optional = true;
      else if (word === 'external') draft.external = true;
      else if (word !== 'dimension' && word !== 'save' && word !== 'intrinsic') draft.attributes.add(word);
      names.push(entity[2]!);
    }
    if (word === 'save' && this.inside === 0)
      this.storage.push({
        kind: 'save',
        parent: this.ownPath(),
        names,
        text: statement.text.slice(0, 200),
        ...this.at(statement),
      });
    if (word === 'dimension') this.claimNames(names, statement);
    return true;
  }

  private access(word: string, code: string): boolean {
    const rest = code
      .slice(word.length)
      .replace(/^\s*::/, '')
      .trim();
    if (/^[=(%]/.test(rest)) return false;
    if (rest === '') {
      if (word === 'private') this.scope.isPrivate = true;
      return true;
    }
    const names = word === 'public' ? this.scope.publicNames : this.scope.privateNames;
    for (const { text } of splitTop(rest)) names.add(text.replace(/\s+/g, ''));
    return true;
  }

  private storing(word: string, statement: Statement): boolean {
    if (
      !/^(equivalence\s*\(|data\s*[a-z_(]|namelist\s*\/)/.test(statement.code) ||
      /^data\w*\s*=|^data\s*\(.*\)\s*=/.test(statement.code)
    )
      return false;
    if (this.inside === 0) {
      const names = [
        ...new Set([...statement.code.slice(word.length).matchAll(/[a-z_]\w*/g)].map(([name]) => name)),
      ].slice(0, 200);
      this.storage.push({
        kind: word as StorageStatement['kind'],
        parent: this.ownPath(),
        names,
        text: statement.text.slice(0, 200),
        ...this.at(statement),
      });
    }
    return true;
  }

  private entry(statement: Statement): boolean {
    const match = /^entry\s+([a-z_]\w*)\s*(\(.*\))?/s.exec(statement.code);
    if (match === null || this.inside > 0) return match !== null;
    const entry = newScope(
      this.scope.kind,
      match[1]!,
      this.scope.parent,
      this.at(statement, statement.code.indexOf(match[1]!)),
      statement.condition,
    );
    const inside = match[2] === undefined ? '' : match[2].slice(1, closing(match[2], 0));
    for (const { text } of splitTop(inside))
      if (text.trim() !== '') entry.dummies.push({ name: text.trim(), line: entry.line, column: entry.column });
    this.entries.push({ entry, host: this.scope });
    return true;
  }

  private readonly entries: { entry: Scope; host: Scope }[] = [];

  private inType(statement: Statement): boolean {
    const { code } = statement;
    if (/^(contains|private|public|sequence|final\b)/.test(code)) {
      if (code.trim() === 'contains') this.scope.containing = true;
      return true;
    }
    if (!this.scope.containing) return false;
    const binding = /^(?:procedure|generic)\s*(?:\([^)]*\))?\s*(?:,[^:]*)?(?:::)?\s*(.*)$/s.exec(code);
    if (binding === null) return false;
    for (const { text } of splitTop(binding[1]!)) {
      const pair = /^\s*([a-z_]\w*|operator\s*\(.*\)|assignment\s*\(.*\))\s*(?:=>\s*([a-z_]\w*))?/.exec(text);
      if (pair !== null)
        this.scope.bindings.push({ name: pair[1]!, procedure: pair[2] ?? pair[1]!, line: statement.line });
    }
    return true;
  }

  private inInterface(statement: Statement): boolean {
    const match = /^(?:module\s+)?procedure\b\s*(?:::)?\s*(.*)$/s.exec(statement.code);
    if (match === null) return false;
    for (const { text } of splitTop(match[1]!)) if (text.trim() !== '') this.scope.gathers.push(text.trim());
    return true;
  }

  // Executable statements

  private executes(statement: Statement): void {
    if (
      this.inside > 0 ||
      this.scope.kind === 'module' ||
      this.scope.kind === 'type' ||
      this.scope.kind === 'interface'
    )
      return;
    if (this.scope.kind === 'file') {
      // A main program needs no PROGRAM statement; an include file has no unit at all.
      if (!/^(call|if|do|write|print|read|open|stop|[a-z_]\w*\s*(\(.*\))?\s*=)/.test(statement.code)) return;
    }
    const caller = this.ownPath();
    const known = (name: string) => this.isArray(name);
    for (const call of callsIn(statement, known, (name) => this.typeOf(name)))
      this.calls.push({ ...call, caller, ...(statement.condition === null ? {} : { condition: statement.condition }) });
    this.assignment(statement);
    const opened = /^open\s*\(.*\bfile\s*=\s*(['"])(.*?)\1/i.exec(statement.text);
    if (opened !== null) this.externals.push({ kind: 'file', name: opened[2]!, ...this.at(statement) });
    const variable = /\bget_?env\w*\s*\(\s*(['"])(\w+)\1/i.exec(statement.text);
    if (variable !== null) this.externals.push({ kind: 'environment', name: variable[2]!, ...this.at(statement) });
  }

  /** Whether a name followed by a parenthesis is an element and no call. */
  private isArray(name: string): boolean {
    for (let at: Scope | null = this.scope; at !== null; at = at.parent) {
      const draft = at.drafts.get(name);
      if (draft !== undefined)
        return draft.bounds !== null || draft.type === 'character' || (draft.type ?? '').includes('(');
    }
    return false;
  }

  /** What declarations, or the implicit rule, say of a name; null for what is known from elsewhere. */
  private typeOf(name: string): KnownType | null {
    for (let at: Scope | null = this.scope; at !== null; at = at.parent) {
      const draft = at.drafts.get(name);
      if (draft === undefined) continue;
      const { type, bytes, rank, kind } = declaredFrom(at, draft, () => null);
      return { type, bytes, rank, ...(kind === undefined ? { declaredDefault: true } : {}) };
    }
    return null;
  }

  private assignment(statement: Statement): void {
    const body = /^if\s*\(/.test(statement.code) ? closing(statement.code, statement.code.indexOf('(')) + 1 : 0;
    const match = /^\s*([a-z_]\w*)\s*(\([^=]*\))?\s*=(?!=)\s*/.exec(statement.code.slice(body));
    if (match === null || !/[\d.]/.test(statement.code)) return;
    const name = match[1]!;
    let target: Declared | null = null;
    for (let at: Scope | null = this.scope; at !== null && target === null; at = at.parent) {
      const draft = at.drafts.get(name);
      if (draft !== undefined) target = declaredFrom(at, draft, () => null);
      else if (at === this.scope && at.implicit !== null && at.implicit.has(name[0]!))
        target = declaredFrom(
          at,
          { ...draftOf(newScope('file', '', null, this.at(statement), null), name, this.at(statement), null) },
          () => null,
        );
    }
    if (target === null) return;
    const from = body + match[0].length;
    this.literal(statement.text.slice(from), name, target.bytes, target.type, statement, from);
  }

  // What a unit leaves behind

  private endUnit(scope: Scope, endLine = scope.line): void {
    const bound = (text: string) => evaluate(text, (name) => valueIn(scope, name));
    for (const common of this.commons.filter((one) => one.scope === scope)) {
      this.doneCommons.push({
        name: common.name,
        parent: common.parent,
        members: common.members.map((draft) => declaredFrom(scope, draft, bound)),
        line: common.line,
        column: common.column,
        ...(common.condition === null ? {} : { condition: common.condition }),
      });
    }
    for (let at = this.commons.length - 1; at >= 0; at--)
      if (this.commons[at]!.scope === scope) this.commons.splice(at, 1);
    switch (scope.kind) {
      case 'subroutine':
      case 'function':
        this.endProcedure(scope, endLine, bound);
        return;
      case 'separate':
        this.procedures.push({
          ...this.head(scope, endLine),
          kind: 'separate-module-procedure',
          args: [],
          result: null,
        });
        return;
      case 'program':
      case 'block-data':
        if (this.inside === 0)
          this.procedures.push({ ...this.head(scope, endLine), kind: scope.kind, args: [], result: null });
        return;
      case 'module':
      case 'submodule':
        this.endModule(scope, bound);
        return;
      case 'type':
        this.endType(scope, bound);
        return;
      case 'interface':
        if (scope.name !== '' && this.inside === 0) {
          const kind = scope.name.startsWith('operator')
            ? 'operator'
            : scope.name.startsWith('assignment')
              ? 'assignment'
              : 'generic';
          this.generics.push({
            name: scope.name,
            parent: scope.path,
            procedures: scope.gathers,
            kind,
            line: scope.line,
            column: scope.column,
          });
        }
        return;
      default:
        for (const draft of scope.drafts.values()) this.variable(scope, draft, bound);
    }
  }

  private head(scope: Scope, endLine: number) {
    const visibility = scope.parent === null ? undefined : visibilityOf(scope.parent, scope.name);
    return {
      name: scope.name,
      parent: scope.path,
      line: scope.line,
      column: scope.column,
      endLine,
      attributes: scope.attributes,
      ...(visibility === undefined ? {} : { visibility }),
      ...(scope.linkName === undefined ? {} : { linkName: scope.linkName }),
      ...(scope.condition === null ? {} : { condition: scope.condition }),
    };
  }

  private endProcedure(scope: Scope, endLine: number, bound: (text: string) => number | null): void {
    const inInterface = scope.parent?.kind === 'interface';
    if (inInterface) scope.parent!.gathers.push(scope.name);
    if (this.inside > 0) return;
    const args = argumentsOf(scope, bound);
    this.procedures.push({
      ...this.head(scope, endLine),
      kind: scope.kind as 'subroutine' | 'function',
      args,
      result: scope.kind === 'function' ? this.resultOf(scope, bound) : null,
      ...(inInterface ? { prototype: true } : {}),
    });
    for (const { entry } of this.entries.filter((one) => one.host === scope)) {
      for (const [name, draft] of scope.drafts) if (!entry.drafts.has(name)) entry.drafts.set(name, draft);
      entry.implicit = scope.implicit;
      this.procedures.push({
        ...this.head(entry, endLine),
        kind: 'entry',
        args: argumentsOf(entry, bound),
        result: scope.kind === 'function' ? this.resultOf(entry, bound) : null,
      });
    }
    const waiting = this.blockFor.filter((one) => one.scope === scope);
    this.blockFor = this.blockFor.filter((one) => one.scope !== scope);
    const within = this.comments.filter((one) => one.line > scope.line && one.line <= endLine);
    this.claimBlocks(scope, [...waiting.flatMap((one) => one.comments), ...within]);
    if (scope.parent?.kind !== 'subroutine' && scope.parent?.kind !== 'function') this.comments.splice(0);
    const parent = scope.path === null ? scope.name : `${scope.path}::${scope.name}`;
    for (const arg of args) this.claims.push(...claimsFromName(arg.name, arg, parent));
  }

  private resultOf(scope: Scope, bound: (text: string) => number | null): Declared {
    const name = scope.resultName ?? scope.name;
    const draft = scope.drafts.get(name) ?? draftOf(scope, name, scope, null);
    if (draft.type === null && scope.prefixType !== null) {
      const { type, bytes, kind, length } = scope.prefixType;
      Object.assign(draft, {
        type,
        bytes,
        ...(kind === undefined ? {} : { kind }),
        ...(length === undefined ? {} : { length }),
      });
    }
    return declaredFrom(scope, draft, bound);
  }

  private endModule(scope: Scope, bound: (text: string) => number | null): void {
    if (this.inside > 0) return;
    for (const draft of scope.drafts.values()) this.variable(scope, draft, bound);
  }

  private variable(scope: Scope, draft: Draft, bound: (text: string) => number | null): void {
    if (this.inside > 0 || draft.attributes.has('parameter') || draft.external || draft.type === null) return;
    if (
      this.procedures.some(
        (one) => one.name === draft.name && one.parent === (scope.kind === 'file' ? null : scope.name),
      )
    )
      return;
    const visibility = visibilityOf(scope, draft.name);
    const { value } = draft as Draft & { value?: string };
    this.variables.push({
      ...declaredFrom(scope, draft, bound),
      parent: scope.kind === 'file' ? null : scope.path === null ? scope.name : `${scope.path}::${scope.name}`,
      ...(visibility === undefined ? {} : { visibility }),
      ...(value === undefined ? {} : { value }),
    });
  }

  private endType(scope: Scope, bound: (text: string) => number | null): void {
    if (this.inside > 0) return;
    this.types.push({
      name: scope.name,
      kind: 'type',
      parent: scope.path,
      ...(scope.extends === undefined ? {} : { extends: scope.extends }),
      fields: [...scope.drafts.values()].map((draft) => declaredFrom(scope, draft, bound)),
      bindings: scope.bindings,
      attributes: scope.attributes,
      line: scope.line,
      column: scope.column,
    });
  }
}

function literalBytes(kind: string, kindOf: (name: string) => number | null): number | null {
  if (kind === 'd') return 8;
  if (kind === '') return 4;
  return kindBytes(kind, kindOf);
}

function boundsOf(text: string): string[] {
  return splitTop(text).map((part) => part.text.replace(/\s+/g, ''));
}

function closes(word: string, kind: Scope['kind']): boolean {
  return (
    word === kind ||
    (word === 'blockdata' && kind === 'block-data') ||
    (word === 'procedure' && (kind === 'separate' || kind === 'function' || kind === 'subroutine'))
  );
}

function enclosed(scope: Scope, word: string): boolean {
  for (let at: Scope | null = scope; at !== null; at = at.parent) if (closes(word, at.kind)) return true;
  return false;
}

/** Whether a name stands on one of the lines of a continued statement. */
function lineHolds(statement: Statement, line: number, name: string): boolean {
  const index = statement.pieces.findIndex((piece) => piece.line === line);
  if (index < 0) return false;
  const stretch = statement.code.slice(statement.pieces[index]!.offset, statement.pieces[index + 1]?.offset);
  return new RegExp(`(^|[^a-z0-9_])${name}([^a-z0-9_]|$)`).test(stretch);
}

function stripMark(text: string): string {
  return text.replace(/^(?:[cC*!]|!!|!>|!<)+\s?/, ' ');
}

function typeSpecOfImplicit(
  code: string,
  kindOf: (name: string) => number | null,
): (TypeSpec & { letters: string; rest: string }) | null {
  // `real*8 (a-h,o-z)` and `real (a-h)`: the last parenthesis holds the letters.
  const open = code.search(/\(\s*[a-z]\s*(-\s*[a-z]\s*)?(,[a-z\s,-]*)?\)/);
  if (open < 0) return null;
  const close = closing(code, open);
  const spec = typeSpecAt(code.slice(0, open).trim(), kindOf);
  if (spec === null || close < 0) return null;
  return { ...spec, letters: code.slice(open + 1, close), rest: code.slice(close + 1) };
}
