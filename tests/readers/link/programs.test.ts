import { describe, expect, it } from 'vitest';
import { check } from '../../support/check-sources.ts';

const MAIN = (name: string) => `      PROGRAM ${name}\n      CALL EXITT(1)\n      END\n`;
const EXITT = (args: string) => `      SUBROUTINE EXITT${args}\n      END\n`;

describe('several programs in one checkout', () => {
  it('are linked one by one: each calls what stands beside it', async () => {
    expect(
      await check({
        'tools/a/main.f': MAIN('A'),
        'tools/a/exit.f': EXITT('(I)'),
        'tools/b/main.f': MAIN('B').replace('(1)', ''),
        'tools/b/exit.f': EXITT(''),
      }),
    ).toEqual([]);
  });

  it('do not lend each other what they define: no verdict where only another program has the name', async () => {
    expect(
      await check({
        'core/drive.f': MAIN('CORE'),
        'tools/post/main.f': MAIN('POST').replace('(1)', ''),
        'tools/post/exit.f': EXITT('(I, J)').replace('      END', '      I = J\n      END'),
      }),
    ).toEqual(['tools/post/main.f:2 stop call-count']);
  });

  it('still share a library beside them, and what stands above them', async () => {
    const sources = { 'a/main.f': MAIN('A'), 'b/main.f': MAIN('B') };
    const expected = ['a/main.f:2 stop call-count', 'b/main.f:2 stop call-count'];
    expect(await check({ ...sources, 'lib/exit.f': EXITT('') })).toEqual(expected);
    expect(await check({ ...sources, 'main.f': MAIN('ROOT'), 'exit.f': EXITT('') })).toEqual([
      ...expected,
      'main.f:2 stop call-count',
    ]);
  });

  it('have COMMON blocks of their own', async () => {
    const block = (type: string) => `      SUBROUTINE S\n      ${type} X\n      COMMON /BLK/ X\n      END\n`;
    const sources = {
      'a/main.f': '      PROGRAM A\n      END\n',
      'a/s.f': block('REAL*8'),
      'b/main.f': '      PROGRAM B\n      END\n',
      'b/s.f': block('INTEGER'),
    };
    expect(await check(sources)).toEqual([]);
    expect(await check({ 'src/a.f': block('REAL*8'), 'src/b.f': block('INTEGER') })).toEqual([
      'src/b.f:3 stop common-differs',
    ]);
  });

  it('of one folder choose among several definitions: one of them must fit', async () => {
    const caller = '      SUBROUTINE C\n      CALL EXITT(1)\n      END\n';
    const alternatives = { 'src/x.f': EXITT('(I)'), 'src/y.f': EXITT('') };
    expect(await check({ ...alternatives, 'src/c.f': caller })).toEqual([]);
    expect(await check({ ...alternatives, 'src/c.f': caller.replace('(1)', '(1, 2)') })).toEqual([
      'src/c.f:2 caution call-count',
    ]);
  });

  it('that define a name in the calling file mean that one', async () => {
    const caller = `      SUBROUTINE C\n      CALL EXITT(1)\n      END\n${EXITT('')}`;
    expect(await check({ 'src/c.f': caller, 'src/x.f': EXITT('(I)') })).toEqual(['src/c.f:2 stop call-count']);
  });
});

describe('a definition under a preprocessor condition', () => {
  const definition =
    '#ifdef TAF\n      SUBROUTINE G(A)\n      END\n#else\n      SUBROUTINE G(A, B)\n      END\n#endif\n';
  const caller = (first: string, second: string) =>
    `      SUBROUTINE C(A, B)\n#ifdef TAF\n      CALL G(${first})\n#else\n      CALL G(${second})\n#endif\n      END\n`;
  it('is called from the same branch: an argument under #ifdef is right there and wrong elsewhere', async () => {
    expect(await check({ 'g.F': definition, 'c.F': caller('A', 'A, B') })).toEqual([]);
    expect(await check({ 'g.F': definition, 'c.F': caller('A, B', 'A') })).toEqual([
      'c.F:3 stop call-count',
      'c.F:5 stop call-count',
    ]);
  });

  it('is one of its alternatives for a call without condition', async () => {
    const plain = '      SUBROUTINE C(A, B)\n      CALL G(A)\n      CALL G(A, B)\n      END\n';
    expect(await check({ 'g.F': definition, 'c.F': plain })).toEqual([]);
  });
});

describe('an element of an array that a module holds', () => {
  const caller = 'subroutine c(i, x)\n use state\n x = curve(i, 2) + 1\nend subroutine\n';
  const curve = 'real function curve(a, b, c)\nend function\n';
  it('is no call of a function of that name', async () => {
    const module = 'module state\n real, allocatable :: curve(:,:)\nend module\n';
    expect(await check({ 'c.f90': caller, 'f.f90': curve, 'state.f90': module })).toEqual([]);
    expect(
      await check({
        'c.f90': caller,
        'f.f90': curve,
        'state.f90': module,
        'use.f90': 'module m\n use state\nend module\n',
      }),
    ).toEqual([]);
  });
  it('is one where the module holds no such array', async () => {
    const module = 'module state\n real, allocatable :: other(:,:)\nend module\n';
    expect(await check({ 'c.f90': caller, 'f.f90': curve, 'state.f90': module })).toEqual(['c.f90:3 stop call-count']);
  });
});
