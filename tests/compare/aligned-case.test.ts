import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type CaseOptions, compareCase } from '../../src/compare/compare-outputs.edge.ts';
import { gridConvergence } from '../../src/compare/grid-convergence.ts';
import { plainKernel } from '../../src/compare/measure-block.ts';
import { noiseFloor } from '../../src/compare/noise-floor.ts';
import type { Case, CaseOutput, Feature } from '../../src/model/manifest.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-aligned-'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Compares two texts of one output; the deviations by name. */
async function compare(
  reference: string,
  result: string,
  output: Partial<CaseOutput>,
  features: Record<string, Feature> = {},
  options: CaseOptions = {},
) {
  const theCase: Case = {
    case: 'c',
    run: 'run',
    outputs: [{ file: 'out.txt', quantities: {}, ...output }],
    features,
  };
  for (const [side, text] of Object.entries({ reference, result })) {
    mkdirSync(join(folder, side), { recursive: true });
    writeFileSync(join(folder, side, 'out.txt'), text);
  }
  const deviations = await compareCase(theCase, join(folder, 'reference'), join(folder, 'result'), options);
  return Object.fromEntries(deviations.map((one) => [one.quantity, one]));
}

const table = (names: string, rows: readonly (readonly number[])[]) =>
  `# ${names}\n${rows.map((row) => row.join(' ')).join('\n')}\n`;
const rho = { dataset: 'rho', unit: 'g/cm3', tolerance: { relative: 1e-6 } };
const line = (count: number) => Array.from({ length: count }, (_, i) => i / (count - 1));

describe('runs on unlike grids', () => {
  const coarse = table(
    'x rho',
    line(5).map((x) => [x, 1 + 2 * x]),
  );
  const fine = table(
    'x rho',
    line(9).map((x) => [x, 1 + 2 * x]),
  );

  it('are put onto the coarser one where an axis is declared', async () => {
    const found = await compare(coarse, fine, { along: 'x', quantities: { rho } });
    expect(found.rho).toMatchObject({ class: 'bit-for-bit', measures: { count: 5 } });
    expect(found.rho!.why).toContain("interpolated onto the 5 elements of the reference's");
  });

  it('cannot be compared where none is', async () => {
    const found = await compare(coarse, fine, { quantities: { rho } });
    expect(found.rho).toMatchObject({
      class: 'not comparable',
      why: 'rho has the shape 5 in the reference and 9 in the result',
    });
  });

  it('have features made from what each wrote itself', async () => {
    const peaked = table('x rho', [
      [0, 1],
      [0.25, 3],
      [0.5, 9],
      [0.75, 3],
      [1, 1],
    ]);
    const missed = table('x rho', [
      [0, 1],
      [1, 1],
    ]);
    const peak: Feature = { of: 'rho', take: 'maximum', tolerance: { relative: 1e-3 } };
    const found = await compare(peaked, missed, { along: 'x', quantities: { rho } }, { peak });
    expect(found.peak!.measures!.worst).toMatchObject({ reference: 9, result: 1 });
  });

  it('keep the total of an amount', async () => {
    const cells = (count: number) => Array.from({ length: count }, (_, i) => [(i + 0.5) / count, 12 / count]);
    const mass = { dataset: 'mass', unit: 'g', extensive: true, tolerance: { relative: 1e-12 } };
    const found = await compare(table('x mass', cells(4)), table('x mass', cells(6)), {
      along: 'x',
      quantities: { mass },
    });
    expect(found.mass!.class).toMatch(/bit-for-bit|roundoff/);
  });
});

describe('elements in another order', () => {
  it('are paired by what is declared to match', async () => {
    const [a, b] = [
      table('id rho', [
        [7, 1],
        [3, 2],
        [9, 3],
      ]),
      table('id rho', [
        [3, 2],
        [9, 3],
        [7, 1],
      ]),
    ];
    const found = await compare(a, b, { match: 'id', quantities: { rho } });
    expect(found.rho).toMatchObject({
      class: 'bit-for-bit',
      why: '3 elements stood in another order and were paired by key',
    });
  });
});

describe('a declared shift', () => {
  const pulse = (at: number) => line(201).map((x) => [x, 1 + Math.exp(-(((x - at) / 0.1) ** 2))]);
  const output = {
    along: 'x',
    shift: { tolerance: 0.05 },
    quantities: { rho: { ...rho, tolerance: { relative: 0.01 } } },
  };

  it('is taken back, and is a feature of its own', async () => {
    const found = await compare(table('x rho', pulse(0.5)), table('x rho', pulse(0.52)), output);
    expect(found.rho!.class).toMatch(/within tolerance|roundoff/);
    expect(found['shift of rho']).toMatchObject({ of: 'feature', class: 'within tolerance' });
    expect(found['shift of rho']!.measures!.worst!.result).toBeCloseTo(0.02, 3);
  });

  it('does not excuse more than it may', async () => {
    const found = await compare(table('x rho', pulse(0.4)), table('x rho', pulse(0.6)), output);
    expect(found.rho!.class).toBe('beyond tolerance');
  });
});

describe('what is allowed', () => {
  const reference = table('x rho', [
    [0, 1],
    [1, 2],
  ]);
  const result = table('x rho', [
    [0, 1.0001],
    [1, 2],
  ]);
  const base = { along: 'x', quantities: { rho } };

  it('is the larger of the declared tolerance and the noise of the code', async () => {
    const runs = [1e-4, 2e-4, 3e-4].map((size) => Float64Array.of(1 + size, 2));
    const noise = { rho: noiseFloor(Float64Array.of(1, 2), runs, 'pointwise', plainKernel()) };
    expect((await compare(reference, result, base)).rho!.class).toBe('beyond tolerance');
    const { rho: found } = await compare(reference, result, base, {}, { noise });
    expect(found!.class).toBe('within tolerance');
    expect(found!.tolerance!.reason).toBe('the noise floor of 3 repeated runs');
  });

  it('is beyond tolerance but below the error of the grid, and says so', async () => {
    const gridError = { rho: gridConvergence([0.9705, 0.96854, 0.96178], [2, 2]) };
    const { rho: found } = await compare(reference, result, base, {}, { gridError });
    expect(found!.class).toBe('beyond tolerance');
    expect(found!.why).toContain('below the error of the grid (0.10 %)');
    const far = table('x rho', [
      [0, 1.1],
      [1, 2],
    ]);
    expect((await compare(reference, far, base, {}, { gridError })).rho!.why).toContain(
      'beyond the error of the grid too',
    );
  });

  it('weighs elements by mass where weights are declared', async () => {
    const heavy = (first: number) =>
      table('rho m', [
        [first, 1],
        [1, 999],
      ]);
    const quantity = { ...rho, weight: 'm', tolerance: { relative: 1e-3, norm: 'L1' as const } };
    const found = await compare(heavy(1), heavy(1.5), { quantities: { rho: quantity } });
    expect(found.rho).toMatchObject({ class: 'within tolerance' });
    expect(found.rho!.measures!.l1).toBeCloseTo(0.5 / 1000, 12);
  });
});

describe('units', () => {
  const T = { dataset: 'T', unit: 'K', tolerance: { relative: 1e-12 } };

  it('that a file declares are brought to those of the case, on either side', async () => {
    const found = await compare('x[cm],T[K]\n0,300\n100,400\n', 'x[m],T[mK]\n0,300000\n1,400000\n', {
      along: 'x',
      quantities: { T },
    });
    expect(found.T!.class).toMatch(/bit-for-bit|roundoff/);
  });

  it('may differ by an offset', async () => {
    const found = await compare('T[K]\n300\n', 'T[Celsius]\n26.85\n', { quantities: { T } });
    expect(found.T!.class).toMatch(/bit-for-bit|roundoff/);
  });

  it('of another dimension cannot be compared', async () => {
    const found = await compare('T[K]\n300\n', 'T[erg]\n300\n', { quantities: { T } });
    expect(found.T!.why).toContain('out.txt of the result has T in erg');
  });

  it('of features follow from their parts', async () => {
    const text = 'x[cm],T[K]\n0,10\n100,30\n';
    const area: Feature = { of: 'T', take: 'integral', unit: 'K.m', tolerance: { relative: 1e-12 } };
    const wrong: Feature = { ...area, unit: 'g' };
    const found = await compare(text, text.replace('30', '50'), { along: 'x', quantities: { T } }, { area, wrong });
    expect(found.area!.measures!.worst).toMatchObject({ reference: 20, result: 30 });
    expect(found.wrong!.why).toContain('cannot be brought to g');
  });
});

describe('what one side lacks', () => {
  it('is named, with what there is instead', async () => {
    const found = await compare(table('x rho', [[0, 1]]), table('x density', [[0, 1]]), { quantities: { rho } });
    expect(found.rho).toMatchObject({
      class: 'not comparable',
      why: 'out.txt of the result has no data set "rho"; it holds x, density',
    });
  });

  it('takes the features with it, and says why for each', async () => {
    const peak: Feature = { of: 'rho', take: 'maximum', tolerance: {} };
    const ratio: Feature = {
      of: 'rho',
      take: 'formula',
      formula: 'maximum(rho) / mean(rho)',
      tolerance: { relative: 1e-9 },
    };
    const text = table('x rho', [
      [0, 1],
      [1, 3],
    ]);
    const found = await compare(text, text, { quantities: { rho } }, { peak, ratio, lost: { ...peak, of: 'nothing' } });
    expect(found.peak!.class).toBe('bit-for-bit');
    expect(found.ratio!.measures!.worst).toBeNull();
    expect(found.lost!.why).toBe('no output of the case has a quantity "nothing"');
  });
});

describe('special values', () => {
  const of = (...values: string[]) => `rho\n${values.join('\n')}\n`;
  const found = async (a: string, b: string) => {
    const { rho: deviation } = await compare(a, b, { quantities: { rho } });
    return `${deviation!.class}${deviation!.why === undefined ? '' : `: ${deviation!.why}`}`;
  };

  it('have each their own message', async () => {
    expect(await found(of('1', '0.0'), of('1', '-0.0'))).toBe('roundoff: differs only in the sign of zeros');
    expect(await found(of('1', 'inf'), of('1', 'inf'))).toBe('bit-for-bit');
    expect(await found(of('1', '2'), of('1', 'inf'))).toBe(
      'beyond tolerance: the result is infinite in 1 element, the reference in 0',
    );
    expect(await found(of('1', '-inf'), of('1', '2'))).toBe(
      'beyond tolerance: the reference is infinite in 1 element where the result is not',
    );
    expect(await found(of('1', 'nan'), of('1', 'nan'))).toContain(
      'not comparable: the reference holds NaN in 1 element',
    );
    expect(await found(of('5e-324', '1'), of('1e-323', '1'))).toBe(
      'beyond tolerance: the worst element is below the smallest normal number, where digits are lost',
    );
  });
});
