/** Cases and a tree come in; they are built once a configuration, run, compared; an outcome for every case goes out. */
import { compareCase, footprintOf } from '../compare/compare-outputs.edge.ts';
import type { Case, ManifestSet } from '../model/manifest.ts';
import { type CaseOutcome, type Produced, worstClass } from './case-outcome.ts';
import { cleanEnvironment } from './clean-environment.ts';
import { CommandMistake, fillCommand, splitCommand } from './command-words.ts';
import { type Configuration, casesNamed, configurationOf, NotDeclared } from './configuration.ts';
import type { Exchange } from './exchange.ts';
import { availableParallelism, localExecutor } from './local-executor.edge.ts';
import type { Executor } from './process-end.ts';
import { producedBy } from './produced.ts';
import { alteredOutputs, readNoise, readReferenceIn, referencePlace, referenceStands } from './reference-files.edge.ts';
import { ReferenceDamaged } from './reference-record.ts';
import type { RunEvent } from './run-event.ts';
import { slurmExecutor } from './slurm-executor.edge.ts';
import { closeStore, expectedSeconds, openStore, type Store, storeFolder } from './store.edge.ts';
import { listTree, type TreeListing } from './tree-files.edge.ts';
import { type RunResult, type RunTask, Workshop } from './workshop.ts';

export interface RerunRequest {
  /** Absolute path of the repository or folder of the code. */
  readonly root: string;
  /** Of the tree that is run: read at the same revision. */
  readonly manifests: ManifestSet;
  /** Folder of the manifests within the code; `manifests` when absent. */
  readonly manifestFolder?: string;
  /** Names of cases; all of them when absent or empty. */
  readonly cases?: readonly string[];
  /** A revision; the work tree when absent. */
  readonly at?: string | null;
  readonly exchanges?: readonly Exchange[];
  /** Runs at once; as many as cores, or as the executor declares, when absent. */
  readonly jobs?: number;
  /** The caller's variables; PATH, HOME and the declared ones of them reach the code. */
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly signal?: AbortSignal;
  readonly onEvent?: (event: RunEvent) => void;
  /** Name of a declared executor; the assembly's only one, or this machine, when absent. */
  readonly executor?: string;
  /** True for a case of which only a result kept from before is wanted; without one it is left out. */
  readonly onlyKept?: (name: string) => boolean;
  /** Run again what is kept already, and keep the new result in its place. */
  readonly fresh?: boolean;
  /** Absolute folder where builds and results are kept. */
  readonly store?: string;
}

/**
 * Runs cases and compares them with their references.
 *
 * @returns an outcome for each case, in the order asked for, or of their names
 * @throws {NotDeclared} for a case, module or executor that no manifest declares
 * @throws {GitFailed} when the revision can't be read
 */
export async function rerunCases(request: RerunRequest): Promise<CaseOutcome[]> {
  const asked = casesNamed(request.manifests, request.cases ?? []);
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(request.at ?? null);
    const cases = asked.filter((one) => request.onlyKept?.(one.case) !== true || tree.readBefore(one) !== null);
    const say = request.onEvent ?? (() => {});
    const planned = cases.map((one) => ({
      case: one.case,
      expectedSeconds: expectedSeconds(laboratory.store, one.case),
    }));
    say({ what: 'planned', cases: planned, atOnce: laboratory.executor.atOnce });
    let done = 0;
    const one = async (theCase: Case): Promise<CaseOutcome> => {
      const outcome = await tree.examine(theCase, request.exchanges ?? []);
      done++;
      say({ what: 'finished', case: theCase.case, state: outcome.state, class: outcome.class, done, of: cases.length });
      return outcome;
    };
    // The longest first, so that the last to finish is a short one.
    const order = cases
      .map((_, i) => i)
      .sort((a, b) => (planned[b]!.expectedSeconds ?? 0) - (planned[a]!.expectedSeconds ?? 0));
    const outcomes: CaseOutcome[] = [];
    await Promise.all(
      order.map(async (i) => {
        outcomes[i] = await one(cases[i]!);
      }),
    );
    return outcomes;
  });
}

export type LaboratoryRequest = Omit<RerunRequest, 'cases' | 'exchanges' | 'at'>;

/** A store and an executor, open for as long as `work` takes; everything is given back whatever happens. */
export async function withLaboratory<T>(
  request: LaboratoryRequest,
  work: (laboratory: Laboratory) => Promise<T>,
): Promise<T> {
  const store = openStore(request.store ?? storeFolder(request.root, request.env));
  try {
    const executor = executorOf(request, store);
    try {
      return await work(new Laboratory(request, store, executor));
    } finally {
      await executor.close();
    }
  } finally {
    closeStore(store);
  }
}

/** Where trees are built and run. Made by `withLaboratory`. */
export class Laboratory {
  readonly store: Store;
  readonly executor: Executor;
  readonly request: LaboratoryRequest;
  readonly manifestFolder: string;
  readonly workshop: Workshop;

  constructor(request: LaboratoryRequest, store: Store, executor: Executor) {
    this.request = request;
    this.store = store;
    this.executor = executor;
    this.manifestFolder = request.manifestFolder ?? 'manifests';
    this.workshop = new Workshop({
      store,
      executor,
      builder: executor.kind === 'local' ? executor : localExecutor(store.guard),
      signal: request.signal ?? new AbortController().signal,
      say: request.onEvent ?? (() => {}),
      manifestFolder: this.manifestFolder,
    });
  }

  /**
   * One tree with the manifests it is built and run by.
   *
   * @param revision  null for the work tree
   * @throws {GitFailed} when the revision can't be read
   */
  async tree(revision: string | null): Promise<TreeRuns> {
    const { root, manifests } = this.request;
    return new TreeRuns(this, await listTree(root, revision, declaredFiles(manifests)), manifests);
  }
}

/** Runs and compares the cases of one tree. */
export class TreeRuns {
  readonly listing: TreeListing;
  readonly manifests: ManifestSet;
  private readonly laboratory: Laboratory;

  constructor(laboratory: Laboratory, listing: TreeListing, manifests: ManifestSet) {
    this.laboratory = laboratory;
    this.listing = listing;
    this.manifests = manifests;
  }

  /** The same tree, built and run as other manifests say. */
  by(manifests: ManifestSet): TreeRuns {
    return new TreeRuns(this.laboratory, this.listing, manifests);
  }

  /** Builds and runs one case, without comparing it. */
  async run(
    theCase: Case,
    exchanges: readonly Exchange[],
    options: { replaced?: ReadonlyMap<string, Uint8Array | null>; repeat?: number; keepFailures?: boolean } = {},
  ): Promise<{ readonly result: RunResult; readonly produced: Produced | null }> {
    const planned = this.planned(theCase, exchanges, options);
    if ('mistaken' in planned)
      return { result: { state: 'mistaken', why: planned.mistaken, logTail: '' }, produced: null };
    const { task, configuration } = planned;
    const result = await this.laboratory.workshop.run(task);
    const produced = await producedBy({
      case: theCase.case,
      manifests: this.manifests,
      listing: this.listing,
      configuration,
      command: task.words,
      build: task.build,
      inputs: theCase.inputs ?? [],
      environment: task.environment,
      executor: this.laboratory.executor.kind,
    });
    return { result, produced };
  }

  /** Files that an earlier build and run of a case on the same contents had read; null where no kept run tells. */
  readBefore(theCase: Case): ReadonlySet<string> | null {
    const planned = this.planned(theCase, [], {});
    return 'mistaken' in planned ? null : this.laboratory.workshop.readBefore(planned.task);
  }

  private planned(
    theCase: Case,
    exchanges: readonly Exchange[],
    options: { replaced?: ReadonlyMap<string, Uint8Array | null>; repeat?: number; keepFailures?: boolean },
  ): { readonly task: RunTask; readonly configuration: Configuration } | { readonly mistaken: string } {
    let configuration: Configuration;
    let words: string[];
    let build: string[] | null;
    try {
      configuration = configurationOf(this.manifests, theCase, exchanges);
      const select = Object.fromEntries(
        Object.entries(configuration.select).map(([name, value]) => [`select.${name}`, value]),
      );
      // `{out}` and `{root}` stay open: where a run lies must not change its key.
      const open = { ...select, out: '{out}', root: '{root}' };
      words = fillCommand([...this.launcher(), ...splitCommand(theCase.run)], open);
      build =
        configuration.build === null
          ? null
          : fillCommand(splitCommand(configuration.build.run), { ...select, root: '{root}' });
    } catch (error) {
      if (!(error instanceof CommandMistake || error instanceof NotDeclared)) throw error;
      return { mistaken: error.message };
    }
    const environment = cleanEnvironment(this.laboratory.request.env, configuration.pass, configuration.set);
    const limits = this.limits();
    const task: RunTask = {
      case: theCase.case,
      words,
      build,
      makes: configuration.build?.makes ?? [],
      needs: configuration.needs,
      builtWith: configuration.builtWith,
      environment,
      inputs: theCase.inputs ?? [],
      timeLimitSeconds: theCase['time-limit-seconds'] ?? limits.timeLimitSeconds,
      memoryMegabytes: limits.memoryMegabytes,
      listing: this.listing,
      replaced: options.replaced ?? new Map(),
      repeat: options.repeat ?? 0,
      fresh: this.laboratory.request.fresh ?? false,
      keepFailures: options.keepFailures ?? false,
    };
    return { task, configuration };
  }

  /** Builds, runs and compares one case with its reference. */
  async examine(theCase: Case, exchanges: readonly Exchange[]): Promise<CaseOutcome> {
    const { result, produced } = await this.run(theCase, exchanges);
    const base = { case: theCase.case, produced, logTail: result.logTail, class: null, deviations: [] } as const;
    if (result.state !== 'ran') {
      return {
        ...base,
        state: result.state,
        why: result.why,
        seconds: result.seconds ?? null,
        peakMegabytes: result.peakMegabytes ?? null,
        kept: false,
        key: null,
        result: null,
        footprint: null,
      };
    }
    const ran = {
      ...base,
      seconds: result.seconds,
      peakMegabytes: result.peakMegabytes,
      kept: result.kept,
      key: result.key,
      result: result.out,
      footprint: await footprintOf(theCase, result.out),
      ...(result.absent.length === 0 ? {} : { absent: result.absent }),
    };
    const missing = theCase.outputs.filter((output) => !result.files.includes(output.file));
    if (missing.length > 0) {
      const names = missing.map((output) => output.file).join(', ');
      const why = `the run ended well but did not write ${names} under {out}; does its command pass {out} on?`;
      return { ...ran, state: 'failed', why };
    }
    const reference = await referencePlace(
      this.listing,
      this.laboratory.manifestFolder,
      theCase.case,
      this.laboratory.store.scratch,
    );
    if (!referenceStands(reference)) {
      const next = `record one with "mortise rerun ${theCase.case} --record --reason TEXT"`;
      return { ...ran, state: 'no reference', why: `no reference was recorded; ${next}` };
    }
    const damage = await referenceDamage(reference, theCase.case);
    if (damage !== null) return { ...ran, state: 'no reference', why: damage, damage };
    const noise = readNoise(reference)?.floors;
    const deviations = await compareCase(theCase, reference, result.out, noise === undefined ? {} : { noise });
    return { ...ran, state: 'compared', why: '', deviations, class: worstClass(deviations) };
  }

  /** The launcher belongs to the command, and so to the key: another count of ranks sums in another order. */
  private launcher(): string[] {
    const launcher = declaredExecutor(this.laboratory.request)?.launcher;
    return launcher === undefined ? [] : splitCommand(launcher);
  }

  private limits(): { timeLimitSeconds: number | null; memoryMegabytes: number | null } {
    const declared = declaredExecutor(this.laboratory.request);
    return {
      timeLimitSeconds: declared?.['time-limit-seconds'] ?? null,
      memoryMegabytes: declared?.['memory-megabytes'] ?? null,
    };
  }
}

export async function referenceDamage(folder: string, theCase: string): Promise<string | null> {
  try {
    readNoise(folder);
    const altered = await alteredOutputs(folder, readReferenceIn(folder, theCase)!);
    if (altered.length === 0) return null;
    return `its reference can't be trusted: ${altered.map(({ file, why }) => `${file} ${why}`).join('; ')}`;
  } catch (error) {
    if (!(error instanceof ReferenceDamaged)) throw error;
    return error.message;
  }
}

function declaredExecutor(request: Pick<RerunRequest, 'manifests' | 'executor'>) {
  const declared = request.manifests.assembly?.value.executors ?? {};
  const name = request.executor ?? (Object.keys(declared).length === 1 ? Object.keys(declared)[0]! : 'local');
  const one = declared[name];
  if (one === undefined && request.executor !== undefined && name !== 'local') {
    throw new NotDeclared(`no executor "${name}" is declared in the assembly`);
  }
  return one;
}

function executorOf(request: LaboratoryRequest, store: Store): Executor {
  const declared = declaredExecutor(request);
  const atOnce = request.jobs ?? declared?.['at-once'];
  if (declared?.kind === 'slurm') return slurmExecutor(store.folder, declared, atOnce);
  const cores = declared?.cores ?? 1;
  return localExecutor(store.guard, atOnce ?? Math.floor(availableParallelism() / cores));
}

/** Files that manifests name: they belong to the code even when git does not track them yet. */
function declaredFiles(manifests: ManifestSet): string[] {
  return [
    ...(manifests.assembly === null ? [] : [manifests.assembly.file]),
    ...[...manifests.modules.values(), ...manifests.cases.values()].map(({ file }) => file),
    ...[...manifests.modules.values()].flatMap(({ value }) => [
      ...value.source.files,
      ...(value.tables ?? []).map((table) => table.file),
    ]),
    ...[...manifests.cases.values()].flatMap(({ value }) => value.inputs ?? []),
  ];
}
