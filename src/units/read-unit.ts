/** A unit string in, the unit and how it was read out: UCUM, VOUnits, UDUNITS or as people write in comments, told apart by what the text holds. */
import type { Edition } from './constant-values.ts';
import { parseUnit, type UnitNode, type UnitProblem } from './parse-unit.ts';
import { isOne, multiply, parseRational, power, type Rational } from './rational.ts';
import { DIMENSIONLESS, dimensionText, factorText, factorValue, product, sameExponents, type Unit } from './unit.ts';
import { type Meaning, meanings, suggestName, type UnitSyntax } from './unit-names.ts';

export type { UnitProblem } from './parse-unit.ts';
export type { UnitSyntax } from './unit-names.ts';

export interface ReadOptions {
  /** Hold the text to one syntax; absent, the syntax is told from the text. */
  readonly syntax?: UnitSyntax;
  /** CODATA edition of the constants that units such as u and the solar mass rest on; 2022 when absent. */
  readonly edition?: Edition;
}

/** One way of reading an ambiguous string. `unit` is null when the reading is no unit, as "the prefix kilo". */
export interface Reading {
  readonly unit: Unit | null;
  readonly says: string;
}

export type UnitReading =
  | {
      readonly unit: Unit;
      /** The strictest syntax in which the text means this. */
      readonly syntax: UnitSyntax;
      /** All readings, likeliest first and equal to `unit`; absent when there is only one. */
      readonly readings?: readonly Reading[];
    }
  | { readonly error: UnitProblem };

/** No unit is longer; what is, is refused before anything is parsed. */
const LONGEST = 200;

const cache = new Map<string, UnitReading>();

/**
 * Reads a unit string. Never throws: what is no unit comes back as an error with the column and, where one is near, a suggestion.
 *
 * @param text  e.g. `g/cm^3`, `erg g**-1 K**-1`, `MeV/baryon`, `[dyne cm-2]`, `log10(g/cm3)`
 * @source The Unified Code for Units of Measure 2.2; IVOA VOUnits 1.1; UDUNITS-2 grammar; comments: common practice
 */
export function readUnit(text: string, options: ReadOptions = {}): UnitReading {
  const edition = options.edition ?? '2022';
  const key =
    options.syntax === undefined && edition === '2022' ? text : `${options.syntax ?? ''}\0${edition}\0${text}`;
  const known = cache.get(key);
  if (known !== undefined) return known;
  const reading = read(text, options.syntax, edition);
  if (cache.size > 20_000) cache.clear();
  cache.set(key, reading);
  return reading;
}

function read(text: string, syntax: UnitSyntax | undefined, edition: Edition): UnitReading {
  if (text.length > LONGEST)
    return { error: { says: `no unit is longer than ${LONGEST} characters`, column: LONGEST + 1, width: 1 } };
  if (syntax !== undefined && syntax !== 'freehand') return outcome(readIn(text, syntax, edition), syntax);
  const comment = readComment(text, edition);
  if (syntax === 'freehand') return outcome(comment, 'freehand');
  if ('error' in comment) {
    for (const strict of STRICT) {
      const other = readIn(text, strict, edition);
      if (!('error' in other)) return outcome(other, strict);
    }
    return comment;
  }
  // `10*3` is a thousand in UCUM and thirty anywhere else.
  if (/10\*[+-]?\d/.test(text) && !/10\*\*/.test(text)) {
    const ucum = readIn(text, 'ucum', edition);
    if (!('error' in ucum)) return outcome([...ucum, ...comment], 'ucum');
  }
  const first = comment[0]!.unit!;
  // Neither UCUM nor VOUnits has spaces or "^": most comments need one more reading and not three.
  for (const strict of /[\s^]/.test(text) ? (['udunits'] as const) : STRICT) {
    const other = readIn(text, strict, edition);
    if (!('error' in other) && other.some(({ unit }) => unit !== null && sameUnits(unit, first)))
      return outcome(comment, strict);
  }
  return outcome(comment, 'freehand');
}

const STRICT = ['ucum', 'vounits', 'udunits'] as const;

type Readings = readonly Meaning[] | { readonly error: UnitProblem };

function outcome(readings: Readings, syntax: UnitSyntax): UnitReading {
  if ('error' in readings) return readings;
  const found = readings as readonly Meaning[];
  const unit = found.find((reading) => reading.unit !== null)?.unit;
  if (unit === undefined || unit === null) return { error: { says: 'this is no unit', column: 1, width: 1 } };
  return found.length === 1
    ? { unit, syntax }
    : { unit, syntax, readings: found.map(({ unit, says }) => ({ unit, says })) };
}

/** A comment's spelling: what delimits it is taken off, then logarithms, arrows and alternatives are told apart. */
function readComment(text: string, edition: Edition): Readings {
  if (/^\s*[[({]?\s*-?\s*[\])}]?\s*$/.test(text) && /[-[(]/.test(text)) return [{ unit: DIMENSIONLESS, says: '1' }];
  if (/^\s*n\/a\.?\s*$/.test(text))
    return {
      error: { says: '"n/a" says that there is no unit', column: text.indexOf('n') + 1, width: 3, suggestion: '1' },
    };
  const clean = plain(text);
  const log = /^(\s*)(log_?10|log|lg|ln)\s*(?:\((.*)\)|\[(.*)\]|\s(.+))\s*$/i.exec(clean);
  if (log !== null) {
    const inner = (log[3] ?? log[4] ?? log[5])!;
    const content = readIn(
      inner.replace(/^\s*re\s+/, (re) => ' '.repeat(re.length)),
      'freehand',
      edition,
    );
    if ('error' in content)
      return { error: { ...content.error, column: content.error.column + clean.lastIndexOf(inner) } };
    const bases = /^ln$/i.test(log[2]!)
      ? (['e'] as const)
      : /^log$/i.test(log[2]!)
        ? ([10, 'e'] as const)
        : ([10] as const);
    return bases.flatMap((base) =>
      (content as readonly Meaning[]).map(({ unit, says }) =>
        unit === null
          ? { unit, says }
          : {
              unit: { ...unit, logarithm: { base, steps: ONE_STEP } },
              says: `${base === 10 ? 'log10' : 'ln'} of ${says}`,
            },
      ),
    );
  }
  const arrow = clean.lastIndexOf('~>');
  const start = arrow < 0 ? 0 : arrow + 2;
  const alternatives = splitAlternatives(clean, start);
  const found: Meaning[] = [];
  for (const [from, to] of alternatives) {
    const readings = readIn(' '.repeat(from) + clean.slice(from, to), 'freehand', edition);
    if ('error' in readings) return readings;
    for (const reading of readings as readonly Meaning[])
      if (!found.some((other) => other.unit !== null && reading.unit !== null && sameUnits(other.unit, reading.unit)))
        found.push(reading);
  }
  if (/^\s*N\/A\s*$/.test(text)) found.push({ unit: null, says: 'not applicable: there is no unit' });
  return found;
}

const ONE_STEP: Rational = parseRational('1');

function splitAlternatives(text: string, start: number): [number, number][] {
  const found: [number, number][] = [];
  let from = start;
  for (const match of text.slice(start).matchAll(/\sor\s/g)) {
    found.push([from, start + match.index]);
    from = start + match.index + match[0].length;
  }
  found.push([from, text.length]);
  return found;
}

/** TeX, typographic signs and outer brackets out, every character that stays at its column. */
function plain(text: string): string {
  let clean = text;
  if (/[\\${}~−–]/.test(clean) && !clean.includes('~>')) {
    clean = clean
      .replace(/\\(?:mathrm|rm|text|textrm|mathit|unit|left|right|f\$)/g, blank)
      .replace(/\\(?:cdot|times)/g, (sign) => '*'.padEnd(sign.length))
      .replace(/_\{?\\(?:odot|sun)\}?/g, (sign) => '_odot'.padEnd(sign.length))
      .replace(/\\mu(?![A-Za-z])/g, (sign) => 'u'.padStart(sign.length))
      .replace(/\\AA(?![A-Za-z])/g, (sign) => 'Å'.padEnd(sign.length))
      .replace(/\\[,;:! ]|[~$]/g, blank)
      .replace(/\{/g, '(')
      .replace(/\}/g, ')')
      .replace(/[−–]/g, '-');
  }
  // Brackets around the whole are the comment's.
  for (let round = 0; round < 2; round++) {
    const outer = /^(\s*)([[(])(.*)([\])])(\s*[.,;]?\s*)$/.exec(clean);
    if (outer === null || (outer[2] === '[') !== (outer[4] === ']') || /[[\]]/.test(outer[3]!) || !balanced(outer[3]!))
      break;
    clean = `${outer[1]} ${outer[3]}`;
  }
  return clean.trimEnd();
}

function blank(text: string): string {
  return ' '.repeat(text.length);
}

function balanced(text: string): boolean {
  let depth = 0;
  for (const character of text) {
    if (character === '(') depth++;
    if (character === ')' && --depth < 0) return false;
  }
  return depth === 0;
}

function readIn(text: string, syntax: UnitSyntax, edition: Edition): Readings {
  const log = syntax === 'vounits' || syntax === 'udunits' ? /^(log|ln|lg)\((?:re )?(.*)\)$/.exec(text) : null;
  if (log !== null) {
    const inner = readIn(log[2]!, syntax, edition);
    if ('error' in inner) return { error: { ...inner.error, column: inner.error.column + text.indexOf(log[2]!) } };
    return (inner as readonly Meaning[]).map(({ unit, says }) => ({
      unit: unit && { ...unit, logarithm: { base: log[1] === 'ln' ? ('e' as const) : (10 as const), steps: ONE_STEP } },
      says: `${log[1]} of ${says}`,
    }));
  }
  const parsed = parseUnit(text, syntax);
  if ('error' in parsed) return parsed;
  const readings = evaluate(parsed.node, syntax, edition);
  if ('error' in readings || !parsed.slashThenProduct) return readings;
  const other = parseUnit(text, syntax, true);
  if ('error' in other) return readings;
  const below = evaluate(other.node, syntax, edition);
  if ('error' in below) return readings;
  const all = [...(readings as readonly Meaning[])];
  for (const reading of below as readonly Meaning[])
    if (!all.some(({ unit }) => unit !== null && reading.unit !== null && sameUnits(unit, reading.unit)))
      all.push(reading);
  return all;
}

/** No string has more readings than this; beyond it the likeliest are kept. */
const MOST_READINGS = 16;

function evaluate(node: UnitNode, syntax: UnitSyntax, edition: Edition): Readings {
  const problem: { error?: UnitProblem } = {};
  const choices = new Map<UnitNode, readonly Meaning[]>();
  let several = false;
  collect(node);
  if (problem.error !== undefined) return { error: problem.error };
  if (node.is === 'name') {
    const found = choices.get(node)!;
    return found.length === 1
      ? found
      : found.map(({ unit, says }) => ({ unit, says: unit === null ? says : describe(says, unit) }));
  }
  if (!several) {
    const unit = build(node, (name) => choices.get(name)![0]!.unit!);
    return [{ unit, says: describe('', unit) }];
  }
  // One choice a name, wherever it stands: `A/A` is never an ampere per angstrom.
  const names = [...new Set([...choices.keys()].map((key) => (key as { name: string }).name))];
  const options = names.map((name) =>
    [...choices].find(([key]) => (key as { name: string }).name === name)![1].filter(({ unit }) => unit !== null),
  );
  const found: Meaning[] = [];
  const picked = names.map(() => 0);
  for (let count = 0; count < MOST_READINGS; count++) {
    const unit = build(node, (key) => {
      const index = names.indexOf((key as { name: string }).name);
      return options[index]![picked[index]!]!.unit!;
    });
    const words = names
      .map((_, index) => options[index]![picked[index]!]!.says)
      .filter((_, index) => options[index]!.length > 1);
    if (!found.some((other) => sameUnits(other.unit!, unit)))
      found.push({ unit, says: describe(words.join(', '), unit) });
    let place = 0;
    while (place < picked.length && ++picked[place]! >= options[place]!.length) picked[place++] = 0;
    if (place === picked.length) break;
  }
  return found;

  function collect(part: UnitNode): void {
    if (part.is === 'product') for (const { node: inner } of part.parts) collect(inner);
    if (part.is !== 'name' || problem.error !== undefined) return;
    const found = meanings(part.name, syntax, edition);
    if (found.every(({ unit }) => unit === null)) {
      const near = suggestName(part.name);
      problem.error = {
        says: `"${part.name}" is not a unit${syntax === 'freehand' ? '' : ` in ${SYNTAX_NAMES[syntax]}`}`,
        column: part.column,
        width: part.width,
        ...(near === null || near === part.name ? {} : { suggestion: near }),
      };
      return;
    }
    choices.set(part, found);
    if (found.filter(({ unit }) => unit !== null).length > 1) several = true;
  }
}

const SYNTAX_NAMES: Readonly<Record<UnitSyntax, string>> = {
  ucum: 'UCUM',
  vounits: 'VOUnits',
  udunits: 'UDUNITS',
  freehand: 'comments',
};

function build(node: UnitNode, unitOf: (name: UnitNode) => Unit): Unit {
  if (node.is === 'name') return unitOf(node);
  if (node.is === 'number')
    return isOne(node.value)
      ? DIMENSIONLESS
      : {
          factor: { ratio: node.value, pi: 0, approximate: 1, uses: [] },
          dimension: DIMENSIONLESS.dimension,
          counted: {},
        };
  return product(node.parts.map(({ node: part, exponent }) => ({ unit: build(part, unitOf), exponent })));
}

function describe(name: string, unit: Unit): string {
  const value = `${factorText(unit.factor)} ${dimensionText(unit)}`;
  return name === '' ? value : `${name} = ${value}`;
}

/** Equal in factor (to 1e-12), dimension, what they count, zero and logarithm. */
export function sameUnits(a: Unit, b: Unit): boolean {
  if (a === b) return true;
  if (!sameExponents(a.dimension, b.dimension) || !sameExponents(a.counted, b.counted)) return false;
  if ((a.zero === undefined) !== (b.zero === undefined)) return false;
  if (a.zero !== undefined && (a.zero.numerator !== b.zero!.numerator || a.zero.denominator !== b.zero!.denominator))
    return false;
  if ((a.logarithm === undefined) !== (b.logarithm === undefined)) return false;
  if (a.logarithm !== undefined) {
    if (a.logarithm.base !== b.logarithm!.base) return false;
    if (!isOne(multiply(a.logarithm.steps, power(b.logarithm!.steps, -1)))) return false;
  }
  const ratio = factorValue(a.factor) / factorValue(b.factor);
  return Math.abs(ratio - 1) < 1e-12;
}
