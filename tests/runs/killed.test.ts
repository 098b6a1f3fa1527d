import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { hostname, tmpdir } from 'node:os';
import { join } from 'node:path';
import { build } from 'esbuild';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { rerunCases } from '../../src/runs/rerun.ts';
import { closeStore, openStore } from '../../src/runs/store.edge.ts';
import { alive, soon } from './alive.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

/** A script that reruns every case of a tiny code, to be killed from outside. */
let script: string;
let folder: string;
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-killed-'));
  script = join(folder, 'rerun.mjs');
  await build({
    stdin: {
      contents: `
        import { TinyCode } from './tiny-code.ts';
        import { rerunCases } from '../../src/runs/rerun.ts';
        const code = Object.assign(Object.create(TinyCode.prototype), { root: process.argv[2] });
        const interrupt = new AbortController();
        process.on('SIGINT', () => interrupt.abort());
        const outcomes = await rerunCases({ root: code.root, manifests: code.manifests(), env: process.env, signal: interrupt.signal, jobs: 2 });
        console.log(outcomes.map((one) => one.state).join());`,
      resolveDir: import.meta.dirname,
      loader: 'ts',
    },
    outfile: script,
    bundle: true,
    platform: 'node',
    format: 'esm',
    external: ['h5wasm', 'h5wasm/node', 'ts-morph', 'better-sqlite3'],
    banner: {
      js: "import{createRequire as __requireFrom}from'node:module';const require=__requireFrom(import.meta.url);",
    },
    define: { 'import.meta.dirname': JSON.stringify(import.meta.dirname) },
    logLevel: 'silent',
  });
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

let code: TinyCode;
beforeEach(() => {
  // The first case is done at once, the second notes its process and waits.
  code = new TinyCode({
    ...TINY,
    'src/wait.mjs': `
import { writeFileSync } from 'node:fs';
if (process.env.WAIT === 'yes') { writeFileSync(process.env.NOTE, String(process.pid)); setInterval(() => {}, 1000); }
else writeFileSync(process.argv[2] + '/profile.csv', 'x,pressure,temperature\\n1,1,1\\n2,2,2\\n');
`,
    'manifests/assembly.yaml': `${TINY['manifests/assembly.yaml']}environment: {pass: [WAIT, NOTE]}\n`,
    'manifests/cases/wait.yaml': TINY['manifests/cases/shock.yaml']!.replace('case: shock', 'case: wait').replace(
      'node build/main.mjs {select.EOS} {out}',
      'node build/wait.mjs {out}',
    ),
  });
});
afterEach(() => code.remove());

function start() {
  const note = join(code.root, '.git', 'note');
  const child = spawn(process.execPath, [script, code.root], {
    env: { ...CALLER, WAIT: 'yes', NOTE: note },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  let printed = '';
  child.stdout.on('data', (chunk) => {
    printed += String(chunk);
  });
  const ended = new Promise<string>((resolve) => child.on('close', () => resolve(printed.trim())));
  return { child, ended, waiting: () => Number(readFileSync(note, 'utf8')) };
}
const scratch = () => readdirSync(join(code.store, 'scratch'));
const kept = () => readdirSync(join(code.store, 'results')).length;

describe('a rerun that is ended from outside', () => {
  it('ends its runs and removes its scratch folder on Ctrl-C, and says so', async () => {
    const { child, ended, waiting } = start();
    await soon(() => waiting() > 0 && kept() === 1);
    child.kill('SIGINT');
    expect(await ended).toBe('no reference,interrupted');
    expect(alive(waiting())).toBe(false);
    expect(scratch()).toEqual([]);
  });

  it('leaves no process and no scratch folder when it is killed outright', async () => {
    const { child, ended, waiting } = start();
    await soon(() => waiting() > 0 && kept() === 1);
    expect(scratch()).toHaveLength(1);
    child.kill('SIGKILL');
    await ended;
    await soon(() => !alive(waiting()) && scratch().length === 0);
  });

  it('goes on where it was killed: what had finished is not run again', async () => {
    const { child, ended, waiting } = start();
    await soon(() => waiting() > 0 && kept() === 1);
    child.kill('SIGKILL');
    await ended;
    // The same variables, since they belong to the key; the wait case is a run of its own without WAIT.
    const env = { ...CALLER, WAIT: 'yes', NOTE: join(code.root, '.git', 'note') };
    const outcomes = await rerunCases({ root: code.root, manifests: code.manifests(), env, cases: ['shock'] });
    expect(outcomes).toMatchObject([{ case: 'shock', kept: true }]);
  });

  it('builds anew what a killed process had half built', async () => {
    const [first] = await rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER, cases: ['shock'] });
    const [build] = readdirSync(join(code.store, 'builds'));
    const place = join(code.store, 'builds', build!);
    // As a kill leaves it: no record that it is done, and an owner that is gone.
    rmSync(join(place, 'build.json'));
    rmSync(join(place, 'tree', 'build'), { recursive: true });
    writeFileSync(join(place, 'owner.json'), JSON.stringify({ process: 2 ** 22 + 1, started: '1', host: hostname() }));
    const [again] = await rerunCases({
      root: code.root,
      manifests: code.manifests(),
      env: CALLER,
      cases: ['shock'],
      fresh: true,
    });
    expect(again).toMatchObject({ state: first!.state, kept: false });
  });

  it('sweeps what was left by processes that are gone, and nothing of those that live', () => {
    const store = code.store;
    for (const [name, owner] of [
      ['dead', 2 ** 22 + 1],
      ['living', process.pid],
    ] as const) {
      mkdirSync(join(store, 'scratch', name), { recursive: true });
      const started = owner === process.pid ? '' : '1';
      writeFileSync(
        join(store, 'scratch', name, 'owner.json'),
        JSON.stringify({ process: owner, started, host: hostname() }),
      );
    }
    const opened = openStore(store);
    closeStore(opened);
    expect(existsSync(join(store, 'scratch', 'dead'))).toBe(false);
    expect(existsSync(join(store, 'scratch', 'living'))).toBe(true);
  });
});
