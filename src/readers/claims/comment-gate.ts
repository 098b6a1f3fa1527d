/**
 * One look at the bytes of a comment line that says whether it can hold a claim at all, and whether it names one of the things
 * asked for. It lets through more than becomes a claim and never less: what it turns away is not made into a string.
 */
import { UNIT_WORDS } from './unit-words.ts';

/** Flags of words in a table of names. */
export const UNIT_WORD = 1;
const SAYING_WORD = 2;
const OPENING_WORD = 4;

/** What a look finds: one of the names asked for; something that may be a claim; nothing but marks. */
export const MENTIONS = 1;
export const SAYS = 2;
export const EMPTY = 4;

/** Words without which no sentence becomes a claim: the gates of `units-in-comment.ts` and `conventions.ts`. */
const SAYING =
  `units unit dimension dimensions nondim nondimensional unitless dimensionless non dry moist wet humid per positive negative ve log ln
  logarithm dex degree degrees deg degs radian radians relative reference referenced respect w measured counted shape row column major order index
  frame comoving co lagrangian eulerian proper up upward upwards down downward downwards inward inwards outward outwards log10 log2 above below zero vanishes potential virtual
  molar specific decadic arcdeg arcdegree arcdegrees contiguous ordered sorted indexed numbered level levels excluding including in`.split(
    /\s+/,
  );
/** Words that may begin what stands in brackets and is no unit by itself. */
const OPENING =
  'given no none fraction frac ratio pure mass mole n nd non unit units in dimensionless unitless nondim'.split(' ');

/** The words to be known to a table of names that comments are looked at with. */
export const CLAIM_WORDS: readonly (readonly [string, number])[] = [
  ...[...UNIT_WORDS].map((word) => [word.toLowerCase(), UNIT_WORD] as const),
  ...SAYING.map((word) => [word, SAYING_WORD] as const),
  ...OPENING.map((word) => [word, OPENING_WORD] as const),
];

/** A table of names: the number of a spelling that is known, flags and stamps by number. */
export interface WordTable {
  /** `hash`: 31 times the hash so far plus the byte in lower case. */
  knownHashed(bytes: Uint8Array, from: number, to: number, hash: number): number;
  readonly flags: Uint8Array;
  readonly stamps: Int32Array;
}

const LETTER = 1;
const DIGIT = 2;
const BLANK = 3;
const OPEN = 4;
const SURE = 5;
const CLASS = new Uint8Array(256);
for (let byte = 0; byte < 256; byte++) {
  const small = byte | 32;
  if (small >= 97 && small <= 122) CLASS[byte] = LETTER;
  else if (byte >= 48 && byte <= 57) CLASS[byte] = DIGIT;
  else if (byte === 32 || byte === 9 || byte === 13) CLASS[byte] = BLANK;
  else if (byte === 40 || byte === 91) CLASS[byte] = OPEN;
  else if (byte === 92 || byte === 36 || byte === 126 || byte >= 128) CLASS[byte] = SURE;
}
CLASS[95] = LETTER;

/**
 * @param stamp  the mark, in `table.stamps`, of the names asked for
 * @returns MENTIONS, SAYS and EMPTY as bits
 */
export function lookAtComment(table: WordTable, bytes: Uint8Array, from: number, to: number, stamp: number): number {
  const { flags, stamps } = table;
  let found = 0;
  let words = 0;
  let units = 0;
  let opened = false;
  let marks = true;
  for (let at = from; at < to; ) {
    const byte = bytes[at]!;
    const kind = CLASS[byte]!;
    if (kind === BLANK) {
      at++;
      continue;
    }
    if (kind === LETTER) {
      marks = false;
      let end = at + 1;
      let letters = 0;
      let underscore = byte === 95;
      let hash = underscore ? 95 : byte | 32;
      let letterHash = 0;
      for (; end < to; end++) {
        const one = bytes[end]!;
        const next = CLASS[one]!;
        if (next === LETTER) {
          if (one === 95) {
            underscore = true;
            hash = (Math.imul(hash, 31) + 95) | 0;
          } else hash = (Math.imul(hash, 31) + (one | 32)) | 0;
        } else if (next === DIGIT) {
          if (letters === 0) {
            letters = end - at;
            letterHash = hash;
          }
          if (underscore && bytes[end - 1] === 95 && one === 49) found |= SAYS;
          hash = (Math.imul(hash, 31) + one) | 0;
        } else break;
      }
      words++;
      const id = table.knownHashed(bytes, at, end, hash);
      let flag = 0;
      if (id >= 0) {
        if (stamps[id] === stamp) found |= MENTIONS;
        flag = flags[id]!;
      }
      if (letters > 0 && (flag & UNIT_WORD) === 0) {
        const plain = table.knownHashed(bytes, at, at + letters, letterHash);
        if (plain >= 0) flag |= flags[plain]! & UNIT_WORD;
      }
      if ((flag & SAYING_WORD) !== 0) found |= SAYS;
      if ((flag & UNIT_WORD) !== 0 || underscore) {
        units++;
        if (opened) found |= SAYS;
      } else if (opened && (flag & OPENING_WORD) !== 0) found |= SAYS;
      opened = false;
      at = end;
      continue;
    }
    at++;
    if (kind === OPEN) {
      marks = false;
      opened = true;
    } else if (kind === SURE) {
      marks = false;
      found |= SAYS;
    } else {
      if (kind === DIGIT || (byte !== 33 && byte !== 42 && byte !== 47 && byte !== 35 && byte !== 45)) marks = false;
      // `(10^-6 m)`, `[%]`, `(-)`; an index or an empty list says nothing.
      if (
        opened &&
        byte !== 41 &&
        byte !== 93 &&
        byte !== 58 &&
        byte !== 44 &&
        byte !== 61 &&
        byte !== 39 &&
        byte !== 34
      )
        found |= SAYS;
      opened = false;
    }
  }
  if (units > 0 && units === words && to - from < 80) found |= SAYS;
  return marks ? EMPTY : found;
}
