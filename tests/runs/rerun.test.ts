import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { canTellReads } from '../../src/runs/reads.edge.ts';
import { recordReference } from '../../src/runs/record-reference.ts';
import { readReference } from '../../src/runs/reference-files.edge.ts';
import { type RerunRequest, rerunCases } from '../../src/runs/rerun.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

let code: TinyCode;
beforeEach(() => {
  code = new TinyCode();
});
afterEach(() => code.remove());

const rerun = (more: Partial<RerunRequest> = {}) =>
  rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER, ...more });

async function record(reason = 'first light') {
  const [outcome] = await rerun();
  return recordReference({
    root: code.root,
    case: code.manifests().cases.get('shock')!.value,
    outcome: outcome!,
    reason,
    who: 'Ada Tester',
  });
}

describe('rerunCases', () => {
  it('builds, runs, and says that there is no reference yet', async () => {
    const [outcome] = await rerun();
    expect(outcome).toMatchObject({ case: 'shock', state: 'no reference', kept: false });
    expect(outcome!.footprint).toEqual({ temperature: [101, 2001] });
    expect(existsSync(join(outcome!.result!, 'profile.csv'))).toBe(true);
  });

  it('finds a result bit for bit equal to the reference recorded from it', async () => {
    await record();
    const [outcome] = await rerun();
    expect(outcome).toMatchObject({ state: 'compared', class: 'bit-for-bit', kept: true });
    expect(outcome!.deviations.map((one) => one.quantity)).toEqual(['pressure', 'temperature', 'peak-pressure']);
  });

  it('says which quantity moved beyond tolerance when the code changed', async () => {
    await record();
    code.write({ 'src/cooling.mjs': 'export function cooling(t) {\n  return 2.01 * t + 1;\n}\n' });
    const [outcome] = await rerun();
    expect(outcome).toMatchObject({ state: 'compared', class: 'beyond tolerance' });
    expect(outcome!.deviations.map((one) => [one.quantity, one.class])).toEqual([
      ['pressure', 'bit-for-bit'],
      ['temperature', 'beyond tolerance'],
      ['peak-pressure', 'bit-for-bit'],
    ]);
    expect(outcome!.produced!.changed).toEqual(['src/cooling.mjs']);
  });

  it('leaves nothing in the work tree and nothing in the scratch folder', async () => {
    await rerun();
    expect(code.git('status', '--porcelain', '--ignored')).toBe('');
    expect(readdirSync(join(code.store, 'scratch'))).toEqual([]);
  });

  it('runs nothing twice while only files that nothing read have changed', async () => {
    await rerun();
    code.write({ 'README.md': 'Other words.\n', 'src/eos-other.mjs': 'export const pressure = (rho) => rho;\n' });
    code.commit('Words');
    const [outcome] = await rerun();
    // The build copies src as a whole, so it read eos-other.mjs: that asks for a new run.
    expect(outcome!.kept).toBe(false);
    code.write({ 'README.md': 'Yet other words.\n' });
    code.commit('More words');
    // Where access times can't be trusted every file counts as read, and it runs again.
    expect((await rerun())[0]!.kept).toBe(canTellReads(code.store));
  });
});

describe('a build', () => {
  it('is made once for all cases that are built alike, even when one needs another program', async () => {
    const shock = readFileSync(join(code.root, 'manifests/cases/shock.yaml'), 'utf8');
    code.write({
      'manifests/cases/other.yaml': shock.replace('case: shock', 'case: other').replace('run: node', 'run: env node'),
      'manifests/cases/swapped.yaml': shock.replace(
        'case: shock',
        'case: swapped\nwith: {equation-of-state: eos-other}',
      ),
    });
    const built: string[] = [];
    const outcomes = await rerun({ onEvent: (event) => void (event.what === 'built' && built.push(event.build)) });
    expect(outcomes.map((one) => [one.case, one.state, one.kept])).toEqual([
      ['other', 'no reference', false],
      ['shock', 'no reference', false],
      ['swapped', 'no reference', false],
    ]);
    expect(built).toHaveLength(1);
  });

  it('that failed fails every case that needs it, once, with the end of its log', async () => {
    code.write({
      'manifests/assembly.yaml': readFileSync(join(code.root, 'manifests/assembly.yaml'), 'utf8').replace(
        /run: .*, makes/,
        `run: "node -e \\"console.error('no such header'); process.exit(2)\\"", makes`,
      ),
    });
    const [outcome] = await rerun();
    expect(outcome).toMatchObject({
      state: 'not built',
      why: 'the build ended with exit status 2',
      logTail: 'no such header\n',
    });
    expect(readdirSync(join(code.store, 'builds'))).toEqual([]);
  });
});

describe('recordReference', () => {
  it('tells what produced the reference, down to the content id of every source file', async () => {
    const revision = code.git('rev-parse', 'HEAD');
    const written = await record('agrees with the analytic solution');
    const read = readReference(code.root, 'shock');
    expect(read).toEqual(written);
    expect(read).toMatchObject({
      case: 'shock',
      revision,
      reason: 'agrees with the analytic solution',
      who: 'Ada Tester',
      modules: {
        'equation-of-state': {
          module: 'eos-perfect',
          version: '1.0.0',
          files: { 'src/eos-perfect.mjs': `swh:1:cnt:${code.git('rev-parse', 'HEAD:src/eos-perfect.mjs')}` },
        },
      },
      command: ['node', 'build/main.mjs', 'eos-perfect', '{out}'],
      footprint: { temperature: [101, 2001] },
    });
    expect(read!.environment.programs.node).toBe(process.version);
    expect(read!.outputs['profile.csv']!.digest).toMatch(/^sha256:[0-9a-f]{64}$/);
  });
});

describe('what surrounds a run', () => {
  const seen = async (script: string) => {
    code.write({
      'src/main.mjs': `import { execFileSync } from 'node:child_process';
import { readdirSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
${script}
writeFileSync(process.argv[3] + '/profile.csv', 'x,pressure,temperature\\n1,1,1\\n');`,
    });
    const [outcome] = await rerun({ env: { ...CALLER, SECRET: 'x', LANG: 'de_DE.UTF-8' } });
    return outcome!;
  };

  it('is only what is declared: no other variable of the caller reaches it', async () => {
    const { logTail } = await seen('console.log(Object.keys(process.env).sort().join());');
    expect(logTail).toBe('GIT_CEILING_DIRECTORIES,HOME,LC_ALL,PATH,TMPDIR\n');
  });

  it('has a folder for temporary files that is gone afterwards', async () => {
    const { result } = await seen("writeFileSync(tmpdir() + '/left', 'x');");
    expect(readdirSync(join(result!, '..')).sort()).toEqual(['log.txt', 'out', 'result.json']);
  });

  it('is no repository: a code that asks git for its version does not get that of another', async () => {
    const { logTail } = await seen(
      "try { execFileSync('git', ['rev-parse', 'HEAD'], { stdio: ['ignore', 'inherit', 'inherit'] }); } catch {}",
    );
    expect(logTail).toContain('not a git repository');
  });
});

describe('a declared launcher', () => {
  it('stands before the command of each run, and another one asks for another run', async () => {
    const assembly = readFileSync(join(code.root, 'manifests/assembly.yaml'), 'utf8');
    const declare = (ranks: number) =>
      code.write({
        'manifests/assembly.yaml': `${assembly}executors: {here: {kind: local, cores: 2, launcher: "env RANKS=${ranks}"}}\n`,
        'src/main.mjs': TINY['src/main.mjs']!.replace(
          'let text',
          "console.log('ranks ' + process.env.RANKS);\nlet text",
        ),
      });
    declare(2);
    expect(await rerun()).toMatchObject([{ logTail: 'ranks 2\n', kept: false }]);
    expect(await rerun()).toMatchObject([{ kept: true }]);
    declare(4);
    const [outcome] = await rerun();
    expect(outcome).toMatchObject({ logTail: 'ranks 4\n', kept: false });
    expect(outcome!.produced!.command.slice(0, 3)).toEqual(['env', 'RANKS=4', 'node']);
  });
});
