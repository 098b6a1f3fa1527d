/**
 * Python without running it: bytes come in, the interface goes out. Logical lines and their indentation give the structure;
 * a full parser would be slower than whole histories allow.
 */
import type {
  ActualArgument,
  Argument,
  CallSite,
  Claim,
  Declared,
  External,
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
import { claimsFromDocumentation } from '../claims/claims-from-documentation.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import { evaluatePython, numberOfPython } from './evaluate.ts';
import { type LogicalLine, P, type PythonComment, type PythonTokens, tokenisePython } from './tokens.ts';

/** @returns the interface; no bytes whatever make it throw */
export function readPython(_path: string, bytes: Uint8Array): FileInterface {
  const reader = new PythonReader(tokenisePython(decode(bytes)));
  reader.read();
  return reader.finish();
}

interface Block {
  readonly indent: number;
  readonly kind: 'class' | 'def' | 'other';
  /** Name with its parents, for a class or a function. */
  readonly name: string;
  readonly procedure?: Open;
  readonly type?: OpenType;
  /** The next statement may be its documentation. */
  fresh: boolean;
}

type Open = { -readonly [K in keyof Procedure]: Procedure[K] } & { documented?: boolean };
type OpenType = { -readonly [K in keyof TypeDefinition]: TypeDefinition[K] } & { fields: Declared[] };

const KEYWORDS = new Set(
  'and as assert async await break class continue def del elif else except finally for from global if import in is lambda nonlocal not or pass raise return try while with yield print exec match case'.split(
    ' ',
  ),
);
const PYTHON2 = 'this is Python 2; what both editions spell alike was read';

class PythonReader {
  private readonly tokens: PythonTokens;
  private readonly procedures: Procedure[] = [];
  private readonly types: TypeDefinition[] = [];
  private readonly variables: ModuleVariable[] = [];
  private readonly constants: NamedConstant[] = [];
  private readonly literals: LiteralUse[] = [];
  private readonly uses: Use[] = [];
  private readonly calls: CallSite[] = [];
  private readonly claims: Claim[] = [];
  private readonly externals: External[] = [];
  private readonly values = new Map<string, number | string | boolean>();
  private readonly commentOnLine = new Map<number, PythonComment>();
  private readonly blocks: Block[] = [];
  private decorators: string[] = [];
  private python2 = false;
  private lastLine = 1;

  constructor(tokens: PythonTokens) {
    this.tokens = tokens;
    for (const comment of tokens.comments) this.commentOnLine.set(comment.line, comment);
  }

  finish(): FileInterface {
    return {
      language: 'python',
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
      externals: this.externals,
      datasets: [],
      incomplete: this.tokens.incomplete,
    };
  }

  read(): void {
    for (const line of this.tokens.lines) {
      while (this.blocks.length > 0 && line.indent <= this.blocks.at(-1)!.indent) this.close();
      // `a = 1; b = 2` and `if x: y = 1` hold several statements.
      this.statements(line.from, line.to, line);
      this.lastLine = this.line(line.to - 1);
      const last = this.tokens.kind[line.to - 1] === P.string ? this.text(line.to - 1).split('\n').length - 1 : 0;
      this.lastLine += last;
    }
    while (this.blocks.length > 0) this.close();
  }

  private close(): void {
    const block = this.blocks.pop()!;
    if (block.procedure !== undefined) block.procedure.endLine = this.lastLine;
  }

  private statements(from: number, to: number, line: LogicalLine): void {
    let start = from;
    for (let at = from; at < to; at++) {
      const word = this.tokens.kind[at] === P.operator ? this.text(at) : '';
      if (word === '(' || word === '[' || word === '{') at = Math.max(at, this.match(at));
      else if (word === ';') {
        this.statement(start, at, line);
        start = at + 1;
      }
    }
    if (start < to) this.statement(start, to, line);
  }

  private statement(from: number, to: number, line: LogicalLine): void {
    const first = this.text(from);
    const top = this.blocks.at(-1);
    const documents = top?.fresh === true || (top === undefined && this.procedures.length === 0 && from === 0);
    if (top !== undefined) top.fresh = false;
    if (this.kind(from) === P.string) {
      if (documents && to - from >= 1) this.documentation(from, top);
      // Text below a variable documents it, too; strings hold no calls.
      return;
    }
    if (this.kind(from) === P.operator) {
      if (first === '@') {
        this.decorators.push(this.span(from + 1, to));
        this.scan(from + 1, to, null);
        return;
      }
      this.scan(from, to, null);
      return;
    }
    switch (first) {
      case 'async':
        if (this.text(from + 1) !== 'def') break;
        this.definition(from + 1, to, line, true);
        return;
      case 'def':
        if (this.kind(from + 1) !== P.name) break;
        this.definition(from, to, line, false);
        return;
      case 'class':
        if (this.kind(from + 1) !== P.name) break;
        this.classDefinition(from, to, line);
        return;
      case 'import':
        this.importModules(from, to);
        return;
      case 'from':
        this.importNames(from, to);
        return;
      case 'return':
        this.returned(from, to);
        break;
      case 'yield':
        this.gives();
        break;
      case 'print':
        if (
          to > from + 1 &&
          (this.kind(from + 1) !== P.operator || this.text(from + 1) === '>>' || this.text(from + 1) === '-')
        )
          this.oldPython(from);
        break;
      case 'exec':
        if (this.kind(from + 1) === P.string || (this.kind(from + 1) === P.name && this.text(from + 1) !== 'in'))
          this.oldPython(from);
        break;
      case 'except':
        if (this.kind(from + 1) === P.name && this.text(from + 2) === ',' && this.text(from + 4) === ':')
          this.oldPython(from);
        break;
      case 'raise':
        if (this.kind(from + 1) === P.name && this.text(from + 2) === ',') this.oldPython(from);
        break;
      case 'if':
      case 'elif':
      case 'else':
      case 'for':
      case 'while':
      case 'with':
      case 'try':
      case 'finally':
      case 'match':
      case 'case': {
        const colon = this.colon(from, to);
        if (colon >= 0 && colon + 1 < to && first !== 'match' && first !== 'case') {
          this.scan(from, colon, null);
          this.statements(colon + 1, to, line);
          return;
        }
        break;
      }
      default:
        this.assignment(from, to);
        break;
    }
    if (first === 'except' || first === 'with') {
      const colon = this.colon(from, to);
      if (colon >= 0 && colon + 1 < to) {
        this.scan(from, colon, null);
        this.statements(colon + 1, to, line);
        return;
      }
    }
    this.scan(from, to, null);
  }

  private oldPython(at: number): void {
    if (!this.python2) this.tokens.incomplete.push({ line: this.line(at), why: PYTHON2 });
    this.python2 = true;
  }

  private definition(def: number, to: number, line: LogicalLine, async: boolean): void {
    const name = this.text(def + 1);
    let open = def + 2;
    let template: string | undefined;
    if (this.text(open) === '[') {
      template = this.span(open + 1, this.match(open));
      open = this.match(open) + 1;
    }
    const close = this.text(open) === '(' ? this.match(open) : -1;
    if (close < 0) {
      this.tokens.incomplete.push({ line: this.line(def), why: `the arguments of ${name} are not closed` });
      this.decorators = [];
      return;
    }
    const colon = this.colon(close + 1, to);
    const host = this.blocks.at(-1);
    const owner = this.owner();
    const inClass = this.enclosing()?.kind === 'class';
    const decorators = this.decorators;
    this.decorators = [];
    const bare = decorators.map((one) => one.replace(/\(.*$/s, ''));
    const property = bare.some((one) => /(?:^|[._])(?:cached_)?property$/.test(one));
    const setter = bare.some((one) => /\.(?:setter|deleter|getter)$/.test(one));
    const kind: ProcedureKind = !inClass
      ? 'function'
      : name === '__init__'
        ? 'constructor'
        : property || setter
          ? 'property'
          : 'method';
    const args = this.parameters(open, close);
    const fixed = bare.includes('staticmethod');
    if (inClass && !fixed && args[0] !== undefined && args[0].passing !== 'variadic') {
      args[0] = { ...args[0], attributes: ['receiver'] };
    }
    const arrow = this.text(close + 1) === '->' ? this.span(close + 2, colon < 0 ? to : colon) : undefined;
    const qualified = owner === null ? name : `${owner}::${name}`;
    const procedure: Open = {
      name,
      kind,
      parent: owner,
      endLine: this.line(to - 1),
      args,
      result: arrow === undefined || arrow === 'None' ? null : this.declared(name, arrow, def + 1),
      attributes: [...(async ? ['async'] : []), ...decorators.map((one) => `@${one.slice(0, 80)}`)],
      visibility: name.startsWith('_') && !/^__\w+__$/.test(name) ? 'private' : 'public',
      ...(template === undefined ? {} : { template }),
      ...this.at(def + 1),
    };
    this.procedures.push(procedure);
    for (const one of args) {
      const beside =
        this.line(def) === one.line && one.line === this.line(close) ? undefined : this.commentOnLine.get(one.line);
      if (beside !== undefined && !beside.alone && args.filter((other) => other.line === one.line).length === 1) {
        this.claims.push(
          ...claimsFromComment(this.commentText(beside), [one.name], this.placeOfComment(beside), qualified, {
            caseSensitive: true,
          }),
        );
      }
      this.claims.push(...claimsFromName(one.name, one, qualified));
    }
    const block: Block = { indent: line.indent, kind: 'def', name: qualified, procedure, fresh: true };
    this.blocks.push(block);
    // Defaults are reckoned by the host, not by the function.
    this.scan(open + 1, close, host?.kind === 'def' ? host.name : null, true);
    if (colon >= 0 && colon + 1 < to) this.statements(colon + 1, to, line);
  }

  private parameters(open: number, close: number): Argument[] {
    const args: Argument[] = [];
    let passing: 'positional' | 'either' | 'keyword' = 'either';
    let start = open + 1;
    while (start < close) {
      let at = start;
      let colon = -1;
      let equal = -1;
      while (at < close) {
        const word = this.kind(at) === P.operator ? this.text(at) : this.text(at) === 'lambda' ? 'lambda' : '';
        if (word === ',') break;
        if (word === '(' || word === '[' || word === '{') at = Math.max(at, Math.min(this.match(at), close));
        else if (word === ':' && colon < 0 && equal < 0) colon = at;
        else if (word === '=' && equal < 0) equal = at;
        else if (word === 'lambda') {
          // Up to the comma that ends the default: commas before the colon belong to the lambda.
          while (at < close && this.text(at) !== ':') at++;
        }
        at++;
      }
      const stop = at;
      const mark = this.kind(start) === P.operator ? this.text(start) : '';
      if (mark === '/' && stop === start + 1) {
        for (let index = 0; index < args.length; index++) args[index] = { ...args[index]!, passing: 'positional' };
      } else if (mark === '*' && stop === start + 1) passing = 'keyword';
      else {
        const star = mark === '*' || mark === '**';
        const nameAt = star ? start + 1 : start;
        if (this.kind(nameAt) === P.name) {
          const annotation = colon >= 0 ? this.span(colon + 1, equal >= 0 ? equal : stop) : undefined;
          const value = equal >= 0 ? this.span(equal + 1, stop) : undefined;
          args.push({
            ...this.declared(this.text(nameAt), annotation, nameAt, value),
            intent: null,
            optional: value !== undefined || star,
            passing: mark === '*' ? 'variadic' : mark === '**' ? 'variadic-keyword' : passing,
            ...(value === undefined ? {} : { default: value }),
          });
          if (mark === '*') passing = 'keyword';
        } else if (mark === '(') this.oldPython(start);
      }
      start = stop + 1;
    }
    return args;
  }

  private declared(name: string, annotation: string | undefined, token: number, value?: string): Declared {
    const bare = annotation?.replace(/^["']|["']$/g, '');
    const type = bare ?? (value === undefined ? 'unknown' : typeOfValue(value));
    return {
      name,
      type,
      bytes: /^(?:np\.|numpy\.)?float64$|^float$/.test(type) ? 8 : /float32$/.test(type) ? 4 : null,
      rank: 0,
      bounds: [],
      shape: [],
      attributes: [],
      ...(annotation === undefined && type !== 'unknown' ? { implicit: true } : {}),
      ...this.at(token),
    };
  }

  private classDefinition(from: number, to: number, line: LogicalLine): void {
    const name = this.text(from + 1);
    const owner = this.owner();
    let open = from + 2;
    if (this.text(open) === '[') open = this.match(open) + 1;
    let extended: string | undefined;
    let close = open - 1;
    if (this.text(open) === '(') {
      close = this.match(open);
      if (close > open + 1) extended = this.span(open + 1, close);
      if (close > 0) this.scan(open + 1, close, null);
    }
    const type: OpenType = {
      name,
      kind: 'class',
      parent: owner,
      fields: [],
      bindings: [],
      attributes: this.decorators.map((one) => `@${one.slice(0, 80)}`),
      ...(extended === undefined ? {} : { extends: extended }),
      ...this.at(from + 1),
    };
    this.decorators = [];
    this.types.push(type);
    this.blocks.push({
      indent: line.indent,
      kind: 'class',
      name: owner === null ? name : `${owner}::${name}`,
      type,
      fresh: true,
    });
    const colon = this.colon(Math.max(close, from + 1) + 1, to);
    if (colon >= 0 && colon + 1 < to) this.statements(colon + 1, to, line);
  }

  private importModules(from: number, to: number): void {
    let at = from + 1;
    while (at < to) {
      const start = at;
      while (at < to && this.text(at) !== ',' && this.text(at) !== 'as') at++;
      const module = this.span(start, at).replace(/\s/g, '');
      let local: string | undefined;
      if (this.text(at) === 'as') {
        local = this.text(at + 1);
        at += 2;
      }
      if (module !== '')
        this.uses.push({
          module,
          parent: this.owner(),
          ...(local === undefined ? {} : { renames: [{ local, name: module }] }),
          ...this.at(start),
        });
      at++;
    }
  }

  private importNames(from: number, to: number): void {
    let at = from + 1;
    while (at < to && this.text(at) !== 'import') at++;
    if (at >= to) return;
    const module = this.span(from + 1, at).replace(/\s/g, '');
    const only: { local: string; name: string }[] = [];
    let all = false;
    for (at++; at < to; at++) {
      const word = this.text(at);
      if (word === '*') all = true;
      if (this.kind(at) !== P.name) continue;
      if (word === 'as') {
        const last = only.pop();
        if (last !== undefined) only.push({ local: this.text(++at), name: last.name });
      } else only.push({ local: word, name: word });
    }
    this.uses.push({ module, parent: this.owner(), ...(all ? {} : { only }), ...this.at(from) });
  }

  private returned(from: number, to: number): void {
    if (to <= from + 1) return;
    const procedure = this.gives();
    if (procedure === null) return;
    if (to === from + 2 && this.text(from + 1) === 'None') return;
    let [start, stop] = [from + 1, to];
    if (this.text(start) === '(' && this.match(start) === to - 1) [start, stop] = [start + 1, to - 1];
    const names: string[] = [];
    let begin = start;
    for (let at = start; at <= stop; at++) {
      const word = at === stop ? ',' : this.text(at);
      if (word === '(' || word === '[' || word === '{') at = Math.max(at, Math.min(this.match(at), stop));
      else if (word === 'lambda' || word === 'for') return;
      else if (word === ',') {
        if (at > begin)
          names.push(
            this.kind(at - 1) === P.name && plainName(this.span(begin, at))
              ? this.text(at - 1)
              : this.span(begin, at).slice(0, 60),
          );
        begin = at + 1;
      }
    }
    // The first tuple counts; another of other length is another way out.
    if (names.length > 1 && procedure.returns === undefined) procedure.returns = names;
  }

  private gives(): Open | null {
    for (let index = this.blocks.length - 1; index >= 0; index--) {
      const { procedure } = this.blocks[index]!;
      if (procedure === undefined) continue;
      procedure.result ??= {
        name: procedure.name,
        type: 'unknown',
        bytes: null,
        rank: 0,
        bounds: [],
        shape: [],
        attributes: [],
        line: procedure.line,
        column: procedure.column,
      };
      return procedure;
    }
    return null;
  }

  /** `NAME = expression`, `name: type = expression`, `self.x = ...`, at any level. */
  private assignment(from: number, to: number): void {
    if (this.kind(from) !== P.name || KEYWORDS.has(this.text(from))) return;
    const enclosing = this.enclosing();
    const second = this.text(from + 1);
    if (enclosing?.kind === 'def') {
      // `self.T = ...  # temperature [K]`
      if (second === '.' && this.text(from) === 'self' && this.text(from + 3) === '=') {
        this.attributeClaims(from + 2, to);
      }
      return;
    }
    const name = this.text(from);
    const owner = this.owner();
    if (second === ':') {
      const equal = this.find('=', from + 2, to);
      const annotation = this.span(from + 2, equal < 0 ? to : equal);
      const declared = this.declared(name, annotation, from);
      const value = equal < 0 ? undefined : this.span(equal + 1, to);
      if (enclosing?.kind === 'class' && !/ClassVar/.test(annotation)) {
        (enclosing.type as OpenType).fields.push(
          value === undefined ? declared : { ...declared, attributes: [`= ${value.slice(0, 80)}`] },
        );
      } else this.valued(name, value ?? '', declared, owner, from);
      this.besides(from, to, name, owner);
      return;
    }
    if (second !== '=') {
      // `a, b = 1, 2`
      if (second === ',') {
        const equal = this.find('=', from, to);
        if (equal < 0) return;
        for (let at = from; at < equal; at += 2) {
          if (this.kind(at) !== P.name || (at + 1 < equal && this.text(at + 1) !== ',')) return;
          this.variables.push({ ...this.declared(this.text(at), undefined, at), parent: owner, visibility: 'public' });
        }
      }
      return;
    }
    // `a = b = 1`
    let start = from;
    const names: number[] = [];
    while (this.kind(start) === P.name && this.text(start + 1) === '=') {
      names.push(start);
      start += 2;
    }
    const value = this.span(start, to);
    for (const one of names) {
      const plain = this.text(one);
      this.valued(plain, value, this.declared(plain, undefined, one, value), owner, one);
      this.besides(one, to, plain, owner);
    }
  }

  private valued(name: string, value: string, declared: Declared, owner: string | null, token: number): void {
    const known =
      value === ''
        ? null
        : evaluatePython(
            value,
            (other) => this.values.get(other) ?? this.values.get(`${owner ?? ''}.${other}`) ?? null,
          );
    const public_ = name.startsWith('_') ? 'private' : 'public';
    if (known !== null && (typeof known === 'number' || /^[A-Z_][A-Z0-9_]*$/.test(name))) {
      if (!this.values.has(name)) this.values.set(owner === null ? name : `${owner}.${name}`, known);
      this.constants.push({
        name,
        parent: owner,
        type:
          typeof known === 'number'
            ? /[.eE]/.test(value) || !Number.isInteger(known)
              ? 'float'
              : 'int'
            : typeof known === 'string'
              ? 'str'
              : 'bool',
        bytes: typeof known === 'number' ? 8 : null,
        text: value.slice(0, 400),
        value: typeof known === 'number' && !Number.isFinite(known) ? null : known,
        ...this.at(token),
      });
    } else
      this.variables.push({
        ...declared,
        parent: owner,
        visibility: public_,
        ...(value === '' ? {} : { value: value.slice(0, 200) }),
      });
  }

  /** Claims of the comment behind a line, or above it, on the name it gives a value. */
  private besides(from: number, to: number, name: string, owner: string | null): void {
    const found: Claim[] = [];
    const behind = this.commentOnLine.get(this.line(to - 1));
    if (behind !== undefined && !behind.alone)
      found.push(
        ...claimsFromComment(this.commentText(behind), [name], this.placeOfComment(behind), owner, {
          caseSensitive: true,
        }),
      );
    if (found.length === 0) {
      const above = this.commentOnLine.get(this.line(from) - 1);
      if (above?.alone === true)
        found.push(
          ...claimsFromComment(this.commentText(above), [name], this.placeOfComment(above), owner, {
            caseSensitive: true,
          }),
        );
    }
    for (const one of claimsFromName(name, this.at(from), owner))
      if (!found.some((known) => known.what === one.what)) found.push(one);
    this.claims.push(...found);
  }

  private attributeClaims(token: number, to: number): void {
    const owner = [...this.blocks].reverse().find((one) => one.kind === 'class')?.name ?? null;
    const behind = this.commentOnLine.get(this.line(to - 1));
    const name = this.text(token);
    if (behind !== undefined && !behind.alone)
      this.claims.push(
        ...claimsFromComment(this.commentText(behind), [name], this.placeOfComment(behind), owner, {
          caseSensitive: true,
        }),
      );
    else this.claims.push(...claimsFromName(name, this.at(token), owner));
  }

  private documentation(token: number, block: Block | undefined): void {
    const raw = this.text(token);
    const mark = /^[a-zA-Z]*("""|'''|"|')/.exec(raw);
    if (mark === null || block === undefined) return;
    const text = raw.slice(mark[0]!.length, raw.length - mark[1]!.length);
    const at = this.at(token);
    if (block.procedure !== undefined) {
      const { procedure } = block;
      const names = procedure.args.map((one) => one.name).filter((one) => one !== 'self' && one !== 'cls');
      const found = claimsFromDocumentation({
        text,
        at,
        args: names,
        itself: procedure.name,
        owner: block.name,
        parent: procedure.parent,
        from: 'docstring',
      });
      this.claims.push(...found);
    } else if (block.type !== undefined) {
      // Attributes are named in the text of the class; fields come later, so any name at the head of a line counts.
      const names = [...text.matchAll(/^\s*(?::(?:ivar|param|var|cvar)\s+)?([A-Za-z_]\w*)\s*(?::|=|--|\()/gm)]
        .map((one) => one[1]!)
        .slice(0, 200);
      if (names.length > 0)
        this.claims.push(
          ...claimsFromComment(text, names, at, block.name, { from: 'docstring', block: true, caseSensitive: true }),
        );
    }
  }

  /** Calls and literals of an expression. */
  private scan(from: number, to: number, within: string | null, given = false): void {
    const caller = given ? within : this.caller();
    for (let at = from; at < to; at++) {
      const kind = this.kind(at);
      if (kind === P.number) this.literal(at, caller);
      else if (kind === P.name && this.kind(at + 1) === P.operator && this.text(at + 1) === '(')
        this.call(at, caller, from);
    }
  }

  private call(name: number, caller: string | null, lineStart: number): void {
    const word = this.text(name);
    if (KEYWORDS.has(word) && word !== 'print' && word !== 'match' && word !== 'exec') return;
    const open = name + 1;
    const close = this.match(open);
    if (close < 0) return;
    let begin = name;
    while (this.text(begin - 1) === '.' && this.kind(begin - 2) === P.name && begin - 2 >= lineStart) begin -= 2;
    // `f(x).g(y)`, `a[i].g(y)`: the method of something that has no name.
    const method = this.text(begin - 1) === '.';
    const callee = `${method && begin === name ? '.' : ''}${this.span(begin, name + 1).replace(/\s/g, '')}`;
    const args: ActualArgument[] = [];
    let start = open + 1;
    while (start < close) {
      let at = start;
      while (at < close && !(this.kind(at) === P.operator && this.isComma(at))) {
        const kind = this.kind(at);
        if (kind === P.operator) {
          const match = this.match(at);
          if (match > at) at = Math.min(match, close);
        } else if (kind === P.name) {
          const inner = this.text(at);
          if (inner === 'lambda') while (at < close && this.text(at) !== ':') at++;
          // `sum(a * b for a, b in pairs)`: what is drawn is the only argument, and its commas are its own.
          else if (inner === 'for' && start === open + 1) at = close - 1;
        }
        at++;
      }
      if (at > start) args.push(this.actual(start, at));
      start = at + 1;
    }
    const unpacked: string[] = [];
    if (this.text(begin - 1) === '=' && begin - 1 > lineStart) {
      let stop = begin - 1;
      // Only names, commas and brackets before the sign: a target.
      let first = stop - 1;
      while (first > lineStart && this.text(first - 1) !== '=' && this.text(first - 1) !== ':') first--;
      if (this.text(first) === '(' && this.match(first) === stop - 1) {
        first++;
        stop--;
      }
      let part = first;
      for (let at = first; at <= stop; at++) {
        const inner = at === stop ? ',' : this.text(at);
        if (inner === '[' || inner === '(') at = Math.max(at, Math.min(this.match(at), stop - 1));
        else if (inner === ',') {
          if (at > part) unpacked.push(this.span(part, at).slice(0, 80));
          part = at + 1;
        }
      }
    }
    this.calls.push({
      callee,
      how: /^[A-Z]\w*[a-z]/.test(word) ? 'constructor' : begin < name || method ? 'method' : 'function',
      caller,
      args,
      ...(unpacked.length > 0 ? { unpacked } : {}),
      ...this.at(begin),
    });
    const [argument] = args;
    if (argument?.form === 'literal' && argument.type === 'str') {
      const kind = /(?:^|\.)(?:getenv|environ\.get)$/.test(callee)
        ? 'environment'
        : /(?:^|\.)(?:open|loadtxt|genfromtxt|read_csv|load|File|Dataset)$/.test(callee)
          ? 'file'
          : null;
      if (kind !== null)
        this.externals.push({
          kind,
          name: argument.text.replace(/^[a-zA-Z]*["']|["']$/g, ''),
          line: argument.line,
          column: argument.column,
        });
    }
  }

  private actual(from: number, to: number): ActualArgument {
    const at = this.at(from);
    let start = from;
    let keyword: string | undefined;
    if (this.kind(from) === P.name && this.text(from + 1) === '=' && to > from + 2) {
      keyword = this.text(from);
      start = from + 2;
    }
    const text = this.span(start, to).slice(0, 200);
    // Written out field by field: this is the busiest place of the reader, and copies of objects are dear.
    const give = (form: ActualArgument['form'], more: 'name' | 'type' | null, value: string): ActualArgument => {
      const given: { -readonly [K in keyof ActualArgument]: ActualArgument[K] } = {
        text,
        form,
        line: at.line,
        column: at.column,
      };
      if (keyword !== undefined) given.keyword = keyword;
      if (more === 'name') given.name = value;
      else if (more === 'type') {
        given.type = value;
        given.rank = 0;
      }
      return given;
    };
    let last = start;
    while (last + 2 < to && this.kind(last) === P.name && this.text(last + 1) === '.') last += 2;
    if (this.kind(last) === P.name && !KEYWORDS.has(this.text(last))) {
      if (last + 1 === to) {
        const word = this.text(last);
        if (last === start && (word === 'True' || word === 'False' || word === 'None'))
          return give('literal', 'type', word === 'None' ? 'None' : 'bool');
        return give('name', 'name', word);
      }
      if (this.text(last + 1) === '[' && this.match(last + 1) === to - 1) {
        return give(text.includes(':') ? 'section' : 'element', 'name', this.text(last));
      }
    }
    const sign = this.text(start) === '-' || this.text(start) === '+' ? 1 : 0;
    if (start + sign + 1 === to && this.kind(start + sign) === P.number) {
      return give('literal', 'type', /[.eE]/.test(text) && !/^-?0x/i.test(text) ? 'float' : 'int');
    }
    if (start + 1 === to && this.kind(start) === P.string) return give('literal', 'type', 'str');
    return give(this.text(start) === 'lambda' ? 'procedure' : 'expression', null, '');
  }

  private literal(at: number, caller: string | null): void {
    const text = this.text(at);
    if (text.length < 3) return;
    const value = numberOfPython(text);
    if (value === null || value === 0 || value === 1 || value === 2 || value === 0.5) return;
    const integer = !/[.eEjJ]/.test(text);
    if (integer && text.length < 5) return;
    const before = this.text(at - 1);
    const after = this.text(at + 1);
    const assigned = before === '=' && this.kind(at - 2) === P.name;
    const argument = (before === '(' || before === ',' || before === '=') && (after === ')' || after === ',');
    this.literals.push({
      text,
      value,
      bytes: 8,
      role:
        assigned && !argument
          ? caller === null
            ? 'named'
            : 'assigned'
          : argument
            ? 'argument'
            : before === '**'
              ? 'exponent'
              : 'plain',
      procedure: caller,
      ...(assigned ? { target: this.text(at - 2) } : {}),
      ...this.at(at),
    });
  }

  private owner(): string | null {
    return this.enclosing()?.name ?? null;
  }

  private enclosing(): Block | undefined {
    for (let index = this.blocks.length - 1; index >= 0; index--)
      if (this.blocks[index]!.kind !== 'other') return this.blocks[index];
    return undefined;
  }

  private caller(): string | null {
    for (let index = this.blocks.length - 1; index >= 0; index--)
      if (this.blocks[index]!.kind === 'def') return this.blocks[index]!.name;
    return null;
  }

  /** The colon that ends the head of a statement: not one of a slice, a dictionary or a lambda. */
  private colon(from: number, to: number): number {
    for (let at = from; at < to; at++) {
      const word = this.text(at);
      if (this.kind(at) === P.operator && (word === '(' || word === '[' || word === '{'))
        at = Math.max(at, this.match(at));
      else if (word === 'lambda' && this.kind(at) === P.name) while (at < to && this.text(at) !== ':') at++;
      else if (word === ':' && this.kind(at) === P.operator) return at;
    }
    return -1;
  }

  private find(operator: string, from: number, to: number): number {
    for (let at = from; at < to; at++) {
      const word = this.kind(at) === P.operator ? this.text(at) : '';
      if (word === operator) return at;
      if (word === '(' || word === '[' || word === '{') at = Math.max(at, this.match(at));
    }
    return -1;
  }

  private kind(at: number): number {
    return at < 0 || at >= this.tokens.count ? 0 : this.tokens.kind[at]!;
  }

  private text(at: number): string {
    const { tokens } = this;
    if (at < 0 || at >= tokens.count) return '';
    const start = tokens.start[at]!;
    const end = tokens.end[at]!;
    // Most tokens looked at are single signs: no string is made for them.
    if (end - start === 1) {
      const code = tokens.text.charCodeAt(start);
      if (code < 128) return SIGNS[code]!;
    }
    return tokens.text.slice(start, end);
  }

  private isComma(at: number): boolean {
    return this.tokens.text.charCodeAt(this.tokens.start[at]!) === 44;
  }

  private match(at: number): number {
    return at < 0 || at >= this.tokens.count ? -1 : this.tokens.match[at]!;
  }

  private line(at: number): number {
    return this.tokens.line[Math.max(0, Math.min(at, this.tokens.count - 1))] ?? 1;
  }

  private span(from: number, to: number): string {
    const { tokens } = this;
    const last = Math.min(to, tokens.count) - 1;
    if (from > last) return '';
    const raw = tokens.text.slice(tokens.start[from], Math.min(tokens.end[last]!, tokens.start[from]! + 4000));
    return raw.includes('\n') || raw.includes('  ') || raw.includes('\t')
      ? raw
          .replace(/#.*$/gm, '')
          .replace(/\\\r?\n/g, ' ')
          .replace(/\s+/g, ' ')
          .trim()
      : raw;
  }

  private at(token: number): Position {
    const line = this.line(token);
    return { line, column: (this.tokens.start[token] ?? 0) - this.tokens.lineStarts[line - 1]! + 1 };
  }

  private commentText(comment: PythonComment): string {
    return this.tokens.text.slice(comment.start, comment.end).replace(/^#[:#]*/, (marks) => ' '.repeat(marks.length));
  }

  private placeOfComment(comment: PythonComment): Position {
    return { line: comment.line, column: comment.start - this.tokens.lineStarts[comment.line - 1]! + 1 };
  }
}

const SIGNS: readonly string[] = Array.from({ length: 128 }, (_, code) => String.fromCharCode(code));

const plainName = (text: string) => /^[A-Za-z_][\w.]*$/.test(text);

function typeOfValue(value: string): string {
  if (/^[+-]?\d[\d_]*$/.test(value)) return 'int';
  if (/^[+-]?(?:\d[\d_]*\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/.test(value)) return 'float';
  if (/^(?:True|False)$/.test(value)) return 'bool';
  if (/^[rbuf]{0,2}["']/i.test(value)) return 'str';
  if (value.startsWith('[')) return 'list';
  if (value.startsWith('{')) return value.includes(':') || value === '{}' ? 'dict' : 'set';
  return 'unknown';
}

function decode(bytes: Uint8Array): string {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
  if (!/[\x80-\xff]/.test(text)) return text;
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    return text;
  }
}
