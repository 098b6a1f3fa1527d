/** One C or C++ file while it is read: its tokens, what was gathered so far, and the comments beside things. */
import type {
  CallSite,
  Claim,
  Declared,
  External,
  LiteralUse,
  ModuleVariable,
  NamedConstant,
  Procedure,
  TypeDefinition,
  Use,
} from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { claimsFromComment } from '../claims/claims-from-comment.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import { functionMacros, type MacroKind } from './function-macros.ts';
import { closeAngle, typeWords } from './parameters.ts';
import type { CUnitReading } from './settle.ts';
import { type Comment, type Part, T, type Tokens, tokenise } from './tokens.ts';
import { bytesOfType, isMarker, QUALIFIERS } from './words.ts';

export interface Holder {
  readonly parent: string | null;
  readonly className: string | null;
  readonly visibility: 'public' | 'private';
}

interface TypeSaid {
  readonly type: string;
  readonly rank: number;
  readonly bounds: readonly string[];
  readonly attributes: readonly string[];
}

const SIGNS: readonly string[] = Array.from({ length: 128 }, (_, code) => String.fromCharCode(code));

/** Messages of one kind beyond this many say nothing new. */
const MOST_MISSED = 50;

export class CFile {
  readonly language: 'c' | 'c++';
  readonly tokens: Tokens;
  readonly procedures: Procedure[] = [];
  readonly types: TypeDefinition[] = [];
  readonly variables: ModuleVariable[] = [];
  readonly constants: NamedConstant[] = [];
  readonly literals: LiteralUse[] = [];
  readonly uses: Use[] = [];
  readonly calls: CallSite[] = [];
  readonly claims: Claim[] = [];
  readonly externals: External[] = [];
  /** Fields of the type that is being read. */
  fields: Declared[] | null = null;
  private readonly open: (Declared[] | null)[] = [];
  private readonly text: string;
  private readonly said = new Set<string>();
  private readonly commentOnLine = new Map<number, number>();
  private readonly commentEndsOn = new Map<number, number>();
  private readonly functionMacros: Readonly<Record<string, MacroKind>>;

  /** @param part  what a unit of a file has to know of the rest; absent for a whole file */
  constructor(
    bytes: Uint8Array,
    language: 'c' | 'c++',
    define: Readonly<Record<string, string>>,
    part?: Part & { readonly utf8: boolean; readonly macros: Readonly<Record<string, MacroKind>> },
  ) {
    this.language = language;
    this.text = decode(bytes, part?.utf8);
    this.tokens = tokenise(this.text, define, part);
    this.tokens.comments.forEach((comment, index) => {
      this.commentOnLine.set(comment.line, index);
      if (comment.alone) this.commentEndsOn.set(comment.endLine, index);
    });
    this.functionMacros = part?.macros ?? functionMacros(this.tokens.macros);
  }

  word(at: number): string {
    const { tokens } = this;
    if (at < 0 || at >= tokens.count) return '';
    const start = tokens.start[at]!;
    const end = tokens.end[at]!;
    // Most tokens looked at are single signs: no string is made for them.
    if (end - start === 1) {
      const code = this.text.charCodeAt(start);
      if (code < 128) return SIGNS[code]!;
    }
    return this.text.slice(start, end);
  }

  kind(at: number): number {
    return at < 0 || at >= this.tokens.count ? 0 : this.tokens.kind[at]!;
  }

  match(at: number): number {
    return at < 0 || at >= this.tokens.count ? -1 : this.tokens.match[at]!;
  }

  line(at: number): number {
    const { tokens } = this;
    return tokens.count === 0 ? 1 : tokens.line[Math.max(0, Math.min(at, tokens.count - 1))]!;
  }

  start(at: number): number {
    return this.tokens.start[at] ?? this.text.length;
  }

  end(at: number): number {
    return this.tokens.end[at] ?? this.text.length;
  }

  at(token: number): Position {
    const line = this.line(token);
    return { line, column: this.start(token) - this.tokens.lineStarts[line - 1]! + 1 };
  }

  condition(at: number): string {
    return this.tokens.conditions[this.tokens.condition[at] ?? 0] ?? '';
  }

  /** Tokens as one text: as written, white space folded, comments left out. */
  textOf(from: number, to: number): string {
    const { tokens, text } = this;
    if (from >= to) return '';
    const last = Math.min(to, tokens.count) - 1;
    if (last < from) return '';
    const start = tokens.start[from]!;
    const end = tokens.end[last]!;
    if (end - start < 400) {
      const slice = text.slice(start, end);
      if (!slice.includes('/') && !slice.includes('\n') && !slice.includes('#'))
        return slice.includes('  ') || slice.includes('\t') ? slice.replace(/\s+/g, ' ') : slice;
    }
    let out = '';
    for (let at = from; at <= last && out.length < 4000; at++) {
      if (at > from && tokens.start[at]! > tokens.end[at - 1]!) out += ' ';
      out += text.slice(tokens.start[at], tokens.end[at]);
    }
    return out;
  }

  missed(line: number, why: string): void {
    const key = why.replace(/\d+/g, '');
    if (this.said.has(key) || this.said.size > MOST_MISSED) return;
    this.said.add(key);
    this.tokens.incomplete.push({ line, why });
  }

  /** True when the file defines the macro and its text holds a body; null when the file does not define it. */
  makesFunction(name: string): boolean | null {
    return Object.hasOwn(this.functionMacros, name) ? this.functionMacros[name] === 'function' : null;
  }

  makesCode(name: string): boolean {
    return Object.hasOwn(this.functionMacros, name) && this.functionMacros[name] !== 'plain';
  }

  openFields(): Declared[] {
    this.open.push(this.fields);
    this.fields = [];
    return this.fields;
  }

  closeFields(): void {
    this.fields = this.open.pop() ?? null;
  }

  /** Where the body ends that several headers of different branches share. */
  siblingBody(body: number, to: number): number {
    const { tokens } = this;
    const own = tokens.condition[body]!;
    const group = tokens.group[own] ?? -1;
    // Beyond the branches of this #if stands the body, up to the brace that the first branch's brace is paired with.
    for (let at = body - 1; at >= 0 && body - at < 4000; at--) {
      if (this.word(at) !== '{') continue;
      const other = tokens.condition[at]!;
      if (other !== own && tokens.group[other] === group) {
        const close = this.match(at);
        return close > body && close <= to ? close : -1;
      }
    }
    return -1;
  }

  /** Where the declarators begin in `const double *x[3] = ..., y`: the token of the first star, reference or name. */
  declaratorStart(from: number, to: number): number {
    let last = -1;
    let at = from;
    for (; at < to; at++) {
      const word = this.word(at);
      if (word === '=' || word === '{' || word === '[' || word === ':' || (word === '(' && at > from)) break;
      if (this.kind(at) === T.name) last = at;
      if (word === '<' && this.kind(at - 1) === T.name) {
        const close = closeAngle(this, at, to);
        if (close > 0) at = close;
      }
    }
    if (last <= from) return -1;
    // A vendor's marker behind the name.
    if (isMarker(this.word(last)) && this.kind(last - 1) === T.name && last - 1 > from) last--;
    let begin = last;
    while (begin - 2 > from && this.word(begin - 1) === '::') begin -= 2;
    while (begin - 1 > from && /^(?:\*|&|const|volatile|restrict|__restrict__|__restrict)$/.test(this.word(begin - 1)))
      begin--;
    // `double const x`: the qualifier belongs to the type, which must keep a word.
    return begin;
  }

  /** One declarator of a variable, field or constant. */
  declarator(typeFrom: number, typeTo: number, from: number, to: number, holder: Holder): void {
    let name = -1;
    let at = from;
    const bounds: string[] = [];
    let pointers = 0;
    const attributes: string[] = [];
    for (; at < to; at++) {
      const word = this.word(at);
      if (word === '*') pointers++;
      else if (word === '&') attributes.push('reference');
      else if (word === '[') {
        const close = this.match(at);
        if (close < 0) break;
        if (this.word(at + 1) !== '[') bounds.push(this.textOf(at + 1, close) || ':');
        at = close;
      } else if (word === '=' || word === '{' || word === ':' || word === '(') break;
      else if (this.kind(at) === T.name && !QUALIFIERS.has(word) && (name < 0 || this.word(at - 1) === '::')) name = at;
    }
    if (name < 0) return;
    const said = typeWords(this, typeFrom, typeTo);
    if (said.type === '' || /^(?:return|goto|else|delete|throw|case|break|continue)$/.test(said.type)) return;
    const constant = said.attributes.includes('const') || said.attributes.includes('constexpr');
    const all = [...said.attributes, ...attributes, ...(pointers > 0 ? ['pointer'] : [])];
    let value: string | undefined;
    if (this.word(at) === '=') value = this.textOf(at + 1, to);
    else if (this.word(at) === '{' || this.word(at) === '(')
      value = this.textOf(at + 1, this.match(at) < 0 ? to : this.match(at));
    // A field of bits: `int x : 3`.
    const scalar = bounds.length === 0 && (pointers === 0 || said.type === 'char');
    if (
      constant &&
      value !== undefined &&
      value !== '' &&
      scalar &&
      (holder.className === null || all.includes('static') || all.includes('constexpr'))
    ) {
      this.constant(name, said.type, bytesOfType(said.type), value, holder.parent);
      return;
    }
    this.variable(name, { type: said.type, rank: bounds.length, bounds, attributes: all }, holder, value);
  }

  variable(name: number, said: TypeSaid, holder: Holder, value: string | undefined): void {
    const condition = this.condition(name);
    const declared: Declared = {
      name: this.word(name),
      type: said.type,
      bytes: bytesOfType(said.type),
      rank: said.rank,
      bounds: said.bounds,
      shape: said.bounds.map((bound) => numberIn(bound)),
      attributes: said.attributes,
      ...(condition === '' ? {} : { condition }),
      ...this.at(name),
    };
    if (holder.className !== null && this.fields !== null && !said.attributes.includes('static'))
      this.fields.push(declared);
    else {
      this.variables.push({
        ...declared,
        parent: holder.parent,
        visibility: said.attributes.includes('static') || holder.visibility === 'private' ? 'private' : 'public',
        ...(value === undefined ? {} : { value: value.slice(0, 200) }),
      });
    }
    this.claimsBeside(name, declared.name, holder.parent);
  }

  constant(name: number, type: string, bytes: number | null, text: string, parent: string | null): void {
    const condition = this.condition(name);
    this.constants.push({
      name: this.word(name),
      parent,
      type,
      bytes,
      text: text.slice(0, 400),
      value: null,
      ...(condition === '' ? {} : { condition }),
      ...this.at(name),
    });
    this.claimsBeside(name, this.word(name), parent);
  }

  /** What the comment behind or above a declaration says of it. */
  private claimsBeside(token: number, name: string, parent: string | null): void {
    const line = this.line(token);
    const behind = this.commentBehind(token, line);
    const found: Claim[] = [];
    if (behind !== null) {
      let text = this.commentText(behind);
      // A remark goes on in the lines below, set in as far.
      for (let next = line + 1; next < line + 6; next++) {
        const index = this.commentEndsOn.get(next);
        const comment = index === undefined ? undefined : this.tokens.comments[index]!;
        if (
          comment === undefined ||
          comment.line !== next ||
          comment.start - this.tokens.lineStarts[next - 1]! < behind.start - this.tokens.lineStarts[line - 1]! - 2
        )
          break;
        text += `\n${this.commentText(comment)}`;
      }
      found.push(...claimsFromComment(text, [name], this.placeOf(behind.start), parent, { caseSensitive: true }));
    }
    if (!found.some((one) => one.what === 'unit')) {
      const above = this.commentAbove(token);
      if (above !== null && above.text.length < 1500) {
        for (const one of claimsFromComment(above.text, [name], above.at, parent, { caseSensitive: true }))
          if (!found.some((known) => known.what === one.what)) found.push(one);
      }
    }
    for (const one of claimsFromName(name, this.at(token), parent))
      if (!found.some((known) => known.what === one.what)) found.push(one);
    this.claims.push(...found);
  }

  /** The comment that follows on the line of a token. */
  commentBehind(token: number, line: number): Comment | null {
    const index = this.commentOnLine.get(line);
    if (index === undefined) return null;
    const comment = this.tokens.comments[index]!;
    return !comment.alone && comment.start > this.end(token) ? comment : null;
  }

  /** The comments, one above the other without a gap, that end on the line before the first token of a declaration. */
  commentAbove(token: number): { text: string; at: Position } | null {
    const { comments } = this.tokens;
    let line = this.line(token) - 1;
    // Markers on a line of their own stand between: `AMREX_GPU_HOST_DEVICE AMREX_INLINE`.
    let index = this.commentEndsOn.get(line);
    // On the same line, in front: `/* [K] */ double t;`
    if (index === undefined) {
      const same = this.commentOnLine.get(line + 1);
      if (same !== undefined && comments[same]!.alone && comments[same]!.end < this.start(token)) index = same;
    }
    if (index === undefined) return null;
    // A remark that belongs to what stands before: `///<`, `//!<`.
    const parts: string[] = [];
    let first = comments[index]!;
    while (index !== undefined && parts.length < 60) {
      const comment: Comment = comments[index]!;
      if (/^(?:\/\/[/!]|\/\*[*!])</.test(this.text.slice(comment.start, comment.start + 4))) break;
      parts.unshift(this.commentText(comment));
      first = comment;
      line = comment.line - 1;
      index = this.commentEndsOn.get(line);
    }
    return parts.length === 0 ? null : { text: parts.join('\n'), at: this.placeOf(first.start) };
  }

  *commentsBetween(from: number, to: number): Generator<Comment> {
    const { comments } = this.tokens;
    let low = 0;
    let high = comments.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (comments[middle]!.start < from) low = middle + 1;
      else high = middle;
    }
    for (let index = low; index < comments.length && comments[index]!.start < to; index++) yield comments[index]!;
  }

  /** Without its marks; lines stay lines. */
  commentText(comment: Comment): string {
    const raw = this.text.slice(comment.start, Math.min(comment.end, comment.start + 20_000));
    if (raw.startsWith('//'))
      return raw.replace(/^\/\/+[!<]*/, (marks) => ' '.repeat(marks.length)).replace(/\n\s*\/\/+/g, '\n ');
    return raw
      .replace(/^\/\*+[!<]*/, (marks) => ' '.repeat(marks.length))
      .replace(/\*+\/$/, '')
      .replace(/\n[ \t]*\*+(?!\/)/g, '\n ');
  }

  placeOf(offset: number): Position {
    const { lineStarts } = this.tokens;
    let low = 0;
    let high = lineStarts.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (lineStarts[middle]! <= offset) low = middle + 1;
      else high = middle;
    }
    return { line: low, column: offset - lineStarts[low - 1]! + 1 };
  }

  /** @returns the reading, its constants not yet reckoned from one another, and the names of those that macros give */
  finish(): CUnitReading {
    const macroConstants = this.macroConstants();
    const { includes, incomplete, conditions } = this.tokens;
    return {
      language: this.language,
      procedures: this.procedures,
      commons: [],
      types: this.types,
      variables: this.variables,
      constants: this.constants,
      literals: this.literals,
      uses: this.uses,
      includes: includes.map(({ path, line, column, condition }) => ({
        path,
        how: '#include',
        parent: null,
        line,
        column,
        ...((conditions[condition] ?? '') === '' ? {} : { condition: conditions[condition]! }),
      })),
      generics: [],
      calls: this.calls,
      claims: this.claims,
      storage: [],
      externals: this.externals,
      datasets: [],
      incomplete,
      macroConstants,
    };
  }

  /** `#define boltzmann 1.38e-16 /* erg/K *\/` */
  private macroConstants(): string[] {
    const names: string[] = [];
    for (const macro of this.tokens.macros) {
      if (macro.params !== null || macro.body === '' || macro.body.length > 400) continue;
      const { body } = macro;
      const number = /^[([\s+-]*(?:\d|\.\d)/.test(body);
      if (!number && !/^[()"\w\s.+\-*/]+$/.test(body) && !body.startsWith('"')) continue;
      // `#define name other` renames; it is a constant only if it comes to a value.
      const condition = this.tokens.conditions[macro.condition] ?? '';
      const at = this.placeOf(macro.offset);
      const real = /[.]|\d[eE][+-]?\d/.test(body);
      names.push(macro.name);
      this.constants.push({
        name: macro.name,
        parent: null,
        type: body.startsWith('"') ? 'char' : real ? 'double' : 'int',
        bytes: body.startsWith('"') ? 1 : real ? (/^[\s(+-]*[\d.]+(?:[eE][+-]?\d+)?[fF]\)?$/.test(body) ? 4 : 8) : 4,
        text: body,
        value: null,
        ...(condition === '' ? {} : { condition }),
        ...at,
      });
      const index = this.commentOnLine.get(macro.line);
      const found: Claim[] = [];
      if (index !== undefined && this.tokens.comments[index]!.start > macro.offset) {
        const comment = this.tokens.comments[index]!;
        found.push(
          ...claimsFromComment(this.commentText(comment), [macro.name], this.placeOf(comment.start), null, {
            caseSensitive: true,
          }),
        );
      }
      if (!found.some((one) => one.what === 'unit')) {
        const above = this.commentEndsOn.get(macro.line - 1);
        if (above !== undefined) {
          const comment = this.tokens.comments[above]!;
          for (const one of claimsFromComment(
            this.commentText(comment),
            [macro.name],
            this.placeOf(comment.start),
            null,
            { caseSensitive: true },
          ))
            if (!found.some((known) => known.what === one.what)) found.push(one);
        }
      }
      for (const one of claimsFromName(macro.name, at, null))
        if (!found.some((known) => known.what === one.what)) found.push(one);
      this.claims.push(...found);
    }
    return names;
  }
}

function numberIn(bound: string): number | null {
  return /^\d{1,9}$/.test(bound) ? Number(bound) : null;
}

function decode(bytes: Uint8Array, utf8 = true): string {
  // Without a byte above 127 both are the same, and Latin-1 is the faster.
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
  if (!utf8 || !/[\x80-\xff]/.test(text)) return text;
  try {
    return new TextDecoder('utf-8', { fatal: true, ignoreBOM: false }).decode(bytes);
  } catch {
    return text;
  }
}
