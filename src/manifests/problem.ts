/** A finding about a manifest, with the line meant as its own excerpt. */
import type { Finding, Gravity } from '../model/finding.ts';
import type { FindingKind } from '../model/finding-kind.ts';
import { printable } from '../model/printable.ts';
import type { ManifestText, Span } from './manifest-text.ts';

export interface Problem {
  readonly kind: FindingKind;
  readonly span: Span;
  readonly says: string;
  readonly next: string;
  readonly gravity?: Gravity;
  readonly module?: string;
}

export function problemFinding(source: ManifestText, problem: Problem): Finding {
  return {
    kind: problem.kind,
    gravity: problem.gravity ?? 'stop',
    ...(problem.module === undefined ? {} : { module: problem.module }),
    place: source.placeAt(problem.span.start),
    says: problem.says,
    evidence: [{ says: 'the line meant', excerpt: source.excerpt(problem.span) }],
    next: problem.next,
  };
}

/** A value as it is shown in a message: in quotes, on one line, cut at 60 characters. */
export function quoted(text: string): string {
  const shown = printable(text);
  return `"${shown.length > 60 ? `${shown.slice(0, 57)}...` : shown}"`;
}

/** `a, b or c`, each in quotes. */
export function anyOf(names: readonly string[]): string {
  const shown = names.map((name) => `"${name}"`);
  return shown.length < 2 ? shown.join('') : `${shown.slice(0, -1).join(', ')} or ${shown.at(-1)}`;
}
