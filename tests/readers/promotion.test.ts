import { describe, expect, it } from 'vitest';
import { promotionIn, promotionOf } from '../../src/readers/promotion.ts';
import type { SourceTree } from '../../src/sources/tree.ts';

const treeOf = (files: Record<string, string>): SourceTree => ({
  root: '/code',
  revision: null,
  entries: async () => Object.keys(files).map((path) => ({ path, id: null, kind: 'file' as const })),
  read: async (path) => (files[path] === undefined ? null : new TextEncoder().encode(files[path])),
});

describe('the switches of a build', () => {
  // The spellings are those of the compilers' manuals: GNU Fortran, Intel Fortran, NAG, Cray.
  it.each([
    ['FFLAGS = -O3 -fdefault-real-8 -fdefault-double-8', { real: 8 }],
    ['FFLAGS = -fdefault-real-8 -fdefault-integer-8', { real: 8, integer: 8 }],
    ['DBLFLAG= -r8', { real: 8 }],
    ['set(FLAGS "-real-size 64 -i8")', { real: 8, integer: 8 }],
    ['FR8="-sreal64"', { real: 8 }],
    ['FFLAGS += -s default64', { real: 8, integer: 8 }],
  ])('promote what %j says', (text, bytes) => {
    expect(promotionIn('Makefile', text)?.bytes).toEqual(bytes);
  });

  it.each([
    '# FFLAGS = -r8',
    'FFLAGS = -O2 # not -r8',
    'FFLAGS_PLAIN := $(filter-out -fdefault-real-8,$(FFLAGS))',
    'CFLAGS = -march=armv8-r8 --foo-r8',
    'FFLAGS = -fdefault-real-80',
  ])('promote nothing in %j', (text) => {
    expect(promotionIn('Makefile', text)).toBeNull();
  });

  it('say where they stand', () => {
    expect(promotionIn('build/Makefile', 'FC = gfortran\nFFLAGS = -O2 -fdefault-real-8\n')?.said).toEqual([
      { place: { file: 'build/Makefile', line: 2, column: 14 }, text: '-fdefault-real-8' },
    ]);
  });

  it('are taken from the build file nearest to the root, and not from sources', async () => {
    const found = await promotionOf(
      treeOf({
        'src/notes.f90': '! compile with -r8',
        'tools/old/Makefile': 'F = -i8',
        'build/Makefile_defaults': 'F = -fdefault-real-8',
      }),
    );
    expect(found?.bytes).toEqual({ real: 8 });
    expect(await promotionOf(treeOf({ 'src/notes.f90': '! compile with -r8' }))).toBeNull();
  });
});
