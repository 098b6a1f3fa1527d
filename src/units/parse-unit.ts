/** The grammar of unit strings, one for each syntax: text in, a tree of names and exponents out, or the place where it breaks. */
import { parseRational, type Rational } from './rational.ts';
import type { UnitSyntax } from './unit-names.ts';
import { PHRASES } from './unit-table.ts';

export type UnitNode =
  | { readonly is: 'number'; readonly value: Rational; readonly text: string }
  | { readonly is: 'name'; readonly name: string; readonly column: number; readonly width: number }
  | { readonly is: 'product'; readonly parts: readonly UnitPart[] };

export interface UnitPart {
  readonly node: UnitNode;
  readonly exponent: number;
}

/** What is wrong with a unit string, and where: `column` from 1 in characters, `width` at least 1. */
export interface UnitProblem {
  readonly says: string;
  readonly column: number;
  readonly width: number;
  /** What was probably meant. */
  readonly suggestion?: string;
}

export interface ParsedUnit {
  readonly node: UnitNode;
  /** A product follows a division without brackets: `W/m2 K` is read in two ways. */
  readonly slashThenProduct: boolean;
}

class Broken extends Error {
  readonly problem: UnitProblem;
  constructor(problem: UnitProblem) {
    super(problem.says);
    this.problem = problem;
  }
}

/** Brackets deeper than this are nobody's unit, and would exhaust the stack. */
const DEEPEST = 20;

/** Powers above it are slips; powers of powers would make numbers without end. */
const HIGHEST_POWER = 60;

function highestPower(node: UnitNode): number {
  if (node.is !== 'product') return 1;
  return Math.max(1, ...node.parts.map(({ node: part, exponent }) => Math.abs(exponent) * highestPower(part)));
}

/**
 * @param below true reads `a/b c` as a/(b c), false as (a/b) c; only comments leave the choice
 * @returns the tree, or what is wrong
 */
export function parseUnit(
  text: string,
  syntax: UnitSyntax,
  below = false,
): ParsedUnit | { readonly error: UnitProblem } {
  const loose = syntax === 'freehand';
  const spaced = loose || syntax === 'udunits';
  const severalWords = loose && /[A-Za-z.][\s-]+[A-Za-z(]/.test(text);
  let at = 0;
  let slashThenProduct = false;
  let slashes = 0;

  try {
    skipSpace();
    if (at >= text.length) fail('no unit is written here', 0, 1, '1 for a number without a unit');
    const node = readProduct(0);
    if (at < text.length) fail(`"${characterAt(at)}" has no place in a unit`, at, 1, hint(at));
    return { node, slashThenProduct };
  } catch (error) {
    if (error instanceof Broken) return { error: error.problem };
    throw error;
  }

  function readProduct(depth: number): UnitNode {
    if (depth > DEEPEST) fail('the brackets are nested too deep', at, 1);
    const parts: UnitPart[] = [];
    let sign = 1;
    let divided = false;
    skipSpace();
    if ((syntax === 'ucum' || loose) && take(/\/|per(?![A-Za-z])/y) !== null) {
      sign = -1;
      divided = true;
      skipSpace();
    }
    while (true) {
      const before = at;
      const part = readFactor(depth);
      if (sign === 1 && divided && part.exponent > 0 && part.node.is !== 'number' && loose) {
        slashThenProduct = true;
        if (below) sign = -1;
      }
      parts.push({ node: part.node, exponent: part.exponent * sign });
      if (at === before) fail('a unit is missing here', at, 1);
      const operator = readOperator();
      if (operator === null) break;
      sign = operator;
      if (operator === -1) divided = true;
    }
    return parts.length === 1 && parts[0]!.exponent === 1 ? parts[0]!.node : { is: 'product', parts };
  }

  /** 1 for a product, -1 for a division, null where the product ends. */
  function readOperator(): 1 | -1 | null {
    const start = at;
    skipSpace();
    const spaceBefore = at > start;
    if (at >= text.length || text[at] === ')' || (loose && text[at] === ']')) return null;
    const division = spaced ? take(/\/|per(?![A-Za-z])/y) : take(/\//y);
    if (division !== null) {
      if (syntax === 'vounits' && ++slashes > 1)
        fail('VOUnits allows one "/"', at - 1, 1, 'brackets, or powers such as s**-1');
      skipSpace();
      if (at >= text.length) fail(`"${division}" needs a unit behind it`, at - division.length, division.length);
      return -1;
    }
    if (syntax === 'vounits' && slashes > 0 && text[at] === '.')
      fail('VOUnits allows one unit behind "/"', at, 1, 'brackets around the units below the line');
    const sign = take(loose ? /[*.·⋅×∙]|-(?=[A-Za-z(])/y : syntax === 'udunits' ? /[*.·]|-(?=[A-Za-z])/y : /\./y);
    if (sign !== null) {
      skipSpace();
      if (at >= text.length) fail(`"${sign}" needs a unit behind it`, at - 1, 1);
      return 1;
    }
    if (spaceBefore && spaced) return 1;
    // `3 (m/s)` and `(m)(s)` need no sign between them.
    if (spaced && (text[at] === '(' || text[at - 1] === ')')) return 1;
    if (/[A-Za-z]/.test(text[at]!) && /[0-9]/.test(text[at - 1]!))
      fail('a number and a unit need a product sign between them', at, 1, 'a "." or a space');
    return null;
  }

  function readFactor(depth: number): UnitPart {
    const start = at;
    if (text[at] === '(') {
      at++;
      const node = readProduct(depth + 1);
      skipSpace();
      if (text[at] !== ')') fail('")" is missing', start, 1);
      at++;
      annotation();
      const exponent = readExponent();
      if (Math.abs(exponent) * highestPower(node) > HIGHEST_POWER)
        fail('no unit has so high a power', start, at - start);
      return { node, exponent };
    }
    if (syntax === 'ucum' && annotation()) return { node: { is: 'product', parts: [] }, exponent: 1 };
    if (syntax === 'ucum') {
      const star = take(/10[*^]/y);
      if (star !== null)
        return { node: { is: 'name', name: star, column: start + 1, width: 3 }, exponent: readExponent() };
    }
    const digits = take(
      spaced
        ? /\d+\.\d+(?:[eE][+-]?\d+)?|\d+(?:\.?[eE][+-]?\d+)?|\.\d+(?:[eE][+-]?\d+)?/y
        : syntax === 'vounits'
          ? /\d+(?:\.\d+)?(?:[eE][+-]?\d+)?/y
          : /\d+/y,
    );
    if (digits !== null) {
      const value = number(digits, start);
      annotation();
      const exponent =
        syntax === 'ucum' ? 1 : text[at] === '^' || text.startsWith('**', at) || superscript() ? readExponent() : 1;
      return { node: { is: 'number', value, text: digits }, exponent };
    }
    if (loose) {
      const word = take(/(?:square|sq|cubic)\.?\s+(?=[A-Za-z])/iy);
      if (word !== null) {
        const part = readFactor(depth);
        return { node: part.node, exponent: part.exponent * (/^cub/i.test(word) ? 3 : 2) };
      }
    }
    const phrase = severalWords ? take(phrases()) : null;
    const name =
      phrase !== null
        ? PHRASES[phrase.toLowerCase().replace(/\s+/g, ' ')]!
        : take(
            syntax === 'ucum'
              ? /(?:[A-Za-z%'"_]|\[[^\]]*\])+/y
              : syntax === 'vounits'
                ? /[A-Za-z_]+|%/y
                : loose
                  ? /[%#]|a\.u\.|[A-Za-z_µμΩÅ°ö]+/y
                  : /[A-Za-z_%°µμΩÅ]+|['"]/y,
          );
    if (name === null) {
      if (at >= text.length) fail('a unit is missing at the end', Math.max(0, at - 1), 1);
      fail(`a unit is missing before "${characterAt(at)}"`, at, 1, hint(at));
    }
    const node: UnitNode = { is: 'name', name: name!, column: start + 1, width: at - start };
    annotation();
    let exponent = readExponent();
    if (loose && exponent === 1) {
      const power = take(/\s+(?:squared|cubed)(?![A-Za-z])/iy);
      if (power !== null) exponent = /cubed/i.test(power) ? 3 : 2;
    }
    annotation();
    return { node, exponent };
  }

  function readExponent(): number {
    const start = at;
    if (syntax === 'ucum') return whole(take(/[+-]?\d+/y), start);
    const raised = superscript();
    if (raised !== null && spaced) {
      at += raised.length;
      return whole([...raised].map((digit) => SUPERSCRIPTS[digit]!).join(''), start);
    }
    const sign = take(syntax === 'vounits' ? /\*\*/y : loose ? /\s*(?:\*\*|\^)\s*/y : /\*\*|\^/y);
    if (sign === null) {
      if (syntax === 'vounits') return 1;
      const direct = take(/[+-]?\d+(?!\d)/y);
      if (direct !== null && text[at] === '.' && /\d/.test(text[at + 1] ?? ''))
        fail('a fraction as a power needs brackets', start, 1, '^(1/2)');
      return whole(direct, start);
    }
    const bracket = take(/\(\s*/y);
    const raw = take(
      bracket !== null ? /[+-]?\d+(?:\s*\/\s*\d+|\.\d+)?/y : syntax === 'udunits' ? /[+-]?\d+/y : /[+-]?\d+(?:\.\d+)?/y,
    );
    if (raw === null) fail('a power needs a number behind it', start, at - start || 1);
    const value = raw!;
    if (bracket !== null && take(/\s*\)/y) === null) fail('")" is missing behind the power', at - 1, 1);
    // Some readers take m^0.5 for m^0 times .5: only brackets, or ** as in Fortran, say that a fraction is meant.
    if (bracket === null && sign.trim() === '^' && /\./.test(value))
      fail(
        'a fraction as a power needs brackets: some readers take this for m^0 times a number',
        start,
        at - start,
        '^(1/2)',
      );
    if (syntax === 'udunits' && text[at] === '.' && /\d/.test(text[at + 1] ?? ''))
      fail('a fraction as a power needs brackets', start, at - start, '^(1/2)');
    if (/[/.]/.test(value)) {
      const [above, below] = value.split('/').map(Number);
      if (below === 0) fail('a power cannot be divided by zero', start, at - start);
      return inRange(above! / (below ?? 1), start);
    }
    return whole(value, start);
  }

  function whole(digits: string | null, start: number): number {
    return digits === null ? 1 : inRange(Number(digits), start);
  }

  function inRange(exponent: number, start: number): number {
    if (Math.abs(exponent) > HIGHEST_POWER) fail('no unit has so high a power', start, Math.max(1, at - start));
    return exponent;
  }

  function number(digits: string, start: number): Rational {
    try {
      const value = parseRational(digits.replace(/\.(?=[eE])/, ''));
      if (value.numerator !== 0n) return value;
    } catch {
      return fail('the number is out of range', start, digits.length);
    }
    return fail('a unit cannot be zero', start, digits.length);
  }

  /** UCUM's `{words}`: says something about the unit and does not change it. */
  function annotation(): boolean {
    return syntax === 'ucum' && take(/\{[^{}]*\}/y) !== null;
  }

  function superscript(): string | null {
    SUPERSCRIPT.lastIndex = at;
    return SUPERSCRIPT.exec(text)?.[0] ?? null;
  }

  function take(pattern: RegExp): string | null {
    pattern.lastIndex = at;
    const match = pattern.exec(text);
    if (match === null) return null;
    at += match[0].length;
    return match[0];
  }

  function skipSpace(): void {
    if (spaced) while (text[at] === ' ' || text[at] === '\t' || text[at] === '\u00a0') at++;
  }

  function characterAt(index: number): string {
    return String.fromCodePoint(text.codePointAt(index) ?? 63);
  }

  function hint(index: number): string | undefined {
    if (syntax !== 'ucum' || (text[index] !== '^' && text[index] !== '*')) return undefined;
    return 'UCUM writes powers without a sign: cm3';
  }

  function fail(says: string, index: number, width: number, suggestion?: string): never {
    throw new Broken({
      says,
      column: [...text.slice(0, index)].length + 1,
      width: Math.max(1, width),
      ...(suggestion === undefined ? {} : { suggestion }),
    });
  }
}

const SUPERSCRIPT = /[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+/y;
const SUPERSCRIPTS: Readonly<Record<string, string>> = {
  '⁺': '+',
  '⁻': '-',
  '⁰': '0',
  '¹': '1',
  '²': '2',
  '³': '3',
  '⁴': '4',
  '⁵': '5',
  '⁶': '6',
  '⁷': '7',
  '⁸': '8',
  '⁹': '9',
};

let phrasePattern: RegExp | undefined;
function phrases(): RegExp {
  if (phrasePattern === undefined) {
    const alternatives = Object.keys(PHRASES)
      .sort((a, b) => b.length - a.length)
      .map((phrase) => phrase.replace(/[.()]/g, '\\$&').replace(/ /g, '\\s+'));
    phrasePattern = new RegExp(`(?:${alternatives.join('|')})(?![A-Za-z0-9_])`, 'iy');
  }
  return phrasePattern;
}
