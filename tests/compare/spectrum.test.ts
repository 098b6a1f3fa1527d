// numpy.fft and numpy.histogram judge spectra and distributions of fields of one to three dimensions and of any extent.
import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { compareCase } from '../../src/compare/compare-outputs.edge.ts';
import { histogram } from '../../src/compare/histogram.ts';
import { powerSpectrum } from '../../src/compare/spectrum.ts';
import type { Case } from '../../src/model/manifest.ts';
import { describeWith, PYTHON } from '../support/tools.ts';

const SCRIPT = `
import json, sys
import numpy as np
rng = np.random.default_rng(5)
cases = []
for shape in [(64,), (97,), (30,), (16, 16), (12, 9), (8, 8, 8), (5, 6, 7), (1, 32)]:
    x = rng.standard_normal(shape)
    power = np.abs(np.fft.fftn(x)) ** 2 / x.size ** 2
    waves = np.meshgrid(*[np.fft.fftfreq(n) * n for n in shape], indexing='ij')
    shell = np.floor(np.sqrt(sum(np.round(w) ** 2 for w in waves)) + 0.5).astype(int)
    counts, edges = np.histogram(x, bins=10, range=(-2.0, 2.0))
    cases.append(dict(shape=shape, values=x.ravel().tolist(), spectrum=np.bincount(shell.ravel(), power.ravel()).tolist(),
                      counts=counts.tolist()))
print(json.dumps(cases))
`;
interface Judged {
  readonly shape: number[];
  readonly values: number[];
  readonly spectrum: number[];
  readonly counts: number[];
}

describeWith(['python3:numpy'], 'numpy', () => {
  let cases: Judged[] = [];
  beforeAll(() => {
    cases = JSON.parse(execFileSync(PYTHON, ['-c', SCRIPT], { encoding: 'utf8', maxBuffer: 1 << 26 }));
  });

  it('agrees on the power in every shell of wave numbers', () => {
    for (const { shape, values, spectrum } of cases) {
      const ours = powerSpectrum(Float64Array.from(values), shape);
      const numpys = [...spectrum, ...Array(ours.length).fill(0)].slice(0, ours.length);
      for (const [k, power] of numpys.entries())
        expect(Math.abs(ours[k]! - power), `${shape} ${k}`).toBeLessThan(1e-14);
    }
  });

  it('agrees on the counts in every bin', () => {
    for (const { values, counts } of cases) {
      const shares = histogram(Float64Array.from(values), -2, 2, 10);
      expect([...shares.slice(1, -1)].map((share) => Math.round(share * values.length))).toEqual(counts);
    }
  });
});

describe('the spectrum of a field', () => {
  it('sums to the mean square (Parseval)', () => {
    const values = Float64Array.from({ length: 60 }, (_, i) => Math.sin(i * i) + 0.3);
    const sum = powerSpectrum(values, [3, 20]).reduce((a, b) => a + b, 0);
    expect(sum).toBeCloseTo(values.reduce((a, b) => a + b * b, 0) / 60, 14);
  });
});

describe('turbulent fields', () => {
  let folder = '';
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-spectrum-'));
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));
  const theCase = (as: 'spectrum' | 'histogram'): Case => ({
    case: 'box',
    run: 'run',
    outputs: [
      {
        file: 'u.csv',
        along: 'x',
        quantities: { u: { dataset: 'u', unit: 'm/s', tolerance: { relative: 1e-9, norm: 'L1' }, as, bins: 16 } },
      },
    ],
  });
  const u = (shift: number, factor = 1) =>
    [
      'x[m],u[m/s]',
      ...Array.from({ length: 64 }, (_, i) => {
        const at = (2 * Math.PI * (i + shift)) / 64;
        return `${i},${factor * (Math.sin(3 * at) + 0.2 * Math.cos(9 * at + 1))}`;
      }),
    ].join('\n');
  const compared = async (as: 'spectrum' | 'histogram', other: string) => {
    const dirs = [u(0), other].map((text) => {
      const at = mkdtempSync(join(folder, 'side-'));
      writeFileSync(join(at, 'u.csv'), `${text}\n`);
      return at;
    });
    return (await compareCase(theCase(as), dirs[0]!, dirs[1]!))[0]!;
  };

  it.each(['spectrum', 'histogram'] as const)('agree in their %s though no point does', async (as) => {
    const same = await compared(as, u(5));
    expect(same.why).toContain(`compared as ${as}`);
    expect(['within tolerance', 'roundoff', 'bit-for-bit']).toContain(same.class);
    expect((await compared(as, u(5, 1.5))).class).toBe('beyond tolerance');
  });

  it('never pass with a NaN, and say which unit a spectrum is in', async () => {
    const nan = u(0).replace(/\n7,.*/, '\n7,nan');
    expect((await compared('spectrum', nan)).class).toBe('beyond tolerance');
    expect((await compared('histogram', nan)).class).toBe('not comparable');
    expect((await compared('spectrum', u(1))).unit).toBe('(m/s)^2');
  });
});
