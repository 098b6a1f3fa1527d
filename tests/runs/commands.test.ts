import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { mortiseIn } from '../support/run-mortise.ts';
import { CALLER, TinyCode } from './tiny-code.ts';

let code: TinyCode;
beforeEach(() => {
  code = new TinyCode();
});
afterEach(() => code.remove());

const mortise = (...words: string[]) => mortiseIn({ cwd: code.root, env: CALLER }, words);
const record = () => mortise('rerun', 'shock', '--record', '--reason', 'agrees with the exact solution');

describe('mortise rerun', () => {
  it('says how to record a reference where there is none, and is content once there is', async () => {
    const first = await mortise('rerun');
    expect(first.status).toBe(0);
    expect(first.out).toContain('shock: no reference');
    expect(first.out).toContain('mortise rerun shock --record --reason TEXT');
    expect(await record()).toMatchObject({ status: 0, out: expect.stringContaining('shock: recorded') });
    expect(readFileSync(join(code.root, 'manifests/references/shock/record.yaml'), 'utf8')).toContain(
      'who: Ada Tester <ada@example.org>',
    );
    const second = await mortise('rerun');
    expect(second.status).toBe(0);
    expect(second.out).toContain('shock: bit-for-bit  (kept from an earlier run)');
  });

  it('ends with 1 when a result is beyond tolerance, and prints what moved', async () => {
    await record();
    code.write({ 'src/cooling.mjs': 'export const cooling = (t) => 2.2 * t;\n' });
    const { status, out } = await mortise('rerun');
    expect(status).toBe(1);
    expect(out).toContain('shock: beyond tolerance');
    expect(out).toMatch(/temperature \[K\] +beyond tolerance/);
    expect(out).toMatch(/pressure \[dyn.* +bit-for-bit/);
  });

  it('runs the tree of a revision, whatever the work tree holds', async () => {
    await record();
    code.commit('Record');
    code.write({ 'src/cooling.mjs': 'export const cooling = (t) => 2.2 * t;\n' });
    expect((await mortise('rerun', '--at', 'HEAD')).status).toBe(0);
    expect((await mortise('rerun')).status).toBe(1);
  });

  it('ends with 3 when a case fails, and shows the end of its log', async () => {
    code.write({ 'src/main.mjs': "console.error('no\\u001b[31m stomach'); process.exit(4);\n" });
    const { status, out } = await mortise('rerun');
    expect(status).toBe(3);
    expect(out).toContain('the run ended with exit status 4');
    expect(out).toContain('| no\\x1b[31m stomach');
  });

  it('says which build failed, and that a place in a command has no value', async () => {
    code.write({
      'manifests/cases/shock.yaml': readFileSync(join(code.root, 'manifests/cases/shock.yaml'), 'utf8').replace(
        '{select.EOS}',
        '{select.EOSS}',
      ),
    });
    const { status, out } = await mortise('rerun');
    expect(status).toBe(3);
    expect(out).toContain('{select.EOSS} has no value here (there are {select.EOS}');
  });

  it('does not record without a reason, nor from changes that no commit holds', async () => {
    expect((await mortise('rerun', '--record')).err).toContain('--record needs --reason TEXT');
    code.write({ 'src/cooling.mjs': 'export const cooling = (t) => 2.2 * t;\n' });
    const { status, err } = await record();
    expect(status).toBe(2);
    expect(err).toContain('src/cooling.mjs; commit first');
    expect(existsSync(join(code.root, 'manifests/references/shock'))).toBe(false);
    const stated = await mortise('rerun', '--record', '--reason', 'trial', '--even-changed');
    expect(stated.status).toBe(0);
    expect(readFileSync(join(code.root, 'manifests/references/shock/record.yaml'), 'utf8')).toContain(
      '- src/cooling.mjs',
    );
  });

  it('does not compare with a reference whose file was altered', async () => {
    await record();
    code.write({ 'manifests/references/shock/profile.csv': 'x,pressure,temperature\n1,2,3\n' });
    const { status, out } = await mortise('rerun');
    expect(status).toBe(1);
    expect(out).toContain('reference-altered');
    expect(out).toContain('profile.csv is not the file that was recorded: its digest differs');
  });

  it('says where results can be kept when they can not be kept in the repository', async () => {
    // A file stands where the folder belongs: nobody, not even root, can write below it.
    code.write({ '.git/mortise': '' });
    expect(await mortise('rerun')).toMatchObject({
      status: 2,
      err: expect.stringContaining('set MORTISE_STORE to a folder'),
    });
  });

  it('suggests the case that was meant', async () => {
    expect(await mortise('rerun', 'shok')).toMatchObject({
      status: 2,
      err: expect.stringContaining('did you mean "shock"'),
    });
  });

  it('prints one JSON document', async () => {
    const { out } = await mortise('rerun', '--json');
    expect(JSON.parse(out)).toMatchObject({
      document: 'mortise rerun',
      cases: [{ case: 'shock', state: 'no reference' }],
    });
  });
});

describe('mortise swap', () => {
  it('says what moved and where', async () => {
    const { status, out } = await mortise('swap', 'equation-of-state=eos-other');
    expect(status).toBe(1);
    expect(out).toContain('shock: beyond tolerance, against the plugged modules');
    expect(out).toContain('pressure leaves its band at 0 to 19');
  });

  it('suggests the module that was meant', async () => {
    expect(await mortise('swap', 'equation-of-state=eos-othr')).toMatchObject({
      status: 2,
      err: expect.stringContaining('did you mean "eos-other"'),
    });
  });
});

describe('mortise trace', () => {
  it('names commit, module and procedure', async () => {
    code.git('tag', 'v1');
    code.write({ 'README.md': 'Words\n' });
    code.commit('Words');
    code.write({
      'src/cooling.mjs': readFileSync(join(code.root, 'src/cooling.mjs'), 'utf8').replace('2 * t', '3 * t'),
    });
    const commit = code.commit('Cool faster');
    code.write({ 'README.md': 'More words\n' });
    code.commit('More words');
    const { status, out } = await mortise('trace', 'shock', 'v1..HEAD');
    expect(status).toBe(1);
    expect(out).toContain(`${commit.slice(0, 10)}  `);
    expect(out).toContain('Ada Tester  Cool faster');
    expect(out.replace(/\s+/g, ' ')).toMatch(
      /temperature moved by \d+ tolerances: cooling-fit, rate in src\/cooling\.mjs/,
    );
    expect(out).toContain('did not move: pressure, peak-pressure');
  });

  it.each([
    [['shock'], 'a range of commits such as v1.0..HEAD'],
    [['shock', 'nowhere..HEAD'], 'there is no commit "nowhere"'],
    [['shock', 'presure', 'HEAD..HEAD'], 'has no quantity "presure"'],
  ])('refuses %j', async (words, says) => {
    expect(await mortise('trace', ...words)).toMatchObject({ status: 2, err: expect.stringContaining(says) });
  });
});
