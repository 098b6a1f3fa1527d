/** What a comment says about the things it stands beside: its text and their names come in, claims with places go out. */
import type { Claim } from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { conventionsIn } from './conventions.ts';
import { type SaidUnit, unitsInComment } from './units-in-comment.ts';

export interface CommentOptions {
  /** `comment` unless the text is a docstring, a metadata table or an attribute. */
  readonly from?: Claim['from'];
  /**
   * True for a block that speaks of many things by name (`rho :: density [g/cm3]`, a line each): what names nothing is about
   * nothing. False (the default): the comment belongs to one declaration, and what it says holds for all that it declares.
   */
  readonly block?: boolean;
  /** Names differ by case (C, Python); the default compares them without (Fortran). */
  readonly caseSensitive?: boolean;
  /** Lines were looked at before (`lookAtComment`): those that come may say something. */
  readonly looked?: boolean;
}

/** Longest comment looked at, in characters; a licence or a table in a comment is not read to its end. */
const LONGEST = 20_000;

/** No comment without one of these says anything that could become a claim. Kept cheap: it is asked for every comment. */
const WORTH_READING =
  /[[($°]|\\|\b(?:in|per|units?|non-?dim\w*|unitless|dimensionless|dry|moist|wet|positive|negative|upwards?|downwards?|log\w*|ln|degrees?|deg|radians?|relative|respect|reference|shape|major|order|frame|level)\b|[a-z]\s?[/^*-]\s?\w|\b[a-z]+\s?-?\d|\b[a-z]{2,5}\s*$/i;

/**
 * Claims of a comment on the things named in `candidates`.
 * A line that names one of them is about it; a line that names none is about all of them when the comment belongs to a
 * declaration (`real :: u, v ! velocities [m/s]`), and about the thing last named when it belongs to a block.
 * As many units as names are paired in order (`real p, t ! pressure, temperature [Pa, K]`).
 *
 * @param text        the comment without its marks; several lines are allowed, the first at `position`
 * @param candidates  names as the language compares them; empty gives no claims
 * @param position    where the text begins
 * @param parent      the procedure, type or module that the candidates belong to
 */
export function claimsFromComment(
  text: string,
  candidates: readonly string[],
  position: Position,
  parent: string | null,
  options: CommentOptions = {},
): Claim[] {
  if (candidates.length === 0 || !WORTH_READING.test(text)) return [];
  const reader = new CommentClaims(candidates, parent, options);
  const lines = (text.length > LONGEST ? text.slice(0, LONGEST) : text).split('\n');
  for (let index = 0; index < lines.length; index++)
    reader.line(lines[index]!, position.line + index, index === 0 ? position.column : 1);
  return reader.claims;
}

/** The claims of one comment, line by line; a block hands its subject on from line to line. */
export class CommentClaims {
  readonly claims: Claim[] = [];
  private readonly candidates: Candidates;
  private readonly parent: string | null;
  private readonly options: CommentOptions;
  private readonly seen = new Set<string>();
  private subject: readonly string[] = [];

  constructor(candidates: readonly string[], parent: string | null, options: CommentOptions = {}) {
    this.candidates = new Candidates(candidates, options.caseSensitive === true);
    this.parent = parent;
    this.options = options;
  }

  /** A line of nothing but marks: what comes behind it speaks of something else. */
  endSubject(): void {
    this.subject = [];
  }

  /** A line that says nothing itself may name what the next lines speak of. */
  subjectOf(line: string): void {
    const heads = namesAtStart(line, this.candidates);
    if (heads.length > 0) this.subject = heads;
  }

  /**
   * @param line    the text without comment marks
   * @param number  its line
   * @param column  column of its first character
   */
  line(line: string, number: number, column: number): void {
    const { candidates, options, seen, claims, parent } = this;
    const from = options.from ?? 'comment';
    const heads = namesAtStart(line, candidates);
    if (heads.length > 0) this.subject = heads;
    else if (options.block === true && /^[\s*!/#-]*$/.test(line)) this.subject = [];
    if (options.looked !== true && !WORTH_READING.test(line)) return;
    const units = unitsInComment(line, candidates.names);
    const conventions = conventionsIn(line);
    if (units.length === 0 && conventions.length === 0) return;
    const say = (name: string, what: Claim['what'], value: string, offset: number, place?: SaidUnit['place']) => {
      const key = `${name}\0${what}`;
      // The first word counts; several lines of one comment may repeat it in other units.
      if (seen.has(key)) return;
      seen.add(key);
      const bracket = from === 'comment' && (place === 'square' || place === 'round' || place === 'arrow');
      claims.push({
        name,
        parent,
        what,
        value,
        text: line.trim().slice(0, 200),
        from: bracket ? 'bracket' : from,
        line: number,
        column: column + offset,
      });
    };
    for (const [name, unit] of assignUnits(line, units, candidates, heads, this.subject, options)) {
      say(name, 'unit', unit.unit, unit.start, unit.place);
      const angle = /^(?:deg|degs|degrees?)$/i.test(unit.unit)
        ? 'degrees'
        : /^(?:rad|radians?)$/i.test(unit.unit)
          ? 'radians'
          : null;
      if (angle !== null) say(name, 'angle', angle, unit.start, unit.place);
    }
    const { names } = candidates;
    const about = heads.length > 0 ? heads : options.block === true ? this.subject : names.length <= 12 ? names : [];
    for (const said of conventions) for (const name of about) say(name, said.what, said.value, said.at);
  }
}

/** The names that a comment may be about, quick to ask when they are many. */
class Candidates {
  readonly names: readonly string[];
  private readonly caseSensitive: boolean;
  private readonly folded: ReadonlyMap<string, string> | null;

  constructor(names: readonly string[], caseSensitive: boolean) {
    this.names = names;
    this.caseSensitive = caseSensitive;
    this.folded =
      names.length <= 8 ? null : new Map(names.map((name) => [caseSensitive ? name : name.toLowerCase(), name]));
  }

  /** The candidate that a word spells; null when it is none. */
  lookUp(word: string): string | null {
    if (this.folded !== null) return this.folded.get(this.caseSensitive ? word : word.toLowerCase()) ?? null;
    if (this.names.includes(word)) return word;
    if (this.caseSensitive) return null;
    for (const name of this.names)
      if (name.length === word.length && name.toLowerCase() === word.toLowerCase()) return name;
    return null;
  }
}

/** Which units belong to which names. */
function assignUnits(
  line: string,
  units: readonly SaidUnit[],
  candidates: Candidates,
  heads: readonly string[],
  subject: readonly string[],
  options: CommentOptions,
): [string, SaidUnit][] {
  if (units.length === 0) return [];
  const named: [string, SaidUnit][] = [];
  const rest: SaidUnit[] = [];
  for (const unit of units) {
    const name = nameBefore(line, unit.start, candidates);
    if (name === null) rest.push(unit);
    else named.push([name, unit]);
  }
  const free = (names: readonly string[]) => names.filter((name) => !named.some(([taken]) => taken === name));
  const about = free(heads.length > 0 ? heads : options.block === true ? subject : candidates.names);
  // Beside one that is named directly, an unnamed unit says something else ("at 273 K").
  if (rest.length === 0 || about.length === 0 || (named.length > 0 && heads.length === 0)) return named;
  if (rest.length === about.length && rest.length > 1)
    return [...named, ...about.map((name, index) => [name, rest[index]!] as [string, SaidUnit])];
  const [best] = rest
    .filter((unit) => unit.listed !== true)
    .sort((a, b) => RANK[a.place] - RANK[b.place] || a.start - b.start);
  if (best === undefined || (options.block !== true && heads.length === 0 && about.length > 12)) return named;
  return [...named, ...about.map((name) => [name, best] as [string, SaidUnit])];
}

const RANK: Readonly<Record<SaidUnit['place'], number>> = {
  arrow: 0,
  units: 1,
  square: 2,
  latex: 3,
  round: 4,
  in: 5,
  alone: 6,
};

// Marks of documentation tools in front of a name: `@param[in] x`, `:param x:`, `\param x`, `- x`.
const HEAD =
  /^[\s*!/#<>.&|+-]*(?:(?:[@\\](?:param|var|arg|property|field|member)|:(?:param|var|ivar|cvar|arg|type))(?:\s*\[[^\]]{0,12}\])?\s+(?:\{[^}]{0,60}\}\s*)?)?(?:\(?(?:in|out|inout|input|output|i\/o)\)?\s*[:=-]?\s+)?[`"'*]*/i;
const NAME = /[A-Za-z_][\w%]*/y;

/** The names that a line begins with and goes on to describe: `rho, T (n) = ...`, `x : float`, `:param x: ...`. */
function namesAtStart(line: string, candidates: Candidates): string[] {
  const head = HEAD.exec(line);
  let at = head === null ? 0 : head[0]!.length;
  const marked = head !== null && /[@\\:](?:param|var|arg)/.test(head[0]!);
  const names: string[] = [];
  for (;;) {
    NAME.lastIndex = at;
    const match = NAME.exec(line);
    if (match === null) break;
    const name = candidates.lookUp(match[0]!);
    if (name === null) {
      // `double rho`, `float T`: a type may stand before the name.
      if (names.length === 0 && marked && /^\s+/.test(line.slice(NAME.lastIndex))) {
        const next = /^\s+/.exec(line.slice(NAME.lastIndex))![0]!.length + NAME.lastIndex;
        if (next > at && next - at < 40) {
          at = next;
          continue;
        }
      }
      break;
    }
    at = NAME.lastIndex;
    const index = /^\s*\([^()]{0,40}\)/.exec(line.slice(at));
    names.push(name);
    const afterIndex = index === null ? at : at + index[0]!.length;
    const next =
      /^[`"'*]*\s*(?:,|&|\/|and\b)\s*[`"'*]*/.exec(line.slice(afterIndex)) ??
      /^[`"'*]*\s*(?:,|&|\/|and\b)\s*[`"'*]*/.exec(line.slice(at));
    if (next === null) break;
    at = (/^[`"'*]*\s*(?:,|&|\/|and\b)/.test(line.slice(afterIndex)) ? afterIndex : at) + next[0]!.length;
  }
  if (names.length === 0) return [];
  const after = line.slice(at);
  // A sentence that happens to begin with the name of a variable is not its description.
  if (
    marked ||
    /^[`"'*]*\s*(?:\([^()]{0,60}\)|\[[^[\]]{0,60}\])?\s*(?:::|:|=|->|--?|–|\.\.+|~|$)/.test(after) ||
    /^[`"'*]*\s{2,}|^[`"'*]*\t|^\s*[[(]|^\s+(?:is|are|in)\b/.test(after)
  )
    return names;
  return names.some((name) => name.length > 2 && /[_\d]/.test(name)) ? names : [];
}

/** The candidate that stands right before a unit: `rho [g/cm3]`, `T in K`, `p(:) (Pa)`. */
function nameBefore(line: string, end: number, candidates: Candidates): string | null {
  let at = end;
  while (at > 0 && /[\s:=`"'*,]/.test(line[at - 1]!)) at--;
  if (line[at - 1] === ')') {
    const open = line.lastIndexOf('(', at);
    if (open > 0 && at - open < 40) at = open;
    while (at > 0 && line[at - 1] === ' ') at--;
  }
  let start = at;
  while (start > 0 && at - start < 64 && /[\w%]/.test(line[start - 1]!)) start--;
  if (start === at) return null;
  const word = line.slice(start, at);
  const name = candidates.lookUp(word);
  // "temperature (K)" in `real :: temperature, pressure ! temperature (K)` is about it; the article "a" is not.
  return name === null ||
    (name.length === 1 &&
      /^(?:a|i)$/i.test(name) &&
      line[at] === ' ' &&
      start > 0 &&
      line[start - 1] === ' ' &&
      !/^[\s]*[[(]/.test(line.slice(at)))
    ? null
    : name;
}
