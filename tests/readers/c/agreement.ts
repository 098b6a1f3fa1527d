/** How far the reader of C and C++ agrees with clang about one source: what each saw that the other did not. */
import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import type { Argument, FileInterface } from '../../../src/model/interface.ts';
import { readC } from '../../../src/readers/c/read-c.ts';
import { askClang, type ClangCall, type ClangFunction, type ClangSays } from './clang.ts';

export interface Agreement {
  readonly procedures: { readonly clang: number; readonly missed: string[]; readonly invented: string[] };
  readonly arguments: { readonly compared: number; readonly names: string[]; readonly types: string[] };
  readonly calls: {
    readonly clang: number;
    readonly ours: number;
    readonly missed: string[];
    readonly invented: string[];
  };
  readonly says: ClangSays;
  readonly read: FileInterface;
}

/** The text that clang's preprocessor makes of a source: both then read the same words, those that macros made among them. */
export function preprocessed(source: string, language: 'c' | 'c++', flags: readonly string[]): Buffer {
  return execFileSync('clang', ['-E', '-P', '-x', language, ...flags, '-'], { input: source, maxBuffer: 1 << 30 });
}

export function agreementOn(file: string, language: 'c' | 'c++', flags: readonly string[]): Agreement {
  const says = askClang(file, flags);
  const read = readC(file, new Uint8Array(readFileSync(file)), { language });
  return { ...compareProcedures(says, read), calls: compareCalls(says, read), says, read };
}

/** Written so that both spell it alike: no blanks, no template arguments, one name for conversions. */
function bareName(name: string): string {
  if (/^operator\s*[A-Za-z_]/.test(name) && !/^operator\s*(?:new|delete)/.test(name)) return 'operator of conversion';
  return (name.startsWith('operator') ? name : withoutAngles(name)).replace(/\s+/g, '');
}

function compareProcedures(says: ClangSays, read: FileInterface): Pick<Agreement, 'procedures' | 'arguments'> {
  const theirs = new Map<string, ClangFunction[]>();
  const seen = new Set<string>();
  const all: ClangFunction[] = [];
  for (const one of says.functions) {
    const key = `${bareName(one.name)}@${one.line}:${one.column}`;
    // What clang made of a template stands in the same place.
    if (seen.has(`${key}/${one.args.length}`)) continue;
    seen.add(`${key}/${one.args.length}`);
    all.push(one);
    theirs.set(key, [...(theirs.get(key) ?? []), one]);
  }
  const used = new Set<ClangFunction>();
  const invented: string[] = [];
  const names: string[] = [];
  const types: string[] = [];
  let compared = 0;
  for (const mine of read.procedures) {
    const args = mine.args.filter((arg) => arg.type !== '...');
    const candidates = theirs.get(`${bareName(mine.name)}@${mine.line}:${mine.column}`) ?? [];
    const found =
      candidates.find((one) => !used.has(one) && one.args.length === args.length) ??
      candidates.find((one) => !used.has(one));
    if (found === undefined) {
      invented.push(`${mine.line} ${mine.parent}::${mine.name}`);
      continue;
    }
    used.add(found);
    const [ours, clangs] = [args.map((one) => one.name).join(), found.args.map((one) => one.name).join()];
    if (ours !== clangs) {
      names.push(`${mine.line} ${mine.name}: (${ours}) where clang has (${clangs})`);
      continue;
    }
    for (const [index, arg] of args.entries()) {
      compared++;
      const [our, clang] = [ourType(arg), clangType(found.args[index]!.type)];
      // The type of variable argument lists is spelled as the machine has it.
      if (our !== clang && !clang.startsWith('__va_list_tag'))
        types.push(`${mine.line} ${mine.name} ${arg.name}: ${our} where clang has ${clang}`);
    }
  }
  const missed = all.filter((one) => !used.has(one)).map((one) => `${one.line} ${one.scope}::${one.name} ${one.type}`);
  return { procedures: { clang: all.length, missed, invented }, arguments: { compared, names, types } };
}

function compareCalls(says: ClangSays, read: FileInterface): Agreement['calls'] {
  // Traits and shuffles of vectors have kinds of their own in the tree, and no call.
  const special = /^__(?:is|has)_|^__builtin_(?:shuffle|convert)|^__atomic_|^~/;
  const ours = read.calls.filter((one) => one.how !== 'constructor' && !special.test(lastName(one.callee)));
  const byKey = new Map<string, typeof ours>();
  const keyOf = (name: string, line: number, count: number) => `${lastName(name)}/${count}@${line}`;
  for (const one of ours) {
    const key = keyOf(one.callee, one.line, one.args.length);
    const list = byKey.get(key);
    if (list === undefined) byKey.set(key, [one]);
    else list.push(one);
  }
  const seen = new Set<string>();
  const theirs: ClangCall[] = [];
  for (const one of says.calls) {
    // The name of an operator that is called by a sign stands nowhere; a name that is not in the tree cannot be compared.
    if (one.constructs || one.callee.startsWith('operator') || one.callee === '?' || special.test(one.callee)) continue;
    const key = `${one.line}:${one.column}:${one.callee}`;
    if (!seen.has(key)) theirs.push(one);
    seen.add(key);
  }
  const taken = new Set<unknown>();
  const missed: string[] = [];
  for (const one of theirs) {
    const found = [one.line, one.lastLine]
      .flatMap((line) => byKey.get(keyOf(one.callee, line, one.nargs)) ?? [])
      .find((call) => !taken.has(call));
    if (found === undefined) missed.push(`${one.line} ${one.callee}/${one.nargs}`);
    else taken.add(found);
  }
  const objects = new Set(says.calls.filter((one) => one.constructs || one.callee === '?').map((one) => `${one.line}`));
  const invented = ours
    .filter((one) => !taken.has(one) && !objects.has(`${one.line}`))
    .map((one) => `${one.line} ${one.callee}/${one.args.length}`);
  return { clang: theirs.length, ours: ours.length, missed, invented };
}

function lastName(name: string): string {
  return withoutAngles(name).split('::').at(-1)!;
}

function withoutAngles(text: string): string {
  let bare = text;
  for (let before = ''; before !== bare; ) {
    before = bare;
    bare = bare.replace(/<[^<>]*>/g, '');
  }
  return bare;
}

/** The last name of a type, a star for each pointer and each dimension, and `&` for a reference. */
function clangType(type: string): string {
  const bare = withoutAngles(type);
  if (/\(&&?\)\s*\[/.test(bare)) return `${lastWord(bare.replace(/\(.*$/, ''))}*&`;
  if (/\)\s*\[/.test(bare)) return lastWord(bare.replace(/\(.*$/, '')) + '*'.repeat((bare.match(/[*[]/g) ?? []).length);
  if (/\(.*\)/.test(bare) && !/decltype|__attribute__/.test(bare)) return 'procedure';
  const stars = '*'.repeat((bare.match(/[*[]/g) ?? []).length);
  return `${lastWord(bare)}${stars}${bare.includes('&') ? '&' : ''}`;
}

function ourType(arg: Argument): string {
  if (arg.type === 'procedure') return 'procedure';
  const stars = '*'.repeat(arg.attributes.filter((one) => one === 'pointer').length + arg.rank);
  return `${lastWord(withoutAngles(arg.type))}${stars}${arg.attributes.includes('reference') ? '&' : ''}`;
}

function lastWord(type: string): string {
  return type
    .replace(/\b(?:const|volatile|restrict|__restrict|struct|union|enum|class|typename)\b/g, '')
    .replace(/\s*[*&[].*$/, '')
    .replace(/\.\.\.$/, '')
    .trim()
    .replace(/\s+/g, ' ')
    .split('::')
    .at(-1)!
    .trim()
    .replace(/^_Bool$/, 'bool')
    .replace(/^(?:_Complex|__complex__) ([\w ]+)$/, '$1 _Complex');
}

export function share(part: number, whole: number): number {
  return whole === 0 ? 1 : part / whole;
}
