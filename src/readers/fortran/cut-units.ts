/**
 * Cuts a file behind the END of each top-level program unit, so that a unit that many versions of a file share is read once.
 * Looks at the beginnings of lines only. Where it can not tell, it does not cut: a longer unit is read as well.
 */
import { createHash } from 'node:crypto';
import { type ConditionState, Conditions } from './conditions.ts';
import { LOWER } from './names.ts';
import { fixedColumns, sourceForm } from './source-form.ts';

export interface FortranUnit {
  /** Bytes of the file, first and behind the last: the comments above a unit belong to it, its last line is whole. */
  readonly from: number;
  readonly to: number;
  /** Line of the file that it begins with, from 1. */
  readonly line: number;
  readonly form: 'fixed' | 'free';
  readonly columns: 72 | 132;
  /** Preprocessor groups open where it begins, and macros defined above. */
  readonly conditions: ConditionState;
  /** Equal ids mean equal readings, save for what included files bring in: SHA-1 of all of the above except the places. */
  readonly id: string;
}

export interface UnitOptions {
  /** When a build says otherwise than the name and the content. */
  readonly form?: 'fixed' | 'free';
  /** Columns of a fixed-form line that count, when a build says so. */
  readonly columns?: 72 | 132;
}

/**
 * The top-level units of a file, in order and without gaps: together they are all its bytes.
 * Linear in the size of the file; never throws.
 *
 * @param path  by which its form is judged, with its content
 */
export function fortranUnits(path: string, bytes: Uint8Array, options: UnitOptions = {}): FortranUnit[] {
  const { form, columns, cuts } = cutFile(path, bytes, options);
  return cuts.map((cut) => {
    const { from, to, line, conditions } = cut;
    const hash = createHash('sha1');
    const plain = conditions.groups.length === 0 && Object.keys(conditions.macros).length === 0;
    hash.update(`${form} ${columns} ${plain ? '' : JSON.stringify(conditions)}\n`);
    hash.update(bytes.subarray(from, to));
    return { from, to, line, form, columns, conditions, id: hash.digest('hex') };
  });
}

export interface Cut {
  readonly from: number;
  readonly to: number;
  readonly line: number;
  readonly conditions: ConditionState;
}

/** The same without ids, for a reading of the whole file. */
export function cutFile(
  path: string,
  bytes: Uint8Array,
  options: UnitOptions,
): { form: 'fixed' | 'free'; columns: 72 | 132; cuts: Cut[] } {
  const form = options.form ?? sourceForm(path, bytes);
  const columns = options.columns ?? (form === 'fixed' ? fixedColumns(bytes) : 132);
  const cutter = new Cutter(bytes, form);
  return { form, columns, cuts: cutter.cut() };
}

/** What stands open: a unit, or an interface block, whose bodies need no CONTAINS. */
interface Open {
  readonly isInterface: boolean;
  readonly containing: boolean;
}

const UNIT: Open = { isInterface: false, containing: false };
const HOST: Open = { isInterface: false, containing: true };
const INTERFACE: Open = { isInterface: true, containing: false };

/** First letters of lines that can begin or end a unit, and `#`. */
const MATTERS = new Uint8Array(256);
for (const letter of '#abcdefilmnprst_') {
  MATTERS[letter.charCodeAt(0)] = 1;
  MATTERS[letter.toUpperCase().charCodeAt(0)] = 1;
}

const TYPE =
  '(?:real|integer|logical|complex|character|byte|doubleprecision|doublecomplex|type|class|_r\\w{1,2})(?:\\*\\d+|\\*?\\((?:[^()]|\\([^()]*\\))*\\))?';
const PREFIX = '(?:pure|impure|elemental|recursive|non_recursive|module|attributes\\([a-z,]*\\))';
const PROCEDURE = new RegExp(`^(?:${PREFIX})*(?:${TYPE})?(?:${PREFIX})*(?:subroutine|function)[a-z]\\w*(?:\\(|bind|$)`);
const PREFIXES = new RegExp(`^(?:${PREFIX})*(?:${TYPE})?(?:${PREFIX})*$`);
const END =
  /^end(?:(program|module|submodule|subroutine|function|blockdata|procedure|interface)(?:[a-z]\w*|operator.*|assignment.*)?)?$/;

class Cutter {
  private readonly bytes: Uint8Array;
  private readonly fixed: boolean;
  private stack: Open[] = [];
  /** The stack where each open `#if` group began: every branch starts from it. */
  private readonly branches: Open[][] = [];
  private readonly conditions = new Conditions(undefined);
  private ended = false;
  /** The next `&` of the file, looked for once. */
  private nextMark = -1;
  /** The line that goes on has only words before a procedure's name so far: `pure &`. */
  private onlyPrefixes = false;

  constructor(bytes: Uint8Array, form: 'fixed' | 'free') {
    this.bytes = bytes;
    this.fixed = form === 'fixed';
  }

  cut(): Cut[] {
    const { bytes } = this;
    const cuts: Cut[] = [];
    let from = 0;
    let fromLine = 1;
    let state = this.conditions.state();
    let line = 0;
    let continues = false;
    for (let start = 0; start < bytes.length; ) {
      let end = bytes.indexOf(10, start);
      if (end < 0) end = bytes.length;
      line++;
      const next = end + 1;
      if (bytes[start] === 35) {
        end = this.directive(start, end);
        for (let at = next; at <= end; at++) if (bytes[at - 1] === 10) line++;
      } else {
        const at = this.fixed ? this.fixedStart(start, end) : this.freeStart(start, end);
        if (at >= 0) {
          if (MATTERS[bytes[at]!] === 1 && (!continues || this.onlyPrefixes)) this.statement(at, end, start);
          else this.onlyPrefixes = false;
          if (!this.fixed) continues = this.endsWithMark(at, end);
        }
      }
      start = end + 1;
      if (this.ended && this.stack.length === 0 && this.branches.every((one) => one.length === 0)) {
        this.ended = false;
        const to = Math.min(start, bytes.length);
        cuts.push({ from, to, line: fromLine, conditions: state });
        [from, fromLine, state] = [to, line + 1, this.conditions.state()];
      }
    }
    if (from < bytes.length || cuts.length === 0)
      cuts.push({ from, to: bytes.length, line: fromLine, conditions: state });
    return cuts;
  }

  /** @returns the end of the directive, which a backslash carries over the line */
  private directive(start: number, firstEnd: number): number {
    const { bytes } = this;
    let end = firstEnd;
    while (end < bytes.length && (bytes[end - 1] === 92 || (bytes[end - 1] === 13 && bytes[end - 2] === 92))) {
      const next = bytes.indexOf(10, end + 1);
      end = next < 0 ? bytes.length : next;
    }
    const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).latin1Slice(
      start,
      Math.min(end, start + 4000),
    );
    if (!this.conditions.take(text)) return end;
    const word = /^#\s*(\w+)/.exec(text)![1]!;
    if (word.startsWith('if')) this.branches.push([...this.stack]);
    else if (word === 'endif') this.branches.pop();
    else {
      const before = this.branches.at(-1);
      if (before !== undefined) this.stack = [...before];
    }
    return end;
  }

  /** Where the statement of an initial line of fixed form begins; -1 for comments, continuations and blank lines. */
  private fixedStart(start: number, end: number): number {
    const { bytes } = this;
    const first = bytes[start]!;
    if (first === 67 || first === 99 || first === 42 || first === 33) return -1;
    let at = start;
    while (at < end && at - start < 5 && bytes[at] === 32) at++;
    if (at - start === 5) {
      if (at < end && bytes[at] !== 32 && bytes[at] !== 48 && bytes[at] !== 9) return -1;
      at++;
    }
    while (at < end) {
      const byte = bytes[at]!;
      if (byte !== 32 && byte !== 9 && byte !== 13 && !(byte >= 48 && byte <= 57)) break;
      at++;
    }
    return at < end && bytes[at] !== 33 ? at : -1;
  }

  private freeStart(start: number, end: number): number {
    const { bytes } = this;
    let at = start;
    while (at < end) {
      const byte = bytes[at]!;
      if (byte !== 32 && byte !== 9 && byte !== 13 && !(byte >= 48 && byte <= 57)) break;
      at++;
    }
    return at < end && bytes[at] !== 33 ? at : -1;
  }

  private endsWithMark(at: number, end: number): boolean {
    const { bytes } = this;
    let last = end - 1;
    while (last > at && (bytes[last] === 32 || bytes[last] === 13 || bytes[last] === 9)) last--;
    if (bytes[last] === 38) return true;
    // A remark behind the mark.
    if (this.nextMark < at) {
      const next = bytes.indexOf(38, at);
      this.nextMark = next < 0 ? bytes.length : next;
    }
    if (this.nextMark >= end) return false;
    for (let place = this.nextMark; place < end; place++) {
      if (bytes[place] !== 38) continue;
      let next = place + 1;
      while (next < end && (bytes[next] === 32 || bytes[next] === 9)) next++;
      if (bytes[next] === 33) return true;
    }
    return false;
  }

  private statement(from: number, end: number, lineStart: number): void {
    const { bytes } = this;
    let at = from;
    const stop = this.fixed ? Math.min(end, lineStart + 132) : end;
    while (at < stop) {
      const code = this.couldMatter(at) ? this.compact(at, stop) : '';
      this.onlyPrefixes = code !== '' && PREFIXES.test(code);
      if (code !== '') this.take(code);
      // Another statement on the same line.
      while (at < stop && bytes[at] !== 59) {
        const byte = bytes[at]!;
        if (byte === 33 || byte === 39 || byte === 34) return;
        at++;
      }
      at++;
      while (at < stop && bytes[at] === 32) at++;
    }
  }

  /** Judged by two letters, blanks between them left out: `if`, `do`, `call` and nearly all assignments end here. */
  private couldMatter(at: number): boolean {
    const { bytes } = this;
    const first = LOWER[bytes[at]!]!;
    let next = at + 1;
    while (bytes[next] === 32) next++;
    const second = LOWER[bytes[next] ?? 0]!;
    switch (first) {
      case 97: // abstract, attributes
        return second === 98 || second === 116;
      case 98: // block data, byte
        return second === 108 || second === 121;
      case 99: // character, complex, contains, class
        return second === 104 || second === 111 || second === 108;
      case 100: // double precision
        return second === 111 && LOWER[bytes[next + 1] ?? 0] === 117;
      case 101: // end, elemental
        return second === 110 || second === 108;
      case 102: // function
        return second === 117;
      case 105: // integer, interface, impure
        return second === 110 || second === 109;
      case 108: // logical
        return second === 111;
      case 109: // module
        return second === 111;
      case 110: // non_recursive
        return second === 111;
      case 112: // program, pure
        return second === 114 || second === 117;
      case 114: // real, recursive
        return second === 101;
      case 115: // subroutine, submodule
        return second === 117;
      case 116: // type(t) function
        return second === 121;
      default:
        return first === 95;
    }
  }

  /** The statement in lower case without blanks; cut where nothing that matters can follow. */
  private compact(from: number, end: number): string {
    const { bytes } = this;
    let length = 0;
    for (let at = from; at < end && length < 400; at++) {
      const byte = LOWER[bytes[at]!]!;
      if (byte === 32 || byte === 9 || byte === 13) continue;
      if (byte === 33 || byte === 59 || byte === 39 || byte === 34 || byte === 38) break;
      this.buffer[length++] = byte;
    }
    const code = this.buffer.latin1Slice(0, length);
    const first = this.buffer[0];
    // Declarations by far outnumber functions.
    if (first !== 101 && first !== 109 && first !== 112 && first !== 115 && first !== 98 && first !== 97)
      return code.includes('function') ||
        code.startsWith('contains') ||
        code.startsWith('interface') ||
        code.includes('subroutine') ||
        PREFIXES.test(code)
        ? code
        : '';
    return code;
  }

  private readonly buffer = Buffer.alloc(400);

  private take(code: string): void {
    const top = this.stack.at(-1);
    if (code === 'contains') {
      if (top === undefined) this.stack.push(HOST);
      else if (!top.isInterface) this.stack[this.stack.length - 1] = HOST;
      return;
    }
    if (code.startsWith('end')) {
      const match = END.exec(code);
      if (match !== null) this.end(match[1]);
      return;
    }
    if (/^(?:abstract)?interface(?:$|[a-z]\w*$|(?:operator|assignment|read|write)\()/.test(code)) {
      if (!/^interface\w*=/.test(code)) this.stack.push(INTERFACE);
      return;
    }
    if (PROCEDURE.test(code)) {
      // Without CONTAINS it is another branch of the preprocessor, or the END of the one before is missing.
      if (top === undefined || top.isInterface || top.containing) this.stack.push(UNIT);
      return;
    }
    if (/^(?:program[a-z]\w*$|module(?!procedure)[a-z]\w*$|submodule\([^)]*\)\w+$|blockdata\w*$)/.test(code)) {
      if (top === undefined) this.stack.push(UNIT);
      return;
    }
    if (/^moduleprocedure[a-z]\w*$/.test(code)) {
      if (top !== undefined && !top.isInterface) this.stack.push(UNIT);
      return;
    }
  }

  private end(kind: string | undefined): void {
    if (kind === 'interface') {
      if (this.stack.at(-1)?.isInterface === true) this.stack.pop();
      return;
    }
    if (kind === 'program' || kind === 'module' || kind === 'submodule') this.stack = [];
    else if (this.stack.at(-1)?.isInterface !== true) this.stack.pop();
    if (this.stack.length === 0) this.ended = true;
  }
}
