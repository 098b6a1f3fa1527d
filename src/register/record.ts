/**
 * The register is a set of sealed records, one file each. A record is never changed: an amendment, a withdrawal or the lifting of
 * a notice is a new record that names the one it replaces. Every record also names the records that nothing followed when it was
 * written, so that one taken out of the middle is missed by those that came after.
 */
import { createHash } from 'node:crypto';
import { canonicalJson, type Json } from '../model/canonical-json.ts';
import type { JsonObject } from './plain-yaml.ts';

export const RECORD_KINDS = ['entry', 'amendment', 'withdrawal', 'remaking', 'notice', 'lifting'] as const;
export type RecordKind = (typeof RECORD_KINDS)[number];

/** `sha256:` and 64 hexadecimal digits. */
export type Seal = `sha256:${string}`;

export interface RegisterRecord<C extends object = Entry | Notice | Withdrawal | Remaking | Lifting> {
  readonly format: 'mortise record 1';
  readonly kind: RecordKind;
  /** What it is about: the id that the first record of the entry or notice was given. */
  readonly about: string;
  /** The record that this one replaces or speaks of. */
  readonly replaces?: Seal;
  /** Records that none followed when this one was written. */
  readonly follows: readonly Seal[];
  /** ISO 8601 in UTC. */
  readonly written: string;
  readonly by: Person;
  readonly content: C;
  readonly seal: Seal;
  /** Made by `ssh-keygen -Y sign` over the seal, in the namespace `mortise`. */
  readonly signature?: string;
}

export interface Person {
  readonly name: string;
  readonly orcid?: string;
  readonly role?: string;
}

/** A published or internal result and everything that made it. */
export interface Entry {
  readonly result: Result;
  readonly code: readonly CodeRevision[];
  readonly modules: readonly UsedModule[];
  /** Contract to version. */
  readonly contracts?: Readonly<Record<string, string>>;
  readonly inputs?: readonly Digested[];
  readonly environment?: Readonly<Record<string, string>>;
  readonly clearance?: { readonly seal: string; readonly outcome: string };
  readonly cases?: readonly {
    readonly case: string;
    readonly quantity: string;
    readonly class: string;
    readonly tolerances: number | null;
  }[];
  /** States visited: quantity, unit, lowest and highest. */
  readonly footprint?: readonly {
    readonly quantity: string;
    readonly unit: string;
    readonly from: number;
    readonly to: number;
  }[];
  readonly outputs?: readonly (Digested & { readonly kept?: string })[];
  readonly people: readonly Person[];
  readonly dates?: { readonly begun?: string; readonly ended?: string; readonly published?: string };
  readonly notes?: string;
}

export interface Result {
  readonly title?: string;
  readonly doi?: string;
  readonly arxiv?: string;
  readonly thesis?: string;
  readonly dataset?: string;
  readonly campaign?: string;
  readonly figure?: string;
  readonly table?: string;
}

export interface CodeRevision {
  readonly repository?: string;
  readonly commit: string;
  /** SWHID of the revision, `swh:1:rev:…` (ISO/IEC 18670). */
  readonly swhid?: string;
}

export interface UsedModule {
  readonly module: string;
  readonly component: string;
  readonly version: string;
  /** `sha256:` of the manifest's bytes. */
  readonly manifest?: string;
  /** SWHIDs of its source files and tables, by path. */
  readonly contents?: Readonly<Record<string, string>>;
}

export interface Digested {
  readonly name: string;
  /** `sha256:` and 64 hexadecimal digits. */
  readonly digest: string;
}

/** A recorded defect of module versions. */
export interface Notice {
  readonly title: string;
  readonly module: string;
  /** Versions that have the defect, a semver range. */
  readonly versions?: string;
  readonly broughtIn?: readonly string[];
  readonly mendedAt?: readonly string[];
  /** It only touches runs that plug the module into this component. */
  readonly component?: string;
  /** It only touches runs whose footprint enters all of these. */
  readonly states?: readonly {
    readonly quantity: string;
    readonly unit: string;
    readonly from: number | null;
    readonly to: number | null;
  }[];
  readonly says: string;
  readonly gravity?: 'stop' | 'caution' | 'note';
}

export interface Withdrawal {
  readonly reason: string;
}

export interface Lifting {
  readonly reason: string;
}

export const STANDINGS = ['remade bit-for-bit', 'remade within tolerance', 'not remade', 'cannot be tried'] as const;
export type Standing = (typeof STANDINGS)[number];

/** What came of making a result again. */
export interface Remaking {
  readonly standing: Standing;
  /** The first thing that differs, or what is missing. */
  readonly because?: string;
  readonly environment?: Readonly<Record<string, string>>;
}

/** The record with its seal: SHA-256 over the canonical JSON (RFC 8785) of everything but seal and signature. */
export function seal<C extends object>(record: Omit<RegisterRecord<C>, 'seal' | 'signature'>): RegisterRecord<C> {
  return { ...record, seal: sealOf(record) };
}

export function sealOf(record: object): Seal {
  const { seal: _seal, signature: _signature, ...sealed } = record as JsonObject;
  return `sha256:${createHash('sha256')
    .update(canonicalJson(sealed as Json))
    .digest('hex')}`;
}

/** A name for a new entry or notice that two people on two branches do not both choose: day, a few words of its title, part of its seal. */
export function nameFor(written: string, title: string, distinguishing: string): string {
  const words = title
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '')
    .toLowerCase()
    .slice(0, 40)
    .replace(/-+$/, '');
  const part = createHash('sha256').update(distinguishing).digest('hex').slice(0, 8);
  return [written.slice(0, 10), ...(words === '' ? [] : [words]), part].join('-');
}

/** Where a record is kept below the register's folder: `2026/2026-03-01-figure-4-1a2b3c4d.entry.5e6f7a8b.yaml`. */
export function fileOf(record: RegisterRecord<object>): string {
  return `${record.written.slice(0, 4)}/${record.about}.${record.kind}.${record.seal.slice(7, 15)}.yaml`;
}
