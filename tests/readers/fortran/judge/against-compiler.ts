/** What the reader yields held against what the compiler takes the source for, both ways: what is missed, what is made up. Pure. */
import type { Argument, Declared, FileInterface } from '../../../../src/model/interface.ts';
import type { CompilerView, SeenValue } from './compiler-view.ts';

export type Matter = 'procedures' | 'declarations' | 'commons' | 'calls';

export interface Tally {
  /** What the compiler has. */
  expected: number;
  /** What the reader has. */
  found: number;
  /** What both have alike. */
  right: number;
}

export interface Comparison {
  readonly tallies: Readonly<Record<Matter, Tally>>;
  /** One line each: what differs, and how. */
  readonly differences: string[];
}

export function emptyComparison(): Comparison {
  const tally = () => ({ expected: 0, found: 0, right: 0 });
  return {
    tallies: { procedures: tally(), declarations: tally(), commons: tally(), calls: tally() },
    differences: [],
  };
}

/** The smaller of precision and recall. */
export function rightShare({ expected, found, right }: Tally): number {
  return right / Math.max(expected, found, 1);
}

/** Adds one file to a comparison. */
export function compareWithCompiler(into: Comparison, path: string, read: FileInterface, seen: CompilerView): void {
  const { tallies, differences } = into;
  const say = (text: string) => differences.push(`${path}: ${text}`);
  compareProcedures(tallies, read, seen, say);
  comparePrototypes(tallies.procedures, read, seen, say);
  compareCommons(tallies.commons, read, seen, say);
  compareCalls(tallies.calls, read, seen, say);
}

/** `procedures` counts a procedure by name, kind, and the names of its arguments in order; `declarations` its arguments and result. */
function compareProcedures(
  tallies: Comparison['tallies'],
  read: FileInterface,
  seen: CompilerView,
  say: (text: string) => void,
): void {
  const own = read.procedures.filter(
    (one) => one.prototype !== true && /^(?:function|subroutine|entry)$/.test(one.kind),
  );
  const rest = new Map(own.map((one) => [one.parent === null ? one.name : `${one.parent}::${one.name}`, one]));
  tallies.procedures.found += own.length;
  tallies.procedures.expected += seen.procedures.length;
  for (const expected of seen.procedures) {
    const procedure = rest.get(expected.path);
    rest.delete(expected.path);
    if (procedure === undefined) {
      say(`${expected.kind} ${expected.path} is not seen`);
      continue;
    }
    const [names, others] = [expected.args, procedure.args].map((args) => args.map((one) => one.name).join(' '));
    const kind = procedure.kind === 'entry' ? (procedure.result === null ? 'subroutine' : 'function') : procedure.kind;
    if (names !== others || kind !== expected.kind) {
      say(`${expected.kind} ${expected.path}(${names}) is read as ${kind} (${others})`);
      continue;
    }
    tallies.procedures.right++;
    const pairs: [SeenValue, Argument | Declared | undefined][] = expected.args.map((one, at) => [
      one,
      procedure.args[at],
    ]);
    if (expected.result !== null) pairs.push([expected.result, procedure.result ?? undefined]);
    for (const [value, declared] of pairs) {
      tallies.declarations.expected++;
      if (declared === undefined) {
        say(`${expected.path}: the result is not seen`);
        continue;
      }
      tallies.declarations.found++;
      const [want, have] = [seenText(value), declaredText(declared, value)];
      if (want === have) tallies.declarations.right++;
      else say(`${expected.path}: ${value.name} is ${want}, read as ${have}`);
    }
  }
  for (const path of rest.keys()) say(`there is no procedure ${path}`);
}

function comparePrototypes(tally: Tally, read: FileInterface, seen: CompilerView, say: (text: string) => void): void {
  const own = new Map(
    read.procedures
      .filter((one) => one.prototype === true)
      .map((one) => [`${one.parent}::${one.name}`, one.args.map((arg) => arg.name).join(' ')]),
  );
  tally.found += own.size;
  tally.expected += seen.prototypes.length;
  for (const { path, args } of seen.prototypes) {
    const have = own.get(path);
    own.delete(path);
    if (have === args.join(' ')) tally.right++;
    else say(`interface body ${path}(${args.join(' ')}) is ${have === undefined ? 'not seen' : `read as (${have})`}`);
  }
  for (const path of own.keys()) say(`there is no interface body ${path}`);
}

/** Members in storage order with type, bytes and extents. Blank COMMON is left out: the dump does not tell its order. */
function compareCommons(tally: Tally, read: FileInterface, seen: CompilerView, say: (text: string) => void): void {
  const blocks = new Map<string, Declared[]>();
  for (const one of read.commons) {
    if (one.name === '') continue;
    const key = `${one.parent} /${one.name}/`;
    blocks.set(key, [...(blocks.get(key) ?? []), ...one.members]);
  }
  tally.found += blocks.size;
  tally.expected += seen.commons.length;
  for (const { parent, name, members } of seen.commons) {
    const key = `${parent} /${name}/`;
    const block = blocks.get(key);
    blocks.delete(key);
    const want = members.map((one) => `${one.name} ${one.type} ${one.bytes} (${one.shape.join()})`).join('; ');
    const have = block
      ?.map((one, at) => `${one.name} ${one.type} ${one.bytes} (${shapeText(one, members[at])})`)
      .join('; ');
    if (want === have) tally.right++;
    else say(`COMMON ${key} is ${want}, read as ${have ?? 'nothing'}`);
  }
  for (const key of blocks.keys()) say(`there is no COMMON ${key}`);
}

/** `(1)` is read as "unknown length" on purpose. */
function shapeText(declared: Declared, seen: SeenValue | undefined): string {
  return declared.shape.map((one, at) => (one === null && seen?.shape[at] === 1 ? 1 : one)).join();
}

/** A call is right when caller, callee and number of arguments are; a generic name may mean any of its procedures. */
function compareCalls(tally: Tally, read: FileInterface, seen: CompilerView, say: (text: string) => void): void {
  const rest = new Map<string, number>();
  for (const one of seen.calls) {
    const key = `${one.caller} calls ${one.callee} with ${one.count}`;
    rest.set(key, (rest.get(key) ?? 0) + 1);
  }
  tally.expected += seen.calls.length;
  const made: string[] = [];
  for (const call of read.calls) {
    const caller = call.caller ?? '';
    if (isIntrinsic(seen, caller, call.callee)) continue;
    tally.found++;
    const count = call.args.filter((one) => one.form !== 'alternate-return').length + (call.how === 'method' ? 1 : 0);
    const names = [
      call.callee,
      ...read.generics.filter((one) => one.name === call.callee).flatMap((one) => one.procedures),
    ];
    const key = names.map((name) => `${caller} calls ${name} with ${count}`).find((one) => (rest.get(one) ?? 0) > 0);
    if (key === undefined) made.push(`no call at line ${call.line}: ${caller} calls ${call.callee} with ${count}`);
    else {
      tally.right++;
      rest.set(key, rest.get(key)! - 1);
    }
  }
  for (const text of made) say(text);
  for (const [key, times] of rest) if (times > 0) say(`${key}: ${times} not seen`);
}

function isIntrinsic(seen: CompilerView, caller: string, name: string): boolean {
  for (let at = caller; at !== ''; at = at.includes('::') ? at.slice(0, at.lastIndexOf('::')) : '')
    if (seen.intrinsics.get(at)?.has(name)) return true;
  return false;
}

function seenText(one: SeenValue): string {
  return `${one.type} of ${one.bytes} bytes, rank ${one.rank}, intent ${one.intent}${one.optional ? ', optional' : ''}`;
}

function declaredText(one: Argument | Declared, seen: SeenValue): string {
  const argument = 'intent' in one ? one : { intent: null, optional: false };
  const type = one.type.startsWith('class(') ? 'class' : one.type;
  const rank = seen.rank === null ? null : one.rank;
  return `${type} of ${type === 'procedure' ? null : one.bytes} bytes, rank ${rank}, intent ${argument.intent}${argument.optional ? ', optional' : ''}`;
}
