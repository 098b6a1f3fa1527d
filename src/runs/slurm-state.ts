/** What Slurm says of a job, as what it means for the run inside it. Pure; the texts are those of squeue, sacct and scontrol. */
import type { EndedHow } from './process-end.ts';

export type JobStanding =
  | { readonly is: 'queued' | 'running' }
  /** Over, and what it had taken was lost with it; `again` when it was no fault of the run. */
  | { readonly is: 'over'; readonly how: EndedHow; readonly again: boolean };

/** States in which a job still is, or will again be, in the queue. */
const WAITING = new Set([
  'PENDING',
  'CONFIGURING',
  'REQUEUED',
  'REQUEUE_HOLD',
  'REQUEUE_FED',
  'SPECIAL_EXIT',
  'RESV_DEL_HOLD',
]);
const RUNNING = new Set(['RUNNING', 'COMPLETING', 'SUSPENDED', 'STOPPED', 'SIGNALING', 'STAGE_OUT', 'RESIZING']);

const MEMORY = /OutOfMemory|exceeded (?:job |step )?memory limit|oom.?kill/i;

/**
 * @param state  as printed, perhaps with more behind it: `CANCELLED by 1000`
 * @param told  what else is known: `Reason=` of scontrol, the last of what the job printed
 * @source Slurm 22.05 manual pages squeue(1) and sacct(1), section JOB STATE CODES
 */
export function standingOf(state: string, told = ''): JobStanding {
  const word = state.trim().split(/[\s+]/)[0]!.toUpperCase();
  if (WAITING.has(word)) return { is: 'queued' };
  if (RUNNING.has(word)) return { is: 'running' };
  switch (word) {
    case 'OUT_OF_MEMORY':
      return { is: 'over', how: 'out of memory', again: false };
    case 'TIMEOUT':
    case 'DEADLINE':
      // The allocation ran out, which holds many runs: the one at hand gets another.
      return { is: 'over', how: 'timed out', again: true };
    case 'PREEMPTED':
      return { is: 'over', how: 'preempted', again: true };
    case 'NODE_FAIL':
    case 'BOOT_FAIL':
      return { is: 'over', how: 'node failed', again: true };
    case 'CANCELLED':
    case 'REVOKED':
      return { is: 'over', how: MEMORY.test(told) ? 'out of memory' : 'interrupted', again: false };
    default:
      // Without cgroups a job that took too much memory is FAILED, and only its output says why.
      if (MEMORY.test(told)) return { is: 'over', how: 'out of memory', again: false };
      return { is: 'over', how: 'ended', again: true };
  }
}

/** `squeue -h -r -o "%F_%K %T %r"`: a line an element of an array: its state, and why it waits. */
export function readQueue(text: string): Map<string, { readonly state: string; readonly reason: string }> {
  const states = new Map<string, { state: string; reason: string }>();
  for (const line of text.split('\n')) {
    const [id, state, reason = ''] = line.trim().split(/\s+/);
    if (id !== undefined && state !== undefined) states.set(id, { state, reason });
  }
  return states;
}

/** `scontrol show job -o`: a line a job or element, `ArrayJobId=7 ArrayTaskId=2 … JobState=TIMEOUT Reason=TimeLimit …`. */
export function readJobs(text: string): Map<string, { readonly state: string; readonly reason: string }> {
  const jobs = new Map<string, { state: string; reason: string }>();
  for (const line of text.split('\n')) {
    const field = (name: string) => new RegExp(`(?:^|\\s)${name}=(\\S+)`).exec(line)?.[1];
    const [job, array, element, state] = [field('JobId'), field('ArrayJobId'), field('ArrayTaskId'), field('JobState')];
    if (job === undefined || state === undefined) continue;
    jobs.set(array === undefined || element === undefined ? job : `${array}_${element}`, {
      state,
      reason: field('Reason') ?? '',
    });
  }
  return jobs;
}

/** `sacct -n -P -X -o JobID,State`: the same, where there is accounting. */
export function readAccounts(text: string): Map<string, { readonly state: string; readonly reason: string }> {
  const jobs = new Map<string, { state: string; reason: string }>();
  for (const line of text.split('\n')) {
    const [id, state] = line.split('|');
    if (id !== undefined && id !== '' && state !== undefined) jobs.set(id, { state, reason: '' });
  }
  return jobs;
}

/** Seconds as Slurm's `--time` takes them; whole minutes upwards, since that is its grain. */
export function timeText(seconds: number): string {
  const minutes = Math.max(1, Math.ceil(seconds / 60));
  const two = (value: number) => String(value).padStart(2, '0');
  return `${Math.floor(minutes / 1440)}-${two(Math.floor(minutes / 60) % 24)}:${two(minutes % 60)}:00`;
}
