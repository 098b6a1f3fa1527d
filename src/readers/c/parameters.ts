/** Types and parameter lists of C and C++, from tokens. */
import type { Argument, Declared } from '../../model/interface.ts';
import { T, type TokenView } from './tokens.ts';
import { BUILTIN, bytesOfType, isMarker, QUALIFIERS, TAGS } from './words.ts';

/** The token of the `>` that closes a `<`, or -1 when it is less-than. */
export function closeAngle(file: TokenView, open: number, limit: number): number {
  let depth = 0;
  const end = Math.min(limit, open + 1500);
  for (let at = open; at < end; at++) {
    const word = file.word(at);
    if (word === '<') depth++;
    else if (word === '>') {
      if (--depth === 0) return at;
    } else if (word === '(' || word === '[' || word === '{') {
      const close = file.match(at);
      if (close < 0) return -1;
      at = close;
    } else if (word === ';' || word === ')' || word === '}') return -1;
  }
  return -1;
}

/** Only names and commas: the arguments of an old-style definition, or of a macro. */
export function plainParameters(file: TokenView, open: number, close: number): boolean {
  let name = true;
  for (let at = open + 1; at < close; at++) {
    if (name ? file.kind(at) !== T.name || BUILTIN.has(file.word(at)) : file.word(at) !== ',') return false;
    name = !name;
  }
  return close === open + 1 || !name;
}

const ATTRIBUTES = new Set(['__attribute__', '__attribute', '__declspec', 'alignas', '_Alignas']);
/** Qualifiers that are kept as attributes; the others say nothing about a value. */
const SAID = new Set('const constexpr static extern volatile mutable thread_local virtual inline'.split(' '));

export interface TypeWords {
  readonly type: string;
  readonly attributes: string[];
}

/** A type without its qualifiers, stars and markers; what was left out as attributes. */
export function typeWords(file: TokenView, from: number, to: number): TypeWords {
  const attributes: string[] = [];
  let type = '';
  const marks: string[] = [];
  for (let at = from; at < to; at++) {
    const word = file.word(at);
    if (word === '*') {
      attributes.push('pointer');
      continue;
    }
    if (word === '&') {
      attributes.push('reference');
      continue;
    }
    if (word === '[' || word === '(') {
      const close = file.match(at);
      if (close < 0) break;
      if (word === '(' && /^(?:decltype|typeof|__typeof__)$/.test(type)) type += file.textOf(at, close + 1);
      at = close;
      continue;
    }
    if (word === '<') {
      const close = closeAngle(file, at, to);
      if (close < 0) break;
      type += file
        .textOf(at, close + 1)
        .replace(/\s+/g, ' ')
        .replace(/ ?([<>,]) ?/g, '$1');
      at = close;
      continue;
    }
    if (word === '::') {
      type += '::';
      continue;
    }
    if (file.kind(at) !== T.name) continue;
    if (QUALIFIERS.has(word)) {
      if (SAID.has(word)) attributes.push(word);
      continue;
    }
    if (TAGS.has(word)) continue;
    if (ATTRIBUTES.has(word)) continue;
    if (isMarker(word) && !type.endsWith('::') && file.word(at + 1) !== '::' && file.word(at + 1) !== '<') {
      marks.push(word);
      continue;
    }
    type += type === '' || type.endsWith('::') ? word : ` ${word}`;
  }
  // A type in capitals alone: `FILE`, `MPI_Comm`
  if (type === '' && marks.length > 0) type = marks.at(-1)!;
  else attributes.push(...marks);
  return { type: normal(type), attributes };
}

/** Spellings of one type: `long unsigned int` is `unsigned long`. */
function normal(type: string): string {
  if (!type.includes(' ')) return type === 'unsigned' ? 'unsigned int' : type === 'signed' ? 'int' : type;
  const words = type.split(' ');
  if (!words.every((word) => BUILTIN.has(word))) return type;
  const longs = words.filter((word) => word === 'long').length;
  const unsigned = words.includes('unsigned');
  const base = words.find((word) => !/^(?:long|unsigned|signed|int|short|_Complex|__complex__)$/.test(word));
  const complex = words.includes('_Complex') || words.includes('__complex__') ? ' _Complex' : '';
  if (base === 'double' || base === 'float') return `${longs > 0 ? 'long ' : ''}${base}${complex}`;
  if (base === 'char') return unsigned ? 'unsigned char' : words.includes('signed') ? 'signed char' : 'char';
  if (base !== undefined) return type;
  const size = longs > 1 ? 'long long' : longs === 1 ? 'long' : words.includes('short') ? 'short' : 'int';
  return unsigned ? `unsigned ${size}` : size;
}

/** The type of a result. */
export function typeOf(file: TokenView, from: number, to: number, name: string, nameAt: number): Declared | null {
  const { type, attributes } = typeWords(file, from, to);
  if (type === '')
    return file.language === 'c'
      ? { name, type: 'int', bytes: 4, implicit: true, rank: 0, bounds: [], shape: [], attributes, ...file.at(nameAt) }
      : null;
  return {
    name,
    type,
    bytes: bytesOfType(type),
    rank: 0,
    bounds: [],
    shape: [],
    attributes: attributes.filter((one) => /^(?:const|pointer|reference)$/.test(one)),
    ...file.at(nameAt),
  };
}

/**
 * The parameters between two brackets.
 *
 * @param shared  tokens of a type that stands elsewhere: the second declarator of `int a, *b;`
 */
export function parameters(
  file: TokenView,
  open: number,
  close: number,
  shared?: readonly [number, number],
): Argument[] {
  const args: Argument[] = [];
  let start = open + 1;
  if (start >= close) return args;
  if (close === start + 1 && file.word(start) === 'void') return args;
  while (start < close) {
    let at = start;
    let equal = -1;
    while (at < close && file.word(at) !== ',') {
      const word = file.word(at);
      if (word === '(' || word === '[' || word === '{') at = Math.max(at, file.match(at));
      else if (word === '<' && equal < 0) {
        const angle = closeAngle(file, at, close);
        if (angle > 0) at = angle;
      } else if (word === '=' && equal < 0) equal = at;
      at++;
    }
    if (at > start)
      args.push(
        parameter(file, start, equal < 0 ? at : equal, equal < 0 ? undefined : file.textOf(equal + 1, at), shared),
      );
    start = at + 1;
  }
  return args;
}

function parameter(
  file: TokenView,
  from: number,
  to: number,
  value: string | undefined,
  shared: readonly [number, number] | undefined,
): Argument {
  const condition = file.condition(from);
  const common = {
    optional: value !== undefined,
    ...(value === undefined ? {} : { default: value.slice(0, 200) }),
    ...(condition === '' || condition === file.condition(from - 1) ? {} : { condition }),
  };
  // Variadic: `...`
  if (file.word(from) === '.' && file.word(from + 1) === '.') {
    return {
      name: '...',
      type: '...',
      bytes: null,
      rank: 0,
      bounds: [],
      shape: [],
      attributes: [],
      intent: null,
      ...common,
      passing: 'variadic',
      ...file.at(from),
    };
  }
  let name = -1;
  let typeEnd = to;
  const bounds: string[] = [];
  let pointer = false;
  let variadic = false;
  // A pointer or reference to a function or an array: `(*name)(...)`, `(&name)[3]`.
  for (let at = from; at < to; at++) {
    const word = file.word(at);
    if (word === '<') {
      const close = closeAngle(file, at, to);
      if (close > 0) at = close;
      continue;
    }
    if (word !== '(') continue;
    const close = file.match(at);
    if (close < 0 || close > to) break;
    if (
      /^(?:__attribute__|decltype|alignas|typeof|__typeof__)$/.test(file.word(at - 1)) ||
      isMarker(file.word(at - 1))
    ) {
      at = close;
      continue;
    }
    let inner = -1;
    for (let inside = at + 1; inside < close; inside++)
      if (file.kind(inside) === T.name && !QUALIFIERS.has(file.word(inside)) && file.word(inside + 1) !== '::')
        inner = inside;
    const after = file.word(close + 1);
    if (after === '[' && /^[*&]$/.test(file.word(at + 1))) {
      const { type, attributes } = typeWords(file, from, at);
      for (let bracket = close + 1; bracket < to && file.word(bracket) === '['; bracket = file.match(bracket) + 1) {
        if (file.match(bracket) < 0) break;
        bounds.push(file.textOf(bracket + 1, file.match(bracket)) || ':');
      }
      return {
        name: inner < 0 ? '' : file.word(inner),
        type,
        bytes: bytesOfType(type),
        rank: bounds.length,
        bounds,
        shape: bounds.map(extent),
        attributes: [...attributes, file.word(at + 1) === '*' ? 'pointer' : 'reference'],
        intent: attributes.includes('const') ? 'in' : null,
        ...common,
        passing: 'positional',
        ...file.at(inner < 0 ? from : inner),
      };
    }
    // `double f(double)` as a parameter is a function too.
    const direct = after !== '(';
    const before = at - 1;
    const own = direct ? (file.kind(before) === T.name && before > from ? before : -1) : inner;
    return {
      name: own < 0 ? '' : file.word(own),
      type: 'procedure',
      bytes: 8,
      rank: 0,
      bounds: [],
      shape: [],
      attributes: direct ? [] : ['pointer'],
      intent: 'in',
      ...common,
      passing: 'positional',
      ...file.at(own < 0 ? from : own),
    };
  }
  // The name is the last word that is not part of the type.
  const names: number[] = [];
  let typed = 0;
  for (let at = from; at < to; at++) {
    const word = file.word(at);
    if (word === '[') {
      const close = file.match(at);
      if (close < 0) break;
      if (file.word(at + 1) !== '[' && at > from) bounds.push(file.textOf(at + 1, close) || ':');
      if (typeEnd === to && at > from) typeEnd = at;
      at = close;
    } else if (word === '<') {
      const close = closeAngle(file, at, to);
      if (close > 0) at = close;
      typed++;
    } else if (word === '(') at = Math.max(at, file.match(at));
    else if (word === '*' || word === '&') pointer = true;
    else if (word === '.') variadic = true;
    else if (file.kind(at) === T.name) {
      if (QUALIFIERS.has(word) || TAGS.has(word) || ATTRIBUTES.has(word)) continue;
      if (BUILTIN.has(word) && file.word(at + 1) !== '::') {
        typed++;
        continue;
      }
      if (file.word(at - 1) === '::' || file.word(at + 1) === '::') {
        if (file.word(at + 1) !== '::') typed++;
        continue;
      }
      // `const pair<A, B> &`: the name of a template is that of a type.
      if (file.word(at + 1) !== '<') names.push(at);
    }
  }
  let candidates = names;
  if (shared === undefined) {
    const plain = names.filter((one) => !isMarker(file.word(one)));
    // Markers beside a type and a name: `double x UNUSED`, `double * RESTRICT x`.
    if (plain.length + Math.min(typed, 1) >= 2 || (plain.length === 1 && typed > 0)) candidates = plain;
    if (candidates.length + Math.min(typed, 1) >= 2) name = candidates.at(-1)!;
  } else name = candidates.at(-1) ?? -1;
  if (name >= 0 && name < typeEnd) typeEnd = name;
  const said = typeWords(file, shared?.[0] ?? from, shared?.[1] ?? typeEnd);
  if (shared !== undefined && pointer) said.attributes.push('pointer');
  const indirect = said.attributes.some((one) => one === 'pointer' || one === 'reference') || bounds.length > 0;
  return {
    name: name < 0 ? '' : file.word(name),
    type: said.type === '' ? 'unknown' : said.type,
    bytes: bytesOfType(said.type),
    rank: bounds.length,
    bounds,
    shape: bounds.map(extent),
    attributes: said.attributes,
    intent: !indirect || said.attributes.includes('const') ? 'in' : null,
    ...common,
    passing: variadic ? 'variadic' : 'positional',
    ...file.at(name < 0 ? from : name),
  };
}

const extent = (bound: string) => (/^\d{1,9}$/.test(bound) ? Number(bound) : null);
