/** Asks history, manifests, joints, cases and the register about one change. Holds no judgement of its own. */
import { codeInterfaces } from '../fit/code-interfaces.ts';
import { fitCases } from '../fit/fit-assembly.ts';
import { type DriftReport, drift, policyOf } from '../history/drift.ts';
import { type NetFile, netFiles } from '../history/net-change.ts';
import { type Loaded, loadManifests, manifestsUnreadable } from '../manifests/load-manifests.ts';
import { readManifestFiles, readShippedContracts } from '../manifests/manifest-files.edge.ts';
import type { Finding } from '../model/finding.ts';
import { inRange } from '../register/find.ts';
import type { Register } from '../register/register.edge.ts';
import type { LaboratoryRequest } from '../runs/rerun.ts';
import { storeFolder } from '../runs/store.edge.ts';
import { runGit } from '../sources/git.edge.ts';
import { commitTree } from '../sources/open-tree.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { findCallers } from './find-callers.ts';
import { commandFindings } from './look-at-commands.ts';
import { lookAtFiles } from './look-at-files.ts';
import { type Review, review } from './review.ts';
import { filesReadAt, runSeeingCases } from './run-seeing-cases.ts';

export interface ReviewRequest {
  /** Holds both commits; its work tree is not looked at. */
  readonly repository: Repository;
  /** Full commit ids. */
  readonly base: string;
  readonly head: string;
  /** Folder of the manifests. */
  readonly folder: string;
  /** Root of the code, where kept results and the register belong. */
  readonly root: string;
  /** null reviews without running anything. */
  readonly run: Omit<LaboratoryRequest, 'root' | 'manifests' | 'manifestFolder'> | null;
  /** Build and run by the manifests of the head. */
  readonly headCommands: boolean;
  readonly register: Register | null;
  readonly workers?: number;
  readonly cache?: boolean;
  readonly signal?: AbortSignal;
}

export interface GatheredReview {
  readonly review: Review;
  /** The manifests that commands, cases and consequence were taken from. */
  readonly manifests: Loaded['set'];
  /** Where the change parted from the base: the base itself unless that went on. */
  readonly parted: string;
  /** False when it was interrupted. */
  readonly complete: boolean;
}

export async function gatherReview(request: ReviewRequest): Promise<GatheredReview> {
  const { repository, base, head, folder } = request;
  const { parted, notes } = await whereParted(repository, base, head);
  const baseLoaded = await loadAt(repository, base, folder);
  const [files, report, headLoaded] = await Promise.all([
    netFiles(repository, parted, head),
    drift(
      repository,
      { from: parted, to: head },
      {
        folder,
        net: true,
        ...(baseLoaded.set.assembly === null || request.headCommands ? {} : { policy: policyOf(baseLoaded) }),
        workers: request.workers ?? 1,
        cache: request.cache ?? true,
        ...(request.signal === undefined ? {} : { signal: request.signal }),
      },
    ),
    loadAt(repository, head, folder),
  ]);
  // The first change of a code that had no manifests brings its own.
  const own = request.headCommands || manifestsUnreadable(baseLoaded.findings) ? headLoaded : baseLoaded;
  const manifests = request.headCommands ? headLoaded.set : baseLoaded.set;
  const [callers, shown] = await Promise.all([
    findCallers(
      repository,
      head,
      report.steps.flatMap((step) => step.changes),
    ),
    lookAtFiles(files, head, (id) => repository.blob(id)),
  ]);
  const fresh = [
    ...shown,
    ...(baseLoaded.set.assembly === null
      ? []
      : commandFindings(baseLoaded.set, headLoaded.set, request.headCommands ? 'head' : 'base')),
    ...(await freshFindings(request, parted, files, headLoaded)),
  ];
  const runs =
    request.run === null
      ? null
      : {
          ...request.run,
          root: repository.place.root,
          store: storeFolder(request.root, request.run.env),
          manifests,
          manifestFolder: folder,
        };
  const input = {
    base,
    head,
    manifests,
    drift: report,
    files: files.map(({ path }) => path),
    appeared: files.filter(({ before, after }) => before === null || after === null).map(({ path }) => path),
    callers,
    filesRead: runs === null || manifests.cases.size === 0 ? new Map<string, null>() : await filesReadAt(runs, parted),
    outcomes: [],
    results: resultsOf(request.register, report),
    fresh,
    notes,
  };
  const still = review(input);
  const seeing = still.sees.filter((one) => one.sees).map((one) => one.case);
  if (runs === null || seeing.length === 0 || !report.complete || request.signal?.aborted === true)
    return { review: still, manifests: own.set, parted, complete: report.complete };
  const outcomes = await runSeeingCases(runs, seeing, parted, head);
  return { review: review({ ...input, outcomes }), manifests: own.set, parted, complete: true };
}

/** A base that went on since is no part of the change: what counts is where they parted. */
async function whereParted(
  repository: Repository,
  base: string,
  head: string,
): Promise<{ parted: string; notes: string[] }> {
  const { status, out } = await runGit(repository.place, 'objects', ['merge-base', base, head]);
  const parted = out.toString('latin1').split('\n')[0]!.trim();
  if (status === 0 && parted !== '')
    return {
      parted,
      notes:
        parted === base
          ? []
          : [
              `the base went on after the change parted from it at ${parted.slice(0, 10)}; what changed is told from there`,
            ],
    };
  const why = repository.place.shallow
    ? 'this clone is shallow and its history is too short to tell where the two parted'
    : 'the two have no common history';
  return { parted: base, notes: [`${why}; everything that differs between them is told`] };
}

async function loadAt(repository: Repository, commit: string, folder: string): Promise<Loaded> {
  const { files, findings } = await readManifestFiles(commitTree(repository, commit), folder);
  const loaded = loadManifests(files, { folder, shipped: readShippedContracts(), revision: commit });
  return { ...loaded, findings: [...findings, ...loaded.findings] };
}

/** What is wrong with manifests and joints at the head and was not at the base. Nothing is read where no module's file changed. */
async function freshFindings(
  request: ReviewRequest,
  parted: string,
  files: readonly NetFile[],
  head: Loaded,
): Promise<Finding[]> {
  const { repository, folder } = request;
  if (head.set.modules.size === 0)
    return [...head.findings].filter((one) => files.some((file) => file.path === one.place.file));
  const owned = new Set(
    [...head.set.modules.values()].flatMap(({ value }) => [
      ...value.source.files,
      ...(value.tables ?? []).map((table) => table.file),
    ]),
  );
  const prefix = folder === '' ? '' : `${folder}/`;
  if (!files.some(({ path }) => owned.has(path) || path.startsWith(prefix))) return [];
  const base = await loadAt(repository, parted, folder);
  const all = async (loaded: Loaded, commit: string) => {
    const tree = commitTree(repository, commit);
    return [
      ...loaded.findings,
      ...fitCases(loaded.set, await codeInterfaces(loaded.set, tree, loaded.set.modules.keys())).findings,
    ];
  };
  const [old, now] = [await all(base, parted), await all(head, request.head)];
  // Lines move; a finding is the same while it says the same of the same file.
  const keyOf = (one: Finding) => `${one.kind}\0${one.module ?? ''}\0${one.place.file}\0${one.says}`;
  const known = new Set(old.map(keyOf));
  return now.filter((one) => !known.has(keyOf(one)));
}

/** Entries that used a changed module at the version that the change begins from. */
function resultsOf(register: Register | null, { steps }: DriftReport): Map<string, string[]> {
  const results = new Map<string, string[]>();
  if (register === null) return results;
  const versions = new Map(
    steps.filter((step) => step.asked !== 'none').map((step) => [step.module, step.versionBefore]),
  );
  if (versions.size === 0) return results;
  for (const entry of register.entries()) {
    for (const used of entry.content.modules) {
      if (!versions.has(used.module)) continue;
      const version = versions.get(used.module)!;
      const same = version !== null && inRange(used.version, version);
      const title = entry.content.result.title ?? entry.id;
      const says = `${entry.id}: ${title}${entry.withdrawn === null ? '' : ' (withdrawn)'}, made with ${used.module} ${used.version}${same ? ', the version that changes' : ''}`;
      results.set(used.module, [...(results.get(used.module) ?? []), says]);
    }
  }
  return results;
}
