/** Statements of one top-level unit in order to its interface: which scope begins and ends where, and what each leaves behind. */
import type { Declared, Include, Procedure } from '../../model/interface.ts';
import type { ReadOptions } from '../read-options.ts';
import { claimBlocks, claimDeclared, claimFollowing, claimName } from './comment-claims.ts';
import { alternativesOf, type Branch, Conditions, exclude, isWithin } from './conditions.ts';
import { declares } from './declarations.ts';
import { evaluate } from './evaluate.ts';
import { assignmentAt, executes } from './executable.ts';
import { type TypeSpec, typeSpecAt } from './kinds.ts';
import type { Names } from './names.ts';
import { type Found, Reading } from './reading.ts';
import { type ScanHandler, StatementScanner } from './scan-statements.ts';
import {
  argumentsOf,
  chosen,
  type Draft,
  type Dummy,
  declaredFrom,
  draftIn,
  type Header,
  kindIn,
  Scope,
  type ScopeKind,
  valueIn,
  visibilityOf,
} from './scope.ts';
import { fixedColumns, sourceForm } from './source-form.ts';
import { SourceText } from './source-text.ts';
import type { Statement } from './statement.ts';

const DEPTH_OF_INCLUDES = 12;
/** Module, procedure, internal procedure, interface, interface body: more is no Fortran. */
const DEEPEST = 24;
/** Ways of compiling one procedure that are told apart. */
const MOST_ALTERNATIVES = 8;

export class UnitReader implements ScanHandler {
  private readonly reading: Reading;
  private readonly conditions: Conditions;
  private text: SourceText;
  /** Names of procedures by their parent, which are no variables. */
  private readonly procedureNames = new Set<string>();
  private scanForm: 'fixed' | 'free';
  private readonly columns: number;
  private readonly includedNow: string[] = [];
  /** The type that the present statement begins with, found while it was held for a function. */
  private spec: TypeSpec | null = null;

  constructor(
    path: string,
    text: SourceText,
    names: Names,
    form: 'fixed' | 'free',
    columns: number,
    conditions: Conditions,
    options: ReadOptions,
    found: Found,
    firstLine: number,
  ) {
    this.reading = new Reading(path, text, names, options, found, firstLine);
    this.conditions = conditions;
    // Sizes that the build gives by name (`nx = NXGLOB`), and macros above: known like constants.
    for (const [name, value] of [...conditions.macros, ...Object.entries(options.define ?? {})])
      if (/^\d+$/.test(value)) this.reading.file.setValue(name.toLowerCase(), Number(value));
    this.text = text;
    this.scanForm = form;
    this.columns = columns;
  }

  private readonly kindOf = (name: string) => kindIn(this.reading.scope, name);

  read(from: number, to: number, firstLine: number): void {
    const { names } = this.reading;
    new StatementScanner(this.text, names, this.scanForm, this.columns, this.conditions, this).scan(
      from,
      to,
      firstLine,
    );
    this.finish();
  }

  private finish(): void {
    const { reading } = this;
    this.endConditionally(null);
    while (reading.scope.parent !== null) {
      const { kind, name, line } = reading.scope;
      if (kind !== 'program') reading.found.incomplete.push({ line, why: `${kind} ${name} has no end` });
      this.close(line);
    }
    this.endUnit(reading.file, reading.file.line);
  }

  // What the scanner gives

  comment(from: number, to: number, line: number): void {
    const { reading } = this;
    if (reading.inside > 0) return;
    const { bytes } = this.text;
    // `!!` and `!<` lines right below a declaration go on about it.
    if (
      reading.lastNames.length > 0 &&
      line === reading.lastLine + 1 &&
      bytes[from] === 33 &&
      (bytes[from + 1] === 33 || bytes[from + 1] === 60)
    ) {
      claimFollowing(reading, from, to, line);
      reading.lastLine = line;
      return;
    }
    reading.comments.push(from, to, line);
  }

  directive(text: string, line: number, condition: string | null): void {
    const include = /^#\s*include\s*["<]([^">]+)[">]/.exec(text);
    if (include !== null) {
      this.include(include[1]!, '#include', line, 1, condition);
      return;
    }
    const define = /^#\s*define\s+([A-Za-z_]\w*)(?:\s+(\S.*))?$/s.exec(text.trimEnd());
    const { reading } = this;
    if (define === null || reading.inside > 0) return;
    const value =
      define[2] === undefined ? null : evaluate(define[2].toLowerCase(), (name) => valueIn(reading.scope, name));
    if (typeof value === 'number' && !this.conditions.off) reading.file.setValue(define[1]!.toLowerCase(), value);
    reading.found.constants.push({
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

  divided(statement: Statement): void {
    const { pieces, pieceCount, branch, fixed } = statement;
    const lines = pieces.slice(0, pieceCount).map((piece) => ({ ...piece }));
    const base = lines.every((one) => isWithin(one.branch, branch)) ? branch : null;
    const ways = alternativesOf(
      base,
      lines.map((one) => one.branch),
    );
    const { calls, literals } = this.reading.found;
    const [firstCall, firstLiteral] = [calls.length, literals.length];
    const { bytes } = this.text;
    for (const { branch: way, holds } of ways) {
      const own = new Conditions(undefined);
      own.branch = way;
      const scanner = new StatementScanner(this.text, this.reading.names, fixed ? 'fixed' : 'free', this.columns, own, {
        statement: (one) => this.statement(one),
        comment: () => {},
        directive: () => {},
        divided: () => {},
      });
      let lastStart = -1;
      for (const one of lines) {
        if (one.lineStart === lastStart || !holds(one.branch)) continue;
        lastStart = one.lineStart;
        let end = bytes.indexOf(10, one.lineStart);
        if (end < 0) end = bytes.length;
        if (bytes[end - 1] === 13) end--;
        scanner.line(one.lineStart, end, one.line);
      }
      scanner.scan(0, 0, 1);
    }
    mergeAlike(calls, firstCall, ways.length, base?.whole);
    mergeAlike(literals, firstLiteral, 0, undefined);
    const { scope } = this.reading;
    if (scope.headers.length > 0 && ways.some(({ branch: way }) => way === scope.branch)) {
      scope.branch = base;
      const alike = new Set(scope.headers.map(signatureOf)).size === 1;
      if (alike && scope.headers.length === ways.length)
        scope.headers.splice(0, scope.headers.length, { ...scope.headers[0]!, branch: base });
    }
  }

  statement(statement: Statement): void {
    const first = statement.code[0]!;
    // What begins with no letter or underscore declares nothing.
    if (!((first >= 97 && first <= 122) || first === 95)) return;
    const { reading } = this;
    if (reading.scope.endedIn !== null) this.endConditionally(statement);
    if (statement.equal > 0 && assignmentAt(statement, 0) > 0) {
      const { scope } = reading;
      if (scope.kind === 'type' || scope.kind === 'interface' || scope.kind === 'enum') return;
      if (!this.statementFunction(statement)) executes(reading, statement);
      return;
    }
    if (first === 101 && this.ends(statement)) return;
    this.spec = null;
    if (this.begins(statement)) return;
    const { kind } = reading.scope;
    if (kind === 'type' && this.inType(statement)) return;
    if (kind === 'interface' && this.inInterface(statement)) return;
    if (first === 105 && this.includes(statement)) return;
    if (first === 101 && this.entry(statement)) return;
    if (declares(reading, statement, this.spec)) return;
    executes(reading, statement);
  }

  // Includes

  private includes(statement: Statement): boolean {
    const at = statement.keyword('include', 0);
    if (at < 0 || statement.code[at] !== 39 || statement.length !== at + 2) return false;
    const { line, column } = statement.position(0);
    this.include(statement.constant(at), 'include', line, column, statement.condition);
    return true;
  }

  private include(path: string, how: Include['how'], line: number, column: number, condition: string | null): void {
    const { reading } = this;
    if (reading.inside === 0)
      reading.found.includes.push({
        path,
        how,
        parent: reading.scope.own,
        line,
        column,
        ...(condition === null ? {} : { condition }),
      });
    const bytes =
      reading.inside >= DEPTH_OF_INCLUDES || this.includedNow.includes(path)
        ? null
        : (reading.options.include?.(path, reading.path) ?? null);
    if (bytes === null || bytes.includes(0)) {
      reading.scope.openEnded = true;
      return;
    }
    const outer = this.text;
    const text = new SourceText(bytes);
    const form = sourceForm(path, bytes);
    reading.inside++;
    this.includedNow.push(path);
    this.text = text;
    new StatementScanner(
      text,
      reading.names,
      form,
      form === 'fixed' ? fixedColumns(bytes) : 132,
      this.conditions,
      this,
    ).scan(0, bytes.length, 1);
    this.text = outer;
    this.includedNow.pop();
    reading.inside--;
  }

  // Where units begin and end

  private ends(statement: Statement): boolean {
    if (statement.code[1] !== 110 || statement.code[2] !== 100) return false;
    const kind = endOf(statement);
    if (kind === null) return false;
    const { reading } = this;
    // An END of another kind closes what was left open inside.
    if (kind !== '')
      while (reading.scope.parent !== null && !closes(kind, reading.scope.kind) && enclosed(reading.scope, kind)) {
        const { scope } = reading;
        if (scope.kind !== 'interface' && scope.kind !== 'type' && scope.kind !== 'enum' && reading.inside === 0)
          reading.found.incomplete.push({ line: scope.line, why: `${scope.kind} ${scope.name} has no end` });
        this.close(statement.line);
      }
    const { scope } = reading;
    if (scope.parent === null) return true;
    if (kind !== '' && !closes(kind, scope.kind)) return true;
    const { branch } = statement;
    // An END that only some builds see: lines of the other branches still belong to the unit.
    if (
      branch !== null &&
      !isWithin(scope.branch, branch) &&
      scope.headers.every((one) => !isWithin(one.branch, branch))
    )
      scope.endedIn = { branch, line: statement.endLine };
    else this.close(statement.endLine);
    return true;
  }

  /** Closes a scope that a conditional END has ended, once a line comes that stands beside that END. */
  private endConditionally(statement: Statement | null): void {
    const { reading } = this;
    for (let ended = reading.scope.endedIn; ended !== null; ended = reading.scope.endedIn) {
      if (statement !== null && exclude(ended.branch, statement.branch)) return;
      this.close(ended.line);
    }
  }

  private begins(statement: Statement): boolean {
    switch (statement.code[0]) {
      case 97: // abstract, attributes
      case 105: // interface, integer, impure
        if (this.interface(statement)) return true;
        break;
      case 98:
        if (this.named(statement, 'block-data', statement.keywords('block', 'data', 0))) return true;
        break;
      case 101:
        if (this.enum(statement)) return true;
        break;
      case 109: // module
        if (this.module(statement)) return true;
        break;
      case 112:
        if (this.named(statement, 'program', statement.keyword('program', 0))) return true;
        break;
      case 115: {
        if (this.submodule(statement)) return true;
        break;
      }
      case 116:
        if (this.type(statement)) return true;
        break;
      case 99:
      case 100:
      case 102:
      case 108:
      case 110:
      case 114:
      case 95:
        break;
      default:
        return false;
    }
    return this.procedure(statement);
  }

  private named(statement: Statement, kind: ScopeKind, at: number): boolean {
    if (at < 0) return false;
    const end = statement.nameEnd(at);
    if (end !== statement.length || (end === at && kind !== 'block-data')) return false;
    const place = Math.min(at, statement.length - 1);
    this.open(kind, end === at ? '' : statement.name(at, end), statement, place);
    return true;
  }

  private module(statement: Statement): boolean {
    const at = statement.keyword('module', 0);
    if (at < 0) return false;
    const separate = statement.keyword('procedure', at);
    if (separate >= 0 && this.reading.scope.kind !== 'interface' && this.reading.scope.parent !== null) {
      const end = statement.nameEnd(separate);
      if (end === separate || end !== statement.length) return false;
      this.open('separate', statement.name(separate, end), statement, separate);
      return true;
    }
    if (this.reading.scope.kind === 'interface') return false;
    if (this.procedure(statement)) return true;
    return this.named(statement, 'module', at);
  }

  private submodule(statement: Statement): boolean {
    const at = statement.keyword('submodule', 0);
    if (at < 0 || statement.code[at] !== 40 || statement.match[at]! < 0) return false;
    const close = statement.match[at]!;
    const nameAt = statement.code[close + 1] === 32 ? close + 2 : close + 1;
    const parents = statement.codeText(at + 1, close);
    if (!this.named(statement, 'submodule', nameAt)) return false;
    const { scope, found, inside } = this.reading;
    scope.extends = parents;
    // What its ancestors declare is in sight, as if it were used.
    scope.openEnded = true;
    if (inside === 0)
      for (const ancestor of parents.split(':'))
        found.uses.push({ module: ancestor, parent: scope.own, ...statement.position(0) });
    return true;
  }

  private interface(statement: Statement): boolean {
    let at = statement.keyword('abstract', 0);
    const isAbstract = at >= 0;
    at = statement.keyword('interface', Math.max(0, at));
    if (at < 0) return false;
    const next = at < statement.length ? statement.code[at]! : 0;
    if (next === 40 || next === 37) return false;
    const scope = this.open('interface', statement.codeText(at, statement.length), statement, 0);
    scope.isAbstract = isAbstract;
    return true;
  }

  private enum(statement: Statement): boolean {
    const at = statement.keyword('enum', 0);
    if (at < 0 || (at < statement.length && statement.code[at] !== 44)) return false;
    this.open('enum', '', statement, 0);
    return true;
  }

  private type(statement: Statement): boolean {
    let at = statement.keyword('type', 0);
    const { code, length } = statement;
    if (at < 0 || at >= length || code[at] === 40 || code[at] === 42) return false;
    const attributes: string[] = [];
    let parent: string | undefined;
    if (code[at] === 44) {
      at++;
      while (at < length && code[at] !== 58) {
        let end = at;
        while (end < length && code[end] !== 44 && code[end] !== 58)
          end = code[end] === 40 && statement.match[end]! > end ? statement.match[end]! + 1 : end + 1;
        const text = statement.codeText(at, end);
        if (text.startsWith('extends(')) parent = text.slice(8, -1);
        if (text !== '') attributes.push(text);
        at = code[end] === 44 ? end + 1 : end;
      }
    }
    if (code[at] === 58) at += 2;
    const end = statement.nameEnd(at);
    if (end === at || !(end === length || (code[end] === 40 && statement.match[end] === length - 1))) return false;
    const name = statement.name(at, end);
    if (name === 'is' && end < length) return false;
    const scope = this.open('type', name, statement, at);
    scope.attributes = attributes;
    scope.extends = parent;
    return true;
  }

  private procedure(statement: Statement): boolean {
    const { reading } = this;
    const { code, length } = statement;
    const attributes: string[] = [];
    let prefix: TypeSpec | null = null;
    let at = 0;
    for (;;) {
      const next = this.prefixEnd(statement, at, attributes);
      if (next > at) {
        at = next;
        continue;
      }
      if (prefix !== null) break;
      prefix = typeSpecAt(statement, at, this.kindOf);
      if (at === 0) this.spec = prefix;
      if (prefix === null || prefix.end >= length) break;
      at = prefix.end;
    }
    let kind: 'subroutine' | 'function' = 'subroutine';
    let nameAt = code[at] === 115 ? statement.keyword('subroutine', at) : -1;
    if (nameAt < 0) {
      kind = 'function';
      nameAt = code[at] === 102 ? statement.keyword('function', at) : -1;
    }
    if (nameAt < 0) return false;
    const nameEnd = statement.nameEnd(nameAt);
    if (nameEnd === nameAt || code[nameAt] === 95) return false;
    const open = nameEnd < length && code[nameEnd] === 40 ? nameEnd : -1;
    if (open < 0 && kind === 'function' && (nameEnd < length || statement.fixed)) return false;
    const close = open < 0 ? nameEnd : statement.match[open]! < 0 ? length : statement.match[open]!;
    const dummies = open < 0 ? [] : this.dummiesOf(statement, open + 1, close);
    if (dummies === null) return false;
    const name = statement.name(nameAt, nameEnd);
    const tail = Math.min(length, open < 0 ? nameEnd : close + 1);
    const header: Header = {
      kind,
      name,
      ...statement.position(nameAt),
      branch: statement.branch,
      dummies,
      resultName: resultIn(statement, tail),
      linkName: this.linkNameIn(statement, tail, name),
      attributes: attributes.sort((a, b) => ORDER.indexOf(a) - ORDER.indexOf(b)),
    };
    if (header.linkName !== undefined) attributes.push('bind(c)');
    const { scope } = reading;
    if (this.isAlternative(scope, statement)) {
      scope.headers.push(header);
      for (const dummy of dummies) if (dummy.name !== '*') scope.draft(dummy.name, dummy.line, dummy.column, null);
      return true;
    }
    this.closeUnended(statement);
    const made = this.open(kind, name, statement, nameAt);
    made.headers.push(header);
    made.attributes = attributes;
    made.linkName = header.linkName;
    if (prefix !== null) made.prefixType = prefix;
    for (const dummy of dummies) if (dummy.name !== '*') made.draft(dummy.name, dummy.line, dummy.column, null);
    if (reading.inside === 0)
      claimDeclared(
        reading,
        statement,
        dummies.map((one) => one.name).filter((one) => one !== '*'),
      );
    return true;
  }

  private prefixEnd(statement: Statement, from: number, attributes: string[]): number {
    const words = PREFIXES[statement.code[from]!];
    if (words === undefined) return from;
    for (const word of words) {
      const end = statement.keyword(word, from);
      if (end < 0 || end >= statement.length) continue;
      if (word === 'attributes') {
        if (statement.code[end] !== 40 || statement.match[end]! < 0) return from;
        const close = statement.match[end]! + 1;
        return statement.code[close] === 32 ? close + 1 : close;
      }
      attributes.push(word);
      return end;
    }
    return from;
  }

  /** Names between parentheses, `*` for an alternate return; null when something else stands there. */
  private dummiesOf(statement: Statement, from: number, to: number): Dummy[] | null {
    const dummies: Dummy[] = [];
    const { code } = statement;
    for (let at = from; at < to; ) {
      const end = statement.comma(at, to);
      if (end > at) {
        const first = code[at]!;
        const nameEnd = statement.nameEnd(at);
        const isReturn = (first === 42 || first === 38) && end === at + 1;
        if (!isReturn && nameEnd !== end) {
          // A macro in a list of arguments is seen as it is; a number makes it no list of dummies.
          if (first >= 48 && first <= 57) return null;
          if (nameEnd === at) {
            at = end + 1;
            continue;
          }
          if (statement.fixed || code[nameEnd] === 58) return null;
        }
        const piece = statement.pieceAt(at);
        dummies.push({
          name: isReturn ? '*' : statement.name(at, nameEnd === end ? end : nameEnd),
          line: piece.line,
          column: statement.text.column(piece.lineStart, statement.source[at]!),
        });
      }
      at = end + 1;
    }
    return dummies;
  }

  private linkNameIn(statement: Statement, from: number, name: string): string | undefined {
    const { code, length } = statement;
    for (let at = from; at < length; at++) {
      if (code[at] !== 98) continue;
      const open = statement.keyword('bind', at);
      if (open < 0 || code[open] !== 40 || code[open + 1] !== 99) continue;
      for (let place = open; place < length; place++) if (code[place] === 39) return statement.constant(place);
      return name;
    }
    return undefined;
  }

  /** A second header of the same procedure, in a branch that excludes the first: both have the body that follows. */
  private isAlternative(scope: Scope, statement: Statement): boolean {
    return (
      (scope.kind === 'subroutine' || scope.kind === 'function') &&
      !scope.containing &&
      scope.headers.length < MOST_ALTERNATIVES &&
      scope.headers.every((one) => exclude(one.branch, statement.branch))
    );
  }

  /** A procedure inside another comes after CONTAINS; without it the one before has lost its END. */
  private closeUnended(statement: Statement): void {
    const { reading } = this;
    while (
      (reading.scope.kind === 'subroutine' || reading.scope.kind === 'function' || reading.scope.kind === 'separate') &&
      !reading.scope.containing
    ) {
      const { kind, name, line } = reading.scope;
      if (reading.inside === 0) reading.found.incomplete.push({ line, why: `${kind} ${name} has no end` });
      this.close(Math.max(line, statement.line - 1));
    }
  }

  private entry(statement: Statement): boolean {
    const at = statement.keyword('entry', 0);
    if (at < 0) return false;
    const { scope, inside } = this.reading;
    const nameEnd = statement.nameEnd(at);
    if (nameEnd === at || (scope.kind !== 'subroutine' && scope.kind !== 'function')) return false;
    if (inside > 0) return true;
    const open = nameEnd < statement.length && statement.code[nameEnd] === 40 ? nameEnd : -1;
    const close = open < 0 ? nameEnd : statement.match[open]! < 0 ? statement.length : statement.match[open]!;
    const dummies = open < 0 ? [] : this.dummiesOf(statement, open + 1, close);
    if (dummies === null) return false;
    const name = statement.name(at, nameEnd);
    const tail = Math.min(statement.length, open < 0 ? nameEnd : close + 1);
    for (const dummy of dummies)
      if (dummy.name !== '*') scope.draft(dummy.name, dummy.line, dummy.column, statement.branch);
    scope.entries.push({
      kind: 'entry',
      name,
      ...statement.position(at),
      branch: statement.branch,
      dummies,
      resultName: resultIn(statement, tail),
      linkName: this.linkNameIn(statement, tail, name),
      attributes: [],
    });
    return true;
  }

  /** `f(x) = x**2` among the declarations: a function of one line. */
  private statementFunction(statement: Statement): boolean {
    const { reading } = this;
    const { scope } = reading;
    const { kind } = scope;
    if (
      scope.executing ||
      reading.inside > 0 ||
      (kind !== 'subroutine' && kind !== 'function' && kind !== 'program') ||
      statement.label !== ''
    )
      return false;
    const { code, equal, match } = statement;
    const nameEnd = statement.nameEnd(0);
    if (code[nameEnd] !== 40 || match[nameEnd] !== equal - 1 || code[equal + 1] === 62) return false;
    const name = statement.name(0, nameEnd);
    const draft = scope.drafts.get(name);
    if (draft !== undefined && (draft.bounds !== null || draft.type?.endsWith(')') === true)) return false;
    // What the host declares is its array; where everything must be declared, a function of its own is, too.
    if (draft === undefined && (scope.implicit === null || draftIn(scope, name) !== null)) return false;
    // With modules or included files out of sight it may as well be an array: then only a scalar of its own type is sure.
    for (let at: Scope | null = scope; at !== null; at = at.parent)
      if (at.openEnded && (draft === undefined || draft.type === null || draft.type === 'character')) return false;
    if (scope.headers.some(({ dummies }) => dummies.some((one) => one.name === name))) return false;
    const dummies = this.dummiesOf(statement, nameEnd + 1, equal - 1);
    if (dummies === null || dummies.length === 0 || dummies.some((one) => one.name === '*')) return false;
    if (new Set(dummies.map((one) => one.name)).size !== dummies.length) return false;
    for (let at = nameEnd + 1; at < equal - 1; at++) {
      const byte = code[at]!;
      if (byte === 40 || byte === 43 || byte === 45 || byte === 42 || byte === 58 || byte === 37) return false;
    }
    const header: Header = {
      kind: 'function',
      name,
      ...statement.position(0),
      branch: statement.branch,
      dummies,
      resultName: null,
      linkName: undefined,
      attributes: [],
    };
    const bound = this.boundIn(scope);
    // Its dummies are names of their own, with the types that the unit gives these names.
    const args = dummies.map((one) => {
      const known = scope.drafts.get(one.name);
      const local = new Scope('function', name, scope, one.line, one.column, null);
      const own = local.draft(one.name, one.line, one.column, null);
      if (known !== undefined)
        [own.type, own.bytes, own.kind, own.length] = [known.type, known.bytes, known.kind, known.length];
      return { ...declaredFrom(local, own, bound), intent: null, optional: false };
    });
    this.reading.found.procedures.push({
      name,
      kind: 'statement-function',
      parent: scope.own,
      line: header.line,
      column: header.column,
      endLine: statement.endLine,
      attributes: [],
      args,
      result: declaredFrom(scope, scope.draft(name, header.line, header.column, statement.branch), bound),
    });
    // What it calls itself is called by whoever uses it.
    const { executing } = scope;
    executes(reading, statement);
    scope.executing = executing;
    return true;
  }

  private open(kind: ScopeKind, name: string, statement: Statement, at: number): Scope {
    const { reading } = this;
    if (reading.scope.depth >= DEEPEST) {
      reading.found.incomplete.push({
        line: statement.line,
        why: 'units stand deeper inside one another than Fortran allows',
      });
      this.close(statement.line);
    }
    const piece = statement.pieceAt(at);
    const scope = new Scope(
      kind,
      name,
      reading.scope,
      piece.line,
      statement.text.column(piece.lineStart, statement.source[at]!),
      statement.branch,
    );
    // Comments above belong to what they stand above.
    scope.firstComment = Math.max(
      kind === 'subroutine' || kind === 'function' || kind === 'separate' ? reading.scope.firstComment : 0,
      reading.comments.length - 3 * this.commentsAbove(reading.scope),
    );
    reading.scope = scope;
    return scope;
  }

  private commentsAbove(host: Scope): number {
    const { comments } = this.reading;
    let count = 0;
    for (let at = comments.length - 3; at >= 0 && count < 200; at -= 3) {
      if (host.kind !== 'file' && comments[at + 2]! <= host.line) break;
      count++;
    }
    return count;
  }

  private close(endLine: number): void {
    const { reading } = this;
    const { scope } = reading;
    reading.scope = scope.parent ?? reading.file;
    this.endUnit(scope, endLine);
    reading.lastNames = [];
  }

  // Inside types and interfaces

  private inType(statement: Statement): boolean {
    const { scope } = this.reading;
    const { code, length } = statement;
    if (statement.keyword('contains', 0) === length) {
      scope.containing = true;
      return true;
    }
    for (const word of ['private', 'public', 'sequence', 'final']) if (statement.keyword(word, 0) >= 0) return true;
    if (!scope.containing) return false;
    let at = statement.keyword('procedure', 0);
    const isGeneric = at < 0;
    if (isGeneric) at = statement.keyword('generic', 0);
    if (at < 0) return false;
    let interfaceName: string | null = null;
    if (code[at] === 40 && statement.match[at]! > at) {
      interfaceName = statement.codeText(at + 1, statement.match[at]!);
      at = statement.match[at]! + 1;
    }
    for (let place = at; place + 1 < length; place++) {
      if (code[place] === 40 && statement.match[place]! > place) place = statement.match[place]!;
      else if (code[place] === 61) break;
      else if (code[place] === 58 && code[place + 1] === 58) {
        at = place + 2;
        break;
      }
    }
    let name = '';
    while (at < length) {
      const end = statement.comma(at, length);
      let arrow = -1;
      for (let place = at; place + 1 < end; place++)
        if (code[place] === 61 && code[place + 1] === 62) {
          arrow = place;
          break;
        }
      if (arrow >= 0) name = statement.codeText(at, arrow);
      else if (!isGeneric) name = statement.codeText(at, end);
      const procedure = statement.codeText(arrow >= 0 ? arrow + 2 : at, end);
      if (name !== '') scope.bindings.push({ name, procedure: interfaceName ?? procedure, line: statement.lineAt(at) });
      at = end + 1;
    }
    return true;
  }

  private inInterface(statement: Statement): boolean {
    let at = statement.keyword('module', 0);
    at = statement.keyword('procedure', Math.max(0, at));
    if (at < 0) return false;
    const { code, length } = statement;
    if (code[at] === 58) at += 2;
    while (at < length) {
      const end = statement.comma(at, length);
      if (end > at) this.reading.scope.gathers.push(statement.codeText(at, end));
      at = end + 1;
    }
    return true;
  }

  // What a unit leaves behind

  private boundIn(scope: Scope): (text: string) => number | null {
    const lookUp = (name: string) => valueIn(scope, name);
    return (text) => evaluate(text, lookUp);
  }

  private endUnit(scope: Scope, endLine: number): void {
    const { found, inside } = this.reading;
    const bound = this.boundIn(scope);
    for (const common of scope.commons.values()) {
      if (!common.own) continue;
      found.commons.push({
        name: common.name,
        parent: scope.own,
        members: common.members.map((draft) => declaredFrom(scope, draft, bound)),
        line: common.line,
        column: common.column,
        ...(common.condition === null ? {} : { condition: common.condition }),
      });
    }
    switch (scope.kind) {
      case 'subroutine':
      case 'function':
        this.endProcedure(scope, endLine, bound);
        break;
      case 'separate':
      case 'program':
      case 'block-data':
        if (inside === 0)
          this.push(scope, {
            ...this.head(scope, scope, endLine),
            kind: scope.kind === 'separate' ? 'separate-module-procedure' : scope.kind,
            args: [],
            result: null,
          });
        this.dropComments(scope);
        break;
      case 'type':
        this.endType(scope, bound);
        break;
      case 'interface':
        if (scope.name !== '' && inside === 0)
          found.generics.push({
            name: scope.name,
            parent: scope.path,
            procedures: scope.gathers,
            kind: scope.name.startsWith('operator(')
              ? 'operator'
              : scope.name.startsWith('assignment(')
                ? 'assignment'
                : 'generic',
            line: scope.line,
            column: scope.column,
          });
        break;
      case 'enum':
        break;
      default:
        if (inside === 0) for (const draft of scope.drafts.values()) this.variable(scope, draft, bound);
        this.dropComments(scope);
    }
  }

  private dropComments(scope: Scope): void {
    const { comments } = this.reading;
    comments.length = Math.min(comments.length, scope.firstComment);
  }

  private push(scope: Scope, procedure: Procedure): void {
    this.procedureNames.add(`${scope.parent?.own ?? ''}\0${procedure.name}`);
    this.reading.found.procedures.push(procedure);
  }

  private head(
    scope: Scope,
    header: { name: string; line: number; column: number; branch: Branch | null },
    endLine: number,
  ) {
    const visibility = scope.parent === null ? undefined : visibilityOf(scope.parent, header.name);
    const head: {
      name: string;
      parent: string | null;
      line: number;
      column: number;
      endLine: number;
      attributes: readonly string[];
      visibility?: 'public' | 'private';
      linkName?: string;
      condition?: string;
    } = {
      name: header.name,
      parent: scope.path,
      line: header.line,
      column: header.column,
      endLine,
      attributes: scope.attributes,
    };
    if (visibility !== undefined) head.visibility = visibility;
    if (scope.linkName !== undefined) head.linkName = scope.linkName;
    if (header.branch !== null) head.condition = header.branch.whole;
    return head;
  }

  private endProcedure(scope: Scope, endLine: number, bound: (text: string) => number | null): void {
    const { reading } = this;
    const inInterface = scope.parent?.kind === 'interface';
    if (inInterface) scope.parent!.gathers.push(scope.name);
    if (reading.inside > 0) return;
    const prototype = inInterface ? { prototype: true } : {};
    const attributes = inInterface && scope.parent!.isAbstract ? [...scope.attributes, 'abstract'] : scope.attributes;
    for (const header of scope.headers)
      for (const branch of branchesOf(scope, header))
        this.push(scope, {
          ...this.head(scope, { ...header, branch: branch ?? header.branch }, endLine),
          ...(header === scope.headers[0] ? {} : { linkName: header.linkName }),
          attributes: header === scope.headers[0] ? attributes : header.attributes,
          kind: header.kind === 'entry' ? 'entry' : header.kind,
          args: argumentsOf(scope, header, bound, branch ?? header.branch),
          result: header.kind === 'function' ? this.resultOf(scope, header, bound, branch ?? header.branch) : null,
          ...prototype,
        } as Procedure);
    for (const entry of scope.entries)
      this.push(scope, {
        ...this.head(scope, entry, endLine),
        attributes: entry.linkName === undefined ? [] : ['bind(c)'],
        ...(entry.linkName === undefined ? {} : { linkName: entry.linkName }),
        kind: 'entry',
        args: argumentsOf(scope, entry, bound, entry.branch),
        result: scope.kind === 'function' ? this.resultOf(scope, entry, bound, entry.branch) : null,
      });
    claimBlocks(reading, scope, scope.firstComment);
    this.dropComments(scope);
    const seen = new Set<string>();
    for (const { dummies } of [...scope.headers, ...scope.entries])
      for (const { name } of dummies) {
        if (name === '*' || seen.has(name)) continue;
        seen.add(name);
        const { line, column } = scope.drafts.get(name)!;
        claimName(reading, name, line, column, scope.own);
      }
  }

  private resultOf(
    scope: Scope,
    header: Header,
    bound: (text: string) => number | null,
    branch: Branch | null,
  ): Declared {
    const name = header.resultName ?? header.name;
    const draft = chosen(scope.draft(name, header.line, header.column, null), branch);
    if (draft.type === null && scope.prefixType !== null && header.kind !== 'entry') {
      const { type, bytes, kind, length } = scope.prefixType;
      draft.type = type;
      draft.bytes = bytes;
      draft.kind = kind;
      draft.length = length;
    }
    return declaredFrom(scope, draft, bound, null);
  }

  private variable(scope: Scope, draft: Draft, bound: (text: string) => number | null): void {
    if (draft.attributes.includes('parameter') || draft.external || draft.type === null) return;
    if (this.procedureNames.has(`${scope.own ?? ''}\0${draft.name}`)) return;
    const visibility = visibilityOf(scope, draft.name);
    this.reading.found.variables.push({
      ...declaredFrom(scope, draft, bound),
      parent: scope.own,
      ...(visibility === undefined ? {} : { visibility }),
      ...(draft.value === undefined ? {} : { value: draft.value }),
    });
    for (const variant of draft.variants ?? []) this.variable(scope, variant, bound);
  }

  private endType(scope: Scope, bound: (text: string) => number | null): void {
    if (this.reading.inside > 0) return;
    this.reading.found.types.push({
      name: scope.name,
      kind: 'type',
      parent: scope.path,
      ...(scope.extends === undefined ? {} : { extends: scope.extends }),
      fields: [...scope.drafts.values()].flatMap((draft) =>
        [draft, ...(draft.variants ?? [])].map((one) => declaredFrom(scope, one, bound)),
      ),
      bindings: scope.bindings,
      attributes: scope.attributes,
      line: scope.line,
      column: scope.column,
    });
  }
}

const ORDER = ['pure', 'impure', 'elemental', 'recursive', 'non_recursive', 'module'];
const PREFIXES: Record<number, readonly string[]> = {
  97: ['attributes'],
  101: ['elemental'],
  105: ['impure'],
  109: ['module'],
  110: ['non_recursive'],
  112: ['pure'],
  114: ['recursive'],
};

/** The branches in which the arguments of a header are declared differently; a single null when they are alike in all. */
function branchesOf(scope: Scope, header: Header): (Branch | null)[] {
  const branches: Branch[] = [];
  const names = [...header.dummies.map((one) => one.name), header.resultName ?? header.name];
  for (const name of names) {
    const draft = scope.drafts.get(name);
    if (draft === undefined || draft.variants === null) continue;
    for (const one of [draft, ...draft.variants]) {
      if (one.branch === null || (header.branch !== null && exclude(one.branch, header.branch))) continue;
      if (isWithin(header.branch, one.branch)) continue;
      if (!branches.some((known) => known.group === one.branch!.group && known.index === one.branch!.index))
        branches.push(one.branch);
    }
  }
  return branches.length < 2 ? [null] : branches.slice(0, MOST_ALTERNATIVES);
}

function resultIn(statement: Statement, from: number): string | null {
  const { code, length } = statement;
  for (let at = from; at < length; at++) {
    if (code[at] === 40 && statement.match[at]! > at) {
      at = statement.match[at]!;
      continue;
    }
    if (code[at] !== 114) continue;
    const open = statement.keyword('result', at);
    if (open >= 0 && code[open] === 40 && statement.match[open]! > open)
      return statement.codeText(open + 1, statement.match[open]!);
  }
  return null;
}

/** What an END statement ends: a kind of unit, '' for the plain END; null when it ends no unit. */
function endOf(statement: Statement): string | null {
  if (statement.length === 3) return '';
  for (const [word, kind] of ENDED) {
    const at = word === 'blockdata' ? endWords(statement, 'block', 'data') : endWords(statement, word, '');
    if (at < 0) continue;
    if (at === statement.length) return kind;
    const end = statement.nameEnd(at);
    if (end === statement.length) return kind;
    if (kind === 'interface' && end > at && statement.code[end] === 40) return kind;
  }
  return null;
}

const ENDED = [
  ['subroutine', 'subroutine'],
  ['function', 'function'],
  ['module', 'module'],
  ['program', 'program'],
  ['interface', 'interface'],
  ['type', 'type'],
  ['procedure', 'procedure'],
  ['submodule', 'submodule'],
  ['blockdata', 'block-data'],
  ['enum', 'enum'],
] as const;

function endWords(statement: Statement, first: string, second: string): number {
  let at = statement.keyword('end', 0);
  if (at < 0) at = 3;
  at = statement.keyword(first, at);
  if (at >= 0 && second !== '') return statement.keyword(second, at);
  return at < 0 && second !== '' ? statement.keyword(`end${first}${second}`, 0) : at;
}

function closes(word: string, kind: ScopeKind): boolean {
  return (
    word === kind || (word === 'procedure' && (kind === 'separate' || kind === 'function' || kind === 'subroutine'))
  );
}

function enclosed(scope: Scope, word: string): boolean {
  for (let at: Scope | null = scope; at !== null; at = at.parent) if (closes(word, at.kind)) return true;
  return false;
}

function signatureOf(header: Header): string {
  return JSON.stringify([
    header.kind,
    header.name,
    header.dummies.map((one) => one.name),
    header.resultName,
    header.linkName,
    header.attributes,
  ]);
}

/** What several ways of compiling one statement have in common is kept once; what all have, without a condition of its own. */
function mergeAlike<T extends { line: number; column: number; condition?: string }>(
  list: T[],
  first: number,
  ways: number,
  base: string | undefined,
): void {
  if (list.length <= first) return;
  const added = list.splice(first);
  const groups = new Map<string, T[]>();
  for (const one of added) {
    const { condition: _, ...rest } = one;
    const key = JSON.stringify(rest);
    const known = groups.get(key);
    if (known === undefined) groups.set(key, [one]);
    else known.push(one);
  }
  for (const [one, ...others] of groups.values()) {
    if (ways > 0 && others.length + 1 === ways) {
      const { condition: _, ...rest } = one!;
      list.push((base === undefined ? rest : { ...rest, condition: base }) as T);
    } else list.push(one!);
  }
}
