/** Finds the units that one line of a comment states, with their places: text comes in, spans and grades go out. */
import { dimensionlessSpelling, plainFromLatex, standsInSquareBrackets, unitGrade } from './unit-words.ts';

export type UnitPlace = 'arrow' | 'square' | 'units' | 'round' | 'latex' | 'in' | 'alone';

export interface SaidUnit {
  /** As written, without the brackets; LaTeX in plain spelling; `1` for what has no dimension. */
  readonly unit: string;
  readonly place: UnitPlace;
  /** Offsets in the text of everything that says it, brackets included. */
  readonly start: number;
  readonly end: number;
  /** One of several in one bracket, `[Pa, K]`: it belongs to the name at its place in the list, or to none. */
  readonly listed?: boolean;
}

/** One look that decides whether a line can hold a unit at all. */
const GATE = /[[($\\°]|\b(?:in|units?|nondim|nondimensional|unitless|dimensionless)\b|[A-Za-z][/^*-]|\b[A-Za-z]+\d/i;

/** Words of physics beside which `(m)` or `(K)` is a unit. */
const PHYSICS =
  /\b(?:temp(?:erature)?s?|pressures?|densit(?:y|ies)|heights?|depths?|thickness(?:es)?|lengths?|widths?|radius|radii|distances?|altitudes?|elevations?|time ?(?:step)?s?|durations?|speeds?|velocit(?:y|ies)|accelerations?|energ(?:y|ies)|mass(?:es)?|volumes?|areas?|flux(?:es)?|heat|enthalpy|entropy|viscosity|conductivity|diffusivity|concentrations?|humidity|salinity|albedo|wavelengths?|frequenc(?:y|ies)|luminosit(?:y|ies)|opacit(?:y|ies)|coefficients?|gravity|stress|strain|force|torque|power|work|charge|current|voltage|field|potential|angles?|latitudes?|longitudes?|rates?|precipitation|rain(?:fall)?|snow(?:fall)?|evaporation|wind|levels?|roughness|layer|scale|amplitude|period|emissivity|constant|ratio|fraction|weight|size|diameter|coordinates?|position|displacement|cross[- ]section|half-?life|age|resolution|spacing|step|soil|water|ice|air|surface|melting|freezing|boiling)\b/i;

/** Longest line looked at. */
const LONGEST = 600;

/**
 * Units stated by one line, in their order. Linear in its length.
 *
 * @param subjects  names the line may be about: a weak unit directly behind one of them counts (`T [K]`, `z (m)`)
 */
export function unitsInComment(text: string, subjects: readonly string[] = []): SaidUnit[] {
  const line = text.length > LONGEST ? text.slice(0, LONGEST) : text;
  if (!GATE.test(line)) return unitAlone(line);
  const found: SaidUnit[] = [];
  const overlaps = (start: number, end: number) => found.some((one) => start < one.end && end > one.start);
  const add = (unit: string, place: UnitPlace, start: number, end: number) => {
    if (!overlaps(start, end)) found.push({ unit, place, start, end });
  };
  explicit(line, add);
  brackets(line, subjects, add, (unit, place, start, end) => {
    if (!overlaps(start, end)) found.push({ unit, place, start, end, listed: true });
  });
  if (line.includes('\\') || line.includes('$')) latex(line, add);
  if (found.length === 0) {
    inUnits(line, add);
    if (found.length === 0) found.push(...unitAlone(line));
    if (found.length === 0) bareWord(line, add);
  }
  return found.sort((a, b) => a.start - b.start);
}

type Add = (unit: string, place: UnitPlace, start: number, end: number) => void;

const EXPLICIT = /\b(?:units?|dimensions?)\s*(?:[:=]|are\b|is\b|of\b(?=\s*[[(A-Za-z0-9$\\]))\s*(?:in\s+)?/gi;

/** `Units: erg/g`, `unit = K`, `units of g/cm3`. What follows a colon counts when it reads as a unit at all. */
function explicit(line: string, add: Add): void {
  EXPLICIT.lastIndex = 0;
  for (let match = EXPLICIT.exec(line); match !== null; match = EXPLICIT.exec(line)) {
    const start = EXPLICIT.lastIndex;
    const rest = line.slice(start, start + 80);
    const open = rest[0];
    const colon = /[:=]\s*$/.test(match[0]!);
    if (/^dim/i.test(match[0]!) && !colon) continue;
    const inner =
      open === '[' || open === '('
        ? rest.slice(1, Math.max(1, closing(rest, 0)))
        : open === "'" || open === '"' || open === '`'
          ? rest.slice(1, rest.indexOf(open, 1) < 0 ? rest.length : rest.indexOf(open, 1))
          : longestUnit(rest, colon);
    if (inner === null || inner.trim() === '') continue;
    const plain = /[\\$]/.test(inner) ? plainFromLatex(inner) : inner.trim();
    const none = dimensionlessSpelling(plain);
    if (none === 'not-a-quantity') continue;
    if (none === '1' || (colon && plain === '1')) add('1', 'units', match.index, start + inner.length);
    else if (unitGrade(plain) !== 'none' && (colon || unitGrade(plain) !== 'weak'))
      add(plain, 'units', match.index, start + inner.length);
  }
}

/** The longest beginning of a text, cut at words, that is a unit; null when there is none. */
function longestUnit(text: string, keen: boolean): string | null {
  const stop = /[,;!"'`]|\.(?=\s|$)|\s[-–—=]\s|\s{3,}|\s\(/.exec(text)?.index ?? text.length;
  let cut = Math.min(stop, 50);
  while (cut > 0) {
    const candidate = text
      .slice(0, cut)
      .replace(/[.)\]\s]+$/, (end) => (/[)\]]/.test(end) && /[([]/.test(text.slice(0, cut)) ? end.trim() : ''));
    if (dimensionlessSpelling(candidate) === '1' || (keen && candidate === '1')) return candidate;
    if (
      candidate !== '' &&
      (unitGrade(candidate) === 'sure' ||
        unitGrade(candidate) === 'likely' ||
        (keen && unitGrade(candidate) !== 'none' && !/\s/.test(candidate)))
    )
      return candidate;
    const space = text.lastIndexOf(' ', cut - 1);
    if (space <= 0) return null;
    cut = space;
  }
  return null;
}

function closing(text: string, open: number): number {
  const [a, b] = text[open] === '[' ? ['[', ']'] : ['(', ')'];
  let depth = 0;
  for (let at = open; at < text.length && at < open + 90; at++) {
    if (text[at] === a) depth++;
    else if (text[at] === b && --depth === 0) return at;
  }
  return -1;
}

function brackets(line: string, subjects: readonly string[], add: Add, list: Add): void {
  for (let at = 0; at < line.length; at++) {
    const open = line[at];
    if (open !== '[' && open !== '(') continue;
    const end = closing(line, at);
    if (end < 0) continue;
    const inner = line.slice(at + 1, end);
    if (inner.length > 70) continue;
    const square = open === '[';
    const arrow = inner.indexOf('~>');
    if (square && arrow >= 0) {
      const unit = inner.slice(arrow + 2).trim();
      const none = dimensionlessSpelling(unit);
      if (unit !== '' && none !== 'not-a-quantity') add(none === '1' ? '1' : unit, 'arrow', at, end + 1);
      at = end;
      continue;
    }
    const parts = inner.split(',');
    if (parts.length > 1 && parts.length < 9) {
      const grades = parts.map((part) => unitGrade(part));
      if (grades.every((one) => one !== 'none') && grades.some((one) => one === 'sure')) {
        let from = at + 1;
        for (const part of parts) {
          list(part.trim(), square ? 'square' : 'round', from, from + part.length);
          from += part.length + 1;
        }
      }
      at = end;
      continue;
    }
    const said = bracketUnit(line, at, end, inner, square, subjects);
    if (said !== null) {
      add(said, square ? 'square' : 'round', at, end + 1);
      at = end;
    }
  }
}

function bracketUnit(
  line: string,
  at: number,
  end: number,
  inner: string,
  square: boolean,
  subjects: readonly string[],
): string | null {
  let plain = inner.trim();
  if (/[\\$]/.test(plain)) plain = plainFromLatex(plain);
  plain = plain.replace(/^(?:in|units?\s*[:=]?|given in|in units of)\s+/i, '');
  const word = wordBefore(line, at);
  const touching = at > 0 && /[\w\])%]/.test(line[at - 1]!);
  const behindSubject =
    word !== '' &&
    subjects.some((name) => name === word || (name.length > 1 && name.toLowerCase() === word.toLowerCase()));
  const none = dimensionlessSpelling(plain);
  if (none === 'not-a-quantity') return null;
  if (none === '1') return square || plain.length > 4 || (plain === '-' && !touching) ? '1' : null;
  if (/^1\.?0?$/.test(plain))
    return square && !touching && /^\s*$/.test(line.slice(end + 1)) && PHYSICS.test(line) ? '1' : null;
  const alternatives = plain.split(/,?\s+or\s+|\s*;\s*|,\s+/);
  const grades = alternatives.map((one) => unitGrade(one));
  if (grades.length > 1) {
    // `[H or m]`, `(kg m-3, degC)`: as written, when all are units.
    return grades.every((grade) => grade !== 'none') &&
      grades.some((grade) => grade === 'sure') &&
      square &&
      /\sor\s/.test(plain)
      ? plain
      : null;
  }
  const [grade] = grades;
  if (grade === 'none' || grade === undefined) return null;
  // A call or an index: `f(m)`, `x[s]`; with a sure unit behind a name it is a unit all the same: `T[erg/g]`.
  if (touching && !behindSubject && (grade !== 'sure' || (!square && /^[\w*]+$/.test(plain)))) return null;
  if (grade === 'sure') {
    if (!square && /^[a-z]+$/.test(plain) && touching) return null;
    return plain;
  }
  const before = line.slice(Math.max(0, at - 80), at);
  if (square) {
    if (grade === 'likely') return plain;
    if (/^[A-Za-z°%]{1,2}$/.test(plain) && touching && !behindSubject) return null;
    return standsInSquareBrackets(plain) || PHYSICS.test(line) || behindSubject ? plain : null;
  }
  if (inner !== inner.trim()) return null;
  if (grade === 'likely') return PHYSICS.test(line) || behindSubject ? plain : null;
  // `(m)`: the physics word must stand close before it.
  if (
    plain.length > 1 &&
    !/^(?:mm|mb|days?|years?|hours?|hrs?|fm|%|percent|min|yr|ms|mole?s?|kB|cd|particles?|Mg|GK|MK|ns|ps|fs)$/.test(
      plain,
    )
  )
    return null;
  if (/^[a-z]$/.test(plain) && !/^[msghdk]$/.test(plain)) return null;
  if (/^[A-Z]$/.test(plain) && !/^[KJWNCVATGMF]$/.test(plain)) return null;
  return PHYSICS.test(before) &&
    !/\b(?:order|number|index|matrix|vector|array|dimension|of (?:the )?(?:rows|columns))\b/i.test(before)
    ? plain
    : null;
}

function wordBefore(line: string, at: number): string {
  let end = at;
  while (end > 0 && line[end - 1] === ' ') end--;
  // Past an index: `x(i) [K]`
  if (line[end - 1] === ')') {
    const open = line.lastIndexOf('(', end);
    if (open > 0 && end - open < 40) end = open;
  }
  let start = end;
  while (start > 0 && /[\w%]/.test(line[start - 1]!)) start--;
  return line.slice(start, end);
}

const LATEX =
  /\\f\$(.{1,120}?)\\f\$|\$([^$]{1,120})\$|\\(?:mathrm|rm|text)\s*\{([^{}]{1,60}(?:\{[^{}]{0,20}\}[^{}]{0,40}){0,4})\}/g;

function latex(line: string, add: Add): void {
  LATEX.lastIndex = 0;
  for (let match = LATEX.exec(line); match !== null; match = LATEX.exec(line)) {
    const inner = match[1] ?? match[2] ?? match[3] ?? '';
    const roman = match[3] !== undefined || /\\(?:mathrm|rm|text)\b/.test(inner);
    const plain = plainFromLatex(inner).replace(/^[[(]\s*(.*?)\s*[\])]$/, '$1');
    const grade = unitGrade(plain);
    // In mathematics `m` is a symbol, `\rm m` a unit.
    if (
      grade === 'sure'
        ? roman || /[\^/]/.test(plain)
        : (grade === 'likely' ||
            (grade === 'weak' && /(?:\b(?:in|units?)\s*|[[(])$/i.test(line.slice(0, match.index)))) &&
          roman
    )
      add(plain, 'latex', match.index, match.index + match[0]!.length);
  }
}

const IN = /\b(?:in|as)\s+(?:units of\s+)?(?=[A-Za-z0-9(\\$%°µÅ])/gi;

/** `temperature in K`, `in (g/cm3)`, `in degrees`. */
function inUnits(line: string, add: Add): void {
  if (/\bconver(?:t|sion)|\bfrom\b.*\bto\b/i.test(line)) return;
  IN.lastIndex = 0;
  for (let match = IN.exec(line); match !== null; match = IN.exec(line)) {
    const start = IN.lastIndex;
    const as = /^as/i.test(match[0]!);
    const rest = line.slice(start, start + 60);
    const inner = rest[0] === '(' ? rest.slice(1, Math.max(1, closing(rest, 0))) : longestUnit(rest, false);
    if (
      inner !== null &&
      inner !== '' &&
      !as &&
      (unitGrade(inner) === 'sure' || (unitGrade(inner) === 'likely' && PHYSICS.test(line)))
    ) {
      add(inner.trim(), 'in', match.index, start + inner.length);
      continue;
    }
    if (as) continue;
    // `temperature in K`, `time in seconds`, `in degrees`
    const word = /^([A-Za-z%]+)\b(?![-/^*(_=]|\s*[=(])/.exec(rest)?.[1];
    if (word === undefined) continue;
    const before = line.slice(Math.max(0, match.index - 60), match.index);
    const after = rest.slice(word.length);
    const common =
      /^(?:days?|years?|hours?|hrs?|min|minutes?|seconds?|degrees?|radians?|percent|months?|particles?|mm|mb|K|m|s|g|J|W|N|C|V|T|Mg|GK|MK|fm|%|Kelvin)$/.test(
        word,
      );
    if (!common || unitGrade(word) === 'none') continue;
    if (/^\s+(?:of|the|a|this|which|that|each|all)\b/i.test(after) && word !== 'degrees') continue;
    const single = word.length === 1;
    if (single && !/^\s*(?:[.,;)\]!*]|$|\bfor\b|\band\b|\bat\b|\bor\b)/.test(after)) continue;
    if (PHYSICS.test(before) && !/\b(?:change|number|index|order)\w*\s*$/i.test(before))
      add(word, 'in', match.index, start + word.length);
  }
}

/** A comment that is a unit and nothing else: `! erg/K`. */
function unitAlone(line: string): SaidUnit[] {
  const trimmed = line.replace(/^[\s!*/#<>.:;,&-]+/, '').replace(/[\s.*/;,-]+$/, '');
  if (trimmed === '' || trimmed.length > 40) return [];
  const start = line.indexOf(trimmed);
  const end = start + trimmed.length;
  if (/^(?:nondim|nondimensional|non-dimensional|unitless|dimensionless|no units?)$/i.test(trimmed))
    return [{ unit: '1', place: 'alone', start, end }];
  if (unitGrade(trimmed) !== 'sure') return [];
  // One plain word ("electron", "second") is rather a description than a unit.
  if (
    /^[A-Za-z]+$/.test(trimmed) &&
    !/^(?:erg|ergs|dyn|dynes?|eV|keV|MeV|GeV|Pa|kPa|MPa|GPa|hPa|mbar|bar|mol|kmol|kg|cm|km|Hz|kHz|MHz|GHz|Kelvin|kelvin|gram|grams|gm|meters?|metres?|sec|secs|seconds|cc|pc|kpc|Mpc|AU|Msun|radians?|degrees?|amu|atm|Gauss|Angstroms?|barns?|joules?|watts?)$/.test(
      trimmed,
    )
  )
    return [];
  return [{ unit: trimmed, place: 'alone', start, end }];
}

function bareWord(line: string, add: Add): void {
  const match = /\b(dimensionless|nondimensional|non-dimensional|unitless|nondim)\b/i.exec(line);
  if (match !== null) add('1', 'alone', match.index, match.index + match[0]!.length);
}
