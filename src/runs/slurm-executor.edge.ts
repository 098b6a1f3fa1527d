/**
 * Runs jobs through Slurm: workers are submitted as one job array and take runs from a spool folder in the store, which must be
 * on a file system that the nodes share. The spool outlives Mortise: after a lost login the next call finds what the workers
 * did meanwhile, and waits for what they still do.
 */
import { execFile } from 'node:child_process';
import { setMaxListeners } from 'node:events';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Executor as DeclaredExecutor } from '../model/manifest.ts';
import { type Executor, endedWell, type ProcessEnd, type ProcessJob } from './process-end.ts';
import { readAccounts, readJobs, readQueue, standingOf, timeText } from './slurm-state.ts';
import { readEnd, taskScript, WORKER } from './slurm-task.ts';
import { logTail, writeWhole } from './store.edge.ts';

/** Slurm could not do what was asked; the message is its own. */
export class SlurmFailed extends Error {
  override readonly name = 'SlurmFailed';
}

const POLL_MILLISECONDS = 50;
/** How often the queue is asked for workers that died. */
const QUEUE_MILLISECONDS = 2000;
/** Tenths of a second that a worker waits for more to do: long enough for a login to come back. */
const PATIENCE = 600;
/** Times that a run lost without its fault is tried again. */
const AGAIN = 2;

interface Waiting {
  readonly job: ProcessJob;
  readonly resolve: (end: ProcessEnd) => void;
  readonly reject: (error: Error) => void;
  lost: number;
}

/** @param store  absolute folder of the result store */
export function slurmExecutor(store: string, declared: DeclaredExecutor, atOnce = 16): Executor {
  return new SlurmPool(join(store, 'slurm'), declared, atOnce);
}

class SlurmPool implements Executor {
  readonly kind = 'slurm';
  readonly atOnce: number;
  private readonly spool: string;
  private readonly declared: DeclaredExecutor;
  private readonly waiting = new Map<string, Waiting>();
  private timer: NodeJS.Timeout | undefined;
  private askedQueue = 0;
  private asking = false;
  private cancelling: Promise<void> | undefined;

  constructor(spool: string, declared: DeclaredExecutor, atOnce: number) {
    this.spool = spool;
    this.declared = declared;
    this.atOnce = atOnce;
    for (const name of ['todo', 'taken', 'done', 'jobs', 'runs', 'logs'])
      mkdirSync(join(spool, name), { recursive: true });
    rmSync(join(spool, 'stop'), { force: true });
    writeWhole(join(spool, 'worker.sh'), WORKER, false);
  }

  runFolder(key: string, fresh: boolean): string {
    const folder = join(this.spool, 'runs', key);
    if (fresh && !this.standing(key)) this.forget(key);
    mkdirSync(join(folder, 'out'), { recursive: true });
    return folder;
  }

  run(job: ProcessJob, signal: AbortSignal): Promise<ProcessEnd> {
    const nothing = { exitCode: null, signal: null, peakMegabytes: null, seconds: 0 };
    if (signal.aborted) return Promise.resolve({ ...nothing, how: 'interrupted' });
    // Every run listens, and hundreds may wait.
    setMaxListeners(0, signal);
    return new Promise((resolve, reject) => {
      const onAbort = () => {
        rmSync(join(this.spool, 'todo', `${job.key}.sh`), { force: true });
        this.settle(job.key, { ...nothing, how: 'interrupted' });
        this.cancelling ??= this.cancel();
      };
      const settled = (end: ProcessEnd) => {
        signal.removeEventListener('abort', onAbort);
        resolve(end);
      };
      signal.addEventListener('abort', onAbort, { once: true });
      this.waiting.set(job.key, { job, resolve: settled, reject, lost: 0 });
      if (!this.isDone(job) && !this.standing(job.key)) this.put(job);
      // A first look after a moment, when all that are to come at once have come.
      if (this.timer === undefined) this.askedQueue = Date.now() - QUEUE_MILLISECONDS + 2 * POLL_MILLISECONDS;
      this.timer ??= setInterval(() => this.poll(), POLL_MILLISECONDS);
    });
  }

  async close(): Promise<void> {
    clearInterval(this.timer);
    await this.cancelling?.catch(() => {});
    if (readdirSync(join(this.spool, 'todo')).length === 0 && this.takenTasks().size === 0) {
      writeFileSync(join(this.spool, 'stop'), '');
      await this.cancel();
    }
  }

  private put(job: ProcessJob): void {
    // A folder left by a worker that died half way must not lend its files to the next run.
    rmSync(join(this.spool, 'done', job.key), { force: true });
    const out = join(this.spool, 'runs', job.key);
    rmSync(out, { recursive: true, force: true });
    mkdirSync(join(out, 'out'), { recursive: true });
    writeWhole(join(this.spool, 'todo', `${job.key}.sh`), taskScript(job), false);
  }

  /** An end without its log is one whose result was taken away since. */
  private isDone(job: ProcessJob): boolean {
    return existsSync(join(this.spool, 'done', job.key)) && existsSync(job.log);
  }

  private standing(key: string): boolean {
    return existsSync(join(this.spool, 'todo', `${key}.sh`)) || this.takenTasks().has(key);
  }

  /** Key to the worker that has it. */
  private takenTasks(): Map<string, string> {
    const taken = new Map<string, string>();
    for (const worker of readdirSync(join(this.spool, 'taken'))) {
      for (const name of readdirSync(join(this.spool, 'taken', worker))) {
        if (name.endsWith('.sh')) taken.set(name.slice(0, -3), worker);
      }
    }
    return taken;
  }

  private forget(key: string): void {
    for (const name of [`done/${key}`, `runs/${key}`]) rmSync(join(this.spool, name), { recursive: true, force: true });
  }

  private settle(key: string, end: ProcessEnd): void {
    const waiting = this.waiting.get(key);
    this.waiting.delete(key);
    // A failure is told once and then tried again when asked for; what ended well stays for whoever else waits for it.
    if (!endedWell(end)) rmSync(join(this.spool, 'done', key), { force: true });
    waiting?.resolve(end);
    if (this.waiting.size === 0) {
      clearInterval(this.timer);
      this.timer = undefined;
    }
  }

  private poll(): void {
    for (const key of readdirSync(join(this.spool, 'done'))) {
      const waiting = this.waiting.get(key);
      if (waiting === undefined) continue;
      const end = readEnd(readFileSync(join(this.spool, 'done', key), 'utf8'), waiting.job);
      if (end !== null) this.settle(key, end);
    }
    if (this.waiting.size === 0 || this.asking || Date.now() - this.askedQueue < QUEUE_MILLISECONDS) return;
    this.asking = true;
    this.tend()
      .catch((error: Error) => {
        for (const [key, { reject }] of [...this.waiting]) {
          this.waiting.delete(key);
          reject(error);
        }
      })
      .finally(() => {
        this.askedQueue = Date.now();
        this.asking = false;
      });
  }

  /** Looks after the workers: gives back what dead ones had taken, submits new ones while there is more to do than they are. */
  private async tend(): Promise<void> {
    const jobs = readdirSync(join(this.spool, 'jobs'));
    const queue =
      jobs.length === 0
        ? new Map<string, { state: string; reason: string }>()
        : readQueue(await slurm('squeue', ['-h', '-r', '-o', '%F_%K %T %r', '-j', jobs.join()], true));
    // A worker that was preempted or lost its node waits for a while before it starts again; what it had taken need not.
    const set = [...queue].filter(
      ([, { state, reason }]) => standingOf(state).is === 'queued' && reason === 'BeginTime',
    );
    for (const [id] of set) this.giveBack(id);
    const living = new Set(
      [...queue]
        .filter(([id, { state }]) => standingOf(state).is !== 'over' && !set.some(([one]) => one === id))
        .map(([id]) => id),
    );
    const held = new Set(queue.keys());
    const dead = [...this.takenTasks()].filter(
      ([, worker]) => !held.has(worker) || standingOf(queue.get(worker)!.state).is === 'over',
    );
    if (dead.length > 0) {
      const told = await this.endsOf([...new Set(dead.map(([, worker]) => worker.split('_')[0]!))]);
      for (const [key, worker] of dead) this.lost(key, worker, told.get(worker));
    }
    for (const job of jobs) {
      if (![...held].some((id) => id.startsWith(`${job}_`))) rmSync(join(this.spool, 'jobs', job), { force: true });
    }
    for (const { job } of this.waiting.values()) if (!this.isDone(job) && !this.standing(job.key)) this.put(job);
    const wanted = Math.min(this.atOnce, this.waiting.size) - living.size;
    if (wanted > 0) await this.submit(wanted);
  }

  private giveBack(worker: string): void {
    const folder = join(this.spool, 'taken', worker);
    if (!existsSync(folder)) return;
    for (const name of readdirSync(folder)) {
      const waiting = this.waiting.get(name.slice(0, -3));
      rmSync(join(folder, name), { force: true });
      if (waiting !== undefined) this.put(waiting.job);
    }
  }

  /** sacct where there is accounting; scontrol remembers for some minutes where there is none. */
  private async endsOf(jobs: readonly string[]): Promise<Map<string, { state: string; reason: string }>> {
    const accounts = readAccounts(
      await slurm('sacct', ['-n', '-P', '-X', '-o', 'JobID,State', '-j', jobs.join()], true),
    );
    const ends = new Map(accounts);
    for (const job of jobs) {
      if ([...ends.keys()].some((id) => id.startsWith(`${job}_`))) continue;
      for (const [id, end] of readJobs(await slurm('scontrol', ['show', 'job', '-o', job], true))) ends.set(id, end);
    }
    return ends;
  }

  private lost(key: string, worker: string, end: { state: string; reason: string } | undefined): void {
    const task = join(this.spool, 'taken', worker, `${key}.sh`);
    // It may have ended well just before its worker did.
    if (existsSync(join(this.spool, 'done', key))) {
      rmSync(task, { force: true });
      return;
    }
    const printed = logTail(join(this.spool, 'logs', `worker-${worker}.txt`), 2000);
    const standing = standingOf(end?.state ?? 'NODE_FAIL', `${end?.reason ?? ''} ${printed}`);
    if (standing.is !== 'over') return;
    const waiting = this.waiting.get(key);
    rmSync(task, { force: true });
    if (waiting === undefined) return;
    waiting.lost++;
    if (standing.again && waiting.lost <= AGAIN) {
      this.put(waiting.job);
      return;
    }
    const how = standing.how === 'ended' ? 'node failed' : standing.how;
    const told = `${end?.state ?? 'no state'}${end?.reason === undefined || end.reason === '' ? '' : ` (${end.reason})`}`;
    this.settle(key, {
      how,
      exitCode: null,
      signal: null,
      seconds: 0,
      peakMegabytes: null,
      why: `Slurm says ${told} of job ${worker}`,
    });
  }

  private async submit(workers: number): Promise<void> {
    const memory = this.declared['memory-megabytes'];
    const limit = this.declared['time-limit-seconds'];
    const each = Math.ceil(this.waiting.size / this.atOnce);
    const words = [
      '--parsable',
      `--array=1-${workers}`,
      '--job-name=mortise',
      '--ntasks=1',
      // A worker is one task; what its runs launch, such as MPI ranks, has the cores of that task.
      `--cpus-per-task=${this.declared.cores ?? 1}`,
      '--nodes=1',
      '--requeue',
      '--export=NONE',
      '--open-mode=append',
      `--output=${join(this.spool, 'logs', 'worker-%A_%a.txt')}`,
      `--chdir=${this.spool}`,
      ...(memory === undefined ? [] : [`--mem=${Math.ceil(memory)}M`]),
      // Room for its share of runs at their limit, and a minute to spare.
      ...(limit === undefined ? [] : [`--time=${timeText(each * (limit + 2) + 60)}`]),
      join(this.spool, 'worker.sh'),
      this.spool,
      String(PATIENCE),
    ];
    const id = (await slurm('sbatch', words)).trim().split(';')[0]!;
    if (!/^\d+$/.test(id)) throw new SlurmFailed(`sbatch gave no job id but: ${id}`);
    writeFileSync(join(this.spool, 'jobs', id), '');
  }

  private async cancel(): Promise<void> {
    const jobs = readdirSync(join(this.spool, 'jobs'));
    if (jobs.length === 0) return;
    await slurm('scancel', jobs, true);
    for (const job of jobs) rmSync(join(this.spool, 'jobs', job), { force: true });
    for (const worker of readdirSync(join(this.spool, 'taken'))) {
      if (jobs.includes(worker.split('_')[0]!))
        rmSync(join(this.spool, 'taken', worker), { recursive: true, force: true });
    }
  }
}

/** @param lenient  an error is an empty answer: asking after a job that Slurm has forgotten is one */
function slurm(program: string, words: readonly string[], lenient = false): Promise<string> {
  return new Promise((resolve, reject) => {
    execFile(program, [...words], { timeout: 60_000, maxBuffer: 1 << 26 }, (error, stdout, stderr) => {
      if (error === null) resolve(stdout);
      else if (lenient && (error as NodeJS.ErrnoException).code !== 'ENOENT') resolve(stdout);
      else if ((error as NodeJS.ErrnoException).code === 'ENOENT') {
        if (program === 'sacct') resolve('');
        else
          reject(
            new SlurmFailed(`there is no program "${program}" in PATH: is this a login node of a cluster with Slurm?`),
          );
      } else reject(new SlurmFailed(`${program}: ${stderr.trim() || error.message}`));
    });
  });
}
