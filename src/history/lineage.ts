/** Where a module came from: its births, moves, versions and people, and its copies in other repositories. */
import type { Finding } from '../model/finding.ts';
import { languageOf, readSource } from '../readers/read-source.ts';
import { decodeText } from '../sources/git-object.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { printSwhid } from '../sources/swhid.ts';
import { dayOf } from './commit-text.ts';
import { type Descent, findDescent } from './descent.ts';
import { type DriftReport, drift } from './drift.ts';
import type { ModuleStep } from './module-step.ts';
import { printIndex } from './print-index.edge.ts';
import { readLog } from './read-log.edge.ts';
import type { ScanOptions } from './scan.edge.ts';
import { versionOfTag } from './version-text.ts';
import { type Vintage, vintageOf } from './vintage.ts';

export interface Lineage {
  readonly module: string;
  /** Births, moves and ends of its files, and changes of its version, oldest first. */
  readonly events: readonly LineageEvent[];
  /** Commits that touched it, by year and person, oldest year first, busiest person first. */
  readonly people: readonly { readonly year: number; readonly name: string; readonly commits: number }[];
  /** Its files at the end of the history. */
  readonly files: readonly { readonly path: string; readonly swhid: string; readonly vintage: Vintage }[];
  /** Names of all procedures that it ever held. */
  readonly procedures: readonly string[];
  /** When a result was last validated with it, as the references say; null when none does. */
  readonly validated: { readonly case: string; readonly date: string } | null;
  readonly copies: readonly Copy[];
  readonly findings: readonly Finding[];
}

export interface LineageEvent {
  readonly what: string;
  readonly step: Pick<ModuleStep, 'commit'>;
}

export interface Copy {
  /** The other repository, as it was named. */
  readonly repository: string;
  readonly descent: Descent;
  /** The release that first held the split, in the repository that the copy was taken from; null when none did. */
  readonly version: string | null;
}

export interface OtherRepository {
  readonly name: string;
  readonly repository: Repository;
}

/** @returns null when the history knows no such module; `known` then lists those it does */
export async function lineage(
  repository: Repository,
  to: string,
  module: string,
  others: readonly OtherRepository[],
  options: ScanOptions & { readonly folder: string },
): Promise<{ readonly lineage: Lineage | null; readonly known: readonly string[] }> {
  const report = await drift(repository, { from: null, to }, options);
  const paths = report.paths.get(module);
  if (paths === undefined) return { lineage: null, known: [...report.paths.keys()].sort() };
  const index = await printIndex(repository, to, options);
  const own = index.procedures.filter((one) => paths.has(one.path));
  const copies: Copy[] = [];
  for (const other of others) {
    const end = await other.repository.resolve('HEAD');
    const there = await printIndex(other.repository, end, options);
    const descent = findDescent(index, own, there);
    if (descent === null) continue;
    const source = descent.direction === 'from here to there' ? repository : other.repository;
    copies.push({ repository: other.name, descent, version: await releaseOf(source, descent.split.commit) });
  }
  const made: Lineage = {
    module,
    events: eventsOf(report, module),
    people: await peopleOf(repository, to, paths),
    files: await filesOf(repository, to, paths),
    procedures: [...new Set(own.map((one) => one.name))].sort(),
    validated: await validatedWith(repository, to, module, options.folder),
    copies,
    findings: copies.flatMap((copy) => copyFindings(module, copy)),
  };
  return { lineage: made, known: [] };
}

function eventsOf(report: DriftReport, module: string): LineageEvent[] {
  const events: LineageEvent[] = [];
  let version: string | null = null;
  for (const step of report.steps) {
    if (step.module !== module) continue;
    if (step.event === 'born') events.push({ what: 'born', step });
    if (step.event === 'moved') events.push({ what: `moved from ${step.movedFrom}`, step });
    if (step.event === 'gone') events.push({ what: 'gone', step });
    if (step.versionBefore !== null && step.versionBefore !== version && step.declaredBy === 'manifest') {
      events.push({ what: `version ${step.versionBefore}`, step });
      version = step.versionBefore;
    }
  }
  return events;
}

async function peopleOf(repository: Repository, to: string, paths: ReadonlySet<string>): Promise<Lineage['people']> {
  const { commits } = await readLog(repository, { from: null, to }, (path) => paths.has(path));
  const counts = new Map<string, { year: number; name: string; commits: number }>();
  for (const commit of commits) {
    if (commit.files.length === 0 || commit.parents.length > 1) continue;
    const year = Number(dayOf(commit.authored).slice(0, 4));
    const key = `${year}\0${commit.author}`;
    const known = counts.get(key) ?? { year, name: commit.author, commits: 0 };
    counts.set(key, { ...known, commits: known.commits + 1 });
  }
  return [...counts.values()].sort((a, b) => a.year - b.year || b.commits - a.commits || (a.name < b.name ? -1 : 1));
}

async function filesOf(repository: Repository, to: string, paths: ReadonlySet<string>): Promise<Lineage['files']> {
  const files: Lineage['files'][number][] = [];
  for (const { path, id, kind } of (await repository.list(to)).entries) {
    if (kind !== 'file' || !paths.has(path) || languageOf(path) === null) continue;
    const bytes = await repository.blob(id);
    const vintage: Vintage =
      bytes === null
        ? { notBefore: null, likelyBefore: null, evidence: ['its content is not in this clone'] }
        : vintageOf(await readSource(path, bytes), decodeText(bytes));
    files.push({ path, swhid: printSwhid('cnt', id), vintage });
  }
  return files;
}

async function validatedWith(
  repository: Repository,
  to: string,
  module: string,
  folder: string,
): Promise<Lineage['validated']> {
  let latest: Lineage['validated'] = null;
  const inside = `${folder === '' ? '' : `${folder}/`}references/`;
  for (const { path, id } of (await repository.list(to)).entries) {
    if (!path.startsWith(inside) || !/\.ya?ml$/.test(path)) continue;
    const bytes = await repository.blob(id);
    const text = bytes === null ? '' : decodeText(bytes);
    const date = /^date:\s*["']?(\d{4}-\d{2}-\d{2})/m.exec(text)?.[1];
    const theCase = /^case:\s*(\S+)/m.exec(text)?.[1];
    const names = new RegExp(`^\\s+["']?${module.replace(/[.*+?^${}()|[\]\\]/g, '\\$&')}["']?:`, 'm').test(text);
    if (date !== undefined && theCase !== undefined && names && (latest === null || date > latest.date))
      latest = { case: theCase, date };
  }
  return latest;
}

/** The first release that holds a commit, by its tag. */
async function releaseOf(repository: Repository, commit: string): Promise<string | null> {
  const tags = (await repository.tags())
    .filter((tag) => versionOfTag(tag.name) !== null)
    .sort((a, b) => a.seconds - b.seconds);
  for (const tag of tags) {
    if ((await repository.mergeBase(commit, tag.commit)) === commit) return versionOfTag(tag.name);
  }
  return null;
}

function copyFindings(module: string, { repository, descent }: Copy): Finding[] {
  const behind = descent.procedures.filter((one) => one.missingHere.length > 0);
  if (behind.length === 0) return [];
  const count = behind.reduce((sum, one) => sum + one.missingHere.length, 0);
  const latest = behind[0]!.sharedHere;
  return [
    {
      kind: 'copy-behind',
      gravity: 'note',
      module,
      place: { file: latest.path, line: 1, column: 1, revision: latest.commit },
      says: `${count} ${count === 1 ? 'version' : 'versions'} of ${behind.length} ${behind.length === 1 ? 'procedure' : 'procedures'} in ${repository} came after the last one shared and ${count === 1 ? 'is' : 'are'} missing here.`,
      evidence: behind.slice(0, 10).map((one) => ({
        says: `${one.here}: ${one.missingHere
          .map((version) => `${version.commit.slice(0, 10)} ${dayOf(version.seconds)}`)
          .slice(0, 5)
          .join(', ')}`,
      })),
      next: `look at these commits in ${repository}, and take over the mends.`,
    },
  ];
}
