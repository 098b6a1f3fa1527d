/**
 * The Fortran reader held against gfortran on a published code: Debian's source package of the reference BLAS and LAPACK,
 * fixed and free form. `tests/support/lapack-source.sh` brings it; MORTISE_LAPACK_SOURCE names another folder that holds it.
 */
import { createHash } from 'node:crypto';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { FileInterface } from '../../../src/model/interface.ts';
import { readFortran } from '../../../src/readers/fortran/read-fortran.ts';
import { linkInterfaces } from '../../../src/readers/link.ts';
import { dumpParseTree } from '../../support/gfortran.ts';
import { describeWith } from '../../support/tools.ts';
import { compareWithCompiler, emptyComparison, rightShare } from './judge/against-compiler.ts';
import { compilerView } from './judge/compiler-view.ts';

const LAPACK =
  process.env.MORTISE_LAPACK_SOURCE ?? join(dirname(new URL(import.meta.url).pathname), '../../../.scratch/lapack');

/** The compiler takes about 60 ms a file, and there are 3,500: a part of them, always the same, chosen by the hash of the path. */
const SAMPLE = 220;

function sample(root: string): string[] {
  const all = readdirSync(root, { recursive: true }).map((one) => String(one).replaceAll('\\', '/'));
  const order = (path: string) => createHash('sha256').update(path).digest('hex');
  const fixed = all.filter((path) => path.endsWith('.f')).sort((a, b) => (order(a) < order(b) ? -1 : 1));
  // Few are in free form: all of them, modules first.
  const free = all.filter((path) => /\.f90$/i.test(path)).sort((a, b) => Number(isModule(b)) - Number(isModule(a)));
  return [...free, ...fixed.slice(0, SAMPLE)];
}

function isModule(path: string): boolean {
  return /\/la_\w+\.f90$/i.test(path);
}

function judgeLapack(): void {
  const comparison = emptyComparison();
  const refused: string[] = [];
  let folder = '';
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-judge-'));
    const paths = sample(LAPACK);
    const read = new Map<string, FileInterface>();
    for (const path of paths) read.set(path, readFortran(path, readFileSync(join(LAPACK, path))));
    const linked = linkInterfaces(read);
    const judge = async (path: string) => {
      const { accepted, dump, complaints } = await dumpParseTree([join(LAPACK, path)], folder);
      if (!accepted) refused.push(`${path}: ${complaints}`);
      else compareWithCompiler(comparison, path, linked.files.get(path)!, compilerView(dump));
    };
    // Module files must be there before those that use them are compiled.
    const queue = [...paths];
    while (queue.length > 0 && isModule(queue[0]!)) await judge(queue.shift()!);
    const work = async () => {
      for (let path = queue.shift(); path !== undefined; path = queue.shift()) await judge(path);
    };
    await Promise.all([work(), work()]);
  });

  it('holds enough to judge by, and the compiler takes all of it', () => {
    expect(refused).toEqual([]);
    expect(comparison.tallies.procedures.expected).toBeGreaterThan(SAMPLE);
    expect(comparison.tallies.declarations.expected).toBeGreaterThan(2500);
    expect(comparison.tallies.commons.expected).toBeGreaterThan(30);
    expect(comparison.tallies.calls.expected).toBeGreaterThan(3000);
  });

  it.each([
    ['procedures' as const, 'procedures, names of arguments and their order', 0.998],
    ['declarations' as const, 'type, kind, rank and intent of arguments and results', 0.995],
    ['commons' as const, 'members of COMMON blocks in storage order, with type, bytes and extents', 0.995],
    ['calls' as const, 'calls by caller, callee and number of arguments', 0.99],
  ])('%s: %s are right to the share asked, of what the compiler has and of what is read', (matter, _, share) => {
    const tally = comparison.tallies[matter];
    expect(rightShare(tally), `${JSON.stringify(tally)}\n${comparison.differences.join('\n')}`).toBeGreaterThanOrEqual(
      share,
    );
  });
}

const TITLE = 'Reference BLAS and LAPACK, read and compiled';
if (existsSync(join(LAPACK, 'SRC'))) describeWith(['gfortran'], TITLE, judgeLapack);
else if (process.env.CI === 'true')
  describe(TITLE, () => {
    it('finds the source', () => {
      throw new Error(`no source of LAPACK in ${LAPACK}: run tests/support/lapack-source.sh`);
    });
  });
else describe.skip(`${TITLE} (skipped: no source in ${LAPACK}, tests/support/lapack-source.sh brings it)`, judgeLapack);
