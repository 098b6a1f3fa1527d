// numpy.allclose, numpy.spacing and numpy's norms judge what is compared and measured, on arrays of every kind.
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { compareArrays } from '../../src/compare/compare-arrays.ts';
import { buildEnsemble, ensembleTest } from '../../src/compare/ensemble-test.ts';
import { plainKernel } from '../../src/compare/measure-block.ts';
import { measureArrays } from '../../src/compare/measuring.ts';
import { principalComponents } from '../../src/compare/principal-components.ts';
import { describeWith, PYTHON } from '../support/tools.ts';

const SCRIPT = `
import sys, json, os
import numpy as np
os.chdir(sys.argv[1])
rng = np.random.default_rng(11)
cases = []
def keep(a, b, atol, rtol):
    n = len(cases)
    a.astype('<f8').tofile('a%d' % n); b.astype('<f8').tofile('b%d' % n)
    d = np.abs(b - a)
    finite = bool(np.isfinite(a).all() and np.isfinite(b).all())
    case = dict(atol=atol, rtol=rtol, allclose=bool(np.allclose(b, a, rtol=rtol, atol=atol)), finite=finite)
    if finite:
        case.update(l1=float(d.sum() / np.abs(a).sum()), l2=float(np.linalg.norm(b - a) / np.linalg.norm(a)),
                    linf=float(d.max() / np.abs(a).max()), max=float(d.max()))
        ia, ib = a.view(np.int64).astype(object), b.view(np.int64).astype(object)
        order = lambda bits: bits if bits >= 0 else -(bits + 2 ** 63)
        case['ulp'] = str(max(abs(order(int(x)) - order(int(y))) for x, y in zip(ia, ib)))
    cases.append(case)
for trial in range(300):
    n = int(rng.integers(1, 60))
    a = rng.standard_normal(n) * 10.0 ** rng.integers(-12, 12, n)
    size = 10.0 ** rng.uniform(-16, -2)
    b = a * (1 + size * rng.standard_normal(n))
    if trial % 7 == 0: b = b.copy(); b[rng.integers(0, n)] = [np.nan, np.inf, -np.inf, 0.0][trial % 4]
    if trial % 11 == 0: k = rng.integers(0, n); a[k] = b[k] = np.inf
    if trial % 13 == 0: b = -b
    keep(a, b, float(10.0 ** rng.uniform(-20, 0)) if trial % 3 else 0.0, float(10.0 ** rng.uniform(-16, -1)) if trial % 2 else 0.0)
table = rng.standard_normal((40, 6)) @ rng.standard_normal((6, 6))
standard = (table - table.mean(0)) / table.std(0, ddof=1)
_, s, vt = np.linalg.svd(standard, full_matrices=False)
mixing = rng.standard_normal((30, 30))
members = rng.standard_normal((151, 30)) @ mixing
same = rng.standard_normal((300, 3, 30)) @ mixing
json.dump(dict(cases=cases, table=standard.tolist(), components=vt.tolist(), members=members.tolist(), same=same.tolist()), open('cases.json', 'w'))
`;

interface NumpyCase {
  readonly atol: number;
  readonly rtol: number;
  readonly allclose: boolean;
  readonly finite: boolean;
  readonly l1: number;
  readonly l2: number;
  readonly linf: number;
  readonly max: number;
  readonly ulp: string;
}

describeWith(['python3:numpy'], 'against numpy', () => {
  let folder = '';
  let found: {
    cases: NumpyCase[];
    table: number[][];
    components: number[][];
    members: number[][];
    same: number[][][];
  };
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-numpy-'));
    execFileSync(PYTHON, ['-W', 'ignore', '-c', SCRIPT, folder]);
    found = JSON.parse(readFileSync(join(folder, 'cases.json'), 'utf8'));
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  const side = (name: string) => {
    const bytes = readFileSync(join(folder, name));
    return new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
  };

  it('passes exactly what allclose(result, reference) passes', () => {
    const classes = new Set<string>();
    found.cases.forEach(({ atol, rtol, allclose }, n) => {
      const deviation = compareArrays(side(`a${n}`), side(`b${n}`), { absolute: atol, relative: rtol });
      classes.add(`${deviation.class} ${allclose}`);
      expect(deviation.class === 'beyond tolerance' || deviation.class === 'not comparable', `case ${n}`).toBe(
        !allclose,
      );
    });
    // Both answers came up, or nothing was tested.
    expect(classes).toContain('within tolerance true');
    expect(classes).toContain('beyond tolerance false');
  });

  it('measures the same norms, and the same ULP distances exactly', () => {
    let finite = 0;
    found.cases.forEach((one, n) => {
      if (!one.finite) return;
      const { measures, ulp } = measureArrays(
        side(`a${n}`),
        side(`b${n}`),
        { absolute: 1, relative: 0 },
        plainKernel(),
      );
      const near = (value: number, want: number) => expect(Math.abs(value - want)).toBeLessThanOrEqual(1e-12 * want);
      near(measures.l1, one.l1);
      near(measures.l2, one.l2);
      near(measures.linf, one.linf);
      expect(measures.maxAbsolute).toBe(one.max);
      expect(ulp).toBe(BigInt(one.ulp));
      finite++;
    });
    expect(finite).toBeGreaterThan(100);
  });

  it("finds numpy's principal components", () => {
    const components = principalComponents(found.table);
    expect(components).toHaveLength(6);
    components.forEach((component, k) => {
      const cosine = component.reduce((sum, value, i) => sum + value * found.components[k]![i]!, 0);
      expect(Math.abs(cosine)).toBeCloseTo(1, 9);
    });
  });

  // Baker et al. 2015, Geosci. Model Dev. 8, 2829: runs of the same climate fail seldom, a moved one fails.
  it('lets runs of the same distribution pass an ensemble test nearly always, and a moved quantity never', () => {
    const names = Array.from({ length: 30 }, (_, i) => `quantity ${i}`);
    const ensemble = buildEnsemble(names, found.members);
    const failures = found.same.filter((runs) => !ensembleTest(ensemble, runs).passes).length;
    expect(failures / found.same.length).toBeLessThan(0.05);
    const moved = found.same[0]!.map((run) => run.map((value, i) => value + 3 * ensemble.deviations[i]!));
    expect(ensembleTest(ensemble, moved).passes).toBe(false);
    const broken = found.same[0]!.map((run) => run.with(4, Number.NaN));
    expect(ensembleTest(ensemble, broken)).toMatchObject({ passes: false, why: 'quantity 4 is NaN' });
  });
});
