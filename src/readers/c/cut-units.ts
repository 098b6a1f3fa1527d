/**
 * Cuts a file of C or C++ behind its functions, types and groups of declarations, so that a unit that many versions of a file share is
 * read once. Namespaces and extern "C" do not hide what is in them. Where it can not tell, it does not cut: a longer unit is read as well.
 */

import { isUtf8 } from 'node:buffer';
import { createHash } from 'node:crypto';
import { functionMacros, type MacroKind } from './function-macros.ts';
import { T, type Tokens, tokenise } from './tokens.ts';
import { isMarker } from './words.ts';

export interface OpenBlock {
  /** Namespaces joined by `::`; null outside of all. */
  readonly parent: string | null;
  readonly linkage: boolean;
}

/** What a unit has to know of the rest of its file. */
export interface CUnitState {
  readonly blocks: readonly OpenBlock[];
  readonly guarded: boolean;
  readonly open: boolean;
  readonly later: boolean;
  readonly utf8: boolean;
  /** Function-like macros of the file. */
  readonly macros: Readonly<Record<string, MacroKind>>;
  /** What the classes above extend. */
  readonly bases: Readonly<Record<string, string>>;
}

export interface CUnit {
  /** Bytes of the file, first and behind the last: the comments above a unit belong to it, its last line is whole. */
  readonly from: number;
  readonly to: number;
  /** Line of the file that it begins with, from 1. */
  readonly line: number;
  readonly language: 'c' | 'c++';
  readonly state: CUnitState;
  /** Equal ids mean equal readings: SHA-1 of all of the above except the places. */
  readonly id: string;
}

/** Declarations without a body are kept together up to this many bytes. */
const SMALL = 256;

/**
 * The units of a file, in order and without gaps: together they are all its bytes.
 * Linear in the size of the file; never throws.
 */
export function cUnits(bytes: Uint8Array, language: 'c' | 'c++'): CUnit[] {
  const utf8 = isUtf8(bytes);
  // One character a byte: offsets are places in the file.
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString('latin1');
  const tokens = tokenise(text);
  const macros = functionMacros(tokens.macros);
  const ofTheFile = createHash('sha1')
    .update(JSON.stringify([language, utf8, Object.entries(macros).sort()]))
    .digest('hex');
  const cuts = new Cutter(tokens, language).cut();
  return cuts.map(({ from, to, line, blocks, bases }): CUnit => {
    const { guard } = tokens;
    const inside = (place: number) => guard !== null && place > guard.from && place <= guard.to;
    const state = { blocks, guarded: inside(from), open: inside(to), later: from > 0, utf8, macros, bases };
    const hash = createHash('sha1');
    hash.update(`${ofTheFile} ${JSON.stringify([blocks, state.guarded, state.open, state.later, bases])}\n`);
    hash.update(bytes.subarray(from, to));
    return { from, to, line, language, state, id: hash.digest('hex') };
  });
}

interface Cut {
  readonly from: number;
  readonly to: number;
  readonly line: number;
  readonly blocks: readonly OpenBlock[];
  readonly bases: Readonly<Record<string, string>>;
}

/** One declaration while it goes by. */
interface Statement {
  readonly first: number;
  brackets: boolean;
  equals: boolean;
  colon: boolean;
}

class Cutter {
  private readonly tokens: Tokens;
  private readonly language: 'c' | 'c++';
  private readonly cuts: Cut[] = [];
  private from = 0;
  private fromLine = 1;
  private blocks: OpenBlock[] = [];
  /** What the classes so far extend. */
  private readonly extended = new Map<string, string>();
  /** Those of them that the unit names: `Gas::Gas(...)`. */
  private bases: Record<string, string> = {};
  /** Blocks that are open where the unit begins. */
  private outer: readonly OpenBlock[] = [];
  private comment = 0;
  /** Between the header of an old-style function and its body no semicolon ends a declaration. */
  private old = false;

  constructor(tokens: Tokens, language: 'c' | 'c++') {
    this.tokens = tokens;
    this.language = language;
  }

  cut(): Cut[] {
    const { tokens } = this;
    let now: Statement | null = null;
    for (let at = 0; at < tokens.count; at++) {
      now ??= { first: at, brackets: false, equals: false, colon: false };
      if (tokens.kind[at] !== T.punctuation) continue;
      const code = tokens.text.charCodeAt(tokens.start[at]!);
      if (code === 40 || code === 91) {
        const close = tokens.match[at]!;
        if (close < 0) break;
        at = close;
        if (code === 40) {
          now.brackets = true;
          if (this.language === 'c' && this.beginsOldStyle(close + 1)) this.old = true;
        }
      } else if (code === 123) {
        const close = tokens.match[at]!;
        if (close < 0) break;
        const block = this.blockOf(now.first, at);
        if (block !== null) {
          this.blocks = [...this.blocks, block];
          now = null;
          continue;
        }
        this.findBases(now.first, close);
        // `: member{1}, other{2} { ... }`
        const initialises = now.colon && (tokens.kind[at - 1] === T.name || this.sign(at - 1) === 62);
        at = close;
        if (now.brackets && !now.equals && !initialises && this.isBody(now.first)) {
          this.old = false;
          this.boundary(close, true);
          now = null;
        }
      } else if (code === 125) {
        this.blocks = this.blocks.slice(0, -1);
        this.boundary(at, true);
        now = null;
      } else if (code === 59) {
        if (!this.old) this.boundary(at, this.sign(at - 1) === 125);
        now = null;
      } else if (code === 58 && tokens.end[at]! - tokens.start[at]! === 2) {
        // `Gas::Gas(...)`: what the class extends decides which of the values it gives are calls.
        const name = this.word(at + 1);
        const bases = this.extended.get(name);
        if (bases !== undefined) this.bases[name] = bases;
      } else if (code === 61) now.equals = now.equals || !this.isOperator(at);
      else if (code === 58 && now.brackets) now.colon = true;
    }
    const { length } = tokens.text;
    if (this.from < length || this.cuts.length === 0)
      this.cuts.push({ from: this.from, to: length, line: this.fromLine, blocks: this.outer, bases: this.bases });
    return this.cuts;
  }

  private word(at: number): string {
    return this.tokens.text.slice(this.tokens.start[at], this.tokens.end[at]);
  }

  private sign(at: number): number {
    return at < 0 ? 0 : this.tokens.text.charCodeAt(this.tokens.start[at]!);
  }

  private isOperator(equal: number): boolean {
    for (let at = equal; at > equal - 3 && at >= 0; at--) if (this.word(at) === 'operator') return true;
    return false;
  }

  private beginsOldStyle(next: number): boolean {
    const { tokens } = this;
    if (next >= tokens.count || tokens.kind[next] !== T.name) return false;
    const word = this.word(next);
    return !word.startsWith('__') && !isMarker(word);
  }

  /** What a brace opens whose contents stand at the top as well; null for any other brace. */
  private blockOf(first: number, brace: number): OpenBlock | null {
    const { tokens } = this;
    const outer = this.blocks.at(-1) ?? { parent: null, linkage: false };
    if (this.word(first) === 'extern' && tokens.kind[first + 1] === T.string && brace === first + 2)
      return { parent: outer.parent, linkage: this.word(first + 1) === '"C"' };
    let start = first;
    while (start < brace && (this.word(start) === 'inline' || isMarker(this.word(start)))) start++;
    if (this.word(start) !== 'namespace') return null;
    // Only names and `::` between: attributes and macros are left to the reader of the longer unit.
    let name = '';
    for (let at = start + 1; at < brace; at++) {
      const word = this.word(at);
      if (word === '(') return this.named(outer, name);
      if (word === '__attribute__' || word === 'inline') continue;
      if (tokens.kind[at] !== T.name && word !== '::') return null;
      if (isMarker(word) && name !== '' && !name.endsWith('::')) continue;
      if (isMarker(word)) return null;
      name += word;
    }
    return this.named(outer, name);
  }

  private named(outer: OpenBlock, name: string): OpenBlock {
    const parent = name === '' ? outer.parent : outer.parent === null ? name : `${outer.parent}::${name}`;
    return { parent, linkage: outer.linkage };
  }

  /** A body in braces, not the members of a type. */
  private isBody(first: number): boolean {
    for (let at = first; at < first + 400 && at < this.tokens.count; at++) {
      const word = this.word(at);
      if (word === '(' || word === '{') return true;
      if (word === '<') {
        // `template <class T>` is no class.
        let depth = 0;
        for (; at < first + 400; at++) {
          const inner = this.sign(at);
          if (inner === 60) depth++;
          else if (inner === 62 && --depth === 0) break;
          else if (inner === 59 || inner === 123) return false;
        }
        continue;
      }
      if (word === 'enum' || word === 'union' || word === 'class' || word === 'struct' || word === 'typedef') {
        // `struct part *make(int n) { ... }` is a function that gives one.
        return this.tokens.kind[at + 1] === T.name && this.tokens.kind[at + 2] === T.punctuation
          ? this.sign(at + 2) === 42
          : this.tokens.kind[at + 1] === T.name && this.tokens.kind[at + 2] === T.name && this.sign(at + 3) === 40;
      }
    }
    return false;
  }

  private findBases(from: number, to: number): void {
    const { tokens } = this;
    for (let at = from; at < to; at++) {
      if (tokens.kind[at] !== T.name) continue;
      const length = tokens.end[at]! - tokens.start[at]!;
      if (length !== 5 && length !== 6) continue;
      const word = this.word(at);
      if (word !== 'class' && word !== 'struct') continue;
      let colon = at + 1;
      // Past template arguments, which may hold any of the signs that end a name.
      for (let depth = 0; colon < to && colon < at + 60; colon++) {
        const sign = this.sign(colon);
        if (sign === 60) depth++;
        else if (sign === 62) depth--;
        else if (depth <= 0 && tokens.end[colon]! - tokens.start[colon]! === 1 && ':;{(),='.includes(this.word(colon)))
          break;
      }
      if (this.sign(colon) !== 58 || colon >= to) continue;
      let brace = colon;
      while (brace < to && brace < colon + 400 && this.sign(brace) !== 123 && this.sign(brace) !== 59) brace++;
      if (this.sign(brace) !== 123) continue;
      const open = this.templateName(at + 1, colon);
      const bases = tokens.text.slice(tokens.end[colon]!, tokens.start[brace]!).replace(/\s+/g, ' ');
      this.extended.set(this.word(open), bases);
    }
  }

  /** The name before template arguments: `vector<bool, A>`. */
  private templateName(from: number, to: number): number {
    let name = from;
    for (let at = from; at < to; at++) {
      if (this.sign(at) === 60) break;
      if (this.tokens.kind[at] === T.name && this.word(at) !== 'final') name = at;
    }
    return name;
  }

  /** A declaration ends with this token: the unit may end with its line. */
  private boundary(last: number, large: boolean): void {
    const { tokens } = this;
    const { text, comments } = tokens;
    if (tokens.condition[last] !== 0) return;
    const newline = text.indexOf('\n', tokens.end[last]!);
    if (newline < 0 || (!large && newline - this.from < SMALL)) return;
    if (last + 1 < tokens.count && tokens.start[last + 1]! < newline) return;
    if (text.charCodeAt(newline - 1) === 92 || text.startsWith('\\\r', newline - 2)) return;
    while (this.comment < comments.length && comments[this.comment]!.end <= tokens.end[last]!) this.comment++;
    const remark = comments[this.comment];
    if (remark !== undefined && remark.start < newline) {
      // A remark that goes on below belongs to what stands before it.
      if (remark.end > newline + 1) return;
      const next = comments[this.comment + 1];
      if (next !== undefined && next.line === tokens.line[last]! + 1) return;
    }
    const to = newline + 1;
    this.cuts.push({ from: this.from, to, line: this.fromLine, blocks: this.outer, bases: this.bases });
    this.from = to;
    this.fromLine = lineOf(tokens.lineStarts, to);
    this.outer = this.blocks;
    this.bases = {};
  }
}

function lineOf(starts: readonly number[], place: number): number {
  let [low, high] = [0, starts.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (starts[middle]! <= place) low = middle + 1;
    else high = middle;
  }
  return low;
}
