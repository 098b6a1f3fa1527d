/** What is asked of the register, as data, and whether an entry answers it. The index answers the same questions faster; this is its judge. */
import semver from 'semver';
import type { StandingEntry } from './chain.ts';
import { canonicalOrcid, readDoi, sameDoi } from './identifiers.ts';
import type { Result } from './record.ts';

/** Every part given must be true of an entry. */
export interface Query {
  /** Words that stand anywhere in the entry. */
  readonly text?: string;
  readonly module?: string;
  /** A semver range that the module's version must lie in. */
  readonly versions?: string;
  readonly component?: string;
  /** SWHID, git id or sha256 digest of a file, table, input, output or revision; a beginning of eight or more digits is enough. */
  readonly content?: string;
  readonly case?: string;
  /** First and last day, of publication where known, else of writing. */
  readonly from?: string;
  readonly to?: string;
  /** Name, part of a name, or ORCID iD. */
  readonly person?: string;
  /** DOI, arXiv id, or part of a thesis, data set, campaign, figure or title. */
  readonly result?: string;
  readonly machine?: string;
  readonly standing?: string;
}

export function answers(entry: StandingEntry, query: Query): boolean {
  const { content } = entry;
  return (
    (query.text === undefined || beginsWords(searchText(entry), query.text)) &&
    (query.module === undefined && query.versions === undefined && query.component === undefined
      ? true
      : content.modules.some(
          (one) =>
            (query.module === undefined || one.module === query.module) &&
            (query.component === undefined || one.component === query.component) &&
            (query.versions === undefined || inRange(one.version, query.versions)),
        )) &&
    (query.content === undefined || contentIds(entry).some((id) => isSameContent(id, query.content!))) &&
    (query.case === undefined || (content.cases ?? []).some((one) => one.case === query.case)) &&
    (query.from === undefined || dayOf(entry) >= query.from) &&
    (query.to === undefined || dayOf(entry) <= query.to) &&
    (query.person === undefined || hasPerson(entry, query.person)) &&
    (query.result === undefined || isResult(content.result, query.result)) &&
    (query.machine === undefined || holdsWords(Object.values(content.environment ?? {}).join(' '), query.machine)) &&
    (query.standing === undefined || standingText(entry) === query.standing)
  );
}

/** Prereleases lie in a range that holds their release: for a defect they count like it. */
export function inRange(version: string, range: string): boolean {
  return semver.satisfies(version, range, { includePrerelease: true, loose: true });
}

/** `withdrawn`, one of the standings of a remaking, or `recorded`. */
export function standingText(entry: StandingEntry): string {
  if (entry.withdrawn !== null) return 'withdrawn';
  return entry.standing ?? 'recorded';
}

/** The day by which entries are found and listed. */
export function dayOf(entry: StandingEntry): string {
  return (entry.content.dates?.published ?? entry.content.dates?.ended ?? entry.written).slice(0, 10);
}

/** `doi 10.1000/182, figure 4`, for lists. */
export function resultText(result: Result): string {
  const { title, ...ids } = result;
  const parts = Object.entries(ids).filter(([, value]) => value !== undefined);
  return [...(title === undefined ? [] : [title]), ...parts.map(([key, value]) => `${key} ${value}`)].join(', ');
}

/** The words of an entry, for free text; ids and digests are asked for by content, not by word. */
export function searchText(entry: StandingEntry): string {
  return `${entry.id} ${standingText(entry)} ${words(entry.content)}`;
}

const DIGITS = /^(?:swh:1:|sha256:)|^[0-9a-f]{40,64}$/;

function words(value: unknown): string {
  if (value === null || typeof value !== 'object') return DIGITS.test(String(value)) ? '' : String(value);
  return Object.entries(value)
    .map(([key, part]) => (Array.isArray(value) ? words(part) : `${key} ${words(part)}`))
    .join(' ');
}

/** All content ids that an entry names. */
export function contentIds(entry: StandingEntry): string[] {
  const { code, modules, inputs, outputs } = entry.content;
  return [
    ...code.flatMap((one) => [one.commit, ...(one.swhid === undefined ? [] : [one.swhid])]),
    ...modules.flatMap((one) => [
      ...(one.manifest === undefined ? [] : [one.manifest]),
      ...Object.values(one.contents ?? {}),
    ]),
    ...(inputs ?? []).map((one) => one.digest),
    ...(outputs ?? []).map((one) => one.digest),
  ];
}

function isSameContent(id: string, asked: string): boolean {
  const [own, other] = [bare(id), bare(asked)];
  return own === other || (other.length >= 8 && own.startsWith(other));
}

/** The hexadecimal digits alone: a git id, a SWHID and a digest of one content are then alike. */
export function bare(id: string): string {
  return id.toLowerCase().replace(/^.*:/, '');
}

/** Every word asked for stands somewhere in the text. */
export function holdsWords(text: string, asked: string): boolean {
  const low = text.toLowerCase();
  return asked
    .toLowerCase()
    .split(/\s+/)
    .every((word) => low.includes(word));
}

/** Every word typed is the beginning of a word in the text. */
function beginsWords(text: string, asked: string): boolean {
  const words = text.toLowerCase().split(/[^\p{L}\p{N}_.-]+/u);
  return asked
    .toLowerCase()
    .split(/[^\p{L}\p{N}_.-]+/u)
    .filter((word) => word !== '')
    .every((word) => words.some((one) => one.startsWith(word)));
}

function hasPerson(entry: StandingEntry, asked: string): boolean {
  return entry.content.people.some((one) => isPerson([one.name, one.orcid ?? null], asked));
}

/** By part of a name, or by ORCID iD. */
export function isPerson([name, orcid]: readonly [string, string | null], asked: string): boolean {
  const id = canonicalOrcid(asked);
  return id === null ? holdsWords(name, asked) : orcid !== null && canonicalOrcid(orcid) === id;
}

function isResult(result: Result, asked: string): boolean {
  if (readDoi(asked) !== null) return result.doi !== undefined && sameDoi(result.doi, asked);
  return holdsWords(resultText(result), asked);
}
