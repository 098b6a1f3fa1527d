/** Runs jobs on this machine, each as a process group of its own that is ended as a whole. */
import { spawn } from 'node:child_process';
import { setMaxListeners } from 'node:events';
import { closeSync, existsSync, fstatSync, openSync, readdirSync, readFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import type { Guard } from './guard.edge.ts';
import type { Executor, ProcessEnd, ProcessJob } from './process-end.ts';

/** Between asking a group to end and ending it. */
const GRACE_MILLISECONDS = 2000;
const WATCH_MILLISECONDS = 250;
/** A log beyond this is a run gone wild. */
const LOG_LIMIT_BYTES = 1 << 30;

export { availableParallelism };

/** As many at once as there are cores, unless told otherwise. */
export function localExecutor(guard: Guard, atOnce: number = availableParallelism()): Executor {
  return {
    kind: 'local',
    atOnce: Math.max(1, atOnce),
    run: (job, signal) => runLocally(job, signal, guard),
    close: async () => {},
  };
}

export function runLocally(job: ProcessJob, signal: AbortSignal, guard?: Guard): Promise<ProcessEnd> {
  const started = performance.now();
  const seconds = () => (performance.now() - started) / 1000;
  const nothing = { exitCode: null, signal: null, peakMegabytes: null };
  if (signal.aborted) return Promise.resolve({ ...nothing, how: 'interrupted', seconds: 0 });
  // Every run listens, and there may be more than the ten that Node takes for a leak.
  setMaxListeners(0, signal);
  return new Promise((resolve) => {
    const log = openSync(job.log, 'a');
    const child = spawn(job.words[0]!, job.words.slice(1), {
      cwd: job.folder,
      env: job.environment,
      // The child leads a session and a group of its own: what it starts can be ended with it, and Ctrl-C reaches only Mortise.
      detached: true,
      stdio: ['ignore', log, log],
    });
    let how: ProcessEnd['how'] = 'ended';
    let peak: number | null = null;
    let killer: NodeJS.Timeout | undefined;
    const group = child.pid;
    if (group !== undefined) guard?.hold(group);

    const end = (reason: ProcessEnd['how']) => {
      if (how !== 'ended' || group === undefined) return;
      how = reason;
      endGroup(group, 'SIGTERM');
      killer = setTimeout(() => endGroup(group, 'SIGKILL'), GRACE_MILLISECONDS);
    };
    const onAbort = () => end('interrupted');
    signal.addEventListener('abort', onAbort, { once: true });
    const timer =
      job.timeLimitSeconds === null
        ? undefined
        : setTimeout(() => end('timed out'), Math.min(job.timeLimitSeconds * 1000, 2 ** 31 - 1));
    const watch = setInterval(() => {
      if (fstatSync(log).size > LOG_LIMIT_BYTES) end('too much output');
      if (job.memoryMegabytes === null || group === undefined) return;
      const used = groupMegabytes(group);
      if (used === null) return;
      peak = Math.max(peak ?? 0, used);
      if (used > job.memoryMegabytes) end('out of memory');
    }, WATCH_MILLISECONDS);

    let settled = false;
    const settle = (done: ProcessEnd) => {
      if (settled) return;
      settled = true;
      clearTimeout(timer);
      clearTimeout(killer);
      clearInterval(watch);
      signal.removeEventListener('abort', onAbort);
      // What the command left running in its group ends with it.
      if (group !== undefined) {
        endGroup(group, 'SIGKILL');
        guard?.free(group);
      }
      closeSync(log);
      resolve(done);
    };
    child.on('error', (error: NodeJS.ErrnoException) => {
      const absent = error.code === 'ENOENT' && existsSync(job.folder);
      const why = absent ? `there is no program "${job.words[0]}" in PATH` : error.message;
      settle({ ...nothing, how: 'not started', seconds: seconds(), why });
    });
    child.on('exit', (exitCode, ended) => {
      // A program that answers the request to end by ending well was still ended by us.
      settle({
        how,
        exitCode: how === 'ended' ? exitCode : null,
        signal: ended,
        seconds: seconds(),
        peakMegabytes: peak,
      });
    });
  });
}

function endGroup(group: number, signal: NodeJS.Signals): void {
  try {
    process.kill(-group, signal);
  } catch (error) {
    // ESRCH: nobody is left, which is what was wanted. EPERM: only zombies of another user are left (macOS says so).
    if (!['ESRCH', 'EPERM'].includes((error as NodeJS.ErrnoException).code ?? '')) throw error;
  }
}

/** Resident memory of a process group; null where /proc is not to be had. Shared pages count for each process. */
function groupMegabytes(group: number): number | null {
  let kilobytes = 0;
  let processes: string[];
  try {
    processes = readdirSync('/proc');
  } catch {
    return null;
  }
  for (const id of processes) {
    if (!/^\d+$/.test(id)) continue;
    try {
      const stat = readFileSync(`/proc/${id}/stat`, 'latin1');
      // The name in parentheses can hold anything, so fields are counted from the last parenthesis: state, parent, group.
      if (Number(stat.slice(stat.lastIndexOf(')') + 2).split(' ')[2]) !== group) continue;
      kilobytes += Number(/^VmRSS:\s+(\d+) kB/m.exec(readFileSync(`/proc/${id}/status`, 'latin1'))?.[1] ?? 0);
    } catch {
      // It ended meanwhile.
    }
  }
  return (kilobytes * 1024) / 1e6;
}
