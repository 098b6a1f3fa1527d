/** What became of one case: whether it ran, how its result stands to its reference, and what made it. */
import { type Deviation, type DeviationClass, worseClass } from '../model/deviation.ts';
import type { Domain } from '../model/manifest.ts';

export const CASE_STATES = [
  'compared',
  'no reference',
  'not runnable',
  'not built',
  'failed',
  'timed out',
  'out of memory',
  'interrupted',
  'mistaken',
] as const;
/**
 * *not runnable*: a program it needs is not on this machine. *not built*: its build failed. *mistaken*: its manifest asks for
 * something that can't be done, such as a place in the command without a value.
 */
export type CaseState = (typeof CASE_STATES)[number];

export interface CaseOutcome {
  readonly case: string;
  readonly state: CaseState;
  /** One sentence for every state but *compared*; empty there. */
  readonly why: string;
  /** Worst class over all deviations; null unless compared. */
  readonly class: DeviationClass | null;
  readonly deviations: readonly Deviation[];
  /** Of the run itself; null when it did not run. */
  readonly seconds: number | null;
  readonly peakMegabytes: number | null;
  /** True when the result was kept from an earlier run. */
  readonly kept: boolean;
  /** Key of everything that can change the result; null when there is no result. */
  readonly key: string | null;
  /** Absolute folder of the output files; null when there is no result. */
  readonly result: string | null;
  readonly footprint: Domain | null;
  /** The last lines of its log, or of the build's where that failed. */
  readonly logTail: string;
  readonly produced: Produced | null;
  /** Why its reference can't be trusted, where there is one. */
  readonly damage?: string;
  /** Files of the tree that could not be laid out for it. */
  readonly absent?: readonly AbsentFile[];
}

/** A file of the tree that is not there where the code is built and run: a link that leads outside, a submodule, a missing object. */
export interface AbsentFile {
  readonly path: string;
  readonly why: string;
}

/** What produced a result: enough to make it again, or to say what has changed since. */
export interface Produced {
  /** Full commit id under the tree; null outside git. */
  readonly revision: string | null;
  /** Files that differed from that revision. */
  readonly changed: readonly string[];
  readonly modules: Readonly<Record<string, ProducedModule>>;
  /** Words of the command, with `{out}` and `{root}` left open. */
  readonly command: readonly string[];
  readonly build: readonly string[] | null;
  readonly select: Readonly<Record<string, string>>;
  /** Content ids of the manifests it was built and run by: assembly, case, modules, contracts of the code's own. */
  readonly manifests?: Readonly<Record<string, string>>;
  /** File to content id. */
  readonly inputs: Readonly<Record<string, string>>;
  readonly environment: ProducedEnvironment;
}

export interface ProducedModule {
  readonly module: string;
  readonly version: string;
  /** Content ids (`swh:1:cnt:…`) of its source files and tables; null for a file that is not there. */
  readonly files: Readonly<Record<string, string | null>>;
  /** Content id of its manifest. */
  readonly manifest: string | null;
}

export interface ProducedEnvironment {
  readonly system: string;
  readonly processor: string;
  readonly library: string | null;
  /** Program to the first line of its version, or where it stands when it tells none. */
  readonly programs: Readonly<Record<string, string>>;
  readonly variables: Readonly<Record<string, string>>;
  readonly executor: string;
}

export function worstClass(deviations: readonly Deviation[]): DeviationClass | null {
  return deviations.reduce<DeviationClass | null>(
    (worst, one) => (worst === null ? one.class : worseClass(worst, one.class)),
    null,
  );
}

/** True for what stands in the way of a clearance. */
export function isBad(outcome: CaseOutcome): boolean {
  if (outcome.state === 'compared') return outcome.class === 'beyond tolerance' || outcome.class === 'not comparable';
  return outcome.state !== 'no reference' && outcome.state !== 'not runnable';
}
