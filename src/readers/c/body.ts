/** Bodies of C and C++ functions: calls with their arguments, and literals. */
import type { ActualArgument, LiteralUse } from '../../model/interface.ts';
import type { CFile } from './c-file.ts';
import { numberOf } from './evaluate.ts';
import { closeAngle } from './parameters.ts';
import { T } from './tokens.ts';
import { BEFORE_CALL, BUILTIN, bytesOfType, isMarker, NO_CALL } from './words.ts';

/**
 * Gathers calls and literals between two tokens.
 *
 * @param caller  the procedure, with its parents; null at file level
 * @param types   type of a name, where a declaration was seen: the arguments to begin with
 */
export function scanBody(
  file: CFile,
  from: number,
  to: number,
  caller: string | null,
  types: Map<string, string>,
): void {
  const { tokens } = file;
  for (let at = from; at < to; at++) {
    const kind = tokens.kind[at];
    if (kind === T.name) {
      const next = file.word(at + 1);
      // `(max)(a, b)`, `(std::max)(a, b)`: brackets that keep a macro away.
      if (next === ')' && file.word(at + 2) === '(' && inBrackets(file, at)) call(file, at, at + 2, to, caller, types);
      else if (next === '(') call(file, at, at + 1, to, caller, types);
      else if (next === '<' && at + 3 < to) {
        const close = templated(file, at, to);
        if (close > 0) call(file, at, close + 1, to, caller, types);
      } else if (
        caller !== null &&
        tokens.kind[at - 1] === T.name &&
        (next === '=' || next === ';' || next === '[' || next === ',')
      ) {
        // `double x = ...`: what its literals are given to.
        const type = file.word(at - 1);
        if (bytesOfType(type) !== null || type === 'Real') types.set(file.word(at), type);
      }
    } else if (kind === T.number) literal(file, at, caller, types);
  }
}

function inBrackets(file: CFile, name: number): boolean {
  let at = name;
  while (file.word(at - 1) === '::' && file.kind(at - 2) === T.name) at -= 2;
  // `(double)(x)` is a cast.
  return (
    file.word(at - 1) === '(' &&
    file.kind(at - 2) !== T.name &&
    !BUILTIN.has(file.word(name)) &&
    !/_t$/.test(file.word(name))
  );
}

/** `max<double>(a, b)`: names, types and commas only between the angles, and a round bracket behind. */
function templated(file: CFile, at: number, to: number): number {
  const close = typeArguments(file, at, to);
  return close > 0 && file.word(close + 1) === '(' ? close : -1;
}

/** The `>` of what can only be template arguments: names, types and commas between the angles, and behind them no operand. */
function typeArguments(file: CFile, at: number, to: number): number {
  const close = closeAngle(file, at + 1, Math.min(to, at + 60));
  if (close < 0 || !/^(?:\(|::|\{|\)|,|>|\.|;)$/.test(file.word(close + 1))) return -1;
  for (let inside = at + 2; inside < close; inside++) {
    const kind = file.kind(inside);
    if (kind === T.punctuation && !/^(?:::|,|\*|&|<|>|\.|\(|\)|\+|-)$/.test(file.word(inside))) return -1;
    if (kind === T.string) return -1;
  }
  return close;
}

function call(
  file: CFile,
  name: number,
  open: number,
  to: number,
  caller: string | null,
  types: ReadonlyMap<string, string>,
): void {
  const written = file.word(name);
  if (NO_CALL.has(written)) return;
  const close = file.match(open);
  if (close < 0) return;
  // A name with a block behind its brackets is the header of a local function, or a macro that loops.
  if (close + 1 < to && file.word(close + 1) === '{') return;
  let begin = name;
  while (file.word(begin - 1) === '::') {
    if (file.kind(begin - 2) === T.name && !BEFORE_CALL.has(file.word(begin - 2))) begin -= 2;
    else if (file.word(begin - 2) === '>') {
      // `A<T>::f(x)`
      const angle = openAngle(file, begin - 2);
      if (angle < 0 || file.kind(angle - 1) !== T.name) break;
      begin = angle - 1;
    } else break;
  }
  if (file.word(begin - 1) === '::') begin--;
  // `p->~T()`
  const destroys = file.word(begin - 1) === '~' && (file.word(begin - 2) === '.' || file.word(begin - 2) === '->');
  if (destroys) begin--;
  const before = file.word(begin - 1);
  const method = before === '.' || before === '->';
  // `new T(x)`, `new (place) T(x)`
  const created =
    before === 'new' || (before === ')' && file.language === 'c++' && file.word(file.match(begin - 1) - 1) === 'new');
  // Two names in a row declare: `Foo x(1);` makes an object of the type before.
  let declared: string | null = null;
  if (!method && !created && file.kind(begin - 1) === T.name && !BEFORE_CALL.has(before) && !isMarker(before))
    declared = before;
  if (before === '>' && file.kind(begin - 2) === T.name && file.language === 'c++' && looksTemplated(file, begin - 1))
    declared = '';
  // `T *p(x);` at the beginning of a statement makes a variable; anywhere else it multiplies.
  if (
    (before === '*' || before === '&') &&
    file.language === 'c++' &&
    file.kind(begin - 2) === T.name &&
    /^[;{}]$/.test(file.word(begin - 3))
  )
    return;
  if (declared !== null) {
    if (caller === null || declared === '' || /^(?:struct|class|union|enum|typename|const|static)$/.test(declared))
      return;
    if (NO_CALL.has(declared)) return;
  }
  const callee = declared ?? file.textOf(begin, name + 1).replace(/\s+/g, '');
  const condition = file.condition(name);
  const unpacked = unpackedInto(file, begin, method);
  file.calls.push({
    callee,
    how: created || declared !== null ? 'constructor' : method ? 'method' : 'function',
    caller,
    args: actuals(file, open, close, types),
    ...(unpacked.length > 0 ? { unpacked } : {}),
    ...(condition === '' ? {} : { condition }),
    ...file.at(begin),
  });
  external(file, callee, open, close);
}

/** The `<` that a `>` closes, looked for backwards; -1 when it is greater-than. */
function openAngle(file: CFile, close: number): number {
  let depth = 0;
  for (let at = close; at > close - 60 && at > 0; at--) {
    const word = file.word(at);
    if (word === '>') depth++;
    else if (word === '<') {
      if (--depth === 0) return at;
    } else if (word === ')' || word === ']') {
      const open = file.match(at);
      if (open < 0) return -1;
      at = open;
    } else if (word === ';' || word === '{' || word === '}' || word === '(') return -1;
  }
  return -1;
}

function looksTemplated(file: CFile, close: number): boolean {
  let depth = 0;
  for (let at = close; at > close - 40 && at > 0; at--) {
    const word = file.word(at);
    if (word === '>') depth++;
    else if (word === '<') {
      if (--depth === 0)
        return (
          file.kind(at - 1) === T.name && file.kind(at - 2) !== T.number && !/^[=+\-*/(,]$/.test(file.word(at - 2))
        );
    } else if (word === ';' || word === '{' || word === '(' || word === '&') return false;
  }
  return false;
}

function unpackedInto(file: CFile, begin: number, method: boolean): string[] {
  let at = begin - 1;
  if (method) {
    // Back over the object: `x = a.b->f(...)`
    let steps = 0;
    while (steps++ < 8 && (file.word(at) === '.' || file.word(at) === '->') && file.kind(at - 1) === T.name) at -= 2;
  }
  if (file.word(at) !== '=' || /^[=!<>+\-*/|&^%]$/.test(file.word(at - 1))) return [];
  const target = at - 1;
  if (file.word(target) === ']') {
    const open = file.match(target);
    if (open >= 0 && (file.word(open - 1) === 'auto' || file.word(open - 1) === '&')) {
      const names: string[] = [];
      for (let inside = open + 1; inside < target; inside++)
        if (file.kind(inside) === T.name) names.push(file.word(inside));
      return names;
    }
    return open > 0 && file.kind(open - 1) === T.name ? [file.word(open - 1)] : [];
  }
  return file.kind(target) === T.name ? [file.word(target)] : [];
}

function actuals(file: CFile, open: number, close: number, types: ReadonlyMap<string, string>): ActualArgument[] {
  const args: ActualArgument[] = [];
  let start = open + 1;
  while (start < close) {
    let at = start;
    while (at < close && file.word(at) !== ',') {
      const word = file.word(at);
      if (word === '(' || word === '[' || word === '{') at = Math.max(at, Math.min(file.match(at), close));
      else if (word === '<' && file.kind(at - 1) === T.name) {
        const angle = typeArguments(file, at - 1, close);
        if (angle > 0) at = angle;
      }
      at++;
    }
    if (at > start) args.push(actual(file, start, at, types));
    start = at + 1;
  }
  return args;
}

function actual(file: CFile, from: number, to: number, types: ReadonlyMap<string, string>): ActualArgument {
  const text = file.textOf(from, to).slice(0, 200);
  const at = file.at(from);
  let first = from;
  while (first < to && (file.word(first) === '&' || file.word(first) === '*')) first++;
  // Past the object: `p->rho`, `state.T`, `ns::x`
  let last = first;
  while (last + 2 < to && file.kind(last) === T.name && /^(?:\.|->|::)$/.test(file.word(last + 1))) last += 2;
  if (first < to && file.kind(last) === T.name && last + 1 === to) {
    const name = file.word(last);
    const type = last === first ? types.get(name) : undefined;
    const bytes = type === undefined ? undefined : bytesOfType(type);
    return {
      text,
      form: 'name',
      name,
      ...(type === undefined ? {} : { type }),
      ...(bytes === undefined ? {} : { bytes }),
      ...at,
    };
  }
  if (
    file.kind(last) === T.name &&
    file.word(last + 1) === '[' &&
    (file.match(last + 1) === to - 1 || file.word(file.match(last + 1) + 1) === '[')
  )
    return { text, form: 'element', name: file.word(last), ...at };
  const sign = file.word(from) === '-' || file.word(from) === '+' ? 1 : 0;
  if (from + sign + 1 === to) {
    const kind = file.kind(from + sign);
    if (kind === T.number) {
      const number = numberOf(file.word(from + sign));
      return {
        text,
        form: 'literal',
        type: number === null || number.integer ? 'int' : number.bytes === 4 ? 'float' : 'double',
        bytes: number?.bytes ?? null,
        rank: 0,
        ...at,
      };
    }
    if (kind === T.string) return { text, form: 'literal', type: 'char', bytes: 1, rank: 1, ...at };
    if (kind === T.char) return { text, form: 'literal', type: 'char', bytes: 1, rank: 0, ...at };
  }
  return { text, form: 'expression', ...at };
}

/** Files and environment variables that a literal names. */
function external(file: CFile, callee: string, open: number, close: number): void {
  if (open + 1 >= close || file.kind(open + 1) !== T.string) return;
  const bare = callee.slice(callee.lastIndexOf(':') + 1);
  const kind =
    bare === 'getenv' || bare === 'secure_getenv'
      ? 'environment'
      : /^(?:fopen|freopen|open|H5Fopen|ifstream|nc_open)$/.test(bare)
        ? 'file'
        : null;
  if (kind !== null) file.externals.push({ kind, name: file.word(open + 1).slice(1, -1), ...file.at(open + 1) });
}

function literal(file: CFile, at: number, caller: string | null, types: ReadonlyMap<string, string>): void {
  const text = file.word(at);
  // Most numbers in code count, index and halve; they are told by their length before anything is decoded.
  if (text.length < 3 && file.word(at - 1) !== '/' && file.word(at + 1) !== '/') return;
  const number = numberOf(text);
  if (number === null) return;
  const before = file.word(at - 1);
  const after = file.word(at + 1);
  let role: LiteralUse['role'] | null = null;
  let target: string | undefined;
  if (number.integer) {
    if (after === '/' && file.kind(at + 2) === T.number) {
      const divisor = numberOf(file.word(at + 2));
      if (divisor?.integer === true && divisor.value !== 0 && number.value % divisor.value !== 0)
        role = 'integer-division';
    }
    if (role === null && (text.length < 5 || /^0[xX]/.test(text))) return;
  } else if (number.value === 0 || number.value === 1 || number.value === 2 || number.value === 0.5) {
    if (number.bytes !== 4 && !/[fF]$/.test(text)) return;
  }
  if (role === null) {
    if (before === '=' && !/^[=!<>]$/.test(file.word(at - 2)) && file.kind(at - 2) === T.name) {
      role = after === ';' || after === ',' ? (caller === null ? 'named' : 'assigned') : 'mixed';
      target = file.word(at - 2);
    } else if ((before === '(' || before === ',') && (after === ')' || after === ',')) role = 'argument';
    else role = 'plain';
  }
  const type = target === undefined ? undefined : types.get(target);
  const file_ = {
    text,
    value: number.value,
    bytes: number.bytes,
    role,
    procedure: caller,
    ...(target === undefined ? {} : { target }),
    ...(type === undefined ? {} : { targetBytes: bytesOfType(type) }),
    ...file.at(at),
  } satisfies LiteralUse;
  file.literals.push(file_);
}
