/** All records together: what each entry and notice is today, and whether a record is missing, doubled or forked. */
import type { Finding } from '../model/finding.ts';
import type { ReadRecord } from './read-record.ts';
import {
  type Entry,
  fileOf,
  type Notice,
  type RegisterRecord,
  type Remaking,
  type Seal,
  type Standing,
} from './record.ts';

/** An entry as it stands after every record about it. */
export interface StandingEntry {
  readonly id: string;
  /** From the record that nothing replaces. */
  readonly content: Entry;
  readonly written: string;
  readonly by: string;
  readonly seal: Seal;
  readonly withdrawn: string | null;
  readonly standing: Standing | null;
  readonly because?: string;
  /** Every record about it, oldest first. */
  readonly records: readonly { readonly file: string; readonly record: RegisterRecord }[];
}

export interface StandingNotice {
  readonly id: string;
  readonly content: Notice;
  readonly written: string;
  readonly lifted: string | null;
  readonly seal: Seal;
}

export interface RegisterState {
  readonly entries: ReadonlyMap<string, StandingEntry>;
  readonly notices: ReadonlyMap<string, StandingNotice>;
  /** Seals that no record follows: what the next record has to name. */
  readonly tips: readonly Seal[];
  readonly findings: readonly Finding[];
}

/** Puts records together. Altered records still count, so that nothing vanishes from sight; the findings say what to make of them. */
export function registerState(read: readonly ReadRecord[]): RegisterState {
  const about = new Map<string, Kept[]>();
  const seen = new Set<string>();
  for (const { file, record } of read) {
    if (record === undefined || seen.has(record.seal)) continue;
    seen.add(record.seal);
    const all = about.get(record.about);
    if (all === undefined) about.set(record.about, [{ file, record }]);
    else all.push({ file, record });
  }
  const entries = new Map<string, StandingEntry>();
  const notices = new Map<string, StandingNotice>();
  for (const [id, records] of about) {
    records.sort((a, b) => compare(a.record.written, b.record.written) || compare(a.record.seal, b.record.seal));
    const entry = standingEntry(id, records);
    if (entry !== null) entries.set(id, entry);
    const notice = standingNotice(id, records);
    if (notice !== null) notices.set(id, notice);
  }
  const chained = chain(read.flatMap((one) => headOf(one) ?? []));
  return {
    entries,
    notices,
    tips: chained.tips,
    findings: [...read.flatMap((one) => one.findings), ...chained.findings],
  };
}

/** What of a record the chain needs: little enough to hold a hundred thousand of them. */
export interface RecordHead {
  readonly file: string;
  readonly kind: RegisterRecord['kind'];
  readonly about: string;
  readonly seal: Seal;
  /** Seals that it follows or replaces. */
  readonly names: readonly Seal[];
  readonly replaces?: Seal;
  /** The name that its content gives it. */
  readonly belongs: string;
}

export function headOf({ file, record }: ReadRecord): RecordHead | null {
  if (record === undefined) return null;
  const { kind, about, seal, follows, replaces } = record;
  const names = replaces === undefined ? follows : [...follows, replaces];
  return { file, kind, about, seal, names, ...(replaces === undefined ? {} : { replaces }), belongs: fileOf(record) };
}

/** What is missing, doubled, misnamed or forked among all records, and the seals that none follows. */
export function chain(heads: readonly RecordHead[]): { readonly findings: Finding[]; readonly tips: Seal[] } {
  const findings: Finding[] = [];
  const fileBySeal = new Map<string, string>();
  const amendments = new Map<string, RecordHead[]>();
  for (const head of heads) {
    const other = fileBySeal.get(head.seal);
    if (other !== undefined) {
      findings.push(
        finding(
          'record-doubled',
          'caution',
          head.file,
          `This record stands in ${other} too.`,
          'remove one of the two files.',
        ),
      );
      continue;
    }
    fileBySeal.set(head.seal, head.file);
    if (!head.file.endsWith(head.belongs)) {
      findings.push(
        finding(
          'record-renamed',
          'caution',
          head.file,
          `This record belongs in ${head.belongs}.`,
          'give the file its name back.',
        ),
      );
    }
    if (head.kind === 'amendment' && head.replaces !== undefined) {
      amendments.set(head.replaces, [...(amendments.get(head.replaces) ?? []), head]);
    }
  }
  const named = new Set<string>();
  for (const head of heads) {
    for (const one of new Set(head.names)) {
      named.add(one);
      if (fileBySeal.has(one)) continue;
      findings.push(
        finding(
          'record-missing',
          'stop',
          head.file,
          `This record names the record ${one.slice(0, 19)}, which is not in the register.`,
          'bring the missing record back from git history or from another clone.',
        ),
      );
    }
  }
  for (const several of amendments.values()) {
    if (several.length < 2) continue;
    findings.push(
      finding(
        'record-forked',
        'caution',
        several.at(-1)!.file,
        `${several[0]!.about} was amended ${several.length} times from the same state, on branches that were merged since.`,
        'amend it once more, with what is right of both.',
      ),
    );
  }
  return { findings, tips: ([...fileBySeal.keys()] as Seal[]).filter((one) => !named.has(one)).sort() };
}

type Kept = { readonly file: string; readonly record: RegisterRecord };

function standingEntry(id: string, records: readonly Kept[]): StandingEntry | null {
  const versions = records.filter(({ record }) => record.kind === 'entry' || record.kind === 'amendment');
  const latest = lastUnreplaced(versions);
  if (latest === undefined) return null;
  const withdrawal = records.findLast(({ record }) => record.kind === 'withdrawal');
  const remaking = records.findLast(({ record }) => record.kind === 'remaking')?.record.content as Remaking | undefined;
  return {
    id,
    content: latest.record.content as Entry,
    written: latest.record.written,
    by: latest.record.by.name,
    seal: latest.record.seal,
    withdrawn: withdrawal === undefined ? null : (withdrawal.record.content as { reason: string }).reason,
    standing: remaking?.standing ?? null,
    ...(remaking?.because === undefined ? {} : { because: remaking.because }),
    records,
  };
}

function standingNotice(id: string, records: readonly Kept[]): StandingNotice | null {
  const latest = lastUnreplaced(records.filter(({ record }) => record.kind === 'notice'));
  if (latest === undefined) return null;
  const lifting = records.findLast(({ record }) => record.kind === 'lifting');
  return {
    id,
    content: latest.record.content as Notice,
    written: latest.record.written,
    lifted: lifting === undefined ? null : (lifting.record.content as { reason: string }).reason,
    seal: latest.record.seal,
  };
}

function lastUnreplaced(versions: readonly Kept[]): Kept | undefined {
  const replaced = new Set(versions.map(({ record }) => record.replaces));
  return versions.findLast(({ record }) => !replaced.has(record.seal)) ?? versions.at(-1);
}

function finding(
  kind: Finding['kind'],
  gravity: Finding['gravity'],
  file: string,
  says: string,
  next: string,
): Finding {
  return { kind, gravity, place: { file, line: 1, column: 1 }, says, evidence: [], next };
}

function compare(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
