/**
 * What changed about every module over a range of history, and whether a version said so.
 * Git's objects and the manifests of each commit come in; steps and findings go out.
 */
import { BUMPS, type Bump, type BumpPolicy, coversBump, DEFAULT_POLICY } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import { type Finding, sortFindings } from '../model/finding.ts';
import type { Declaration } from '../model/manifest.ts';
import { languageOf } from '../readers/read-source.ts';
import { decodeText } from '../sources/git-object.ts';
import type { CommitRange, Ref, Repository } from '../sources/repository.edge.ts';
import { askedBump, declaredBump } from './bumps.ts';
import { CallerFinder } from './callers.ts';
import type { CommitRecord } from './commit-record.ts';
import { commitText } from './commit-text.ts';
import { fileOf, stamped } from './compare-interfaces.ts';
import { compareCases, compareContracts, compareManifests } from './compare-manifests.ts';
import { type DeclaredState, DeclaredStates } from './declared-state.ts';
import { declaringFiles, isDeclaring } from './declaring-files.ts';
import { eventFinding, undeclaredFinding } from './drift-findings.ts';
import { driftKeyOf } from './drift-key.ts';
import { draftNames, followPaths } from './module-names.ts';
import type { ModuleStep } from './module-step.ts';
import { netChange } from './net-change.ts';
import { readLog } from './read-log.edge.ts';
import { followsCalendar, type Release, type ReleaseWindow, releaseWindows } from './releases.ts';
import { keepReport, keptReport } from './report-cache.edge.ts';
import { sameUnit } from './same-unit.ts';
import { scan } from './scan.edge.ts';
import type { ScanAnswer } from './scan-step.ts';
import { versionOfTag } from './version-text.ts';

export interface DriftOptions {
  /** Folder of the manifests; `manifests` when absent. */
  readonly folder?: string;
  readonly workers?: number;
  /** Take everything between the two ends of the range as one step; needs a range with both ends. */
  readonly net?: boolean;
  /** Least bumps that count whatever the manifests of the range say, for a change that must not judge itself. */
  readonly policy?: BumpPolicy;
  /** Keep and use answers of earlier scans; true when absent. */
  readonly cache?: boolean;
  readonly signal?: AbortSignal;
  readonly onProgress?: (done: number, all: number) => void;
}

export interface DriftReport {
  readonly range: CommitRange;
  readonly commits: number;
  /** False when modules were drafted, one a source file, because the range ends without manifests. */
  readonly manifests: boolean;
  /** In the order of history. */
  readonly steps: readonly ModuleStep[];
  readonly findings: readonly Finding[];
  /** Every path that each module's files ever had. */
  readonly paths: ReadonlyMap<string, ReadonlySet<string>>;
  /** What could not be read, and why. */
  readonly notes: readonly string[];
  /** False when it was interrupted; what is told is true as far as it goes. */
  readonly complete: boolean;
}

/** Undeclared steps whose callers are looked for, the latest first: each costs a listing of a whole tree. */
const MOST_CALLER_SEARCHES = 60;

/** @throws {SourceProblem} when git is missing */
export async function drift(
  repository: Repository,
  range: CommitRange,
  options: DriftOptions = {},
): Promise<DriftReport> {
  const tags = await repository.tags();
  if (options.cache === false) return compute(repository, range, options, tags);
  const key = `${driftKeyOf(range, options.folder ?? 'manifests', tags)}${options.net === true ? ` net ${JSON.stringify(options.policy ?? null)}` : ''}`;
  const kept = keptReport(repository.place, key);
  if (kept !== null) return revive(kept);
  const report = await compute(repository, range, options, tags);
  if (report.complete) keepReport(repository.place, key, keepable(report));
  return report;
}

function keepable(report: DriftReport): string {
  return JSON.stringify({ ...report, paths: [...report.paths].map(([name, paths]) => [name, [...paths]]) });
}

function revive(text: string): DriftReport {
  const kept = JSON.parse(text) as Omit<DriftReport, 'paths'> & { paths: [string, string[]][] };
  return { ...kept, paths: new Map(kept.paths.map(([name, paths]) => [name, new Set(paths)])) };
}

async function compute(
  repository: Repository,
  range: CommitRange,
  options: DriftOptions,
  tags: readonly Ref[],
): Promise<DriftReport> {
  const folder = options.folder ?? 'manifests';
  const wanted = (path: string) => isDeclaring(path, folder) || languageOf(path) !== null;
  const log =
    options.net === true && range.from !== null
      ? { commits: [await netChange(repository, range.from, range.to, wanted)], broken: null }
      : await readLog(repository, range, wanted);
  const notes =
    log.broken === null ? [] : [`the log stops early, since this clone lacks part of the history: ${log.broken}`];

  const declaring = await declaringFiles(repository, log.commits, folder, range);
  const states = new DeclaredStates(repository, folder);
  const stateOf = async (commit: string | undefined) => states.of(declaring.get(commit ?? '') ?? new Map());
  const lastState = await stateOf(range.to);
  const manifests = lastState.set.modules.size > 0;

  const steps = log.commits.flatMap((commit) => {
    const files = commit.files.filter(({ path }) => isCode(path, lastState));
    return files.length === 0 ? [] : [{ commit: commit.id, files }];
  });
  const answers = new Map<string, ScanAnswer>();
  const complete = await scan(
    repository.place,
    steps,
    {
      workers: options.workers ?? 2,
      cache: options.cache ?? true,
      ...(options.signal === undefined ? {} : { signal: options.signal }),
      ...(options.onProgress === undefined ? {} : { onProgress: options.onProgress }),
    },
    (answer) => answers.set(answer.commit, answer),
  );
  notes.push(...missingNotes(answers.values()));

  const tagged = tags.flatMap((tag) => {
    const version = versionOfTag(tag.name);
    return version === null
      ? []
      : [{ name: tag.name.replace(/^refs\/tags\//, ''), commit: tag.commit, version, seconds: tag.seconds }];
  });
  const calendar = followsCalendar(tagged);
  const releases: readonly Release[] = tagged;
  const windows = releaseWindows(log.commits, releases);
  const follow = followPaths(log.commits, answers);
  const names = draftNames(
    log.commits.flatMap((commit) => commit.files.map(({ path }) => follow(commit.id, path).last)),
  );
  const history = new VersionHistory(log.commits, stateOf);
  const found: ModuleStep[] = [];
  const findings: Finding[] = [];
  const paths = new Map<string, Set<string>>();
  for (const [index, commit] of log.commits.entries()) {
    const after = await stateOf(commit.id);
    const before = await Promise.all(
      commit.parents.length === 0 ? [stateOf(undefined)] : commit.parents.map((parent) => stateOf(parent)),
    );
    const answer = answers.get(commit.id);
    if (answer === undefined && before.every((state) => state === after)) continue;
    const ownerOf = (path: string): string | null => {
      const owner = after.owners.get(path) ?? before[0]!.owners.get(path);
      if (owner !== undefined) return owner;
      const { last } = follow(commit.id, path);
      return lastState.owners.get(last) ?? (manifests ? null : (names.get(last) ?? last));
    };
    for (const { path } of answer === undefined ? [] : commit.files) {
      const module = ownerOf(path);
      if (module !== null) paths.set(module, (paths.get(module) ?? new Set()).add(path));
    }
    const groups = groupChanges(commit, answer, before, after, ownerOf);
    const { files: _, ...head } = commit;
    for (const [module, group] of groups) {
      const policy = options.policy ?? policyOf(after);
      const version = await declaredFor(module, index, before[0]!, windows.get(commit.id)!, calendar, history, stateOf);
      const changes = joinBodies(group.changes).sort(
        (a, b) => BUMPS.indexOf(policy[b.kind]) - BUMPS.indexOf(policy[a.kind]),
      );
      const asked =
        group.event === 'born' || group.event === 'gone' ? 'none' : askedBump(changes, policy, version.before);
      found.push({
        module,
        component:
          after.set.modules.get(module)?.value.component ?? lastState.set.modules.get(module)?.value.component ?? null,
        commit: head,
        event: group.event,
        ...(group.movedFrom === undefined ? {} : { movedFrom: group.movedFrom }),
        changes,
        asked,
        versionBefore: version.before,
        versionAfter: version.after,
        declared: version.declared,
        declaredBy: version.by,
        state: stateFor(asked, version),
        callers: [],
      });
    }
    findings.push(...(await eventFindings(repository, commit, before, after)));
  }
  const withCallers = await addCallers(repository, found, log.commits);
  for (const step of withCallers) if (step.state === 'undeclared') findings.push(undeclaredFinding(step));
  if (!history.versioned && (calendar || releases.length === 0)) {
    findings.push(...unversionedFinding(withCallers, range, calendar));
  }
  return {
    range,
    commits: log.commits.length,
    manifests,
    paths,
    steps: withCallers,
    findings: sortFindings(findings),
    notes,
    complete,
  };
}

/** Tables only where a manifest names them: any other `.dat` is data that comes and goes. */
function isCode(path: string, state: DeclaredState): boolean {
  const language = languageOf(path);
  return language !== null && (language !== 'table' || state.owners.has(path));
}

interface Group {
  event: ModuleStep['event'];
  movedFrom?: string;
  changes: Change[];
}

function groupChanges(
  commit: CommitRecord,
  answer: ScanAnswer | undefined,
  before: readonly DeclaredState[],
  after: DeclaredState,
  ownerOf: (path: string) => string | null,
): Map<string, Group> {
  const groups = new Map<string, Group>();
  const group = (module: string): Group => {
    const known = groups.get(module);
    if (known !== undefined) return known;
    const made: Group = { event: null, changes: [] };
    groups.set(module, made);
    return made;
  };
  const movedTo = new Set(answer?.moved.map(({ to }) => to));
  const movedFrom = new Set(answer?.moved.map(({ from }) => from));
  const born = new Set<string>();
  const gone = new Set<string>();
  for (const file of answer === undefined ? [] : commit.files) {
    if (file.before.every((id) => id === null) && !movedTo.has(file.path)) born.add(file.path);
    if (file.after === null && !movedFrom.has(file.path)) gone.add(file.path);
    const module = ownerOf(file.path);
    if (module === null) continue;
    const declaredBefore = before.some((state) => state.set.modules.has(module));
    if (born.has(file.path) && !declaredBefore) group(module).event = 'born';
    if (gone.has(file.path) && !after.set.modules.has(module)) group(module).event = 'gone';
    if (movedTo.has(file.path)) {
      const it = group(module);
      it.event ??= 'moved';
      const from = answer!.moved.find(({ to }) => to === file.path)?.from;
      if (from !== undefined) it.movedFrom = from;
    }
    const both = file.after !== null && file.before.every((id) => id !== null);
    if (both && languageOf(file.path) === 'table') {
      const place = { file: file.path, line: 1, column: 1, revision: commit.id };
      group(module).changes.push({
        kind: 'table-content',
        subject: file.path,
        says: `table ${file.path} has other content`,
        before: { text: file.before[0]!.slice(0, 10) },
        after: { text: file.after!.slice(0, 10), place },
      });
    }
  }
  for (const change of answer?.changes ?? []) {
    const file = fileOf(change);
    // What is born with its file, or goes with it, is told by the event.
    if (change.kind === 'procedure-added' && born.has(file) && !declares(before, after, file)) continue;
    if (change.kind === 'procedure-removed' && gone.has(file) && !declares(before, after, file)) continue;
    const module = ownerOf(file);
    if (module !== null) group(module).changes.push(inside(beforeParent(change, commit.parents[0]), module, after));
  }
  addManifestChanges(before, after, commit, group);
  for (const it of groups.values()) it.changes = eachOnce(it.changes);
  return new Map([...groups].filter(([, { event, changes }]) => event !== null || changes.length > 0));
}

/** A table's new content is told by its bytes and by the digest that the manifest gives. */
function eachOnce(changes: readonly Change[]): Change[] {
  return changes.filter(
    (change, index) => changes.findIndex((one) => one.kind === change.kind && one.says === change.says) === index,
  );
}

/** The state before lies in the parent, under its own id. */
function beforeParent(change: Change, parent: string | undefined): Change {
  const place = change.before?.place;
  if (place === undefined || parent === undefined) return change;
  return { ...change, before: { ...change.before!, place: { ...place, revision: parent } } };
}

/** Bodies that changed are one change of the module: who needs to know which, reads the commit. */
function joinBodies(changes: readonly Change[]): Change[] {
  const bodies = changes.filter(({ kind }) => kind === 'implementation');
  if (bodies.length < 2) return [...changes];
  const names = bodies.slice(0, 5).map(({ subject }) => subject);
  const more = bodies.length > names.length ? ` and ${bodies.length - names.length} more` : '';
  const joined: Change = {
    ...bodies[0]!,
    subject: names.join(', '),
    says: `the bodies of ${names.join(', ')}${more} changed`,
  };
  return [...changes.filter(({ kind }) => kind !== 'implementation'), joined];
}

/** A file that joins or leaves a module that stays is a change of that module. */
function declares(before: readonly DeclaredState[], after: DeclaredState, file: string): boolean {
  const module = after.owners.get(file) ?? before[0]!.owners.get(file);
  return module !== undefined && after.set.modules.has(module) && before.some((state) => state.set.modules.has(module));
}

/** Procedures that a manifest does not name are the module's own business. */
function inside(change: Change, module: string, state: DeclaredState): Change {
  const procedures = state.set.modules.get(module)?.value.source.procedures;
  if (procedures === undefined || !/^(procedure|argument|optional|result|return)/.test(change.kind)) return change;
  const named = procedures.some((name) => name.toLowerCase() === change.subject.toLowerCase());
  return named ? change : { ...change, kind: 'implementation' };
}

function addManifestChanges(
  before: readonly DeclaredState[],
  after: DeclaredState,
  commit: CommitRecord,
  group: (module: string) => Group,
): void {
  if (before.some((state) => state === after)) return;
  const add = <T>(
    pick: (state: DeclaredState) => ReadonlyMap<string, Declaration<T>>,
    compare: (b: Declaration<T>, a: Declaration<T>) => Change[],
    name: (key: string) => string,
  ) => {
    for (const [key, a] of pick(after)) {
      const sides = before.map((state) => pick(state).get(key));
      if (sides.some((side) => side === undefined)) continue;
      const lists = sides.map((side) => compare(side!, a));
      const kept = lists[0]!.filter((change) =>
        lists.every((list) =>
          list.some((one) => one.says === change.says || (one.kind === change.kind && one.subject === change.subject)),
        ),
      );
      if (kept.length > 0)
        group(name(key)).changes.push(
          ...kept.map((change) => beforeParent(stamped(change, commit.id), commit.parents[0])),
        );
    }
  };
  add(
    (state) => state.set.modules,
    (b, a) => compareManifests(b, a, sameUnit),
    (key) => key,
  );
  add(
    (state) => state.set.contracts,
    (b, a) => compareContracts(b, a, sameUnit),
    (key) => `contract ${key}`,
  );
}

interface DeclaredVersion {
  readonly before: string | null;
  readonly after: string | null;
  readonly declared: Bump;
  readonly by: string | null;
  /** True when a release or a manifest had its chance to declare. */
  readonly closed: boolean;
}

/** The version that a module, or the code as a whole, had in a state. */
type VersionOf = (state: DeclaredState) => string | null;

/**
 * A bump may come later than the change, but not later than the release that carries it: the version before the change is
 * put beside the one in the next release. Where nothing was released after, the next version the manifest takes counts,
 * since the manifest's version is then the only release there is.
 */
async function declaredFor(
  module: string,
  index: number,
  before: DeclaredState,
  window: ReleaseWindow,
  calendar: boolean,
  history: VersionHistory,
  stateOf: (commit: string) => Promise<DeclaredState>,
): Promise<DeclaredVersion> {
  const own: VersionOf = (state) =>
    module.startsWith('contract ')
      ? (state.set.contracts.get(module.slice('contract '.length))?.value.version ?? null)
      : (state.set.modules.get(module)?.value.version ?? null);
  const ownBefore = own(before);
  if (ownBefore !== null) {
    const after =
      window.next === null ? await history.next(module, own, index, ownBefore) : own(await stateOf(window.next.commit));
    return {
      before: ownBefore,
      after,
      declared: after === null ? 'none' : declaredBump(ownBefore, after),
      by: 'manifest',
      closed: true,
    };
  }
  if (calendar) {
    const { previous, next } = window;
    return {
      before: previous?.version ?? null,
      after: next?.version ?? null,
      declared: 'none',
      by: null,
      closed: false,
    };
  }
  if (window.previous !== null || window.next !== null) {
    const { previous, next } = window;
    if (previous === null || next === null) {
      return {
        before: previous?.version ?? null,
        after: next?.version ?? null,
        declared: 'none',
        by: null,
        closed: false,
      };
    }
    return {
      before: previous.version,
      after: next.version,
      declared: declaredBump(previous.version, next.version),
      by: `tag ${next.name}`,
      closed: true,
    };
  }
  if (before.version === null) return { before: null, after: null, declared: 'none', by: null, closed: false };
  const after = await history.next('', (state) => state.version, index, before.version);
  return {
    before: before.version,
    after,
    declared: after === null ? 'none' : declaredBump(before.version, after),
    by: before.versionFile,
    // A version file that has not moved since is waiting for the next release.
    closed: after !== null,
  };
}

function stateFor(asked: Bump, version: DeclaredVersion): ModuleStep['state'] {
  if (asked === 'none' || asked === 'patch' || coversBump(version.declared, asked)) return 'declared';
  return version.closed ? 'undeclared' : 'open';
}

/** Where versions changed along the history, by module. */
class VersionHistory {
  private readonly commits: readonly CommitRecord[];
  private readonly stateOf: (commit: string) => Promise<DeclaredState>;
  private readonly points = new Map<string, { index: number; version: string }[]>();
  /** True once any version was met. */
  versioned = false;

  constructor(commits: readonly CommitRecord[], stateOf: (commit: string) => Promise<DeclaredState>) {
    this.commits = commits;
    this.stateOf = stateOf;
  }

  /** The first other version at or after a commit; null when it never changes again. */
  async next(module: string, versionOf: VersionOf, index: number, version: string): Promise<string | null> {
    this.versioned = true;
    const points = this.points.get(module) ?? (await this.find(module, versionOf));
    return points.find((point) => point.index >= index && point.version !== version)?.version ?? null;
  }

  private async find(module: string, versionOf: VersionOf): Promise<{ index: number; version: string }[]> {
    const points: { index: number; version: string }[] = [];
    for (const [index, commit] of this.commits.entries()) {
      const version = versionOf(await this.stateOf(commit.id));
      if (version !== null && points.at(-1)?.version !== version) points.push({ index, version });
    }
    this.points.set(module, points);
    return points;
  }
}

async function addCallers(
  repository: Repository,
  steps: readonly ModuleStep[],
  commits: readonly CommitRecord[],
): Promise<ModuleStep[]> {
  const finder = new CallerFinder(repository);
  const files = new Map(commits.map((commit) => [commit.id, commit.files]));
  const chosen = new Set(steps.filter(({ state }) => state === 'undeclared').slice(-MOST_CALLER_SEARCHES));
  const done: ModuleStep[] = [];
  for (const step of steps) {
    if (!chosen.has(step)) {
      done.push(step);
      continue;
    }
    const touched = new Set(files.get(step.commit.id)!.map(({ path }) => path));
    done.push({ ...step, callers: await finder.leftBehind(step, touched) });
  }
  return done;
}

async function eventFindings(
  repository: Repository,
  commit: CommitRecord,
  before: readonly DeclaredState[],
  after: DeclaredState,
): Promise<Finding[]> {
  const { files: _, ...head } = commit;
  const findings: Finding[] = [];
  for (const [name, declaration] of after.set.cases) {
    const sides = before.map((state) => state.set.cases.get(name));
    if (sides.some((side) => side === undefined || side.value === declaration.value)) continue;
    for (const change of compareCases(sides[0]!, declaration)) {
      const next = 'see that the commit tells why more deviation is right; put the tolerance back if it does not.';
      findings.push(
        eventFinding(
          'tolerance-widened',
          'caution',
          head,
          beforeParent(stamped(change, commit.id), commit.parents[0]),
          undefined,
          next,
        ),
      );
    }
  }
  for (const file of commit.files) {
    const match =
      /(?:^|\/)references\/([^/]+)\/[^/]*\.ya?ml$/.exec(file.path) ??
      /(?:^|\/)references\/([^/]+)\.ya?ml$/.exec(file.path);
    if (match === null || file.after === null || file.before.some((id) => id === null)) continue;
    const bytes = await repository.blob(file.after);
    const reason = bytes === null ? undefined : /^reason:\s*["']?([^"'\s].*?)["']?\s*$/m.exec(decodeText(bytes))?.[1];
    const change: Change = {
      kind: 'reference-renewed',
      subject: match[1]!,
      says: `the reference of ${match[1]} was renewed${reason === undefined ? ' without a reason' : ''}`,
      after: {
        text: reason ?? 'no reason stated',
        place: { file: file.path, line: 1, column: 1, revision: commit.id },
      },
    };
    const next = 'see that the reason holds, and that versions of the modules that moved the result say so.';
    findings.push(
      eventFinding('reference-renewed', reason === undefined ? 'caution' : 'note', head, change, undefined, next),
    );
  }
  return findings;
}

function unversionedFinding(steps: readonly ModuleStep[], range: CommitRange, calendar: boolean): Finding[] {
  const asking = steps.filter(({ asked }) => asked === 'major' || asked === 'minor');
  if (asking.length === 0) return [];
  const latest = asking.at(-1)!;
  return [
    {
      kind: 'drift-unversioned',
      gravity: 'note',
      place: { file: fileOf(latest.changes[0]!), line: 1, column: 1, revision: range.to },
      says: `${asking.length} steps changed an interface or a value, and ${calendar ? 'the tags here follow the calendar, which says when a release was made but not what it breaks' : 'nothing here declares a version: no manifest, no tag, no version file'}.`,
      evidence: asking
        .slice(-5)
        .map((step) => ({ says: `${step.module}: ${step.changes[0]!.says} (${commitText(step.commit)})` })),
      next: 'write manifests with "mortise draft", so that versions can say what changed.',
    },
  ];
}

function missingNotes(answers: Iterable<ScanAnswer>): string[] {
  const reasons = new Map<string, { count: number; path: string }>();
  for (const { missing } of answers) {
    for (const { path, why } of missing) {
      const known = reasons.get(why);
      reasons.set(why, { count: (known?.count ?? 0) + 1, path: known?.path ?? path });
    }
  }
  return [...reasons].map(
    ([why, { count, path }]) =>
      `${count === 1 ? path : `${count} states of files, ${path} among them,`} could not be compared: ${why}`,
  );
}

export function policyOf(state: Pick<DeclaredState, 'set'>): BumpPolicy {
  return { ...DEFAULT_POLICY, ...state.set.assembly?.value.policy };
}
