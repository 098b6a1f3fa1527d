/** The outcome of an audit, and the sealed file that says what was cleared: written by `mortise audit`, tested by --verify and --gate. */
import { createHash } from 'node:crypto';
import { canonicalJson, type Json } from '../model/canonical-json.ts';
import type { Finding } from '../model/finding.ts';

export type Outcome = 'cleared' | 'cleared with cautions' | 'held';

/** Held by any stop; with cautions by any caution; notes do not count. */
export function outcomeOf(open: readonly Finding[]): Outcome {
  if (open.some((finding) => finding.gravity === 'stop')) return 'held';
  return open.some((finding) => finding.gravity === 'caution') ? 'cleared with cautions' : 'cleared';
}

/** What a clearance is about. Content ids are those of git, so that they can be made again without Mortise. */
export interface Clearance {
  readonly format: 'mortise clearance 1';
  readonly assembly: string;
  readonly outcome: Outcome;
  /** When the audit ended, ISO 8601 in UTC. */
  readonly made: string;
  /** Full commit id, and the id of its tree; null outside git. */
  readonly revision: string | null;
  readonly tree: string | null;
  /** Files that differed from the revision; a clearance with any is of no use to a gate. */
  readonly changed: readonly string[];
  readonly modules: readonly ClearedModule[];
  readonly cases: readonly ClearedCase[];
  readonly findings: readonly {
    readonly kind: string;
    readonly gravity: string;
    readonly module?: string;
    readonly says: string;
  }[];
  readonly accepted: readonly {
    readonly kind: string;
    readonly says: string;
    readonly reason: string;
    readonly by?: string;
    readonly until?: string;
  }[];
  readonly environment: Readonly<Record<string, string>>;
  readonly caution?: string;
}

export interface ClearedModule {
  readonly component: string;
  readonly module: string;
  readonly version: string;
  /** Path to git blob id of every file it is made of, its manifest and tables included. */
  readonly files: Readonly<Record<string, string>>;
}

export interface ClearedCase {
  readonly case: string;
  readonly class: string;
  /** Largest deviation in tolerances; null when not comparable. */
  readonly tolerances: number | null;
}

/**
 * The clearance file's text: the clearance and the seal over its canonical JSON, indented for people.
 *
 * @param sign  makes a signature over the seal
 */
export function sealedText(clearance: Clearance, sign?: (seal: string) => string): string {
  const seal = sealOf(clearance);
  return `${JSON.stringify({ clearance, seal, ...(sign === undefined ? {} : { signature: sign(seal) }) }, null, 2)}\n`;
}

/** `sha256:` and 64 hexadecimal digits over the canonical JSON (RFC 8785). */
export function sealOf(clearance: Clearance): string {
  // Through JSON once, so that what is sealed is exactly what a reader of the file gets.
  const plain = JSON.parse(JSON.stringify(clearance)) as Json;
  return `sha256:${createHash('sha256').update(canonicalJson(plain)).digest('hex')}`;
}

export type Unsealed =
  | { readonly clearance: Clearance; readonly seal: string; readonly signature?: string }
  | { readonly broken: string };

/** Reads a clearance file back; `broken` says in one sentence what is wrong with it. */
export function unseal(text: string): Unsealed {
  let whole: unknown;
  try {
    whole = JSON.parse(text);
  } catch (error) {
    return { broken: `it is no JSON text: ${(error as Error).message}` };
  }
  const { clearance, seal, signature } = (whole ?? {}) as {
    clearance?: Clearance;
    seal?: unknown;
    signature?: unknown;
  };
  if (typeof clearance !== 'object' || clearance === null || clearance.format !== 'mortise clearance 1') {
    return { broken: 'it holds no clearance of the form "mortise clearance 1"' };
  }
  const expected = sealOf(clearance);
  if (seal !== expected)
    return { broken: `its seal is ${String(seal)} where the content asks for ${expected}: it was altered` };
  return { clearance, seal: expected, ...(typeof signature === 'string' ? { signature } : {}) };
}

/** What the gate compares: the code that is checked out now. */
export interface CheckedOut {
  readonly revision: string | null;
  readonly tree: string | null;
  readonly changed: readonly string[];
}

/** Why the checked-out code may not run under this clearance; empty when it may. */
export function gateReasons(clearance: Clearance, now: CheckedOut): string[] {
  const reasons: string[] = [];
  if (clearance.outcome === 'held') reasons.push('the audit ended held');
  if (clearance.changed.length > 0)
    reasons.push(`the audit saw ${clearance.changed.length} files that were in no revision: ${few(clearance.changed)}`);
  if (now.tree === null) reasons.push('this folder is in no git repository');
  else if (now.tree !== clearance.tree) {
    reasons.push(
      `the code here is ${now.revision?.slice(0, 12)}, the cleared one is ${clearance.revision?.slice(0, 12)}, and their contents differ`,
    );
  }
  if (now.changed.length > 0)
    reasons.push(`${now.changed.length} files here differ from the revision: ${few(now.changed)}`);
  return reasons;
}

function few(files: readonly string[]): string {
  return files.length <= 3 ? files.join(', ') : `${files.slice(0, 3).join(', ')} and ${files.length - 3} more`;
}
