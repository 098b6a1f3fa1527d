/** The Fortran reader held against gfortran on programs drawn at random: what the compiler takes is read as the compiler reads it. */
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { readFortran } from '../../../src/readers/fortran/read-fortran.ts';
import { linkInterfaces } from '../../../src/readers/link.ts';
import { dumpParseTree } from '../../support/gfortran.ts';
import { describeWith } from '../../support/tools.ts';
import { compareWithCompiler, emptyComparison } from './judge/against-compiler.ts';
import { compilerView } from './judge/compiler-view.ts';
import { fixedProgram, freeProgram } from './judge/drawn-programs.ts';

const RUNS = 40;

describeWith(['gfortran'], 'Programs drawn at random', () => {
  let folder = '';
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-drawn-'));
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  it.each([
    ['free', freeProgram],
    ['fixed', fixedProgram],
  ])('in %s form are read as the compiler reads them', async (_, program) => {
    let drawn = 0;
    let accepted = 0;
    let declarations = 0;
    await fc.assert(
      fc.asyncProperty(program, async ({ path, text }) => {
        drawn++;
        const file = join(folder, path);
        writeFileSync(file, text);
        const judged = await dumpParseTree([file], folder);
        if (!judged.accepted) return;
        accepted++;
        const read = readFortran(path, Buffer.from(text));
        const comparison = emptyComparison();
        compareWithCompiler(
          comparison,
          path,
          linkInterfaces(new Map([[path, read]])).files.get(path)!,
          compilerView(judged.dump),
        );
        declarations += comparison.tallies.declarations.expected;
        expect(comparison.differences, text).toEqual([]);
      }),
      { numRuns: RUNS, seed: 19_770_401 },
    );
    // A judge that refuses the programs judges nothing.
    expect(accepted / drawn).toBeGreaterThan(0.5);
    expect(declarations).toBeGreaterThan(3 * RUNS);
  });
});
