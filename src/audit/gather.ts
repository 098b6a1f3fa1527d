/** Asks every earlier stage about one code and brings the answers together for `audit`. Holds no judgement of its own. */
import { createHash } from 'node:crypto';
import { census } from '../constants/census.ts';
import { codeInterfaces } from '../fit/code-interfaces.ts';
import { fitCases } from '../fit/fit-assembly.ts';
import type { Joint } from '../fit/joint.ts';
import { type DriftReport, drift } from '../history/drift.ts';
import type { ModuleStep } from '../history/module-step.ts';
import type { Finding } from '../model/finding.ts';
import type { FileInterface } from '../model/interface.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { checkCode } from '../readers/callers/check-code.ts';
import { promotionOf } from '../readers/promotion.ts';
import { Register } from '../register/register.edge.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import { contentId } from '../runs/key.ts';
import { thisMachine } from '../runs/machine.edge.ts';
import { readReference } from '../runs/reference-files.edge.ts';
import { ReferenceDamaged, type ReferenceRecord } from '../runs/reference-record.ts';
import { rerunCases } from '../runs/rerun.ts';
import type { RunEvent } from '../runs/run-event.ts';
import { listTree } from '../runs/tree-files.edge.ts';
import { sha256OfFile } from '../sources/digest.edge.ts';
import { parseCommit } from '../sources/git-object.ts';
import { openRepository } from '../sources/open-tree.edge.ts';
import type { SourceTree } from '../sources/tree.ts';
import type { Gathered } from './audit.ts';
import { noticeFindings } from './notice-findings.ts';
import { pluggedModules } from './validated.ts';

export const STEPS = ['manifests', 'joints', 'constants', 'history', 'register', 'cases'] as const;
export type AuditStep = (typeof STEPS)[number];
export type AuditEvent =
  | { readonly what: 'step'; readonly step: AuditStep }
  /** Commits read so far, of all that must be. */
  | { readonly what: 'read'; readonly done: number; readonly of: number }
  | RunEvent;

export interface AuditRequest {
  readonly root: string;
  readonly tree: SourceTree;
  readonly manifests: ManifestSet;
  readonly manifestFolder: string;
  /** About the manifests themselves. */
  readonly findings: readonly Finding[];
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly jobs?: number;
  readonly executor?: string;
  /** False leaves the cases alone: only what can be known without running is. */
  readonly run: boolean;
  /** True for a case that is not to be run now: its result is taken only if it is kept from before. */
  readonly onlyKept?: (name: string) => boolean;
  readonly signal: AbortSignal;
  /** False leaves history alone, for a first look. */
  readonly history?: boolean;
  readonly onEvent?: (event: AuditEvent) => void;
}

export interface GatheredCode extends Gathered {
  readonly joints: readonly Joint[];
  readonly interfaces: ReadonlyMap<string, FileInterface>;
  /** What history did to each module, oldest first; empty outside git. */
  readonly steps: readonly ModuleStep[];
}

export async function gather(request: AuditRequest): Promise<GatheredCode> {
  const { manifests, tree, root, manifestFolder } = request;
  const say = request.onEvent ?? (() => {});
  const findings: Finding[] = [...request.findings];

  say({ what: 'step', step: 'joints' });
  const interfaces = await codeInterfaces(manifests, tree, manifests.modules.keys());
  const fit = fitCases(manifests, interfaces);
  findings.push(...fit.findings);

  const listing = await listTree(
    root,
    tree.revision,
    [...manifests.modules.values()].map((one) => one.file),
  );
  const ids = new Map(listing.files.map((file) => [file.path, file.id]));

  say({ what: 'step', step: 'constants' });
  const build = manifests.assembly?.value.build;
  // Without a build in the assembly, the code's own makefiles say what they promote.
  const promote = build === undefined ? ((await promotionOf(tree))?.bytes ?? {}) : (build.promote ?? {});
  findings.push(...constantFindings(manifests, interfaces, promote), ...checkCode(interfaces, { promote }));

  let steps: readonly ModuleStep[] = [];
  if (request.history !== false) {
    say({ what: 'step', step: 'history' });
    const history = await historyOf(request, listing.commit);
    findings.push(...history.findings);
    steps = history.steps;
  }

  say({ what: 'step', step: 'register' });
  findings.push(...noticeFindings(new Register(root).notices(), manifests));

  let outcomes: readonly CaseOutcome[] = [];
  if (request.run) {
    say({ what: 'step', step: 'cases' });
    outcomes = await rerunCases({
      root,
      manifests,
      manifestFolder,
      at: tree.revision,
      env: request.env,
      signal: request.signal,
      onEvent: say,
      ...(request.jobs === undefined ? {} : { jobs: request.jobs }),
      ...(request.executor === undefined ? {} : { executor: request.executor }),
      ...(request.onlyKept === undefined ? {} : { onlyKept: request.onlyKept }),
    });
  }
  const references: ReferenceRecord[] = [];
  for (const name of manifests.cases.keys()) {
    try {
      const record = readReference(root, name, manifestFolder);
      if (record !== null) references.push(record);
    } catch (error) {
      // The outcome of the case tells of a damaged reference already.
      if (!(error instanceof ReferenceDamaged)) throw error;
    }
  }
  return {
    manifests,
    revision: listing.commit,
    tree: await treeIdOf(root, listing.commit),
    changed: listing.changed,
    contentOf: (file) => contentId(ids.get(file)),
    tableDigests: await tableDigests(manifests, tree),
    outcomes,
    references,
    findings,
    environment: environmentHere(),
    now: new Date().toISOString(),
    joints: fit.joints,
    interfaces,
    steps,
  };
}

function constantFindings(
  manifests: ManifestSet,
  interfaces: ReadonlyMap<string, FileInterface>,
  promote: Readonly<Record<string, number>>,
): readonly Finding[] {
  const owners = new Map(
    [...manifests.modules].flatMap(([name, { value }]) => value.source.files.map((file) => [file, name] as const)),
  );
  return census(interfaces, { moduleOf: (file) => owners.get(file) ?? file, promote }).findings;
}

async function historyOf(
  request: AuditRequest,
  commit: string | null,
): Promise<Pick<DriftReport, 'steps' | 'findings'>> {
  if (commit === null) return { steps: [], findings: [] };
  const repository = openRepository(request.root);
  try {
    const declared = new Set(request.manifests.modules.keys());
    const report = await drift(
      repository,
      { from: null, to: commit },
      {
        folder: request.manifestFolder,
        signal: request.signal,
        onProgress: (done, of) => request.onEvent?.({ what: 'read', done, of }),
      },
    );
    // What no manifest declares any more is history, not part of this code.
    const isDeclared = (module: string | undefined) =>
      module === undefined || declared.has(module) || module.startsWith('contract ');
    return {
      steps: report.steps.filter((step) => isDeclared(step.module)),
      findings: report.findings.filter((one) => isDeclared(one.module)),
    };
  } finally {
    repository.close();
  }
}

/** The id of the tree that is checked out at a commit; null outside git or when the clone lacks it. */
export async function treeIdOf(root: string, commit: string | null): Promise<string | null> {
  if (commit === null) return null;
  const repository = openRepository(root);
  try {
    const object = await repository.object(commit);
    return object?.type === 'commit' ? parseCommit(object.bytes).tree : null;
  } finally {
    repository.close();
  }
}

async function tableDigests(manifests: ManifestSet, tree: SourceTree): Promise<Map<string, string>> {
  const digests = new Map<string, string>();
  for (const name of pluggedModules(manifests)) {
    for (const { file } of manifests.modules.get(name)?.value.tables ?? []) {
      const bytes = await tree.read(file);
      if (bytes !== null) digests.set(file, `sha256:${createHash('sha256').update(bytes).digest('hex')}`);
      else {
        // Too long to be read whole, or not there.
        const path = await tree.onDisk?.(file);
        if (path != null) digests.set(file, await sha256OfFile(path));
      }
    }
  }
  return digests;
}

export function environmentHere(): Record<string, string> {
  const { system, processor, library } = thisMachine();
  return { system, processor, ...(library === null ? {} : { library }), runtime: `node ${process.version}` };
}
