import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { compareCase, footprintOf } from '../../src/compare/compare-outputs.edge.ts';
import { compareConserved } from '../../src/compare/conserved.ts';
import type { Case } from '../../src/model/manifest.ts';

const cloud: Case = {
  case: 'cloud',
  run: 'run',
  outputs: [
    {
      file: 'profile.csv',
      along: 'x',
      quantities: { temperature: { dataset: 'T', unit: 'K', tolerance: { relative: 1e-6 } } },
    },
    { file: 'totals.dat', quantities: { mass: { dataset: 'mass', unit: 'g', tolerance: {} } } },
  ],
  features: {
    'peak-temperature': { of: 'temperature', take: 'maximum', tolerance: { relative: 1e-4 } },
    'shock-position': { of: 'temperature', take: 'crossing', level: 50, tolerance: { absolute: 0.01 } },
  },
  conserved: ['mass'],
  footprint: { temperature: 'temperature' },
};

let folder = '';
const write = (side: string, file: string, text: string) => {
  mkdirSync(join(folder, side), { recursive: true });
  writeFileSync(join(folder, side, file), text);
};
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-compare-'));
  write('reference', 'profile.csv', 'x[cm],T[K]\n0,10\n1,20\n2,80\n3,90\n');
  write('reference', 'totals.dat', '# t mass\n0 1.0\n1 1.0\n2 1.0\n');
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const byName = async (side: string) =>
  Object.fromEntries(
    (await compareCase(cloud, join(folder, 'reference'), join(folder, side))).map((one) => [
      `${one.of} ${one.quantity}`,
      one,
    ]),
  );

describe('a case compared with its reference', () => {
  it('is bit-for-bit with itself in every quantity, feature and total', async () => {
    const deviations = Object.values(await byName('reference'));
    expect(deviations.map((one) => one.class)).toEqual(Array(5).fill('bit-for-bit'));
  });

  it('names the worst place along the axis, with its unit', async () => {
    write('moved', 'profile.csv', 'x[cm],T[K]\n0,10\n1,20.00001\n2,80.01\n3,90\n');
    write('moved', 'totals.dat', '# t mass\n0 1.0\n1 1.0\n2 1.0\n');
    const { 'field temperature': field, 'feature peak-temperature': peak } = await byName('moved');
    expect(field!.class).toBe('beyond tolerance');
    expect(field!.measures!.worst).toEqual({
      index: 2,
      reference: 80,
      result: 80.01,
      along: { value: 2, unit: 'cm' },
    });
    expect(field!.tolerances).toBeCloseTo(0.01 / 80e-6, 3);
    expect(peak!.class).toBe('bit-for-bit');
  });

  it('never passes a NaN', async () => {
    write('nan', 'profile.csv', 'x[cm],T[K]\n0,10\n1,20\n2,nan\n3,90\n');
    write('nan', 'totals.dat', '# t mass\n0 1.0\n1 nan\n2 1.0\n');
    const deviations = await byName('nan');
    expect(deviations['field temperature']!.class).toBe('beyond tolerance');
    expect(deviations['field temperature']!.why).toContain('NaN in 1 element');
    expect(deviations['feature peak-temperature']!.class).toBe('not comparable');
    expect(deviations['conserved mass']!.class).toBe('beyond tolerance');
  });

  it('says why what is missing cannot be compared', async () => {
    write('short', 'profile.csv', 'x[cm],T[K]\n0,10\n1,20\n2,80\n3,');
    const deviations = await byName('short');
    expect(deviations['conserved mass']!.why).toBe('totals.dat of the result does not exist');
    expect(deviations['field mass']!.class).toBe('not comparable');
  });

  it('says what is beyond tolerance but below the error of the grid, and what is beyond both', async () => {
    // Celik et al., J. Fluids Eng. 130 (2008) 078001, table 1: GCI of 2.2 % for the dimensionless reattachment length.
    const grid = { fine: 6.063, middle: 5.972, coarse: 5.863, ratio: 1.5, 'coarse-ratio': 1.333 };
    const gridded: Case = { ...cloud, 'grid-error': { 'peak-temperature': grid } };
    const peak = async (value: string) => {
      write('grid', 'profile.csv', `x[cm],T[K]\n0,10\n1,20\n2,80\n3,${value}\n`);
      write('grid', 'totals.dat', '# t mass\n0 1.0\n1 1.0\n2 1.0\n');
      const all = await compareCase(gridded, join(folder, 'reference'), join(folder, 'grid'));
      return all.find((one) => one.quantity === 'peak-temperature')!;
    };
    expect(await peak('91.5')).toMatchObject({ class: 'beyond tolerance' });
    expect((await peak('91.5')).why).toContain('below the error of the grid (2.2 %)');
    expect((await peak('93')).why).toContain('beyond the error of the grid too (2.2 %)');
    grid.coarse = 5.98;
    expect((await peak('91.5')).why).toContain('do not converge');
  });

  it('finds a total that drifts where the reference kept it', async () => {
    write('drift', 'profile.csv', 'x[cm],T[K]\n0,10\n1,20\n2,80\n3,90\n');
    write('drift', 'totals.dat', '# t mass\n0 1.0\n1 1.0\n2 1.000001\n');
    const { 'conserved mass': mass } = await byName('drift');
    expect(mass!.class).toBe('beyond tolerance');
    expect(mass!.measures!.maxRelative).toBeCloseTo(1e-6, 9);
  });

  it('lets a total drift as far as the reference did, from zero too', () => {
    const run = (...values: number[]) => Float64Array.from(values);
    expect(compareConserved(run(0, 1e-3), run(0, -9e-4), undefined).class).toBe('within tolerance');
    expect(compareConserved(run(0, 1e-3), run(0, 2e-3), undefined).class).toBe('beyond tolerance');
    expect(compareConserved(run(5, 5), run(5, 5 + 1e-15), undefined).class).toMatch(/roundoff|bit-for-bit/);
  });

  it('takes the footprint from the extremes of the result', async () => {
    expect(await footprintOf(cloud, join(folder, 'reference'))).toEqual({ temperature: [10, 90] });
  });
});
