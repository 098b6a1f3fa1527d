/**
 * C and C++ without compiling: bytes come in, the interface goes out. A scanner of declarations over flat tokens, since a full
 * parse is slower than the whole history may be and stops at the macros that vendors put before and after every function.
 */
import type { Claim, FileInterface, Procedure, Use } from '../../model/interface.ts';
import { claimsFromComment } from '../claims/claims-from-comment.ts';
import { claimsFromDocumentation } from '../claims/claims-from-documentation.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import type { ReadOptions } from '../read-options.ts';
import { scanBody } from './body.ts';
import { CFile } from './c-file.ts';
import type { CUnit, OpenBlock } from './cut-units.ts';
import { closeAngle, parameters, plainParameters, typeOf } from './parameters.ts';
import { type CUnitReading, settled } from './settle.ts';
import { T } from './tokens.ts';
import { BUILTIN, isMarker, QUALIFIERS, TAGS } from './words.ts';

export interface COptions extends ReadOptions {
  readonly language: 'c' | 'c++';
}

/** @returns the interface; no bytes whatever make it throw */
export function readC(_path: string, bytes: Uint8Array, options: COptions): FileInterface {
  const file = new CFile(bytes, options.language, options.define ?? {});
  new Declarations(file).all([]);
  return settled(file.finish());
}

/**
 * Reads one unit of a file alone. Lines are counted from the unit's first, and constants that rest on other units have no value yet;
 * `joinCUnits` gives the file.
 *
 * @param bytes  of the whole file, or of the unit alone (then `unit.from` is ignored)
 */
export function readCUnit(_path: string, bytes: Uint8Array, unit: CUnit, options: ReadOptions = {}): CUnitReading {
  const own = bytes.length === unit.to - unit.from ? bytes : bytes.subarray(unit.from, unit.to);
  const file = new CFile(own, unit.language, options.define ?? {}, unit.state);
  new Declarations(file, unit.state.bases).all(unit.state.blocks);
  return file.finish();
}

interface Scope {
  readonly parent: string | null;
  /** The class whose members are being read; its name without parents. */
  readonly className: string | null;
  visibility: 'public' | 'private';
  /** Inside extern "C". */
  readonly linkage: boolean;
  readonly depth: number;
}

const SPECIFIERS = new Set(
  'static inline virtual extern constexpr explicit friend __device__ __host__ __global__'.split(' '),
);
/** Words of a declaration whose brackets are their own. */
const WITH_BRACKETS = new Set(
  '__attribute__ __attribute __declspec alignas _Alignas decltype __typeof__ typeof noexcept explicit'.split(' '),
);

/** Deeper nesting than any code has; the rest is skipped and said so. */
const DEEPEST = 120;
/** Tokens of one declaration before its body; more is a table or no declaration at all. */
const LONGEST = 20_000;

class Declarations {
  private readonly file: CFile;
  /** What each class of this file extends, as written. */
  private readonly bases: Map<string, string>;

  constructor(file: CFile, bases: Readonly<Record<string, string>> = {}) {
    this.file = file;
    this.bases = new Map(Object.entries(bases));
  }

  /** @param open  namespaces and extern blocks that stand open where the text begins: a brace that closes nothing closes them */
  all(open: readonly OpenBlock[]): void {
    const { file } = this;
    const { count } = file.tokens;
    const blocks = [...open];
    const within = (): Scope => {
      const last = blocks.at(-1);
      return {
        parent: last?.parent ?? null,
        className: null,
        visibility: 'public',
        linkage: last?.linkage ?? false,
        depth: blocks.length,
      };
    };
    let scope = within();
    for (let at = 0; at < count; ) {
      if (blocks.length > 0 && file.word(at) === '}' && file.match(at) < 0) {
        blocks.pop();
        scope = within();
        at++;
      } else at = Math.max(at + 1, this.declaration(at, count, scope));
    }
  }

  scope(from: number, to: number, scope: Scope): void {
    let at = from;
    if (scope.depth > DEEPEST) {
      this.file.missed(this.file.line(from), 'nested too deeply to be read');
      return;
    }
    while (at < to) {
      const next = this.declaration(at, to, scope);
      at = next > at ? next : at + 1;
    }
  }

  /** Reads one declaration; returns the token behind it. */
  private declaration(begin: number, to: number, scope: Scope): number {
    const { file } = this;
    let at = begin;
    const first = file.word(at);
    if (isMarker(first)) {
      // `BEGIN_NAMESPACE_VERSION namespace detail {`; a marker before a template still belongs to its declaration.
      if (file.word(at + 1) === 'namespace') return at + 1;
      if (file.word(at + 1) === 'template' || file.word(at + 1) === 'typedef') at++;
    }
    switch (first) {
      case ';':
      case '}':
      case ')':
      case ',':
        return at + 1;
      case '{': {
        // A block without a header that we understand: skipped whole.
        const close = file.match(at);
        return close > at ? close + 1 : at + 1;
      }
      case '__extension__':
        return at + 1;
      case 'namespace':
        return this.namespace(at, to, scope);
      case 'inline':
        if (file.word(at + 1) === 'namespace') return this.namespace(at + 1, to, scope);
        break;
      case 'using':
        return this.using(at, to, scope);
      case 'public':
      case 'private':
      case 'protected':
        if (file.word(at + 1) === ':' || file.word(at + 2) === ':') {
          scope.visibility = first === 'public' ? 'public' : 'private';
          return at + (file.word(at + 1) === ':' ? 2 : 3);
        }
        break;
      case 'static_assert':
      case '_Static_assert': {
        const end = this.toSemicolon(at, to);
        scanBody(file, at, end, null, new Map());
        return end;
      }
      case 'asm':
      case '__asm__':
        return this.toSemicolon(at, to);
      case 'extern':
        if (file.kind(at + 1) === T.string) {
          const c = file.word(at + 1) === '"C"';
          if (file.word(at + 2) === '{') {
            const close = file.match(at + 2);
            const inside = close < 0 ? to : close;
            this.scope(at + 3, inside, { ...scope, linkage: c, depth: scope.depth + 1 });
            return inside + 1;
          }
          return this.declaration(at + 2, to, { ...scope, linkage: c });
        }
        if (file.word(at + 1) === 'template') return this.toSemicolon(at, to);
        break;
    }
    let template: string | undefined;
    while (file.word(at) === 'template' && file.word(at + 1) === '<') {
      const close = closeAngle(file, at + 1, to);
      if (close < 0) return this.toSemicolon(at, to);
      template = file.textOf(at + 2, close);
      at = close + 1;
      if (file.word(at) === 'requires') at = this.skipRequires(at, to);
    }
    if (file.word(at) === 'friend') {
      const end = this.headerEnd(at, to);
      if (end.word !== '{') return this.toSemicolon(at, to);
    }
    if (file.word(at) === 'using') return this.using(at, to, scope);
    if (file.word(at) === 'concept') return this.toSemicolon(at, to);
    const typedef = file.word(at) === 'typedef';
    const tagged = this.taggedType(typedef ? at + 1 : at, to, scope, typedef, template);
    if (tagged !== null) return tagged;
    if (typedef) return this.typedef(at, to, scope);
    return this.plain(begin, at, to, scope, template);
  }

  private namespace(at: number, to: number, scope: Scope): number {
    const { file } = this;
    let name = '';
    let next = at + 1;
    for (; next < to && file.word(next) !== '{'; next++) {
      const word = file.word(next);
      if (word === ';' || word === '=') return this.toSemicolon(next, to);
      if (word === '[') {
        next = Math.max(next, file.match(next));
        continue;
      }
      if (word === '(') {
        next = Math.max(next, file.match(next));
        continue;
      }
      if (/^__attribute__$|^__declspec$/.test(word)) continue;
      if ((file.kind(next) === T.name && !isMarker(word)) || word === '::') name += word === 'inline' ? '' : word;
      else if (file.kind(next) !== T.name) return next;
      else if (name === '' || name.endsWith('::')) name += word;
    }
    const close = file.match(next);
    const inner = name === '' ? scope.parent : scope.parent === null ? name : `${scope.parent}::${name}`;
    const inside = close < 0 ? to : close;
    this.scope(next + 1, inside, {
      ...scope,
      parent: inner,
      className: null,
      visibility: 'public',
      depth: scope.depth + 1,
    });
    return inside + 1;
  }

  private using(at: number, to: number, scope: Scope): number {
    const { file } = this;
    const end = this.toSemicolon(at, to);
    const condition = file.condition(at);
    const base = { parent: scope.parent, ...file.at(at), ...(condition === '' ? {} : { condition }) };
    if (file.word(at + 1) === 'namespace') {
      const use: Use = { module: file.textOf(at + 2, end - 1), ...base };
      file.uses.push(use);
    } else {
      let equal = at + 1;
      while (equal < end && file.word(equal) !== '=') equal++;
      if (equal < end) {
        file.types.push({
          name: file.word(at + 1),
          kind: 'alias',
          parent: scope.parent,
          extends: file.textOf(equal + 1, end - 1).slice(0, 200),
          fields: [],
          bindings: [],
          attributes: [],
          ...file.at(at + 1),
        });
      } else {
        const whole = file.textOf(at + 1, end - 1).replace(/^typename /, '');
        const cut = whole.lastIndexOf('::');
        if (cut > 0)
          file.uses.push({
            module: whole.slice(0, cut),
            only: [{ local: whole.slice(cut + 2), name: whole.slice(cut + 2) }],
            ...base,
          });
      }
    }
    return end;
  }

  /** `struct name { ... } more;`, also under typedef; null when it is no definition of a type. */
  private taggedType(
    begin: number,
    to: number,
    scope: Scope,
    typedef: boolean,
    template: string | undefined,
  ): number | null {
    const { file } = this;
    let tag = begin;
    // `static struct`, `const struct`, `EXPORT class`
    while (tag < to && file.kind(tag) === T.name && (QUALIFIERS.has(file.word(tag)) || isMarker(file.word(tag)))) tag++;
    const kind = file.word(tag);
    if (!TAGS.has(kind)) return null;
    let at = tag + 1;
    const scoped = kind === 'enum' && TAGS.has(file.word(at));
    if (scoped) at++;
    let name = '';
    let nameAt = at;
    for (; at < to; at++) {
      const word = file.word(at);
      if (word === '{' || word === ':') break;
      if (word === '[' || word === '(') {
        // `[[nodiscard]]`, `__attribute__((packed))`, `alignas(16)`; a bracket behind a plain name is a function.
        const before = file.word(at - 1);
        if (
          word === '(' &&
          !/^(?:__attribute__|__attribute|alignas|__declspec|_Alignas|CCTK_\w+)$/.test(before) &&
          !isMarker(before)
        )
          return null;
        const close = file.match(at);
        if (close < 0) return null;
        at = close;
        continue;
      }
      if (word === '<') {
        const close = closeAngle(file, at, to);
        if (close < 0) return null;
        name += file.textOf(at, close + 1);
        at = close;
        continue;
      }
      if (file.kind(at) === T.name) {
        if (word === 'final' || /^(?:__attribute__|__attribute|alignas|__declspec|_Alignas)$/.test(word)) continue;
        if (name.endsWith('::')) name += word;
        else if (name === '' || isMarker(name) || file.word(at - 1) === ')') {
          name = word;
          nameAt = at;
        } else if (isMarker(word)) continue;
        // Two names: `struct part *p` has a star between, `struct part p;` is a variable.
        else return null;
      } else if (word === '::') name += '::';
      else return null;
    }
    if (at >= to) return null;
    let extended: string | undefined;
    if (file.word(at) === ':') {
      const bases = at + 1;
      while (at < to && file.word(at) !== '{') {
        if (file.word(at) === ';' || file.word(at) === '}') return null;
        if (file.word(at) === '(') at = Math.max(at, file.match(at));
        at++;
      }
      extended = file
        .textOf(bases, at)
        .replace(/\b(?:public|private|protected|virtual)\s+/g, '')
        .slice(0, 200);
    }
    const close = file.match(at);
    if (at >= to) return null;
    const inside = close < 0 || close > to ? to : close;
    // Names behind the body: of the type under typedef, of variables otherwise.
    let end = inside + 1;
    const behind: number[] = [];
    while (end < to && file.word(end) !== ';') {
      const word = file.word(end);
      if (file.kind(end) === T.name && !QUALIFIERS.has(word) && word !== '__attribute__') behind.push(end);
      if (word === '(' || word === '{' || word === '[') end = Math.max(end, file.match(end));
      else if (word === '=' || end - inside > 60) break;
      end++;
    }
    const semicolon = this.toSemicolon(Math.min(end, to), to);
    if (typedef && behind.length > 0 && name === '') {
      nameAt = behind.find((one) => !isMarker(file.word(one))) ?? behind[0]!;
      name = file.word(nameAt);
    }
    if (kind === 'enum') {
      this.enumerators(at + 1, inside, scope, name);
      if (name !== '')
        file.types.push({
          name,
          kind: 'enum',
          parent: scope.parent,
          fields: [],
          bindings: [],
          attributes: scoped ? ['scoped'] : [],
          ...(extended === undefined ? {} : { extends: extended }),
          ...file.at(nameAt),
        });
    } else {
      // An unnamed union or struct inside another: its members are reached as members of the outer one.
      const inner = name === '' ? scope.parent : scope.parent === null ? name : `${scope.parent}::${name}`;
      const fields = file.openFields();
      if (extended !== undefined) this.bases.set(lastName(name), extended);
      this.scope(at + 1, inside, {
        parent: inner,
        className: name === '' ? (scope.className ?? '') : name,
        visibility: kind === 'class' ? 'private' : 'public',
        linkage: scope.linkage,
        depth: scope.depth + 1,
      });
      file.closeFields();
      if (name === '' && scope.className !== null && behind.length === 0) file.fields?.push(...fields);
      else if (name !== '' || behind.length > 0) {
        file.types.push({
          name: name === '' ? file.word(behind[0]!) : name,
          kind: kind as 'struct' | 'class' | 'union',
          parent: scope.parent,
          fields,
          bindings: [],
          attributes: template === undefined ? [] : [`template <${template}>`],
          ...(extended === undefined ? {} : { extends: extended }),
          ...file.at(name === '' ? behind[0]! : nameAt),
        });
      }
    }
    if (!typedef && behind.length > 0) {
      for (const one of behind) {
        if (isMarker(file.word(one)) || file.word(one - 1) === '=') continue;
        file.variable(one, { type: name === '' ? kind : name, rank: 0, bounds: [], attributes: [] }, scope, undefined);
      }
    }
    return semicolon;
  }

  private enumerators(from: number, to: number, scope: Scope, type: string): void {
    const { file } = this;
    let at = from;
    let before: string | null = null;
    let count = 0;
    while (at < to) {
      if (file.kind(at) !== T.name) {
        at++;
        continue;
      }
      const nameAt = at++;
      let end = at;
      while (end < to && file.word(end) !== ',') {
        if ('([{'.includes(file.word(end))) end = Math.max(end, file.match(end));
        end++;
      }
      const equal = file.word(at) === '=' ? at : -1;
      // Each follows the last one that has a value: `last + n`.
      const text: string =
        equal >= 0 ? file.textOf(equal + 1, end) : before === null ? String(count) : `(${before}) + ${count}`;
      if (equal >= 0) {
        before = text;
        count = 0;
      }
      count++;
      const parent: string | null =
        type === '' ? scope.parent : scope.parent === null ? type : `${scope.parent}::${type}`;
      file.constant(nameAt, 'int', 4, text, parent);
      at = end + 1;
    }
  }

  private typedef(at: number, to: number, scope: Scope): number {
    const { file } = this;
    const end = this.toSemicolon(at, to);
    let name = -1;

    for (let index = at + 1; index < end - 1; index++) {
      if (file.word(index) === '(' && /^[*&]$|^\^$/.test(file.word(index + 1))) {
        // `typedef double (*rate)(double, double);`
        const close = file.match(index);
        for (let inside = index + 1; inside < close; inside++) if (file.kind(inside) === T.name) name = inside;

        break;
      }
      if (file.word(index) === '(') break;
      if (file.kind(index) === T.name && file.word(index + 1) !== '::') name = index;
      if (file.word(index) === '[') index = Math.max(index, file.match(index));
      if (file.word(index) === '<') {
        const close = closeAngle(file, index, end);
        if (close > 0) index = close;
      }
    }
    if (name > 0) {
      file.types.push({
        name: file.word(name),
        kind: 'alias',
        parent: scope.parent,
        extends: file.textOf(at + 1, name).slice(0, 200),
        fields: [],
        bindings: [],
        attributes: [],
        ...file.at(name),
      });
    }
    return end;
  }

  /** A function, a variable, or a macro that stands alone. */
  private plain(begin: number, from: number, to: number, scope: Scope, template: string | undefined): number {
    const { file } = this;
    let words = 0;
    let nameOfOperator: { name: string; open: number } | null = null;
    const limit = Math.min(to, from + LONGEST);
    for (let at = from; at < limit; at++) {
      const word = file.word(at);
      // The other branch of an #if begins anew: what stands before it is a header of its own.
      if (file.kind(at) === T.name) {
        words++;
        if (word === 'operator') {
          nameOfOperator = this.operatorName(at, limit);
          if (nameOfOperator === null) return this.toSemicolon(at, to);
          return this.procedure(begin, from, at, nameOfOperator.name, nameOfOperator.open, to, scope, template);
        }
        // `__attribute__((...)) void f()`
        if (file.word(at + 1) === '(' && WITH_BRACKETS.has(word)) {
          const close = file.match(at + 1);
          if (close < 0) return at + 2;
          at = close;
        }
        continue;
      }
      if (word === '<' && words > 0 && file.kind(at - 1) === T.name) {
        const close = closeAngle(file, at, limit);
        if (close > 0) at = close;
        continue;
      }
      if (word === '[') {
        const close = file.match(at);
        if (close < 0) return at + 1;
        at = close;
        continue;
      }
      if (word === '}') return at;
      if (word === '=' || word === ';' || word === '{' || word === ':' || word === ',') {
        if (word === ':' && scope.className === null) return at + 1;
        if (words === 0) return word === '{' ? this.block(at, to) : at + 1;
        if (word === '{' && words === 1 && file.word(from) === 'do') return this.block(at, to);
        // A body whose header no rule knew: what follows is not part of it.
        if (word === '{' && file.word(at - 1) === ')') return this.block(at, to);
        return this.variables(from, at, to, scope);
      }
      if (word === '(') {
        const close = file.match(at);
        if (close < 0) {
          file.missed(file.line(at), 'a round bracket is not closed; the declaration is skipped');
          return at + 1;
        }
        const pointer =
          /^[*&^]$/.test(file.word(at + 1)) ||
          (file.kind(at + 1) === T.name && file.word(at + 2) === '::' && file.word(at + 3) === '*') ||
          (isMarker(file.word(at + 1)) && file.word(at + 2) === '*');
        if (words === 0) return close + 1;
        if (pointer && file.word(close + 1) === '(' && file.kind(at - 1) !== T.punctuation)
          return this.functionPointer(from, at, close, to, scope);
        if (file.kind(at - 1) !== T.name && file.word(at - 1) !== '>') {
          // `(*x)[3]` and the like
          return this.toSemicolon(at, to);
        }
        const nameAt = this.nameStart(at - 1, from);
        const name = file.textOf(nameAt, at).replace(/\s+/g, '');
        const typed = nameAt > from;
        // A second bracket at once: the name is made by a macro, `FORTRAN_NAME(byte_open, BYTE_OPEN)(...)`.
        if (file.word(close + 1) === '(' && !pointer) {
          const inner = file.match(close + 1);
          const made = file.kind(at + 1) === T.name ? file.word(at + 1) : null;
          if (inner > 0 && made !== null && typed) {
            return this.procedure(begin, from, at + 1, made, close + 1, to, scope, template, `name-by-macro ${name}`);
          }
        }
        // A marker with arguments in front of the declaration: `EXPORT(int) f(...)`, `DEPRECATED("...") int f(...)`.
        const behind = close + 1;
        if (!typed && lastName(scope.className ?? '') !== name && !name.includes('::') && !name.startsWith('~')) {
          const verdict = this.loneMacro(at, close, to, scope, name);
          if (verdict === 'marker') {
            at = close;
            words = 1;
            // What follows begins the declaration proper.
            from = behind;
            continue;
          }
          if (verdict !== null) return verdict;
        } else if (
          isMarker(name) &&
          file.kind(behind) === T.name &&
          !QUALIFIERS.has(file.word(behind)) &&
          !isMarker(file.word(behind)) &&
          this.anotherBracket(behind, limit)
        ) {
          at = close;
          continue;
        }
        if (!this.couldBeParameters(at, close, scope)) return this.variables(from, at, to, scope);
        return this.procedure(begin, from, nameAt, name, at, to, scope, template);
      }
    }
    if (limit < to) {
      file.missed(file.line(from), 'a declaration without end is skipped');
      return limit;
    }
    return to;
  }

  private block(at: number, to: number): number {
    const close = this.file.match(at);
    return close > 0 && close < to ? close + 1 : at + 1;
  }

  /** Where a qualified name begins that ends at a token: `A<T>::f`, `~A`. */
  private nameStart(last: number, from: number): number {
    const { file } = this;
    let at = last;
    if (file.word(at) === '>') {
      let depth = 0;
      for (let back = at; back >= from && at - back < 200; back--) {
        if (file.word(back) === '>') depth++;
        else if (file.word(back) === '<' && --depth === 0) {
          at = back - 1;
          break;
        }
      }
    }
    if (file.word(at - 1) === '~' && at - 1 >= from) at--;
    while (at - 2 >= from && file.word(at - 1) === '::') {
      at -= 2;
      if (file.word(at) === '>') {
        let depth = 0;
        for (let back = at; back >= from && at - back < 400; back--) {
          if (file.word(back) === '>') depth++;
          else if (file.word(back) === '<' && --depth === 0) {
            at = back - 1;
            break;
          }
        }
      }
    }
    return Math.max(at, from);
  }

  /** The token of the name itself in `A<T>::f<int>(`, with its `~`. */
  private lastNamePart(nameAt: number, open: number): number {
    const { file } = this;
    let at = open - 1;
    if (file.word(at) === '>') {
      let depth = 0;
      for (let back = at; back > nameAt; back--) {
        if (file.word(back) === '>') depth++;
        else if (file.word(back) === '<' && --depth === 0) {
          at = back - 1;
          break;
        }
      }
    }
    if (at <= nameAt || file.kind(at) !== T.name) return nameAt;
    return file.word(at - 1) === '~' ? at - 1 : at;
  }

  private operatorName(at: number, limit: number): { name: string; open: number } | null {
    const { file } = this;
    // `operator()`, `operator[]`, `operator double`, `operator""_unit`
    let open = at + 1;
    if (file.word(open) === '(' && file.word(open + 1) === ')') return { name: 'operator()', open: open + 2 };
    while (open < limit && file.word(open) !== '(') {
      if (file.word(open) === ';' || file.word(open) === '{' || open - at > 40) return null;
      open++;
    }
    const parts = file.textOf(at + 1, open);
    return { name: /^\w/.test(parts) ? `operator ${parts}` : `operator${parts.replace(/\s+/g, '')}`, open };
  }

  private anotherBracket(from: number, limit: number): boolean {
    for (let at = from; at < limit && at < from + 60; at++) {
      const word = this.file.word(at);
      if (word === '(') return true;
      if (word === ';' || word === '{' || word === '=') return false;
    }
    return false;
  }

  /**
   * `NAME(...)` with nothing before it: a marker of what follows, a macro of its own, or an old function without a type.
   * The next token when it was dealt with; null when it is to be read as a function.
   */
  private loneMacro(open: number, close: number, to: number, scope: Scope, name: string): number | 'marker' | null {
    const { file } = this;
    const next = close + 1;
    const word = next < to ? file.word(next) : ';';
    if (scope.className !== null && word !== ';' && !isMarker(name) && (word === '{' || word === ':')) return null;
    if (word === '{') {
      if (file.language === 'c' && !isMarker(name) && plainParameters(file, open, close)) return null;
      // `TEST(a, b) { ... }`: the macro makes the header.
      file.missed(file.line(open), `${name}(...) makes a function from a macro; its name and arguments are not seen`);
      const end = file.match(next);
      if (end > next) {
        scanBody(
          file,
          next,
          Math.min(end, to),
          `${scope.parent === null ? '' : `${scope.parent}::`}${name}`,
          new Map(),
        );
        return end + 1;
      }
      return next + 1;
    }
    if (file.language === 'c' && file.kind(next) === T.name && !isMarker(name) && this.oldStyle(open, close, to) > 0)
      return null;
    if (word === ';' || next >= to || file.line(next) > file.line(close) || word === '}') {
      if (file.kind(next) === T.name && word !== '}' && this.typeThenBracket(next, to) && !file.makesCode(name))
        return 'marker';
      const made = file.makesFunction(name);
      if (made === true || (made === null && isMarker(name))) {
        file.missed(file.line(open), `${name}(...) stands where a declaration would; what its macro makes is not seen`);
      }
      return word === ';' ? next + 1 : next;
    }
    if (file.kind(next) === T.name) return 'marker';
    return null;
  }

  private typeThenBracket(from: number, to: number): boolean {
    const { file } = this;
    let names = 0;
    for (let at = from; at < to && at < from + 40; at++) {
      const word = file.word(at);
      if (word === '(') return names >= 2;
      if (word === ';' || word === '{' || word === '=') return false;
      if (file.kind(at) === T.name) names++;
      if (word === 'template') return false;
    }
    return false;
  }

  /** Arguments as types say; a bracket of values is the initialiser of a variable. */
  private couldBeParameters(open: number, close: number, scope: Scope): boolean {
    const { file } = this;
    if (close === open + 1) return true;
    let start = open + 1;
    while (start < close) {
      const kind = file.kind(start);
      const word = file.word(start);
      if (kind === T.number || kind === T.string || kind === T.char) return false;
      if (kind === T.punctuation && !/^(?:\[|::|\.|~)$/.test(word)) return word === '.' || false;
      if (/^(?:true|false|nullptr|this|new|sizeof)$/.test(word)) return false;
      // Up to the next comma at this level.
      let at = start;
      while (at < close && file.word(at) !== ',') {
        const inner = file.word(at);
        if (inner === '->' || (inner === '.' && file.word(at + 1) !== '.' && file.word(at - 1) !== '.')) return false;
        if (inner === '=') {
          while (at < close && file.word(at) !== ',') {
            if ('([{'.includes(file.word(at))) at = Math.max(at, file.match(at));
            at++;
          }
          break;
        }
        if (inner === '(' || inner === '[' || inner === '{') {
          // `f(g(x))` is a call; `f(void (*g)(x))` is not.
          if (
            inner === '(' &&
            at === start + 1 &&
            !BUILTIN.has(word) &&
            !/^[*&^)]$/.test(file.word(at + 1)) &&
            file.kind(file.match(at) + 1) !== T.name &&
            !isMarker(word) &&
            scope.className === null &&
            file.word(close + 1) === ';'
          )
            return false;
          at = Math.max(at, file.match(at));
        } else if (inner === '<') {
          const angle = closeAngle(file, at, close);
          if (angle > 0) at = angle;
        }
        at++;
      }
      start = at + 1;
    }
    return true;
  }

  private functionPointer(from: number, open: number, close: number, to: number, scope: Scope): number {
    const { file } = this;
    let name = -1;
    let inner = -1;
    for (let at = open + 1; at < close; at++) {
      if (file.word(at) === '(') {
        inner = at;
        break;
      }
      if (file.kind(at) === T.name && !QUALIFIERS.has(file.word(at))) name = at;
    }
    if (name < 0) return this.toSemicolon(open, to);
    if (inner > 0) {
      // A function that returns a pointer to a function: `void (*signal(int, void (*)(int)))(int)`.
      const end = file.match(close + 1);
      return end < 0
        ? this.toSemicolon(close, to)
        : this.finishProcedure(
            from,
            from,
            name,
            file.word(name),
            inner,
            file.match(inner),
            end + 1,
            to,
            scope,
            undefined,
          );
    }
    const end = this.toSemicolon(close, to);
    file.variable(name, { type: 'procedure', rank: 0, bounds: [], attributes: ['pointer'] }, scope, undefined);
    return end;
  }

  private procedure(
    begin: number,
    from: number,
    nameAt: number,
    name: string,
    open: number,
    to: number,
    scope: Scope,
    template: string | undefined,
    attribute?: string,
  ): number {
    const close = this.file.match(open);
    if (close < 0) return open + 1;
    return this.finishProcedure(begin, from, nameAt, name, open, close, close + 1, to, scope, template, attribute);
  }

  private finishProcedure(
    begin: number,
    from: number,
    nameAt: number,
    written: string,
    open: number,
    close: number,
    after: number,
    to: number,
    scope: Scope,
    template: string | undefined,
    attribute?: string,
  ): number {
    const { file } = this;
    const attributes: string[] = attribute === undefined ? [] : [attribute];
    let typeFrom = from;
    let typeTo = Math.min(nameAt, file.match(open) < 0 ? nameAt : open);
    if (attribute !== undefined) typeTo = nameAt - 2;
    for (let index = from; index < typeTo; index++) {
      const word = file.word(index);
      if (SPECIFIERS.has(word)) attributes.push(word);
      else if (isMarker(word) && index + 1 < typeTo) attributes.push(word);
    }
    // Behind the arguments: qualifiers, a trailing type, initialisers of members, the body.
    let at = this.otherBranches(open, after, to, written);
    let old = -1;
    if (file.language === 'c' && file.kind(at) === T.name) old = this.oldStyle(open, close, to);
    if (old > 0) at = old;
    let trailing: [number, number] | null = null;
    let initialisers: [number, number] | null = null;
    let body = -1;
    let end = -1;
    for (; at < to; at++) {
      const word = file.word(at);
      if (word === '{') {
        body = at;
        break;
      }
      if (word === ';' || word === '}') {
        end = word === ';' ? at + 1 : at;
        break;
      }
      if (word === '=') {
        const what = file.word(at + 1);
        attributes.push(what === '0' ? 'abstract' : what);
        end = this.toSemicolon(at, to);
        if (what === 'default' || what === 'delete' || what === '0') break;
        break;
      }
      if (word === '->') {
        let stop = at + 1;
        while (stop < to && file.word(stop) !== '{' && file.word(stop) !== ';' && file.word(stop) !== '=') {
          if (file.word(stop) === '(' || file.word(stop) === '[') stop = Math.max(stop, file.match(stop));
          stop++;
        }
        trailing = [at + 1, stop];
        at = stop - 1;
        continue;
      }
      if (word === ':') {
        const begins = at + 1;
        at = this.memberInitialisers(begins, to) - 1;
        initialisers = [begins, at + 1];
        continue;
      }
      if (word === '(' || word === '[') {
        at = Math.max(at, file.match(at));
        continue;
      }
      if (word === ',') {
        // `int f(int), g(int);`
        end = this.toSemicolon(at, to);
        break;
      }
      if (word === 'const' || word === 'override' || word === 'final' || word === 'noexcept') attributes.push(word);
      if (word === 'requires') {
        at = this.skipRequires(at, to) - 1;
        continue;
      }
      if (word === 'try' && file.word(at + 1) === ':') continue;
      if (
        file.kind(at) === T.name &&
        !QUALIFIERS.has(word) &&
        !isMarker(word) &&
        !/^__|^(?:volatile|throw|try|and)$/.test(word) &&
        file.word(at + 1) !== '('
      ) {
        // Something else begins here: the header of another branch, or a declaration whose semicolon a macro holds.
        end = at;
        break;
      }
      if (isMarker(word)) attributes.push(word);
    }
    if (body < 0 && end < 0) end = to;

    const parent = scope.parent;
    let name = written.replace(/\s+/g, '');
    let owner = parent;
    const operator = written.startsWith('operator');
    if (operator) name = written;
    if (!operator && name.includes('::')) {
      const cut = splitQualified(name);
      owner = parent === null ? cut[0] : `${parent}::${cut[0]}`;
      name = cut[1];
    } else if (operator && nameAt - 2 >= from && file.word(nameAt - 1) === '::') {
      const start = this.nameStart(nameAt, from);
      const qualified = file.textOf(start, nameAt - 1).replace(/\s+/g, '');
      owner = parent === null ? qualified : `${parent}::${qualified}`;
      typeTo = start;
    }
    // `pair(A, B) -> pair<A, B>;` guides the deduction of a class; it is no function.
    if (trailing !== null && body < 0 && nameAt <= from && owner === scope.parent) return end;
    const className = scope.className ?? (written.includes('::') ? lastName(owner ?? '') : null);
    const constructs = className !== null && (name === lastName(className) || name === `~${lastName(className)}`);
    while (typeFrom < typeTo && QUALIFIERS.has(file.word(typeFrom)) && file.word(typeFrom) !== 'const') typeFrom++;
    const result = constructs
      ? null
      : trailing === null
        ? typeOf(file, typeFrom, typeTo, name, nameAt)
        : typeOf(file, trailing[0], trailing[1], name, nameAt);
    const args = old > 0 ? this.oldArguments(open, close, old) : parameters(file, open, close);
    const condition = file.condition(nameAt);
    const definition = body >= 0 || attributes.includes('default') || attributes.includes('delete');
    let bodyEnd = body >= 0 ? file.match(body) : -1;
    if (body >= 0 && (bodyEnd < 0 || bodyEnd > to)) {
      // Two headers over one body: this one's brace is closed by no one.
      bodyEnd = file.siblingBody(body, to);
    }
    const linkName = scope.linkage ? name : undefined;
    const procedure: Procedure = {
      name,
      kind: constructs ? 'constructor' : className !== null ? 'method' : 'function',
      parent: owner,
      endLine:
        bodyEnd > 0
          ? file.line(bodyEnd)
          : file.line(Math.max(nameAt, Math.min(end < 0 ? close : end, file.tokens.count) - 1)),
      args,
      result: result !== null && result.type === 'void' && !result.attributes.includes('pointer') ? null : result,
      attributes: [...new Set(attributes)],
      visibility: scope.className !== null ? scope.visibility : attributes.includes('static') ? 'private' : 'public',
      ...(definition ? {} : { prototype: true }),
      ...(linkName === undefined ? {} : { linkName }),
      ...(condition === '' ? {} : { condition }),
      ...(template === undefined ? {} : { template: template.slice(0, 300) }),
      ...file.at(operator ? nameAt : this.lastNamePart(nameAt, open)),
    };
    file.procedures.push(procedure);
    this.procedureClaims(procedure, begin, nameAt, open, close);
    if (body < 0) return Math.max(end, close + 1);
    const types = new Map<string, string>();
    for (const one of args) types.set(one.name, one.type);
    const qualified = owner === null ? name : `${owner}::${name}`;
    if (bodyEnd < 0) return body + 1;
    if (initialisers !== null) this.scanInitialisers(initialisers, className, qualified, types);
    scanBody(file, body, bodyEnd, qualified, types);
    return bodyEnd + 1;
  }

  /** `: Base(x), member(f(y))`: a base or the class itself is called, a member is given a value. */
  private scanInitialisers(
    [from, to]: readonly [number, number],
    className: string | null,
    caller: string,
    types: Map<string, string>,
  ): void {
    const { file } = this;
    const bases = this.basesOf(className);
    for (let at = from; at < to; at++) {
      const word = file.word(at);
      if (word === '<') at = Math.max(at, closeAngle(file, at, to));
      if (word !== '(' && word !== '{') continue;
      const close = file.match(at);
      if (close < 0) return;
      let name = at - 1;
      if (file.word(name) === '>') name = this.nameStart(name, from);
      const called = file.word(name);
      if (word === '(' && (called === lastName(className ?? '') || bases.has(called)))
        this.scanBase(file.word(at - 1) === '>' ? name : at - 1, close + 1, caller, types);
      else scanBody(file, at + 1, close, caller, types);
      at = close;
    }
  }

  private scanBase(from: number, to: number, caller: string, types: Map<string, string>): void {
    const { calls } = this.file;
    const first = calls.length;
    scanBody(this.file, from, to, caller, types);
    const call = calls[first];
    if (call !== undefined) calls[first] = { ...call, how: 'constructor' };
  }

  /** Names of the classes that a class is made from, as far as this file says. */
  private basesOf(className: string | null): ReadonlySet<string> {
    if (className === null) return new Set();
    const bare = lastName(className);
    return new Set((this.bases.get(bare) ?? '').match(/[A-Za-z_]\w*/g) ?? []);
  }

  /** Past the ends that the same bracket has in other branches of an #if. */
  private otherBranches(open: number, after: number, to: number, name: string): number {
    const { file } = this;
    if (file.condition(after - 1) === '' || file.condition(after - 1) === file.condition(open)) return after;
    let end = after;
    for (let at = after; at < to && at < after + 200; at++) {
      const word = file.word(at);
      if (word === '{' || word === ';') break;
      if (word === ')' && file.match(at) === open) end = at + 1;
      else if (word === '(') at = Math.max(at, file.match(at));
    }
    if (end > after)
      file.missed(
        file.line(open),
        `the arguments of ${name} differ in branches of an #if; those of the first are given`,
      );
    return end;
  }

  private procedureClaims(procedure: Procedure, begin: number, nameAt: number, open: number, close: number): void {
    const { file } = this;
    const { name, parent, args } = procedure;
    const owner = parent === null ? name : `${parent}::${name}`;
    const names = args.map((one) => one.name).filter((one) => one !== '');
    const claims: Claim[] = [];
    // Comments inside the brackets stand beside single arguments.
    if (file.line(close) > file.line(open)) {
      for (const comment of file.commentsBetween(file.end(open), file.start(close) + 400)) {
        if (comment.line > file.line(close) || comment.line < file.line(open)) continue;
        const beside = args
          .filter((one) => one.line === (comment.alone ? comment.endLine + 1 : comment.line))
          .map((one) => one.name);
        if (beside.length > 0)
          claims.push(
            ...claimsFromComment(file.commentText(comment), beside, file.placeOf(comment.start), owner, {
              caseSensitive: true,
            }),
          );
      }
    }
    const above = file.commentAbove(begin);
    if (above !== null) {
      const spoken = claimsFromDocumentation({
        text: above.text,
        at: above.at,
        args: names,
        itself: procedure.result === null ? null : name,
        owner,
        parent,
        from: 'comment',
      });
      claims.push(
        ...spoken.filter(
          (one) =>
            !claims.some((known) => known.name === one.name && known.what === one.what && known.parent === one.parent),
        ),
      );
    } else {
      const trailing = file.commentBehind(nameAt, file.line(close));
      if (trailing !== null && procedure.result !== null && procedure.prototype === true)
        claims.push(
          ...claimsFromComment(file.commentText(trailing), [name], file.placeOf(trailing.start), parent, {
            caseSensitive: true,
          }),
        );
    }
    for (const one of args) {
      for (const claim of claimsFromName(one.name, one, owner))
        if (!claims.some((known) => known.name === claim.name && known.what === claim.what)) claims.push(claim);
    }
    file.claims.push(...claims);
  }

  /** `f(a, b) int a; double b; { ... }`: the token of the body, or -1. */
  private oldStyle(open: number, close: number, to: number): number {
    const { file } = this;
    if (close === open + 1 || !plainParameters(file, open, close)) return -1;
    let at = close + 1;
    let semicolons = 0;
    for (; at < to && at < close + 400; at++) {
      const word = file.word(at);
      if (word === ';') semicolons++;
      else if (word === '{') return semicolons > 0 && file.word(at - 1) === ';' ? at : -1;
      else if (word === '}' || word === '=') return -1;
    }
    return -1;
  }

  private oldArguments(open: number, close: number, body: number): ReturnType<typeof parameters> {
    const { file } = this;
    const declared = new Map<string, ReturnType<typeof parameters>[number]>();
    let start = close + 1;
    for (let at = close + 1; at < body; at++) {
      if (file.word(at) !== ';') continue;
      // One type, several declarators.
      const commas: number[] = [];
      for (let inside = start; inside < at; inside++) {
        if (file.word(inside) === ',') commas.push(inside);
        else if ('(['.includes(file.word(inside))) inside = Math.max(inside, file.match(inside));
      }
      const typeEnd = file.declaratorStart(start, commas[0] ?? at);
      let from = start;
      for (const stop of [...commas, at]) {
        const one = parameters(file, from - 1, stop, from === start ? undefined : [start, typeEnd])[0];
        if (one !== undefined) declared.set(one.name, one);
        from = stop + 1;
      }
      start = at + 1;
    }
    const args: ReturnType<typeof parameters> = [];
    for (let at = open + 1; at < close; at++) {
      if (file.kind(at) !== T.name) continue;
      const name = file.word(at);
      const one = declared.get(name);
      args.push(
        one ?? {
          name,
          type: 'int',
          bytes: 4,
          implicit: true,
          rank: 0,
          bounds: [],
          shape: [],
          attributes: [],
          intent: 'in',
          optional: false,
          passing: 'positional',
          ...file.at(at),
        },
      );
    }
    return args;
  }

  private memberInitialisers(from: number, to: number): number {
    const { file } = this;
    let at = from;
    while (at < to) {
      const word = file.word(at);
      if (word === '(' || word === '{') {
        const before = file.word(at - 1);
        const close = file.match(at);
        // The body follows a closed initialiser without a comma.
        if (word === '{' && (before === ')' || before === '}' || before === ':' || before === ',')) return at;
        if (close < 0) return at;
        at = close + 1;
        if (file.word(at) !== ',' && file.word(at) !== '.') return at;
      }
      if (word === ';') return at;
      at++;
    }
    return at;
  }

  private skipRequires(at: number, to: number): number {
    const { file } = this;
    let next = at + 1;
    if (file.word(next) === '(') return file.match(next) + 1;
    while (next < to) {
      const word = file.word(next);
      if (word === '<') next = Math.max(next, closeAngle(file, next, to));
      else if (word === '{' || word === '(') {
        next = Math.max(next, file.match(next));
        if (file.word(next + 1) !== '&' && file.word(next + 1) !== '|') return next + 1;
      } else if (file.kind(next) === T.name && file.kind(next + 1) === T.name && file.word(next) !== 'requires')
        return next + 1;
      next++;
    }
    return next;
  }

  /** `double a = 1.0, *b, c[3];` */
  private variables(from: number, first: number, to: number, scope: Scope): number {
    const { file } = this;
    const end = this.toSemicolon(first, to);
    // A header with a body that no rule knew: `operator` oddities, old macros.
    const stop = file.word(end - 1) === ';' ? end - 1 : end;
    const starts = [from];
    for (let at = from; at < stop; at++) {
      const word = file.word(at);
      if (word === ',') starts.push(at + 1);
      else if (word === '(' || word === '[' || word === '{') at = Math.max(at, file.match(at));
      else if (word === '<' && file.kind(at - 1) === T.name && at < first) {
        const close = closeAngle(file, at, stop);
        if (close > 0) at = close;
      }
      if (starts.length > 400) break;
    }
    if (stop - from < 2 && scope.className === null) return end;
    const typeEnd = file.declaratorStart(from, starts[1] === undefined ? stop : starts[1] - 1);
    if (typeEnd <= from) return end;
    for (let index = 0; index < starts.length; index++) {
      const begin = index === 0 ? typeEnd : starts[index]!;
      const limit = starts[index + 1] === undefined ? stop : starts[index + 1]! - 1;
      file.declarator(from, typeEnd, begin, limit, scope);
    }
    // Function calls in initialisers.
    scanBody(file, from, stop, null, new Map());
    return end;
  }

  private headerEnd(from: number, to: number): { word: string; at: number } {
    for (let at = from; at < to; at++) {
      const word = this.file.word(at);
      if (word === ';' || word === '{') return { word, at };
      if (word === '(') at = Math.max(at, this.file.match(at));
    }
    return { word: ';', at: to };
  }

  /** The token behind the next semicolon at this level. */
  private toSemicolon(from: number, to: number): number {
    const { file } = this;
    for (let at = from; at < to; at++) {
      const word = file.word(at);
      if (word === ';') return at + 1;
      if (word === '}') return at;
      if (word === '(' || word === '[' || word === '{') {
        const close = file.match(at);
        if (close < 0) continue;
        at = close;
      }
    }
    return to;
  }
}

function splitQualified(name: string): [string, string] {
  let depth = 0;
  for (let at = name.length - 1; at > 0; at--) {
    if (name[at] === '>') depth++;
    else if (name[at] === '<') depth--;
    else if (depth === 0 && name[at] === ':' && name[at - 1] === ':')
      return [name.slice(0, at - 1), name.slice(at + 1)];
  }
  return ['', name];
}

function lastName(qualified: string): string {
  return (
    qualified
      .replace(/<[\s\S]*$/, '')
      .split('::')
      .at(-1) ?? qualified
  );
}
