/** Fixed or free form, and how wide a fixed line is: by the name where it tells, by the content where it does not. Pure. */
import { WORD } from './names.ts';

const FREE_ENDING = /\.(f90|f95|f03|f08|f18|f2k|pf|fpp|fypp)$/i;

/** As much of a file as its form is judged by. */
const JUDGED_LINES = 400;
const JUDGED_BYTES = 60_000;
/** So many votes more than four times the others need no further lines. */
const DECIDED = 60;

/**
 * `.f .for .f77 .ftn` are fixed and `.f90` and later free; `.F`, `.h`, `.inc` and files without an ending may be either, and
 * a build can say otherwise, so content that can only be one form wins over the name.
 */
export function sourceForm(path: string, bytes: Uint8Array): 'fixed' | 'free' {
  let fixed = 0;
  let free = 0;
  let lines = 0;
  const size = Math.min(bytes.length, JUDGED_BYTES);
  for (let start = 0; start < size; ) {
    let end = start;
    while (end < size && bytes[end] !== 10) end++;
    const votes = votesOf(bytes, start, end);
    if (votes >= 0) {
      if (++lines > JUDGED_LINES) break;
      fixed += votes & 15;
      free += votes >> 4;
      if (fixed - free * 4 > DECIDED || free - fixed * 4 > DECIDED) break;
    }
    start = end + 1;
  }
  if (FREE_ENDING.test(path)) return fixed > 10 && fixed > free * 4 ? 'fixed' : 'free';
  return free > fixed * 2 + 4 ? 'free' : 'fixed';
}

/** Votes for fixed form, and 16 times those for free form; -1 for a line that says nothing. */
function votesOf(bytes: Uint8Array, start: number, end: number): number {
  let lead = start;
  while (lead < end && isBlank(bytes[lead]!)) lead++;
  if (lead === end || bytes[start] === 35) return -1;
  let fixed = 0;
  let free = 0;
  const first = bytes[start]!;
  if ((first === 67 || first === 99 || first === 42) && !continuesWord(bytes, start + 1, end)) fixed = 2;
  else if (lead - start === 5 && bytes[lead] !== 48 && bytes[lead] !== 33 && isMark(bytes, lead, end)) fixed = 2;
  else if (lead - start <= 4 && isLetter(bytes[lead]!) && !isCommentLetter(bytes, lead, end)) free = 1;
  // A line that ends with `&`, at no place where fixed form has its own use for it.
  for (let at = lead; at < end; at++) {
    const byte = bytes[at]!;
    if (byte === 33 || byte === 39 || byte === 34) break;
    if (byte !== 38 || at - start === 72 || at - start === 5) continue;
    let next = at + 1;
    while (next < end && isBlank(bytes[next]!)) next++;
    if (next === end || bytes[next] === 33) free += 2;
  }
  return fixed + 16 * Math.min(free, 15);
}

function isBlank(byte: number): boolean {
  return byte === 32 || byte === 9 || byte === 13;
}

function isLetter(byte: number): boolean {
  return (byte >= 65 && byte <= 90) || (byte >= 97 && byte <= 122);
}

/** What follows a `c` in column 1 makes it a name: `call`, `c = 1`, `c(i)`. */
function continuesWord(bytes: Uint8Array, at: number, end: number): boolean {
  if (at >= end) return false;
  const byte = bytes[at]!;
  return WORD[byte] === 1 || byte === 61 || byte === 40 || byte === 37;
}

function isCommentLetter(bytes: Uint8Array, at: number, end: number): boolean {
  const letter = bytes[at]! | 32;
  return (letter === 99 || letter === 100) && at + 1 < end && isBlank(bytes[at + 1]!);
}

/** A character in column 6 that continues, and no statement of free form indented by five. */
function isMark(bytes: Uint8Array, at: number, end: number): boolean {
  if (!isLetter(bytes[at]!)) return true;
  let next = at;
  while (next < end && WORD[bytes[next]!] === 1) next++;
  while (next < end && isBlank(bytes[next]!)) next++;
  const byte = next < end ? bytes[next]! : 0;
  return !(byte === 61 || byte === 40 || byte === 44 || (byte === 58 && bytes[next + 1] === 58));
}

/**
 * 72 columns, or 132 where the lines of a fixed-form file plainly go on behind column 72: their parentheses close only there.
 * Card sequence numbers and remarks behind column 72 keep it at 72.
 */
export function fixedColumns(bytes: Uint8Array): 72 | 132 {
  let wide = 0;
  let narrow = 0;
  let lines = 0;
  for (let start = 0; start < bytes.length && lines < 40_000 && wide + narrow < 40; lines++) {
    let end = bytes.indexOf(10, start);
    if (end < 0) end = bytes.length;
    if (end - start > 72) {
      const vote = widthVote(bytes, start, end);
      if (vote > 0) wide++;
      else if (vote < 0) narrow++;
    }
    start = end + 1;
  }
  return wide > narrow ? 132 : 72;
}

function widthVote(bytes: Uint8Array, start: number, end: number): number {
  const first = bytes[start]!;
  if (first === 67 || first === 99 || first === 42 || first === 33 || first === 35 || first === 9) return 0;
  let depth = 0;
  let lowest = 0;
  for (let at = start + 6; at < start + 72; at++) {
    const byte = bytes[at]!;
    if (byte === 33 || byte === 39 || byte === 34) return 0;
    if (byte === 40) depth++;
    else if (byte === 41) lowest = Math.min(lowest, --depth);
  }
  let last = end;
  while (last > start + 72 && isBlank(bytes[last - 1]!)) last--;
  if (last === start + 72) return 0;
  if (depth <= 0) return last <= start + 80 ? -1 : 0;
  for (let at = start + 72; at < last; at++) {
    const byte = bytes[at]!;
    if (byte === 33) break;
    if (byte === 40) depth++;
    else if (byte === 41) depth--;
  }
  return depth === 0 ? 1 : -1;
}
