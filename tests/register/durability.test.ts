/** What was acknowledged is there, whatever happens to the writers and the disk. */
import { spawn, spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { build } from 'esbuild';
import { beforeAll, describe, expect, it } from 'vitest';
import { Register } from '../../src/register/register.edge.ts';
import { verifyRegister } from '../../src/register/verify.edge.ts';
import { sampleContent } from './sample-entry.ts';

// Beside the packages, so that the driver finds what it does not bundle.
const driver = join(import.meta.dirname, '../../node_modules/.cache/mortise-tests/writer-driver.mjs');
// Two hundred of each take a minute; where every change is tested, forty.
const MANY = process.env.CI === 'true' ? 40 : 200;
const newFolder = () => mkdtempSync(join(tmpdir(), 'mortise-durable-'));

beforeAll(async () => {
  await build({
    entryPoints: [join(import.meta.dirname, 'writer-driver.ts')],
    outfile: driver,
    bundle: true,
    platform: 'node',
    format: 'esm',
    external: ['better-sqlite3'],
    banner: { js: "import{createRequire as __r}from'node:module';const require=__r(import.meta.url);" },
  });
});

/** Runs a writer; kills it so many milliseconds after its first acknowledgement. @returns the acknowledged seals */
function write(folder: string, entries: number, threads: number, killAfter?: number): Promise<string[]> {
  return new Promise((done) => {
    let said = '';
    const writer = spawn(process.execPath, [driver, folder, String(entries), String(threads)], {
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    writer.stdout.on('data', (data: Buffer) => {
      if (said === '' && killAfter !== undefined) setTimeout(() => writer.kill('SIGKILL'), killAfter);
      said += data.toString();
    });
    // What came half is not acknowledged.
    writer.on('close', () => done(said.split('\n').slice(0, -1)));
  });
}

function sealsIn(folder: string): Set<string> {
  const register = new Register(folder);
  return new Set([...register.entries()].map((one) => one.seal));
}

describe('a register', () => {
  it(`loses nothing to ${MANY} writers at once`, async () => {
    const folder = newFolder();
    const told = (await Promise.all(Array.from({ length: MANY / 20 }, () => write(folder, 1, 20)))).flat();
    expect(told).toHaveLength(MANY);
    const there = sealsIn(folder);
    for (const seal of told) expect(there.has(seal)).toBe(true);
    const { records, findings } = await verifyRegister(new Register(folder).folder);
    expect([records, findings.filter((one) => one.gravity === 'stop')]).toEqual([MANY, []]);
  }, 240_000);

  it(`holds every acknowledged entry after its writers were killed at ${MANY} instants`, async () => {
    const folder = newFolder();
    const told: string[] = [];
    let kills = 0;
    const killer = async () => {
      while (kills < MANY) {
        kills += 1;
        told.push(...(await write(folder, 1000, 1, Math.random() * 25)));
      }
    };
    await Promise.all([killer(), killer()]);
    expect(told.length).toBeGreaterThan(MANY);
    const there = sealsIn(folder);
    for (const seal of told) expect(there.has(seal)).toBe(true);
    const { findings } = await verifyRegister(new Register(folder).folder);
    expect(findings.filter((one) => one.gravity === 'stop')).toEqual([]);
  }, 240_000);

  it('says so and stays as it was where the disk is full', () => {
    const folder = newFolder();
    const register = new Register(folder);
    register.add({ kind: 'entry', by: { name: 'R. Vale' }, title: 'One', content: sampleContent });
    const before = readdirSync(join(folder, 'manifests/register'), { recursive: true }).length;
    // A limit on the size of files stands for the full disk: the system refuses the write halfway.
    const { status, stdout, stderr } = spawnSync(
      'bash',
      ['-c', 'trap "" XFSZ; ulimit -f 0; exec "$0" "$@"', process.execPath, driver, folder, '1', '1'],
      { encoding: 'utf8' },
    );
    expect([status === 0, stdout]).toEqual([false, '']);
    expect(stderr).toMatch(/EFBIG|ENOSPC/);
    expect(readdirSync(join(folder, 'manifests/register'), { recursive: true })).toHaveLength(before);
    expect(sealsIn(folder).size).toBe(1);
  });

  it('says so where nothing can be written', () => {
    // The kernel lets nobody make a folder here, root neither.
    const draft = { kind: 'entry', by: { name: 'R. Vale' }, title: 'One', content: sampleContent } as const;
    expect(() => new Register('/sys').add(draft)).toThrow(/EACCES|EROFS|EPERM|ENOENT/);
  });

  it('says so where its folder vanished and something else stands there', () => {
    const folder = newFolder();
    mkdirSync(join(folder, 'manifests'));
    writeFileSync(join(folder, 'manifests/register'), 'no folder');
    const register = new Register(folder);
    const draft = { kind: 'entry', by: { name: 'R. Vale' }, title: 'One', content: sampleContent } as const;
    expect(() => register.add(draft)).toThrow(/ENOTDIR|EEXIST/);
    rmSync(join(folder, 'manifests/register'));
    expect(register.add(draft).seal).toMatch(/^sha256:/);
  });

  it('keeps its chain when the clock is set back', async () => {
    const folder = newFolder();
    const register = new Register(folder);
    for (const [title, day] of [
      ['One', '2026-05-01'],
      ['Two', '2026-04-01'],
      ['Three', '2026-04-02'],
    ] as const)
      register.add({ kind: 'entry', by: { name: 'R. Vale' }, title, content: sampleContent, written: new Date(day) });
    const { records, findings } = await verifyRegister(register.folder);
    expect([records, findings]).toEqual([3, []]);
  });
});
