import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { EXIT, type Surroundings, UsageError } from '../../src/commands/command.ts';
import { command } from '../../src/commands/compare.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-command-'));
  write('a.csv', 'x[cm],T[K]\n0,10\n1,20\n2,80\n');
  write('b.csv', 'x[cm],T[K]\n0,10\n1,20\n2,80.01\n');
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function write(name: string, text: string): void {
  mkdirSync(join(folder, name, '..'), { recursive: true });
  writeFileSync(join(folder, name), text);
}

async function run(words: readonly string[], options: Record<string, string | boolean | string[]> = {}, columns = 100) {
  let [out, err] = ['', ''];
  const surroundings: Surroundings = {
    cwd: folder,
    env: {},
    stdin: process.stdin,
    stdoutIsTerminal: false,
    columns,
    out: (text) => {
      out += text;
    },
    err: (text) => {
      err += text;
    },
    signal: new AbortController().signal,
  };
  const status = await command.run({ words, options }, surroundings);
  return { status, out, err };
}

describe('mortise compare', () => {
  it('says what moved, by how much of what is allowed, and where it is worst', async () => {
    const { status, out } = await run(['a.csv', 'b.csv'], { relative: '1e-6' });
    expect(status).toBe(EXIT.stop);
    expect(out).toBe(
      [
        'allowed: relative 0.000001',
        'quantity      class            max absolute max relative      max ULP           L2   of allowed',
        'x [cm]        bit-for-bit                 0            0            0            0            0',
        'T [K]         beyond tolerance         0.01      1.25e-4     7.04e+11      1.20e-4          125',
        '    worst at element 2: reference 80, result 80.01',
        '',
        '1 beyond tolerance, 1 bit-for-bit',
        '',
      ].join('\n'),
    );
  });

  it('is content with a tolerance that is wide enough, in any norm', async () => {
    const enough: readonly Record<string, string>[] = [
      { relative: '1e-3' },
      { absolute: '0.02' },
      { ulp: '1e12' },
      { relative: '2e-4', norm: 'L2' },
    ];
    for (const options of enough) {
      expect((await run(['a.csv', 'b.csv'], options)).status, JSON.stringify(options)).toBe(EXIT.ok);
    }
  });

  it('prints one JSON document, with nothing lost that JSON has no number for', async () => {
    write('zero.csv', 'x[cm],T[K]\n0,0\n1,20\n2,nan\n');
    const { status, out } = await run(['a.csv', 'zero.csv'], { json: true, relative: '1e-6' });
    const document = JSON.parse(out);
    expect(status).toBe(EXIT.stop);
    expect(document.class).toBe('beyond tolerance');
    expect(document.deviations[1]).toMatchObject({
      quantity: 'T',
      class: 'beyond tolerance',
      tolerances: 'Infinity',
      why: 'the result holds NaN in 1 element where the reference has numbers',
    });
  });

  it('lists what only one side has, and does not pass it', async () => {
    write('more.csv', 'x[cm],rho[g/cm3]\n0,10\n1,20\n2,80\n');
    const { status, out } = await run(['a.csv', 'more.csv']);
    expect(status).toBe(EXIT.stop);
    expect(out).toContain('only in the reference: T\nonly in the result: rho\n');
  });

  it('pairs the files of two folders by name', async () => {
    write('old/one.csv', 'x\n1\n');
    write('old/deep/two.csv', 'x\n1\n2\n');
    write('old/gone.csv', 'x\n1\n');
    write('new/one.csv', 'x\n1\n');
    write('new/deep/two.csv', 'x\n1\n2\n3\n');
    const { status, out } = await run(['old', 'new']);
    expect(status).toBe(EXIT.stop);
    expect(out).toContain('deep/two.csv\n');
    expect(out).toContain('    the reference has 2 elements, the result 3\n');
    expect(out).toContain('one.csv\n');
    expect(out).toContain('only in the reference: gone.csv\n');
  });

  it('says why a file that is empty or broken cannot be compared', async () => {
    write('empty.csv', '');
    write('broken.csv', 'x[cm],T[K]\n0,10\n1,2');
    write('torn.csv', 'x[cm],T[K]\n0,10\n1');
    expect((await run(['a.csv', 'empty.csv'])).out).toContain('the result is empty: not a single byte was written');
    expect((await run(['a.csv', 'broken.csv'])).out).toContain('the reference has 3 elements, the result 2');
    expect((await run(['a.csv', 'torn.csv'])).out).toContain('the result ends in the middle of line 3');
  });

  it('compares only what is asked for', async () => {
    expect((await run(['a.csv', 'b.csv'], { only: ['x'] })).status).toBe(EXIT.ok);
    expect((await run(['a.csv', 'b.csv'], { only: ['nothing'] })).status).toBe(EXIT.stop);
  });

  it('puts unlike grids onto the coarser one along an axis, and pairs elements by key', async () => {
    write('fine.csv', 'x[cm],T[K]\n0,10\n0.5,15\n1,20\n1.5,50\n2,80\n');
    expect((await run(['a.csv', 'fine.csv'])).status).toBe(EXIT.stop);
    const aligned = await run(['a.csv', 'fine.csv'], { along: 'x' });
    expect(aligned.status).toBe(EXIT.ok);
    expect(aligned.out).toContain("the grids differ: interpolated onto the 3 elements of the reference's");
    write('turned.csv', 'x[cm],T[K]\n2,80\n0,10\n1,20\n');
    expect((await run(['a.csv', 'turned.csv'], { match: 'x' })).status).toBe(EXIT.ok);
    expect((await run(['a.csv', 'turned.csv'], { match: 'id' })).out).toContain('has no data set "id"');
  });

  it('makes names from outside harmless', async () => {
    write('evil.csv', 'x,T\u001b[31m\n1,2\n');
    expect((await run(['evil.csv', 'evil.csv'])).out).not.toContain('\u001b');
  });

  it('keeps within a narrow terminal', async () => {
    const { out } = await run(['a.csv', 'b.csv'], {}, 60);
    for (const line of out.split('\n')) expect(line.length).toBeLessThanOrEqual(60);
  });

  it.each<[string, readonly string[], Record<string, string>]>([
    ['one path', ['a.csv'], {}],
    ['a path that is not there', ['a.csv', 'nowhere'], {}],
    ['a tolerance that is no number', ['a.csv', 'b.csv'], { relative: 'wide' }],
    ['a negative tolerance', ['a.csv', 'b.csv'], { absolute: '-1' }],
    ['an unknown norm', ['a.csv', 'b.csv'], { relative: '1', norm: 'L7' }],
    ['a norm without a tolerance', ['a.csv', 'b.csv'], { norm: 'L2' }],
  ])('refuses %s', async (_, words, options) => {
    await expect(run(words, options)).rejects.toThrow(UsageError);
  });
});
