/** Conventions that no unit shows, as people write them in comments: a line of text comes in, subjects and values go out. */
import type { ClaimSubject } from '../../model/interface.ts';

export interface SaidConvention {
  readonly what: ClaimSubject;
  readonly value: string;
  /** Offset of the words in the text. */
  readonly at: number;
}

/** One look decides whether any rule below can match: most comments say nothing of the kind. */
const GATE =
  /\b(?:dry|moist|wet|per|positive|negative|\+ve|log|ln|logarithm|dex|degrees?|radians?|relative|reference|respect|shape|dimension|row|column|major|order|index|frame|comoving|lagrangian|eulerian|proper|upwards?|downwards?|log10)\b|_10/i;

/** `words`: parts of words one of which stands in every text that the pattern matches, so that most rules are not tried at all. */
const rule = (
  what: ClaimSubject,
  words: string,
  pattern: RegExp,
  value: string | ((match: RegExpExecArray) => string | null),
) => ({
  what,
  words: words.split(' '),
  pattern,
  value: typeof value === 'string' ? () => value : value,
});

const DIRECTION =
  '(up|down|in|out|inward|outward|upward|downward|left|right|north(?:ward)?|south(?:ward)?|east(?:ward)?|west(?:ward)?|clockwise|counter-?clockwise|anti-?clockwise)(?:s|wards?)?';

const RULES = [
  rule(
    'basis',
    'dry',
    /\bdry[- ](?:air|mass|mixing|density|static|basis|pressure|adiabatic|gas|mole|volume)\b|\b(?:of|to|for) dry\b(?! [a-z]*run)|\bdry basis\b/i,
    'dry',
  ),
  rule(
    'basis',
    'moist wet total humid',
    /\b(?:moist|wet|total|humid)[- ](?:air|mixing|basis|density|mass mixing)\b/i,
    (match) => (/total/i.test(match[0]!) && !/air/i.test(match[0]!) ? null : 'moist'),
  ),
  rule(
    'basis',
    'per',
    /\bper (?:unit )?(mole|mass|baryon|nucleon|particle|volume|gram|kilogram|atom|molecule|nucleus|ion|electron|area|kmol|kmole|steradian|unit solid angle|solid angle)\b/i,
    (match) => `per ${match[1]!.toLowerCase().replace('unit ', '')}`,
  ),
  rule(
    'basis',
    'molar specific',
    /\b(molar|specific)[- ](?:enthalpy|entropy|energy|internal|volume|heat|gibbs|helmholtz)\b/i,
    (match) => (match[1]!.toLowerCase() === 'molar' ? 'per mole' : 'per mass'),
  ),
  rule(
    'sign',
    'positive negative +ve -ve',
    new RegExp(
      `\\b(positive|negative|\\+ve|-ve)\\b(?: values?)?(?: (?:is|are|means?|for|when|if|in the|in|=|:|direction|flux|fluxes))*[ ,-]*\\b${DIRECTION}\\b(?! (?:the|a) (?:sense|following|range))`,
      'i',
    ),
    (match) => `${polarity(match[1]!)} ${direction(match[2]!)}`,
  ),
  rule(
    'sign',
    'positive negative',
    /\b(positive|negative) (into|toward|towards|out of|away from|onto) (?:the )?([a-z]+)/i,
    (match) => `${polarity(match[1]!)} ${match[2]!.toLowerCase()} ${match[3]!.toLowerCase()}`,
  ),
  rule(
    'sign',
    'positive negative',
    /(?:\(|\b)(upwards?|downwards?|inwards?|outwards?)[ -](?:is |fluxes? (?:is|are) |flux )?(positive|negative)\b/i,
    (match) => `${polarity(match[2]!)} ${direction(match[1]!)}`,
  ),
  rule(
    'sign',
    '(+ (-',
    /\(\s*([+-])\s*(?:=|:|is|for)?\s*(up|down|in|out)(?:ward)?s?\s*\)/i,
    (match) => `${match[1] === '+' ? 'positive' : 'negative'} ${direction(match[2]!)}`,
  ),
  rule(
    'sign',
    'positive negative',
    /\b(?:defined as |taken |counted |is )(positive|negative)\b(?! (?:definite|number|integer|if|when|or|and|values?))/i,
    (match) => polarity(match[1]!),
  ),
  rule(
    'log-base',
    'log dex decadic',
    /\blog_?\{?10\}?\b|\bbase[- ]10 log|\blog(?:arithm)? (?:to )?(?:the )?base[- ]10\b|\bcommon log|\bin dex\b|\bdecadic/i,
    '10',
  ),
  rule('log-base', 'natural ln log_e', /\bnatural log|\bln\b(?=[\s(])|\blog_e\b/i, 'e'),
  rule('log-base', 'log', /\blog_?2\b|\bbase[- ]2 log/i, '2'),
  rule(
    'angle',
    'deg',
    /\b(?:in )?(?:arc)?deg(?:ree)?s?\b(?!\s*(?:of\b|C\b|K\b|F\b|Cel|Kel|Fahr|celsius|kelvin|fahr|freedom))(?=\s*(?:north|south|east|west|\)|\]|,|\.|;|$|and|or|from|clock|north|angle))/i,
    (match) => (/^arc/i.test(match[0]!) ? null : 'degrees'),
  ),
  rule('angle', 'radian', /\bradians?\b/i, 'radians'),
  rule(
    'reference-state',
    'relative respect w.r.t referenced measured counted',
    /\b(?:relative to|with respect to|w\.r\.t\.?|referenced to|measured from|counted from)\s+(?:the |a |an )?([^.;,()[\]]{2,60})/i,
    (match) =>
      /\b(?:reference|sea[- ]level|zero|ground|freezing|vacuum|infinity|rest mass|triple point|atmospher|standard|neutron|neutral|298|273|0 ?K|datum|geoid|surface|mean|ionised|ionized|atom|elements)/i.test(
        match[1]!,
      )
        ? match[1]!.trim().toLowerCase()
        : null,
  ),
  rule('reference-state', 'sea', /\b(?:above|below) (?:mean )?sea[- ]level\b/i, (match) => match[0]!.toLowerCase()),
  rule(
    'reference-state',
    'zero vanishes',
    /\b(?:zero (?:at|of energy (?:at|is))|vanishes at)\s+([^.;,()[\]]{2,60})/i,
    (match) => `zero at ${match[1]!.trim().toLowerCase()}`,
  ),
  rule('reference-state', 'temperature', /\b(?:potential|virtual) temperature\b/i, (match) => match[0]!.toLowerCase()),
  rule(
    'reference-state',
    'rest',
    /\b(in|ex)cluding (?:the )?(?:(?:electron|nucleon|neutron|baryon|proton)s?'? )?rest[- ](?:mass|energy)(?: energy)?\b/i,
    (match) => `rest mass ${match[1]!.toLowerCase()}cluded`,
  ),
  rule('shape', 'shape', /\bshape(?:\s+is|\s*[:=])?\s*(\([^()]{0,60}\))/i, (match) => match[1]!.replace(/\s+/g, '')),
  rule('shape', 'dimension', /(?<!leading )\bdimension(?:ed|s)?\s*[:=]?\s*(\([^()]{1,60}\))/i, (match) =>
    match[1]!.replace(/\s+/g, ''),
  ),
  rule('index-order', 'major', /\b(?:row|column)[- ]major\b/i, (match) => match[0]!.toLowerCase().replace(' ', '-')),
  rule('index-order', 'contiguous order', /\b(C|Fortran|F)[- ](?:contiguous|order(?:ing|ed)?)\b/, (match) =>
    match[1] === 'C' ? 'row-major' : 'column-major',
  ),
  rule(
    'index-order',
    'index dimension axis',
    /\b(first|last|second|leading|inner|outer|fastest)(?:[- ]varying)? (?:index|dimension|axis) (?:is|runs|=|varies|counts) (?:over |the |along )*([a-z_ ]{2,40})/i,
    (match) => `${match[1]!.toLowerCase()} ${match[2]!.trim().toLowerCase()}`,
  ),
  rule(
    'index-order',
    'order sorted indexed counted numbered level',
    /\b(?:ordered|sorted|indexed|counted|numbered|levels?) (?:from )?(top|bottom|surface)(?: to |[- ]to[- ]|\s+)(bottom|top|down|up|surface)?\b/i,
    (match) => (match[2] === undefined ? null : `${match[1]!.toLowerCase()} to ${match[2]!.toLowerCase()}`),
  ),
  rule(
    'frame',
    'frame coordinate units',
    /\b(comoving|co-moving|lagrangian|eulerian|laborator(?:y|ies)|lab|rest|fluid|centre[- ]of[- ]mass|center[- ]of[- ]mass|inertial|rotating|body|proper|physical)[- ](?:frame|coordinates?|units)\b/i,
    (match) => match[1]!.toLowerCase().replace('co-moving', 'comoving').replace(/^lab$/, 'laboratory'),
  ),
] as const;

const polarity = (word: string) => (/^(?:positive|\+)/i.test(word) ? 'positive' : 'negative');
const direction = (word: string) => word.toLowerCase().replace(/^(up|down|in|out|north|south|east|west)wards?$/, '$1');

/** Rules by the parts of words that they need, as bits. */
const BY_WORD = new Map<string, number>();
RULES.forEach(({ words }, index) => {
  for (const word of words) BY_WORD.set(word, (BY_WORD.get(word) ?? 0) | (1 << index));
});
for (const [word, bits] of BY_WORD) {
  let all = bits;
  for (const [part, others] of BY_WORD) if (word.includes(part)) all |= others;
  BY_WORD.set(word, all);
}
const SIGN = '(+';
const WORDS = new RegExp(
  [...BY_WORD.keys()]
    .filter((word) => !word.startsWith('('))
    .sort((a, b) => b.length - a.length)
    .map((word) => word.replace(/[+.]/g, '\\$&'))
    .join('|'),
  'gi',
);

/** The rules that a line has words for. */
function rulesFor(line: string): number {
  let rules = /\(\s*[+-]/.test(line) ? BY_WORD.get(SIGN)! : 0;
  WORDS.lastIndex = 0;
  for (let match = WORDS.exec(line); match !== null; match = WORDS.exec(line)) {
    rules |= BY_WORD.get(match[0]!.toLowerCase())!;
    // Parts may overlap: `ordered` and `dimension` share letters with what stands beside them.
    WORDS.lastIndex = match.index + 1;
  }
  return rules;
}

/** Longest text that is looked at in one piece; rules are bounded, but a comment of megabytes says nothing more. */
const LONGEST = 400;

/**
 * What a line of a comment says about basis, sign, log base, angle, reference state, shape, index order and frame.
 * The first match of each subject counts.
 */
export function conventionsIn(text: string): SaidConvention[] {
  const line = text.length > LONGEST ? text.slice(0, LONGEST) : text;
  if (!GATE.test(line)) return [];
  const found: SaidConvention[] = [];
  const tried = rulesFor(line);
  if (tried === 0) return [];
  for (let index = 0; index < RULES.length; index++) {
    if ((tried & (1 << index)) === 0) continue;
    const { what, pattern, value } = RULES[index]!;
    if (found.some((one) => one.what === what)) continue;
    const match = pattern.exec(line);
    if (match === null) continue;
    const said = value(match as RegExpExecArray);
    if (said !== null && said !== '') found.push({ what, value: said, at: match.index });
  }
  return found;
}
