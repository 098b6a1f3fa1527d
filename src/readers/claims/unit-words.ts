/**
 * Judges whether a few characters of a comment are a unit, and how surely: text in, a grade out.
 * It is not the reader of units (src/units/ is): it has to be fast, to know how carelessly people write in comments, and to
 * refuse what only looks like a unit (`( m )`, `(n)`, `[i]`), which a reader of units rightly accepts.
 */

/**
 * *sure*: nobody writes this and means something else (`g/cm3`, `erg`, `m s-1`).
 * *likely*: a unit in square brackets or beside a physics word (`m2`, `day`, `A/m`).
 * *weak*: a single letter or a common word (`m`, `s`, `min`); needs more evidence.
 */
export type UnitGrade = 'none' | 'weak' | 'likely' | 'sure';

const words = (text: string) => text.split(/\s+/);

/** Symbols that take SI prefixes. */
const PREFIXABLE = words(
  'm s g K A W N J V Pa Hz mol eV bar L l pc cal b F H T G Gy Sv rad yr a t Bq ohm Ohm Wb Jy gauss',
);
const PREFIXES = words('Y Z E P T G M k h c d m u µ μ n p f a da');

/** Symbols and names without prefix. */
const PLAIN = words(
  `kg C S h d u c cd sr lm lx kat B
  sec secs second seconds msec usec minute minutes hr hrs hour hours day days week weeks month months mon year years yrs Myr Gyr kyr Myrs Gyrs
  meter meters metre metres centimeter centimeters centimetre centimetres millimeter millimeters millimetre millimetres kilometer kilometers kilometre kilometres
  micron microns micrometer micrometers nanometer nanometers micrometre micrometres nanometre fm
  gram grams gm gms gr kilogram kilograms kgs mole moles kmole kmoles gmol mols kelvin kelvins Kelvin Kelvins kelvin degK degC degF degc degk
  deg degs degree degrees radian radians steradian ster str arcsec arcmin arcseconds arcsecond mas
  pascal pascals Pascal joule joules Joule Joules watt watts Watt Watts newton newtons Newton volt volts Volt coulomb Coulomb ampere amps tesla Tesla
  erg ergs foe dyn dyne dynes cc ccm amu AMU dalton Da barn barns atm atmospheres torr Torr mmHg psi mbar millibar millibars
  mb hPa gauss Gauss angstrom angstroms Angstrom Angstroms Å ang Ang AU au ly lightyear Msun Rsun Lsun msun rsun lsun Msol Rsol Lsol M_sun R_sun L_sun M_sol Msolar solMass
  m_sun M☉ L☉ R☉ baryon baryons nucleon nucleons atom atoms photon photons electron electrons particle particles molecule molecules molec mlc
  ppm ppb ppt ppmv ppbv psu PSU percent pct % ‰ permil dex mag Jy mJy hertz Hertz kcal Cal cal kWh MWe MWt rpm Sv Sverdrup sverdrup gal dbar inch inches
  ft feet foot lb lbs lbm lbf knot knots kn kts kt ha hectare rem Ci Siemens siemens °C °F °K ° degrees_C oC C° Celsius celsius Fahrenheit
  kB k_B kb k_b boltzmann neutron neutrons proton protons ion ions fission fissions source neutrino neutrinos cell GWd MTU ppv kgair dobson DU ergs/s
  bohr Bohr hartree Hartree Ha Ry rydberg Rydberg debye e Mach nondim`,
);

/** Never a unit by themselves in prose, however well they read as one. */
const COMMON_WORDS = new Set(
  words(
    `a as am at us is in min max mas ha cell source particle particles atom atoms ion ions electron electrons photon photons neutron neutrons proton protons
    nucleon nucleons baryon baryons fission fissions neutrino neutrinos molecule molecules str mon month months week weeks e ft kn kt ang gr au day days year
    years hour hours second minute percent foot ster gal Cal boltzmann c C mb kb kB b Da Ha DU B kat as pa dm cd mm
    PT GT MT ET pT fT cT dT mT TH GH MH TA GA MA PA EA fA fF cF mF pF nF mL ml cL cl pL dL dl fL fl hL MB GB TB PB EB pB ks Es Ps as ds fs ps cs hs das pa fa na ga ma ka dat at mt ct ft pt nt
    dB hb pb nb fb db cb ub TL EG MG PG TG GG mG cG fG pG nG dG hG Gs Ms Ts ug pg fg ng dg cg hg ag Eg Gg Tg Pg Yg Zg Mg hl hm am em Em Gm Pm Tm Zm Ym pm fm dm dam hK cK dK nK fK pK PK TK EK MK GK hA cA dA kA nA`,
  ),
);
/** In brackets these stand for themselves often enough when they come alone. */
const SQUARE_ALONE = new Set(
  words(
    'm s K g C h d W J N V A T G u c b day days year years hour hours second minute percent mm fm mb ms Mg GK kK MK ks pm ug ng Gg Tg Pg nb pb fs ps cd rad',
  ),
);

const KNOWN = new Set([
  ...PREFIXABLE,
  ...PLAIN,
  ...PREFIXES.flatMap((prefix) => PREFIXABLE.map((unit) => prefix + unit)),
]);
/** Spellings of old codes, which had no lower case, or no upper case. */
const FOLDED = new Set([...KNOWN].filter((name) => name.length > 1).map((name) => name.toLowerCase()));
for (const name of 'k w j n v g s m c'.split(' ')) FOLDED.add(name);

/** Every word that may be a unit or a part of one, in the spelling known. */
export const UNIT_WORDS: ReadonlySet<string> = new Set([...KNOWN, ...FOLDED]);

const NONE = new Set(words('nondim nondimensional non-dimensional unitless dimensionless adimensional'));
/** Single letters that carry a compound: `m/s` is a unit, `a/b` is not. */
const GOOD_LETTERS = new Set(words('m s g K J W N V k w'));
const POOR_LETTERS = new Set(words('a b c u l L H F S A C G T d h e t B'));

/** Words for nothing that could be measured; `1` for what is measured but has no dimension; null for neither. */
export function dimensionlessSpelling(text: string): '1' | 'not-a-quantity' | null {
  const folded = text.trim().toLowerCase();
  if (NONE.has(folded)) return '1';
  if (
    /^(?:no units?|no dimensions?|-|--|none-dimensional|fraction|frac|ratio|unit ?less|dimension ?less|non ?dim|pure number|n\/d|nd|mass fraction|mole fraction)\.?$/.test(
      folded,
    )
  )
    return '1';
  if (
    /^(?:flag|index|count|none|n\/a|various|string|logical|integer|boolean|bool|char|character|name|dim)$/.test(folded)
  )
    return 'not-a-quantity';
  return null;
}

/** Longest text that is looked at: no unit is longer, and hostile comments are. */
const LONGEST = 60;

// One token of a unit: a name, a number, an exponent, an operator, a bracket.
const TOKEN =
  /\s*(?:([A-Za-zµμÅ°%‰☉_]+)|([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)|(\*\*|[*/^·.×⋅]|[-+])|([(){}[\]])|([⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺]+))/y;

/**
 * How surely a text is a unit. Linear in its length; anything beyond 60 characters is none.
 *
 * @param text what stands between the brackets, or behind "in", without them
 */
export function unitGrade(text: string): UnitGrade {
  const known = GRADES.get(text);
  if (known !== undefined) return known;
  const found = judge(text);
  if (text.length <= LONGEST) {
    if (GRADES.size >= MOST_GRADES) GRADES.clear();
    GRADES.set(text, found);
  }
  return found;
}

/** Comments of one code put the same few things into brackets again and again. */
const GRADES = new Map<string, UnitGrade>();
const MOST_GRADES = 20_000;

function judge(text: string): UnitGrade {
  const trimmed = text.trim();
  if (trimmed.length === 0 || trimmed.length > LONGEST) return 'none';
  const first = trimmed.charCodeAt(0);
  // A quick way out for prose: a unit begins with a letter, a digit, a bracket or a degree sign, and has few lower-case words.
  if (first < 128 && !/[A-Za-z0-9(%{.]/.test(trimmed[0]!)) return 'none';
  if (/^deg(?:rees?)?\.?[ _]?(?:C|c|K|k|F)$|^degrees? (?:Celsius|Kelvin|C|K)$/i.test(trimmed)) return 'sure';
  // The exponent's own brackets: `m^{-2}`, `s^(-1)`, `cm**(-3)`.
  const plain = trimmed.replace(/(\^|\*\*)\s*[({]\s*([+-]?\s*[\d./]+)\s*[)}]/g, '$1$2');
  const exact = grade(plain, false);
  if (exact !== 'none') return exact;
  return grade(plain, true);
}

interface Seen {
  names: string[];
  exponents: number;
  slashes: number;
  numbers: number;
}

function grade(text: string, folded: boolean): UnitGrade {
  const seen = tokens(text, folded);
  if (seen === null || seen.names.length === 0) return 'none';
  const { names, exponents, slashes } = seen;
  const letters = names.filter((name) => name.length === 1);
  const strong = names.filter((name) => name.length > 1 && !COMMON_WORDS.has(name));
  if (names.length === 1) {
    const [name] = names as [string];
    if (folded) {
      if (exponents > 0 && name.length > 1) return /-|\*\*|\^/.test(text) ? 'sure' : 'likely';
      return name.length > 2 && !COMMON_WORDS.has(name) ? 'likely' : 'none';
    }
    if (exponents > 0 || slashes > 0) {
      if (
        strong.length > 0 ||
        /[-⁻]\s*[\d(.¹²³⁴]|\*\*|\^|²|³|⁻/.test(text) ||
        (slashes > 0 && GOOD_LETTERS.has(name))
      ) {
        return POOR_LETTERS.has(name) && !/[-⁻]/.test(text) ? 'weak' : 'sure';
      }
      return POOR_LETTERS.has(name) ? 'weak' : slashes > 0 ? 'weak' : 'likely';
    }
    if (strong.length === 1) return 'sure';
    return 'weak';
  }
  if (folded) {
    // `w/m^2`, `ERG/CM**3`: something must be more than one letter, or have a power.
    if (strong.length > 0 || (exponents > 0 && names.every((name) => GOOD_LETTERS.has(name)))) {
      return exponents > 0 || slashes > 0 ? 'sure' : 'likely';
    }
    return 'none';
  }
  if (strong.length > 0) return exponents > 0 || slashes > 0 ? 'sure' : names.length <= 4 ? 'likely' : 'weak';
  if (names.every((name) => COMMON_WORDS.has(name)) && exponents === 0) return 'weak';
  const poor = letters.filter((name) => POOR_LETTERS.has(name)).length;
  const good = letters.filter((name) => GOOD_LETTERS.has(name)).length;
  if (exponents > 0) return good > 0 || poor === 0 ? 'sure' : 'weak';
  if (slashes > 0) return good > 0 && poor < 2 ? (poor === 0 ? 'sure' : 'likely') : 'weak';
  return 'weak';
}

/** The names of units in a text, or null when anything in it is not of a unit. */
function tokens(text: string, folded: boolean): Seen | null {
  const seen: Seen = { names: [], exponents: 0, slashes: 0, numbers: 0 };
  let at = 0;
  let last: 'start' | 'name' | 'number' | 'operator' | 'exponent' | 'close' | 'open' | 'per' = 'start';
  let depth = 0;
  while (at < text.length) {
    TOKEN.lastIndex = at;
    const match = TOKEN.exec(text);
    if (match === null) return text.slice(at).trim() === '' ? finish() : null;
    const spaced = match[0]!.length > match[0]!.trimStart().length;
    at = TOKEN.lastIndex;
    const [, name, number, operator, bracket, superscript] = match;
    if (name !== undefined) {
      if (name === 'per' && (last === 'name' || last === 'exponent' || last === 'number')) {
        seen.slashes++;
        last = 'per';
        continue;
      }
      const found = known(name, folded);
      if (found === null) return null;
      seen.names.push(...found);
      last = 'name';
    } else if (number !== undefined) {
      const sign = number[0] === '-' || number[0] === '+';
      if (last === 'name' && (!spaced || sign)) {
        // An exponent of a unit is small: `T22`, `s2000` are names.
        if (Math.abs(Number(number)) > 12) return null;
        seen.exponents++;
        last = 'exponent';
      } else if (last === 'operator' && text[TOKEN.lastIndex - number.length - 1] !== '/') {
        if (
          /(?:\^|\*\*)\s*$/.test(
            text.slice(
              Math.max(0, at - match[0]!.length - 2),
              at - match[0]!.length + (match[0]!.length - match[0]!.trimStart().length),
            ),
          )
        )
          seen.exponents++;
        last = 'exponent';
      } else if (last === 'exponent') {
        return null;
      } else {
        seen.numbers++;
        last = 'number';
      }
    } else if (operator !== undefined) {
      if (operator === '-' || operator === '+') {
        // `Coulomb-m` joins; a minus before a bracket or a number is a sign.
        if (operator === '+') return null;
        last = 'operator';
        continue;
      }
      if (last === 'start' || last === 'operator') return null;
      if (operator === '/') seen.slashes++;
      last = 'operator';
    } else if (bracket !== undefined) {
      if ('([{'.includes(bracket)) {
        depth++;
        last = last === 'operator' ? 'operator' : 'open';
      } else {
        if (--depth < 0) return null;
        last = 'close';
      }
    } else if (superscript !== undefined) {
      if (last !== 'name') return null;
      seen.exponents++;
      last = 'exponent';
    }
  }
  return finish();

  function finish(): Seen | null {
    if (depth !== 0 || last === 'operator' || last === 'per') return null;
    // Several numbers and one name are a date or a list.
    return seen.numbers > 1 ? null : seen;
  }
}

function known(name: string, folded: boolean): string[] | null {
  if (folded ? FOLDED.has(name.toLowerCase()) : KNOWN.has(name)) return [folded ? name.toLowerCase() : name];
  // `g_per_cm3` and `erg_g`
  if (name.includes('_') && name.length < 30) {
    const parts = name.split('_').filter((part) => part !== '' && part !== 'per');
    if (parts.length > 1 && parts.every((part) => KNOWN.has(part))) return parts;
  }
  return null;
}

/** True when a weak unit alone in square brackets is one that people write so (`[m]`, `[K]`, `[day]`). */
export function standsInSquareBrackets(text: string): boolean {
  return SQUARE_ALONE.has(text.trim());
}

/**
 * LaTeX and marked-up units in plain spelling: `\mathrm{g\,cm^{-3}}` becomes `g cm^-3`, `\rm erg~s$^{-1}$` becomes `erg s^-1`.
 */
export function plainFromLatex(text: string): string {
  return text
    .replace(/\\f[$[\]]/g, '')
    .replace(/\$/g, '')
    .replace(/\\(?:mathrm|rm|text|textrm|unit|mathit|it|mbox|operatorname|left|right|si|SI)\b\s*/g, '')
    .replace(/\\(?:,|;|:|!|\s|quad|cdot|times|thinspace)/g, ' ')
    .replace(/~/g, ' ')
    .replace(/\\odot/g, '☉')
    .replace(/_\{?☉\}?/g, '☉')
    .replace(/\\circ/g, '°')
    .replace(/\\mu\b/g, 'µ')
    .replace(/\\(?:%|#|&)/g, '%')
    .replace(/\^\{\s*([^{}]*?)\s*\}/g, '^$1')
    .replace(/[{}]/g, '')
    .replace(/\s+/g, ' ')
    .trim();
}
