import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type OutputHints, openDeclared, openOutput } from '../../src/outputs/open-output.edge.ts';
import { OutputProblem } from '../../src/outputs/output-file.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-text-'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Everything a file of this text holds: format, names with units, values. */
async function read(text: string | Uint8Array, hints: OutputHints = {}) {
  const path = join(folder, 'file');
  writeFileSync(path, text);
  const file = await openOutput(path, hints);
  const values: Record<string, number[]> = {};
  for (const { name, unit } of file.datasets()) {
    values[unit === undefined ? name : `${name} [${unit}]`] = [...(await file.readAll(name))];
  }
  file.close();
  return { format: file.format, values };
}

async function problem(text: string | Uint8Array, hints: OutputHints = {}): Promise<string> {
  try {
    await read(text, hints);
  } catch (error) {
    if (error instanceof OutputProblem) return `${error.kind}: ${error.message}`;
    throw error;
  }
  return 'none';
}

describe('columns of text', () => {
  it('take names and units from the heading, remark or not', async () => {
    const values = { 'x [cm]': [0, 1], 'T [K]': [10, 20] };
    expect(await read('# x[cm] T[K]\n0 10\n1 20\n')).toEqual({ format: 'columns', values });
    expect(await read('  x [cm]   T (K)\n 0.0D0 1.0D+01\n 1. .2E2')).toEqual({ format: 'columns', values });
    expect(await read('! a preamble of words\n% x[cm] T[K]\n\n0\t10\r\n1\t20\r\n')).toMatchObject({ values });
    expect(await read('x[cm],T[K]\n0,10\n1,20\n')).toEqual({ format: 'csv', values });
    expect(await read('"x [cm]";"T (K)"\n0;10\n1;20\n')).toEqual({ format: 'csv', values });
  });

  it('are numbered when nothing names them', async () => {
    expect((await read('1 2\n3 4\n')).values).toEqual({ 'column 1': [1, 3], 'column 2': [2, 4] });
  });

  it('pass over words, remarks, blank lines, and a heading repeated after a restart', async () => {
    const text = 'name t mass\nrun 0 1\n# restarted\n\nname t mass\nrun 1 2\n';
    expect((await read(text)).values).toEqual({ t: [0, 1], mass: [1, 2] });
  });

  it('give NaN for empty cells and for fields that were too narrow', async () => {
    expect((await read('a,b\n1,\n***,2\n')).values).toEqual({ a: [1, Number.NaN], b: [Number.NaN, 2] });
  });

  it('that are damaged say in which line', async () => {
    expect(await problem('# x y\n1 2\n3 4 5\n6 7\n')).toBe(
      'damaged: has 3 columns in line 3 where the first row has 2: "3 4 5"',
    );
    expect(await problem('1 2\n3 4\nFloating point exception\n')).toBe(
      'damaged: has a line 3 that is no row of numbers: "Floating point exception"',
    );
    expect(await problem('1 2\nsome words\n')).toContain('damaged: has a line 2 that is no row of numbers');
  });

  it('that end within a row are cut short', async () => {
    expect(await problem('1 2\n3 4\n5')).toBe('truncated: ends in the middle of line 3: "5" has 1 of 2 columns');
  });

  it('are read alike however long their lines and their file', async () => {
    const rows = Array.from({ length: 30_000 }, (_, i) => `${i} ${i / 7}   ${' '.repeat(i % 50)}${-i}e-3`);
    const { values } = await read(`t a b\n${rows.join('\n')}`);
    expect(values.t).toHaveLength(30_000);
    expect(values.a![29_999]).toBe(29_999 / 7);
    expect(values.b![12_345]).toBe(-12_345e-3);
  });
});

describe('JSON', () => {
  it('has its numbers under dotted paths', async () => {
    const text =
      '{"run": {"steps": [{"e": 1.5}, {"e": 2.5}], "grid": [[1, 2, 3], [4, 5, 6]]}, "ok": true, "last": NaN}';
    expect(await read(text)).toEqual({
      format: 'json',
      values: { 'run.steps.0.e': [1.5], 'run.steps.1.e': [2.5], 'run.grid': [1, 2, 3, 4, 5, 6], last: [Number.NaN] },
    });
  });

  it('that is broken says where', async () => {
    expect(await problem('{"a": [1, 2')).toMatch(/^(truncated|damaged): is not JSON: .*(position|JSON)/);
  });
});

describe('logs', () => {
  const log =
    'step 1\n total energy = 1.5E+03 erg\nstep 2\n total energy =  1.25D3 erg\nmass: 2.0\n%MON ke_max = 4.0\n';

  it('give the numbers of declared patterns', async () => {
    const hints = { patterns: { energy: 'total energy = {} erg', steps: 'step {}' } };
    expect((await read(log, hints)).values).toEqual({ energy: [1500, 1250], steps: [1, 2] });
  });

  it('give every named number where nothing is declared', async () => {
    expect(await read(log)).toEqual({
      format: 'log',
      values: { 'total energy': [1500, 1250], mass: [2], '%MON ke_max': [4] },
    });
  });
});

describe('binary files', () => {
  const doubles = (values: readonly number[]) => new Uint8Array(Float64Array.from(values).buffer);

  it('are read by a declared layout, in either byte order', async () => {
    const view = new DataView(new ArrayBuffer(24));
    view.setFloat64(4, 1.5, false);
    view.setFloat64(12, -2.5, false);
    view.setInt32(20, 7, false);
    const layout = {
      'byte-order': 'big' as const,
      skip: 4,
      arrays: [
        { name: 'rho', type: 'float64', shape: [2], unit: 'g/cm3' },
        { name: 'n', type: 'int32', shape: [1] },
      ],
    };
    const bytes = new Uint8Array(view.buffer);
    expect((await read(bytes, { layout })).values).toEqual({ 'rho [g/cm3]': [1.5, -2.5], n: [7] });
    expect(await problem(bytes.subarray(0, 23), { layout })).toBe(
      'truncated: has 23 bytes; its declared layout needs 24',
    );
    expect(await problem(new Uint8Array(25), { layout })).toContain('damaged: has 25 bytes');
  });

  it('are taken for doubles where the bytes look like it', async () => {
    expect(await read(doubles([1e10, -3.25, 1e-20, 7]))).toEqual({
      format: 'raw',
      values: { values: [1e10, -3.25, 1e-20, 7] },
    });
  });

  it('of nothing are empty, and never to be found are missing', async () => {
    expect(await problem('')).toBe('empty: is empty: not a single byte was written');
    await expect(openOutput(join(folder, 'nowhere'))).rejects.toMatchObject({ kind: 'missing' });
  });
});

describe('an output of many files', () => {
  it('is joined in the order of their numbers', async () => {
    for (const rank of [0, 1, 2, 10]) writeFileSync(join(folder, `rank.${rank}.dat`), `id rho\n${rank} ${rank / 2}\n`);
    const file = await openDeclared(folder, { file: 'rank.*.dat' });
    expect([...(await file.readAll('id'))]).toEqual([0, 1, 2, 10]);
    file.close();
    await expect(openDeclared(folder, { file: 'none.*.dat' })).rejects.toMatchObject({ kind: 'missing' });
  });
});

describe('any bytes whatever', () => {
  it('are read or refused with a reason, never with a crash', async () => {
    const heads = [
      '',
      '\u0089HDF\r\n\u001a\n',
      'CDF\u0001',
      'CDF\u0005',
      '\u0093NUMPY\u0001\u0000',
      'PK\u0003\u0004',
      '{',
      '# x y\n',
    ];
    const cards = 'SIMPLE  =                    T'.padEnd(80);
    await fc.assert(
      fc.asyncProperty(fc.constantFrom(...heads, cards), fc.uint8Array({ maxLength: 400 }), async (head, tail) => {
        const bytes = Buffer.concat([Buffer.from(head, 'latin1'), tail]);
        if (bytes.length > 0) expect(await problem(bytes)).toMatch(/^(none|truncated|damaged|unsupported): ?|^none$/);
      }),
      { numRuns: 1500 },
    );
  });
});
