/** How a build or a run ended, whatever executor it ran on. */

export type EndedHow =
  | 'ended'
  | 'not started'
  | 'timed out'
  | 'out of memory'
  | 'too much output'
  | 'interrupted'
  | 'preempted'
  | 'node failed';

export interface ProcessEnd {
  readonly how: EndedHow;
  /** null when it did not end by itself. */
  readonly exitCode: number | null;
  readonly signal: string | null;
  readonly seconds: number;
  /** Largest memory seen over all its processes; null where not measured. */
  readonly peakMegabytes: number | null;
  /** Why it could not be started. */
  readonly why?: string;
}

export interface ProcessJob {
  /** Of everything that can change what it does; tells it again after a lost login. */
  readonly key: string;
  /** Names the job in queues and in the result store. */
  readonly name: string;
  readonly words: readonly string[];
  readonly folder: string;
  readonly environment: Readonly<Record<string, string>>;
  /** Absolute path; standard output and error go there, in the order they were written. */
  readonly log: string;
  readonly timeLimitSeconds: number | null;
  readonly memoryMegabytes: number | null;
}

/** Where builds and runs are carried out. */
export interface Executor {
  readonly kind: 'local' | 'slurm';
  readonly atOnce: number;
  /** Absolute folder, with `out/` in it, for one run; the executor's own where runs outlive this process. */
  runFolder?(key: string, fresh: boolean): string;
  /** Never throws for what the job does; aborting the signal ends the job and all its processes. */
  run(job: ProcessJob, signal: AbortSignal): Promise<ProcessEnd>;
  /** Gives back what it holds: allocations, guards. */
  close(): Promise<void>;
}

/** In words, for people: `ended with exit status 2`. */
export function endText(end: ProcessEnd): string {
  switch (end.how) {
    case 'ended':
      if (end.signal !== null) return `was ended by ${end.signal}`;
      return end.exitCode === 0 ? 'ended well' : `ended with exit status ${end.exitCode}`;
    case 'not started':
      return `could not be started: ${end.why ?? 'unknown reason'}`;
    case 'timed out':
      return `was ended after its time limit, at ${end.seconds.toFixed(1)} s`;
    case 'out of memory':
      return `was ended at its memory limit${end.peakMegabytes === null ? '' : `, with ${Math.round(end.peakMegabytes)} MB`}${because(end)}`;
    case 'too much output':
      return 'was ended because it wrote too much to its log';
    case 'interrupted':
      return `was interrupted${because(end)}`;
    case 'preempted':
      return `was preempted by the queue${because(end)}`;
    case 'node failed':
      return `was lost with its node${because(end)}`;
  }
}

export function endedWell(end: ProcessEnd): boolean {
  return end.how === 'ended' && end.exitCode === 0;
}

function because(end: ProcessEnd): string {
  return end.why === undefined ? '' : `: ${end.why}`;
}
