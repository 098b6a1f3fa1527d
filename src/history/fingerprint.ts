/**
 * Fingerprints of what a procedure does, that survive new names of variables, another layout, comments and source form.
 * Text is cut into tokens; names become one symbol, literals keep their value; hashes of runs of tokens are thinned by winnowing.
 * @source Schleimer, Wilkerson & Aiken (2003), "Winnowing: Local Algorithms for Document Fingerprinting", SIGMOD, 76-85
 */
import type { Language } from '../model/interface.ts';
import { eachToken, NAME_SYMBOL } from './tokens.ts';

export interface ProcedureBody {
  readonly name: string;
  /** Of the tokens with their names: the same only when nothing but layout, comments and case differ. */
  readonly hash: string;
  /** The same with names numbered as they come up: equal for what differs only in the names of things, too. */
  readonly form: string;
  /** Winnowed hashes, sorted, each once. */
  readonly prints: readonly number[];
  readonly tokens: number;
  /** The text it was made from, where that is still at hand: equal texts need no fingerprints. */
  readonly written?: string;
}

/** Runs of this many tokens are the shortest copy that can be found (the "noise threshold" k). */
export const RUN_TOKENS = 12;
/** Of every window of this many runs one hash is kept, so any copy of RUN_TOKENS + WINDOW_RUNS - 1 tokens is found. */
export const WINDOW_RUNS = 8;

/** @param text  the source lines of one procedure, line ends as they are */
export function procedureBody(
  name: string,
  text: string,
  language: Language,
  sourceForm?: 'fixed' | 'free',
): ProcedureBody {
  const exact = new Digest();
  const form = new Digest();
  const numbers = new Map<number, number>();
  const symbols: number[] = [];
  eachToken(text, language, sourceForm, (hash, symbol) => {
    exact.add(hash);
    symbols.push(symbol);
    if (symbol !== NAME_SYMBOL) return form.add(symbol);
    const number = numbers.get(hash) ?? numbers.size;
    numbers.set(hash, number);
    form.add(number);
  });
  return { name, hash: exact.text(), form: form.text(), prints: winnow(symbols), tokens: symbols.length };
}

/** 64 bits in two halves: FNV-1a, and a multiplicative one beside it. */
class Digest {
  private first = 0x811c9dc5;
  private second = 0x1000193;

  add(value: number): void {
    this.first = Math.imul(this.first ^ value, 0x01000193);
    this.second = Math.imul(this.second ^ value, 0x5bd1e995) ^ (this.second >>> 13);
  }

  text(): string {
    const hex = (half: number) => (half >>> 0).toString(16).padStart(8, '0');
    return hex(this.first) + hex(this.second);
  }
}

/**
 * @param symbols  one number a token
 * @returns the selected hashes, sorted, without repeats; empty for fewer than {@link RUN_TOKENS} tokens
 */
export function winnow(symbols: readonly number[], run = RUN_TOKENS, window = WINDOW_RUNS): number[] {
  if (symbols.length < run) return [];
  const hashes: number[] = [];
  const BASE = 0x01000193;
  let power = 1;
  for (let step = 1; step < run; step += 1) power = Math.imul(power, BASE);
  let rolling = 0;
  for (let at = 0; at < symbols.length; at += 1) {
    if (at >= run) rolling = (rolling - Math.imul(symbols[at - run]!, power)) | 0;
    rolling = (Math.imul(rolling, BASE) + symbols[at]!) | 0;
    if (at >= run - 1) hashes.push(scatter(rolling));
  }
  const kept = new Set<number>();
  // The rightmost minimum of every window, as in the paper's robust winnowing: runs of one value keep one print.
  let minimum = -1;
  for (let end = 0; end < hashes.length; end += 1) {
    const start = end - window + 1;
    if (start < 0 && end < hashes.length - 1) continue;
    const from = Math.max(0, start);
    if (minimum < from) {
      minimum = from;
      for (let at = from; at <= end; at += 1) if (hashes[at]! <= hashes[minimum]!) minimum = at;
    } else if (hashes[end]! <= hashes[minimum]!) {
      minimum = end;
    }
    kept.add(hashes[minimum]!);
  }
  return [...kept].sort((a, b) => a - b);
}

/** Shared prints over all prints (Jaccard), 0 to 1; 0 when either side has none. */
export function similarity(a: readonly number[], b: readonly number[]): number {
  const shared = sharedPrints(a, b);
  const all = a.length + b.length - shared;
  return a.length === 0 || b.length === 0 ? 0 : shared / all;
}

/** How many values two sorted lists share. */
export function sharedPrints(a: readonly number[], b: readonly number[]): number {
  let shared = 0;
  for (let i = 0, j = 0; i < a.length && j < b.length; ) {
    if (a[i] === b[j]) {
      shared += 1;
      i += 1;
      j += 1;
    } else if (a[i]! < b[j]!) i += 1;
    else j += 1;
  }
  return shared;
}

/** Neighbouring sums must not have neighbouring hashes, or the minimum would follow the text. */
function scatter(value: number): number {
  let hash = value ^ (value >>> 16);
  hash = Math.imul(hash, 0x85ebca6b);
  hash ^= hash >>> 13;
  hash = Math.imul(hash, 0xc2b2ae35);
  return (hash ^ (hash >>> 16)) >>> 0;
}
