/** The one shape of everything Mortise has to say. Every stage makes findings; audit, review, report and screens pass them on. */
import type { FindingKind } from './finding-kind.ts';
import { comparePlaces, compareText, type Place } from './place.ts';

export const GRAVITIES = ['stop', 'caution', 'note'] as const;
/** *stop*: do not go on. *caution*: go on knowing this. *note*: worth knowing. */
export type Gravity = (typeof GRAVITIES)[number];

/** One thing that backs a finding: words, a place, or an excerpt with the characters meant underlined. */
export interface Evidence {
  readonly says: string;
  readonly place?: Place;
  readonly excerpt?: Excerpt;
}

/** One line of a file, without its line end, and the characters in it that are meant. */
export interface Excerpt {
  readonly line: number;
  readonly text: string;
  /** First character meant, from 1. */
  readonly column: number;
  /** How many characters are meant, at least 1. */
  readonly width: number;
}

export interface Finding {
  readonly kind: FindingKind;
  readonly gravity: Gravity;
  /** The module it is about, by its manifest name or, without manifests, its drafted name. */
  readonly module?: string;
  readonly place: Place;
  /** One sentence: what is wrong. */
  readonly says: string;
  readonly evidence: readonly Evidence[];
  /** What to do next, as an instruction. */
  readonly next: string;
}

/** Gravest first, then by place, then by kind and words, so that the order never depends on how findings were gathered. */
export function sortFindings(findings: readonly Finding[]): Finding[] {
  return [...findings].sort(
    (a, b) =>
      GRAVITIES.indexOf(a.gravity) - GRAVITIES.indexOf(b.gravity) ||
      comparePlaces(a.place, b.place) ||
      compareText(a.kind, b.kind) ||
      compareText(a.says, b.says),
  );
}

export function hasStop(findings: readonly Finding[]): boolean {
  return findings.some((finding) => finding.gravity === 'stop');
}
