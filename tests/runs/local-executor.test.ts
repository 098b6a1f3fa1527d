import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { runLocally } from '../../src/runs/local-executor.edge.ts';
import type { ProcessJob } from '../../src/runs/process-end.ts';
import { alive, soon } from './alive.ts';

let folder: string;
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-local-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

const job = (script: string, more: Partial<ProcessJob> = {}): ProcessJob => ({
  key: 'test',
  name: 'test',
  words: [process.execPath, '-e', script],
  folder,
  environment: { PATH: process.env.PATH! },
  log: join(folder, 'log.txt'),
  timeLimitSeconds: 20,
  memoryMegabytes: null,
  ...more,
});
const never = new AbortController().signal;
/** Starts a grandchild that ignores the request to end, notes its process id, and waits. */
const STUBBORN = `
const { spawn } = require('node:child_process');
const child = spawn(process.execPath, ['-e', "process.on('SIGTERM', () => {}); setInterval(() => {}, 1000)"]);
require('node:fs').writeFileSync('grandchild', String(child.pid));
process.on('SIGTERM', () => {});
setInterval(() => {}, 1000);`;
const grandchild = () => Number(readFileSync(join(folder, 'grandchild'), 'utf8'));

describe('runLocally', () => {
  it('gives the exit status and writes both streams to the log in order', async () => {
    const end = await runLocally(job("console.log('one'); console.error('two'); process.exit(3)"), never);
    expect(end).toMatchObject({ how: 'ended', exitCode: 3, signal: null });
    expect(readFileSync(join(folder, 'log.txt'), 'utf8')).toBe('one\ntwo\n');
  });

  it('tells a signal from an exit status', async () => {
    expect(await runLocally(job("process.kill(process.pid, 'SIGSEGV')"), never)).toMatchObject({
      how: 'ended',
      signal: 'SIGSEGV',
    });
  });

  it('says which program is not there', async () => {
    const end = await runLocally(job('', { words: ['no-such-program'] }), never);
    expect(end).toMatchObject({ how: 'not started', why: 'there is no program "no-such-program" in PATH' });
  });

  it('ends the whole process group at the time limit, even one that will not go', async () => {
    const end = await runLocally(job(STUBBORN, { timeLimitSeconds: 1.5 }), never);
    expect(end.how).toBe('timed out');
    await soon(() => !alive(grandchild()));
  });

  it('ends the whole process group when interrupted', async () => {
    const interrupt = new AbortController();
    const running = runLocally(job(STUBBORN), interrupt.signal);
    await soon(() => grandchild() > 0);
    interrupt.abort();
    expect((await running).how).toBe('interrupted');
    await soon(() => !alive(grandchild()));
  });

  it('ends what a command left running behind it', async () => {
    const script = STUBBORN.replace(
      /process\.on\('SIGTERM', \(\) => \{\}\);\s*setInterval\(\(\) => \{\}, 1000\);$/,
      'process.exit(0)',
    );
    const end = await runLocally(job(script), never);
    expect(end).toMatchObject({ how: 'ended', exitCode: 0 });
    await soon(() => !alive(grandchild()));
  });

  it.runIf(process.platform === 'linux')('ends a run that takes more memory than it may', async () => {
    const end = await runLocally(
      job('globalThis.held = Buffer.alloc(400e6, 1); setInterval(() => {}, 1000)', { memoryMegabytes: 200 }),
      never,
    );
    expect(end.how).toBe('out of memory');
    expect(end.peakMegabytes).toBeGreaterThan(200);
  });

  it('gives no variable to the command but those it is given', async () => {
    await runLocally(
      job('console.log(Object.keys(process.env).sort().join())', { environment: { B: '2', A: '1' } }),
      never,
    );
    expect(readFileSync(join(folder, 'log.txt'), 'utf8')).toBe('A,B\n');
  });
});
