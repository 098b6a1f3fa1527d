import { execFileSync, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { cpus, tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, it } from 'vitest';
import type { Executor, ProcessJob } from '../../src/runs/process-end.ts';
import { rerunCases } from '../../src/runs/rerun.ts';
import { slurmExecutor } from '../../src/runs/slurm-executor.edge.ts';
import { describeWith } from '../support/tools.ts';
import { soon } from './alive.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

const never = new AbortController().signal;

describeWith(['slurm'], 'slurmExecutor', () => {
  let store: string;
  let executor: Executor;
  beforeEach(() => {
    store = mkdtempSync(join(tmpdir(), 'mortise-slurm-'));
    executor = slurmExecutor(store, { kind: 'slurm', 'memory-megabytes': 300 }, 1);
  });
  afterEach(async () => {
    await executor.close();
    for (const job of jobs()) execFileSync('scancel', [job]);
    rmSync(store, { recursive: true, force: true, maxRetries: 5 });
  });

  const job = (key: string, script: string, more: Partial<ProcessJob> = {}): ProcessJob => {
    const folder = executor.runFolder!(key, false);
    return {
      key,
      name: key,
      words: [process.execPath, '-e', script],
      folder: store,
      environment: { PATH: process.env.PATH!, ODD: `it's "odd" $HOME` },
      log: join(folder, 'log.txt'),
      timeLimitSeconds: null,
      memoryMegabytes: null,
      ...more,
    };
  };
  const jobs = () => {
    const ids = execFileSync('squeue', ['-h', '-o', '%A %Z'], { encoding: 'utf8' }).split('\n');
    return ids.filter((line) => line.includes(store)).map((line) => line.split(' ')[0]!);
  };
  const log = (key: string) => readFileSync(join(store, 'slurm', 'runs', key, 'log.txt'), 'utf8');
  /** Appends a line a start, so that a second start can be told. */
  const noting = (then: string) => `require('node:fs').appendFileSync('starts', 'start\\n'); ${then}`;
  const starts = () => readFileSync(join(store, 'starts'), 'utf8').split('\n').length - 1;

  it('gives the exit status, the log and the time, and passes odd variables on as they are', async () => {
    const end = await executor.run(
      job('a', 'console.log(process.env.ODD, Object.keys(process.env).sort().join()); process.exit(3)'),
      never,
    );
    expect(end).toMatchObject({ how: 'ended', exitCode: 3 });
    expect(log('a')).toBe(`it's "odd" $HOME ODD,PATH\n`);
  });

  it('runs many jobs in one allocation', async () => {
    const ends = await Promise.all(Array.from({ length: 12 }, (_, i) => executor.run(job(`m${i}`, ''), never)));
    expect(ends.every((end) => end.how === 'ended' && end.exitCode === 0)).toBe(true);
    expect(readdirSync(join(store, 'slurm', 'logs'))).toHaveLength(1);
  });

  it('tells a run that took too long', async () => {
    const end = await executor.run(job('slow', 'setInterval(() => {}, 1000)', { timeLimitSeconds: 1 }), never);
    expect(end.how).toBe('timed out');
  });

  it('tells a run that took too much memory', async () => {
    const end = await executor.run(
      job('big', 'globalThis.held = Buffer.alloc(900e6, 1); setInterval(() => {}, 1000)'),
      never,
    );
    expect(end.how).toBe('out of memory');
  });

  it('tells a program that is not there', async () => {
    const end = await executor.run(job('none', '', { words: ['no-such-program'] }), never);
    expect(end).toMatchObject({ how: 'not started', why: 'there is no program "no-such-program" in PATH on the node' });
  });

  it('takes its job out of the queue when interrupted', async () => {
    const interrupt = new AbortController();
    const running = executor.run(job('wait', noting('setInterval(() => {}, 1000)')), interrupt.signal);
    await soon(() => starts() === 1);
    interrupt.abort();
    expect((await running).how).toBe('interrupted');
    await executor.close();
    await soon(() => jobs().length === 0);
  });

  it('finds after a lost login what the workers did and what they still do', async () => {
    void executor.run(job('first', noting('')), never);
    void executor.run(job('second', noting('setTimeout(() => {}, 1500)')), never);
    await soon(() => starts() === 2);
    // The login is lost: nobody waits any more. A new executor knows nothing but the spool.
    const next = slurmExecutor(store, { kind: 'slurm' }, 1);
    const ends = await Promise.all([
      next.run(job('first', noting('')), never),
      next.run(job('second', noting('')), never),
    ]);
    expect(ends).toMatchObject([
      { how: 'ended', exitCode: 0 },
      { how: 'ended', exitCode: 0 },
    ]);
    expect(starts()).toBe(2);
    await next.close();
  });

  it('starts a run again that was preempted', async () => {
    const running = executor.run(
      job(
        'again',
        noting("setTimeout(() => {}, require('node:fs').readFileSync('starts', 'utf8').length > 6 ? 100 : 60000)"),
      ),
      never,
    );
    await soon(() => starts() === 1);
    const all = String(cpus().length);
    execFileSync('sbatch', ['--partition=high', `--ntasks=${all}`, '--output=/dev/null', '--wrap', 'sleep 1']);
    expect(await running).toMatchObject({ how: 'ended', exitCode: 0 });
    expect(starts()).toBe(2);
  }, 90_000);

  it('starts a run again that was lost with its node', async () => {
    const node = execFileSync('sinfo', ['-h', '-o', '%n'], { encoding: 'utf8' }).trim().split('\n')[0]!;
    const running = executor.run(
      job(
        'node',
        noting("setTimeout(() => {}, require('node:fs').readFileSync('starts', 'utf8').length > 6 ? 100 : 60000)"),
      ),
      never,
    );
    await soon(() => starts() === 1);
    execFileSync('scontrol', ['update', `nodename=${node}`, 'state=down', 'reason=test']);
    // Slurm may take it back by itself first, and then refuses to be told.
    await soon(() => {
      spawnSync('scontrol', ['update', `nodename=${node}`, 'state=resume']);
      return /idle|mixed|allocated/.test(execFileSync('sinfo', ['-h', '-o', '%T'], { encoding: 'utf8' }));
    });
    expect(await running).toMatchObject({ how: 'ended', exitCode: 0 });
    expect(starts()).toBe(2);
  }, 90_000);

  it('reruns the cases of a code whose assembly declares it', async () => {
    const code = new TinyCode({
      ...TINY,
      'manifests/assembly.yaml': `${TINY['manifests/assembly.yaml']}executors: {cluster: {kind: slurm, at-once: 2, time-limit-seconds: 60}}\n`,
    });
    try {
      const [outcome] = await rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER, store });
      expect(outcome).toMatchObject({ state: 'no reference', kept: false });
      expect(outcome!.produced!.environment.executor).toBe('slurm');
      expect(existsSync(join(outcome!.result!, 'profile.csv'))).toBe(true);
    } finally {
      code.remove();
    }
  });
});
