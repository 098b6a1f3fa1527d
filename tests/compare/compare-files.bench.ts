/**
 * `mortise compare` as a user calls it, Node's start included, beside its floors in one run: `cat` of both files to
 * /dev/null (goal for doubles: 3 times that plus Node's start), and what numpy or h5py need for the same measures.
 * Needs `npm run build` before.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, bench } from 'vitest';
import { packageRoot } from '../../src/sources/assets.edge.ts';
import { describeWith, PYTHON } from '../support/tools.ts';

const folder = mkdtempSync(join(tmpdir(), 'mortise-bench-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
const once = { iterations: 3, warmupIterations: 1, time: 0, warmupTime: 0 };

function run(program: string, ...words: readonly string[]): void {
  const { status, stderr } = spawnSync(program, words, { cwd: folder, stdio: ['ignore', 'ignore', 'pipe'] });
  if (status !== 0) throw new Error(`${program} ${words.join(' ')}: ${stderr}`);
}
const python = (script: string, ...words: string[]) => run(PYTHON, '-W', 'ignore', '-c', script, ...words);
const compare = (...words: string[]) =>
  run(process.execPath, join(packageRoot, 'dist', 'mortise.js'), 'compare', ...words, '--relative', '1e-9');
/** Keeps to one core, so that one thread is all there is. */
const compareOnOne = (...words: string[]) =>
  run(
    'taskset',
    '-c',
    '0',
    process.execPath,
    join(packageRoot, 'dist', 'mortise.js'),
    'compare',
    ...words,
    '--relative',
    '1e-9',
  );

const WRITE = `
import numpy as np
rng = np.random.default_rng(1)
a = rng.standard_normal(50_000_000); np.save('a.npy', a)
a *= 1 + 1e-12 * rng.standard_normal(a.size); np.save('b.npy', a)
t = rng.standard_normal((1_000_000, 4))
for name, x in (('a', t), ('b', t * (1 + 1e-12 * rng.standard_normal(t.shape)))):
    np.savetxt(name + '.txt', x, fmt='%.15e', header='x y z w')
`;

/** Every measure that Mortise takes, in whole arrays. */
const MEASURES = `
import sys, numpy as np
def measures(r, s):
    d = np.abs(s - r); size = np.abs(r)
    with np.errstate(all='ignore'): relative = np.nanmax(d / size)
    key = lambda x: np.where(x < 0, np.int64(-2**63) - x, x)
    ulp = np.abs(key(r.view(np.int64)) - key(s.view(np.int64))).max()
    return (d.max(), relative, ulp, d.sum() / size.sum(), np.sqrt((d * d).sum() / (r * r).sum()), d.max() / size.max(),
            np.isnan(r).sum(), np.isnan(s).sum(), np.argmax(d))
`;

describeWith(['python3:numpy'], 'two npy files of 50 million doubles', () => {
  python(WRITE);
  bench('floor: cat of both', () => run('sh', '-c', 'cat a.npy b.npy > /dev/null'), once);
  bench("floor: Node's start", () => run(process.execPath, '-e', '0'), once);
  bench('mortise compare', () => compare('a.npy', 'b.npy'), once);
  bench('mortise compare on one core', () => compareOnOne('a.npy', 'b.npy'), once);
  bench(
    'numpy: read and allclose',
    () => python(`import numpy as np; assert np.allclose(np.load('b.npy'), np.load('a.npy'))`),
    once,
  );
});

describeWith(['python3:numpy'], 'two text tables of a million rows and four columns', () => {
  bench(
    'floor: numpy.loadtxt of both',
    () => python(`import numpy as np; np.loadtxt('a.txt'); np.loadtxt('b.txt')`),
    once,
  );
  bench('mortise compare', () => compare('a.txt', 'b.txt'), once);
  bench('mortise compare on one core', () => compareOnOne('a.txt', 'b.txt'), once);
});

describeWith(['python3:numpy', 'python3:h5py'], 'two HDF5 files of 20 million doubles, plain and packed', () => {
  python(`
import h5py, numpy as np
rng = np.random.default_rng(1)
a = rng.standard_normal((2000, 10000))
for name, x in (('a', a), ('b', a * (1 + 1e-12 * rng.standard_normal(a.shape)))):
    with h5py.File(name + '.h5', 'w') as f: f['plain'] = x
    with h5py.File(name + 'z.h5', 'w') as f:
        f.create_dataset('packed', data=np.round(x[:500], 6), chunks=(100, 1000), compression='gzip', shuffle=True)
`);
  const read = `${MEASURES}
import h5py
with h5py.File(sys.argv[1]) as f, h5py.File(sys.argv[2]) as g:
    for name in f: measures(f[name][()], g[name][()])
`;
  for (const [title, a, b] of [
    ['plain', 'a.h5', 'b.h5'],
    ['packed', 'az.h5', 'bz.h5'],
  ] as const) {
    bench(`floor: h5py and numpy, ${title}`, () => python(read, a, b), once);
    bench(`mortise compare, ${title}`, () => compare(a, b, '--absolute', '1e-5'), once);
  }
});
