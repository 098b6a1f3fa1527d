/** The parse tree that `gfortran -fdump-fortran-original` prints comes in, what the compiler takes the source for goes out. Pure. */

export interface SeenValue {
  readonly name: string;
  /** `real`, `integer`, ..., `type(x)`, `class`, `procedure`, `alternate-return`. */
  readonly type: string;
  readonly bytes: number | null;
  /** null where the dump hides it (polymorphic arrays). */
  readonly rank: number | null;
  readonly intent: 'in' | 'out' | 'inout' | null;
  readonly optional: boolean;
  /** Extents; null where not constant. */
  readonly shape: readonly (number | null)[];
}

export interface SeenProcedure {
  /** Hosts and name joined by `::`. */
  readonly path: string;
  readonly kind: 'subroutine' | 'function';
  readonly args: readonly SeenValue[];
  readonly result: SeenValue | null;
}

export interface SeenCommon {
  readonly parent: string;
  readonly name: string;
  readonly members: readonly SeenValue[];
}

export interface SeenCall {
  readonly caller: string;
  readonly callee: string;
  readonly count: number;
}

export interface CompilerView {
  readonly procedures: readonly SeenProcedure[];
  /** Interface bodies: path of the host and name, names of the arguments. */
  readonly prototypes: readonly { readonly path: string; readonly args: readonly string[] }[];
  readonly commons: readonly SeenCommon[];
  readonly calls: readonly SeenCall[];
  /** Names that the compiler takes for intrinsic procedures, by the path of the unit. */
  readonly intrinsics: ReadonlyMap<string, ReadonlySet<string>>;
}

interface SymbolBlock {
  readonly name: string;
  readonly foreign: boolean;
  type: string;
  attributes: string;
  arraySpec: string;
  result: string;
  formals: string | null;
}

interface Namespace {
  readonly indent: number;
  path: string;
  own: string;
  readonly symbols: Map<string, SymbolBlock>;
  readonly commons: { name: string; members: string[] }[];
  readonly code: string[];
  readonly parent: Namespace | null;
}

/** @param dump  standard output of `gfortran -fsyntax-only -fdump-fortran-original`, of one file */
export function compilerView(dump: string): CompilerView {
  const spaces = namespacesOf(dump);
  const view = {
    procedures: [] as SeenProcedure[],
    prototypes: [] as { path: string; args: string[] }[],
    commons: [] as SeenCommon[],
    calls: [] as SeenCall[],
    intrinsics: new Map<string, Set<string>>(),
  };
  for (const space of spaces) {
    if (space.own === '' || space.own.startsWith('__')) continue;
    const self = symbolIn(space, space.own);
    const isProcedure = /\b(SUBROUTINE|FUNCTION)\b/.test(self?.attributes ?? '');
    const entries = [...space.symbols.values()].filter((one) => / ENTRY /.test(one.attributes));
    if (entries.length > 0) for (const one of entries) view.procedures.push(procedureOf(space, one, space.parent));
    else if (self !== undefined && isProcedure && !/IS-MAIN-PROGRAM/.test(self.attributes))
      view.procedures.push(procedureOf(space, self, space.parent));
    for (const one of space.symbols.values()) {
      if (one.foreign || one.formals === null || one.name === space.own || !/ EXTERNAL /.test(one.attributes)) continue;
      if (/ENTRY|USE-ASSOC|DUMMY|POINTER|_formal/.test(one.attributes + one.formals)) continue;
      view.prototypes.push({ path: `${space.path}::${one.name}`, args: words(one.formals) });
    }
    for (const { name, members } of space.commons)
      view.commons.push({ parent: space.path, name, members: members.map((one) => valueNamed(space, one)) });
    const intrinsics = view.intrinsics.get(space.path) ?? new Set<string>();
    for (const one of space.symbols.values()) if (/\bINTRINSIC\b/.test(one.attributes)) intrinsics.add(one.name);
    view.intrinsics.set(space.path, intrinsics);
    for (const line of space.code) view.calls.push(...callsIn(line, space.path));
  }
  return view;
}

function namespacesOf(dump: string): Namespace[] {
  const spaces: Namespace[] = [];
  let stack: Namespace[] = [];
  let symbol: SymbolBlock | null = null;
  let inCode = false;
  for (const line of dump.split('\n')) {
    const opening = /^( *)Namespace:/.exec(line);
    if (opening !== null) {
      const indent = opening[1]!.length;
      stack = stack.filter((one) => one.indent < indent);
      const space: Namespace = {
        indent,
        path: '',
        own: '',
        symbols: new Map(),
        commons: [],
        code: [],
        parent: stack.at(-1) ?? null,
      };
      stack.push(space);
      spaces.push(space);
      symbol = null;
      inCode = false;
      continue;
    }
    const space = stack.at(-1);
    if (space === undefined) continue;
    const named = /^ *procedure name = (\S+)/.exec(line);
    if (named !== null && space.own === '') {
      space.own = named[1]!;
      const plain = space.own.replace(/^master\.\d+\./, '');
      space.path = space.parent === null ? plain : `${space.parent.path}::${plain}`;
    } else if (/^ *code:$/.test(line)) {
      inCode = true;
    } else if (inCode) {
      space.code.push(line);
    } else {
      symbol = readSymbolLine(line, space, symbol);
    }
  }
  return spaces;
}

function readSymbolLine(line: string, space: Namespace, symbol: SymbolBlock | null): SymbolBlock | null {
  const common = /^ *common: \/(.*?)\/ (.*)$/.exec(line);
  if (common !== null) {
    const members = common[2]!.split(',').map((one) => one.trim());
    space.commons.push({ name: common[1]!, members });
    return symbol;
  }
  const opening = /^ *symtree: '(.*?)' *\|\| symbol: '(.*?)'(.*)$/.exec(line);
  if (opening !== null) {
    const foreign = / from namespace '/.test(opening[3]!);
    const made: SymbolBlock = {
      name: opening[1]!,
      foreign,
      type: '',
      attributes: '',
      arraySpec: '',
      result: '',
      formals: null,
    };
    space.symbols.set(made.name, made);
    return made;
  }
  const field = /^ *(type spec|attributes|Array spec|result|Formal arglist) ?: ?(.*)$/.exec(line);
  if (field === null || symbol === null) return symbol;
  const [, name, text = ''] = field;
  if (name === 'type spec') symbol.type = text;
  else if (name === 'attributes') symbol.attributes = text;
  else if (name === 'Array spec') symbol.arraySpec = text;
  else if (name === 'result') symbol.result = text.trim();
  else symbol.formals = text;
  return symbol;
}

/** The symbol, of the host where this unit only points to it. */
function symbolIn(space: Namespace, name: string): SymbolBlock | undefined {
  const own = space.symbols.get(name);
  return own !== undefined && !own.foreign ? own : space.parent === null ? own : symbolIn(space.parent, name);
}

function procedureOf(space: Namespace, self: SymbolBlock, host: Namespace | null): SeenProcedure {
  const isFunction = /\bFUNCTION\b/.test(self.attributes);
  const args = words(self.formals ?? '').map((one) =>
    one === '*'
      ? {
          name: '*',
          type: 'alternate-return',
          bytes: null,
          rank: 0,
          intent: null,
          optional: false,
          shape: [],
        }
      : valueNamed(space, one),
  );
  const result = self.result === '' ? self.name : self.result;
  return {
    path: host === null ? self.name : `${host.path}::${self.name}`,
    kind: isFunction ? 'function' : 'subroutine',
    args,
    result: isFunction ? valueNamed(space, result) : null,
  };
}

function words(formals: string): string[] {
  return formals
    .replaceAll('[Alt Return]', '*')
    .split(' ')
    .filter((one) => one !== '');
}

function valueNamed(space: Namespace, name: string): SeenValue {
  const symbol = symbolIn(space, name);
  const spec = /^\(([A-Z]+) ?(.*?)\)$/.exec(symbol?.type ?? '');
  const attributes = symbol?.attributes ?? '';
  const word = spec?.[1] ?? 'UNKNOWN';
  const kind = Number(/(\d+)(?: C_INTEROP)?(?: ISO_C)?$/.exec(spec?.[2] ?? '')?.[1] ?? Number.NaN);
  const dummy = /\bDUMMY(?:\((\w+)\))?/.exec(attributes);
  const type =
    word === 'DERIVED'
      ? `type(${spec![2]!.split(' ')[0]!.toLowerCase()})`
      : word === 'UNKNOWN' || word === 'VOID'
        ? 'procedure'
        : word.toLowerCase();
  const bytes = /^(?:real|integer|logical|complex|character)$/.test(type)
    ? type === 'complex'
      ? 2 * kind
      : kind
    : null;
  const array = /^\((-?\d+) \[\d+\] ?(\w*) ?(.*)\)$/.exec(symbol?.arraySpec ?? '');
  return {
    name,
    type,
    bytes,
    rank: word === 'CLASS' ? null : array === null ? 0 : Number(array[1]),
    intent: (dummy?.[1]?.toLowerCase() as SeenValue['intent']) ?? null,
    optional: /\bOPTIONAL\b/.test(attributes),
    shape: array?.[2] === 'AS_EXPLICIT' ? extents(array[3]!, Number(array[1])) : [],
  };
}

function extents(text: string, rank: number): (number | null)[] {
  const bounds = text.trim().split(/\s+/);
  if (bounds.length !== 2 * rank || !bounds.every((one) => /^-?\d+$/.test(one)))
    return Array.from({ length: rank }, () => null);
  return Array.from({ length: rank }, (_, at) => Number(bounds[2 * at + 1]) - Number(bounds[2 * at]) + 1);
}

/** CALL statements and function references of one line of dumped code. The compiler's own helpers start with `_`. */
function callsIn(line: string, caller: string): SeenCall[] {
  const bare = withoutStrings(line);
  const calls: SeenCall[] = [];
  const statement = /^ *(?:\d+ +)?CALL (\S+) +(?=\()/.exec(bare);
  if (statement !== null && !statement[1]!.startsWith('_'))
    calls.push({ caller, callee: statement[1]!, count: countArguments(bare, statement[0].length) });
  for (const found of bare.matchAll(/([A-Za-z_]\w*)\[\[/g)) {
    if (found[1]!.startsWith('_')) continue;
    calls.push({ caller, callee: found[1]!, count: countArguments(bare, found.index + found[0].length) });
  }
  return calls;
}

/** Text constants blanked: they may hold brackets. */
function withoutStrings(line: string): string {
  return line.replace(/'(?:[^']|'')*'/g, (text) => `'${'_'.repeat(text.length - 2)}'`);
}

/** Groups inside the bracket at `from`, one an argument; those left out do not count. */
function countArguments(text: string, from: number): number {
  let depth = 0;
  let count = 0;
  for (let at = from; at < text.length; at++) {
    if (text[at] === '(') {
      depth++;
      if (depth === 2 && !text.startsWith('((arg not-present))', at)) count++;
    } else if (text[at] === ')') {
      depth--;
      if (depth === 0) break;
    }
  }
  return count;
}
