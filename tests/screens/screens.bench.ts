/**
 * How soon the screens stand there on a code that was looked at before, against the start of Node; and how soon a key has its frame with
 * 10,000 findings loaded, moving and finding by name. In a pseudo-terminal of 80x24. Needs a build: the program is started as a whole.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { build } from 'esbuild';
import { type IPty, spawn } from 'node-pty';
import { bench, describe } from 'vitest';
import { builtAsset } from '../../src/sources/assets.edge.ts';
import { temporaryFolder } from '../sources/repositories.ts';
import { laySmallCode } from '../support/small-code.ts';

const program = builtAsset('mortise.js');
if (!existsSync(program)) throw new Error('run "npm run build" first: the bundled program is measured');
const several = { iterations: 15, warmupIterations: 2, time: 0, warmupTime: 0 };

/** A program in a terminal, and a promise for the next time its output holds something. */
class Watched {
  readonly process: IPty;
  private text = '';
  private wanted: { what: string; done: () => void } | null = null;

  constructor(words: readonly string[], cwd: string, cache: string) {
    const env = Object.fromEntries(Object.entries(process.env).filter(([name]) => !/^CI($|_)/.test(name)));
    this.process = spawn(process.execPath, [...words], {
      cols: 80,
      rows: 24,
      cwd,
      env: { ...env, XDG_CACHE_HOME: cache, TERM: 'xterm-256color', LANG: 'C.UTF-8' } as Record<string, string>,
    });
    this.process.onData((data) => {
      this.text += data;
      if (this.wanted === null || !this.text.includes(this.wanted.what)) return;
      const { done } = this.wanted;
      this.wanted = null;
      done();
    });
  }

  shows(what: string): Promise<void> {
    if (this.text.includes(what)) return Promise.resolve();
    return new Promise((done, fail) => {
      const late = setTimeout(() => fail(new Error(`not seen: ${what}\n${this.text}`)), 10_000);
      this.wanted = {
        what,
        done: () => {
          clearTimeout(late);
          done();
        },
      };
    });
  }

  press(keys: string): void {
    this.text = '';
    this.process.write(keys);
  }
}

describe('the first frame of a code that was looked at before', () => {
  const root = laySmallCode();
  const cache = temporaryFolder();
  const look = async () => {
    const watched = new Watched([program], root, cache);
    await watched.shows('Can the campaign start?');
    return watched;
  };

  bench('floor: node -e 0', () => void spawnSync(process.execPath, ['-e', '0']), several);
  bench(
    'mortise',
    async () => {
      (await look()).process.kill('SIGKILL');
    },
    {
      ...several,
      setup: async () => {
        const watched = await look();
        await watched.shows('cleared with cautions');
        watched.press('q');
        await new Promise<void>((done) => watched.process.onExit(() => done()));
      },
    },
  );
});

describe('a key with 10,000 findings', async () => {
  const folder = temporaryFolder();
  await build({
    entryPoints: [join(import.meta.dirname, 'screens-driver.ts')],
    outfile: join(folder, 'driver.mjs'),
    bundle: true,
    platform: 'node',
    format: 'esm',
    define: { 'process.env.NODE_ENV': '"production"', 'process.env.DEV': '"false"' },
    external: ['react-devtools-core', 'h5wasm', 'ts-morph', 'better-sqlite3'],
    alias: { 'react-devtools-core': join(import.meta.dirname, '../../.config/empty.mjs') },
    banner: { js: "import{createRequire as __r}from'node:module';const require=__r(import.meta.url);" },
  });
  const watched = new Watched([join(folder, 'driver.mjs')], folder, folder);
  await watched.shows('Can the campaign start?');
  await new Promise((done) => setTimeout(done, 1500));
  watched.press('f');
  await watched.shows('finding 0 of');
  const keys = { iterations: 100, warmupIterations: 10, time: 0, warmupTime: 0 };

  bench(
    'down, to its frame',
    async () => {
      watched.press('\u001b[B');
      await watched.shows('\u001b[?2026l');
    },
    keys,
  );
  bench(
    'a letter of a name to find, to its frame',
    async () => {
      watched.press('=');
      await watched.shows('find:');
      watched.press('9');
      await watched.shows(' 9_');
      watched.press('\u001b');
      await watched.shows('all keys');
    },
    {
      ...keys,
      teardown: () => {
        const memory = /VmHWM:\s+(\d+) kB/.exec(readFileSync(`/proc/${watched.process.pid}/status`, 'utf8'));
        console.log(`largest memory of the screens: ${Math.round(Number(memory?.[1]) / 1024)} MB`);
      },
    },
  );
});
