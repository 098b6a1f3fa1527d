/** Identifiers of people and publications: read in any of their usual forms, given back in the canonical one. */

/**
 * An ORCID iD in its canonical form, `https://orcid.org/0000-0002-1825-0097`; null when it is none.
 *
 * @source ORCID documentation, Structure of the ORCID Identifier (ISO/IEC 7064:2003, MOD 11-2)
 */
export function canonicalOrcid(text: string): string | null {
  const match = /^(?:https?:\/\/)?(?:www\.)?(?:orcid\.org\/)?(\d{4}-?\d{4}-?\d{4}-?\d{3}[\dX])$/i.exec(text.trim());
  if (match === null) return null;
  const digits = match[1]!.replaceAll('-', '').toUpperCase();
  if (orcidCheckCharacter(digits.slice(0, 15)) !== digits[15]) return null;
  return `https://orcid.org/${digits.replace(/(.{4})(?=.)/g, '$1-')}`;
}

/** The check character of the first fifteen digits. */
export function orcidCheckCharacter(digits: string): string {
  let sum = 0;
  for (const digit of digits) sum = (sum + Number(digit)) * 2;
  const check = (12 - (sum % 11)) % 11;
  return check === 10 ? 'X' : String(check);
}

export interface Doi {
  readonly prefix: string;
  readonly suffix: string;
  /** `https://doi.org/10.1000/182`, as it was spelled; compare with `sameDoi`. */
  readonly link: string;
}

/**
 * A DOI name from any of its usual forms; null when it is none.
 *
 * @source DOI Handbook, Numbering (ISO 26324): prefix `10.` and a registrant code that may be subdivided, `/`, a suffix of any length
 */
export function readDoi(text: string): Doi | null {
  const bare = text.trim().replace(/^(?:https?:\/\/(?:dx\.)?doi\.org\/|doi:\s*)/i, '');
  const match = /^(10\.\d+(?:\.\d+)*)\/(\S.*)$/u.exec(bare);
  if (match === null || /[\p{Cc}\p{Cn}]/u.test(bare)) return null;
  return { prefix: match[1]!, suffix: match[2]!, link: `https://doi.org/${match[1]}/${match[2]}` };
}

/** DOI names are compared without regard to the case of ASCII letters (DOI Handbook, Numbering). */
export function sameDoi(a: string, b: string): boolean {
  const [one, other] = [readDoi(a), readDoi(b)];
  return (
    one !== null && other !== null && fold(`${one.prefix}/${one.suffix}`) === fold(`${other.prefix}/${other.suffix}`)
  );
}

function fold(text: string): string {
  return text.replace(/[A-Z]/g, (letter) => letter.toLowerCase());
}

/**
 * An arXiv identifier, new form `2103.01234v2` or old form `astro-ph/9901001`; null when it is none.
 *
 * @source arXiv identifier scheme (info.arxiv.org), from memory
 */
export function readArxiv(text: string): string | null {
  const bare = text.trim().replace(/^(?:https?:\/\/arxiv\.org\/abs\/|arxiv:)/i, '');
  return /^(?:\d{4}\.\d{4,5}|[a-z-]+(?:\.[A-Z]{2})?\/\d{7})(?:v\d+)?$/.test(bare) ? bare : null;
}
