/** Builds once a configuration and runs once a key, on whatever executor; what is kept already is taken from the store. */

import type { AbsentFile, CaseState } from './case-outcome.ts';
import { agreesOnReads, codeFiles, namesDigest, replacedFiles, wellFormed } from './code-files.ts';
import { fillCommand } from './command-words.ts';
import { filesDigest, type KeyedFile, keyOf } from './key.ts';
import { findProgram, thisMachine } from './machine.edge.ts';
import { Pool } from './pool.ts';
import { type Executor, endedWell, endText, type ProcessEnd } from './process-end.ts';
import { readsOf } from './reads.edge.ts';
import type { RunEvent } from './run-event.ts';
import {
  type BuildPlace,
  buildRecord,
  dropBuild,
  dropTemporary,
  expectedSeconds,
  finishBuild,
  keepFailure,
  keepResult,
  keptFailure,
  keptReads,
  keptResult,
  logTail,
  madeFiles,
  outFiles,
  rememberReads,
  rememberSeconds,
  resultFolder,
  runFolder,
  type Store,
  takeBuild,
  temporaryFolder,
} from './store.edge.ts';
import { layTree, type TreeListing } from './tree-files.edge.ts';

export interface RunTask {
  readonly case: string;
  /** `{out}` and `{root}` still open. */
  readonly words: readonly string[];
  readonly build: readonly string[] | null;
  readonly makes: readonly string[];
  readonly needs: readonly { readonly program: string; readonly module: string }[];
  /** Programs that the build may call. */
  readonly builtWith: readonly string[];
  readonly environment: Readonly<Record<string, string>>;
  readonly inputs: readonly string[];
  readonly timeLimitSeconds: number | null;
  readonly memoryMegabytes: number | null;
  readonly listing: TreeListing;
  readonly replaced: ReadonlyMap<string, Uint8Array | null>;
  /** 0 for the result itself; others are repetitions, kept apart, from which noise is told. */
  readonly repeat: number;
  readonly fresh: boolean;
  /** A build or run that failed once, for the same key, is not tried again. */
  readonly keepFailures: boolean;
}

export type RunResult =
  | {
      readonly state: 'ran';
      readonly key: string;
      /** Absolute folder of the outputs, and the files in it. */
      readonly out: string;
      readonly files: readonly string[];
      readonly seconds: number;
      readonly peakMegabytes: number | null;
      readonly kept: boolean;
      readonly logTail: string;
      readonly absent: readonly AbsentFile[];
    }
  | {
      readonly state: Exclude<CaseState, 'compared' | 'no reference'>;
      readonly why: string;
      readonly logTail: string;
      readonly seconds?: number;
      readonly peakMegabytes?: number | null;
    };

interface KeptRecord {
  readonly case: string;
  readonly key: string;
  readonly seconds: number;
  readonly peakMegabytes: number | null;
  readonly files: Readonly<Record<string, number>>;
  readonly words: readonly string[];
  readonly date: string;
  readonly absent: readonly AbsentFile[];
}

interface BuildRecord {
  readonly key: string;
  readonly absent: readonly AbsentFile[];
}

type Built = { readonly place: BuildPlace; readonly absent: readonly AbsentFile[] } | { readonly failed: RunResult };

export interface WorkshopParts {
  readonly store: Store;
  readonly executor: Executor;
  /** Where it is built. */
  readonly builder: Executor;
  readonly signal: AbortSignal;
  readonly say: (event: RunEvent) => void;
  readonly manifestFolder: string;
}

export class Workshop {
  private readonly parts: WorkshopParts;
  private readonly pool: Pool;
  private readonly builds = new Map<string, Promise<Built>>();
  private readonly running = new Map<string, Promise<RunResult>>();

  constructor(parts: WorkshopParts) {
    this.parts = parts;
    this.pool = new Pool(parts.executor.atOnce);
  }

  async run(task: RunTask): Promise<RunResult> {
    const unable = this.unable(task);
    if (unable !== null) return unable;
    const keys = this.keysOf(task);
    const kept = task.fresh ? null : this.kept(task, keys);
    if (kept !== null) {
      this.parts.say({ what: 'ran', case: task.case, seconds: kept.state === 'ran' ? kept.seconds : 0, kept: true });
      return kept;
    }
    const same = this.running.get(keys.run);
    if (same !== undefined) return same;
    const run = this.buildAndRun(task, keys);
    this.running.set(keys.run, run);
    return run;
  }

  /** Files that an earlier run of the same task on the same contents had read; null where none is kept that tells. */
  readBefore(task: RunTask): ReadonlySet<string> | null {
    const keys = this.keysOf(task);
    const ids = new Map(keys.files.map((file) => [file.path, file.id]));
    const earlier = keptReads(this.parts.store, keys.reads).find(({ reads }) => agreesOnReads(reads, ids));
    return earlier === undefined ? null : new Set(Object.keys(earlier.reads));
  }

  /** What keeps a task from being tried at all. */
  private unable(task: RunTask): RunResult | null {
    const absent = task.needs.filter(({ program }) => findProgram(program, task.environment.PATH) === null);
    if (absent.length > 0) {
      const names = absent.map(({ program, module }) => `${program} (needed by ${module})`).join(', ');
      return { state: 'not runnable', why: `not on this machine: ${names}`, logTail: '' };
    }
    const there = new Set(replacedFiles(task.listing.files, task.replaced).map((file) => file.path));
    const lacking = task.inputs.filter((input) => !there.has(input));
    if (lacking.length > 0) {
      return { state: 'failed', why: `its input is not in the tree: ${lacking.join(', ')}`, logTail: '' };
    }
    return null;
  }

  private keysOf(task: RunTask): Keys {
    const files = codeFiles(replacedFiles(task.listing.files, task.replaced), this.parts.manifestFolder);
    const { PATH, HOME, ...variables } = task.environment;
    // What PATH finds counts, not what PATH says; HOME differs between people and must not.
    const programs = (names: readonly string[]) =>
      names.map((name) => {
        const program = findProgram(name, PATH);
        return wellFormed(program === null ? name : `${name} ${program.path} ${program.bytes} ${program.modified}`);
      });
    // Nothing of the case: those that are built alike share one build.
    const build = {
      variables: Object.fromEntries(Object.entries(variables).map(([name, value]) => [name, wellFormed(value)])),
      programs: task.build === null ? [] : programs([task.build[0]!, ...task.builtWith]),
      machine: { ...thisMachine() },
      build: task.build === null ? null : task.build.map(wellFormed),
    };
    const digest = filesDigest(files);
    const run = {
      ...build,
      words: task.words.map(wellFormed),
      runs: programs([task.words[0]!, ...task.needs.map((need) => need.program)]),
      ...(task.repeat === 0 ? {} : { repeat: task.repeat }),
    };
    return {
      files,
      build: keyOf({ ...build, files: digest }),
      run: keyOf({ ...run, files: digest }),
      reads: keyOf({ ...run, names: namesDigest(files) }),
    };
  }

  private kept(task: RunTask, keys: Keys): RunResult | null {
    const exact = this.keptUnder(keys.run);
    if (exact !== null) return exact;
    const ids = new Map(keys.files.map((file) => [file.path, file.id]));
    for (const earlier of keptReads(this.parts.store, keys.reads)) {
      if (!agreesOnReads(earlier.reads, ids)) continue;
      const result = this.keptUnder(earlier.key);
      if (result !== null) return result;
    }
    return task.keepFailures ? keptFailure<RunResult>(this.parts.store, keys.run) : null;
  }

  private keptUnder(key: string): RunResult | null {
    const record = keptResult<KeptRecord>(this.parts.store, key);
    if (record === null) return null;
    const folder = resultFolder(this.parts.store, key);
    return {
      state: 'ran',
      key,
      out: `${folder}/out`,
      files: Object.keys(record.files),
      seconds: record.seconds,
      peakMegabytes: record.peakMegabytes,
      kept: true,
      absent: record.absent,
      logTail: logTail(`${folder}/log.txt`),
    };
  }

  private async buildAndRun(task: RunTask, keys: Keys): Promise<RunResult> {
    const { store, executor, signal, say } = this.parts;
    const built = await this.buildOnce(task, keys);
    if ('failed' in built) return this.failed(task, keys, built.failed);
    const { absent } = built;
    return this.pool.with(async () => {
      if (signal.aborted) return INTERRUPTED;
      const folder = executor.runFolder?.(keys.run, task.fresh) ?? runFolder(store);
      say({ what: 'started', case: task.case, expectedSeconds: expectedSeconds(store, task.case) });
      const log = `${folder}/log.txt`;
      const end = await executor.run(
        {
          key: keys.run,
          name: task.case,
          words: fillCommand(task.words, { out: `${folder}/out`, root: built.place.tree }),
          folder: built.place.tree,
          environment: this.surroundings(task, built.place, executor.kind === 'local' ? folder : null),
          log,
          timeLimitSeconds: task.timeLimitSeconds,
          memoryMegabytes: task.memoryMegabytes,
        },
        signal,
      );
      const tail = logTail(log);
      dropTemporary(folder);
      if (!endedWell(end)) return this.failed(task, keys, notWell(end, 'the run', tail));
      say({ what: 'ran', case: task.case, seconds: end.seconds, kept: false });
      rememberSeconds(store, task.case, end.seconds);
      const files = outFiles(`${folder}/out`);
      const record: KeptRecord = {
        case: task.case,
        key: keys.run,
        seconds: end.seconds,
        peakMegabytes: end.peakMegabytes,
        files,
        words: task.words,
        date: new Date().toISOString(),
        absent,
      };
      const reads = readsOf(store.scratch, built.place.tree, keys.files);
      const place = keepResult(store, keys.run, folder, record, task.fresh);
      if (reads !== null) rememberReads(store, keys.reads, { key: keys.run, reads });
      return {
        state: 'ran',
        key: keys.run,
        out: `${place}/out`,
        files: Object.keys(files),
        seconds: end.seconds,
        peakMegabytes: end.peakMegabytes,
        kept: false,
        absent,
        logTail: tail,
      };
    });
  }

  /**
   * The declared variables, and two that keep a run to itself and are no part of its key: temporary files go where they are
   * removed with it, and git, should a build ask it for a version, does not take the repository around the store for the code's.
   */
  private surroundings(task: RunTask, place: BuildPlace, own: string | null): Record<string, string> {
    const around: Record<string, string> = { GIT_CEILING_DIRECTORIES: place.folder };
    if (own !== null) around.TMPDIR = temporaryFolder(own);
    return { ...around, ...task.environment };
  }

  private failed(task: RunTask, keys: Keys, result: RunResult): RunResult {
    if (task.keepFailures && (result.state === 'failed' || result.state === 'not built')) {
      keepFailure(this.parts.store, keys.run, result);
    }
    return result;
  }

  private buildOnce(task: RunTask, keys: Keys): Promise<Built> {
    const same = this.builds.get(keys.build);
    if (same !== undefined) return same;
    const built = this.pool.with(() => this.build(task, keys.build));
    this.builds.set(keys.build, built);
    return built;
  }

  private async build(task: RunTask, key: string): Promise<Built> {
    const { store, builder, signal, say } = this.parts;
    if (signal.aborted) return { failed: INTERRUPTED };
    const place = await takeBuild(store, key, signal).catch(() => null);
    if (place === null) return { failed: INTERRUPTED };
    if (place.done) return { place, absent: buildRecord<BuildRecord>(place).absent };
    let done = false;
    try {
      const { absent } = await layTree(task.listing, place.tree, task.replaced);
      if (task.build !== null) {
        const name = `build ${key.slice(0, 12)}`;
        say({ what: 'building', build: name, expectedSeconds: expectedSeconds(store, 'build') });
        // Built where Mortise runs: login nodes have the compilers, and a build must not be lost in a queue.
        const end = await builder.run(
          {
            key,
            name,
            words: fillCommand(task.build, { root: place.tree }),
            folder: place.tree,
            environment: this.surroundings(task, place, place.folder),
            log: place.log,
            timeLimitSeconds: null,
            memoryMegabytes: null,
          },
          signal,
        );
        dropTemporary(place.folder);
        say({ what: 'built', build: name, seconds: end.seconds, well: endedWell(end) });
        if (!endedWell(end)) {
          const result = notWell(end, 'the build', logTail(place.log));
          if (result.state === 'ran') throw new Error('unreachable: a build that did not end well has no result');
          const about =
            absent.length === 0
              ? ''
              : `; not in the tree: ${absent.map((one) => `${one.path} (${one.why})`).join(', ')}`;
          const state = result.state === 'interrupted' ? 'interrupted' : 'not built';
          return { failed: { ...result, state, why: `${result.why}${about}` } as RunResult };
        }
        const lacking = madeFiles(place.tree, task.makes);
        if (lacking.length > 0) {
          const why = `the build ended well but did not make ${lacking.join(', ')}`;
          return { failed: { state: 'not built', why, logTail: logTail(place.log) } };
        }
        rememberSeconds(store, 'build', end.seconds);
      }
      finishBuild(place, { key, absent } satisfies BuildRecord);
      done = true;
      return { place: { ...place, done: true }, absent };
    } finally {
      if (!done) dropBuild(place);
    }
  }
}

interface Keys {
  readonly files: readonly KeyedFile[];
  readonly build: string;
  readonly run: string;
  /** Of everything but the content of files: under it stand the earlier results with what each had read. */
  readonly reads: string;
}

const INTERRUPTED: RunResult = { state: 'interrupted', why: 'it was interrupted', logTail: '' };

function notWell(end: ProcessEnd, what: string, tail: string): RunResult {
  const state = (
    {
      'timed out': 'timed out',
      'out of memory': 'out of memory',
      interrupted: 'interrupted',
      'not started': 'failed',
      'too much output': 'failed',
      preempted: 'failed',
      'node failed': 'failed',
      ended: 'failed',
    } as const
  )[end.how];
  return {
    state,
    why: `${what} ${endText(end)}`,
    logTail: tail,
    seconds: end.seconds,
    peakMegabytes: end.peakMegabytes,
  };
}
