import { describe, expect, it } from 'vitest';
import { check, findingsIn } from '../../support/check-sources.ts';

const caller = (declarations: string, ...calls: string[]) =>
  `      SUBROUTINE CALLER\n      ${declarations}\n${calls.map((one) => `      CALL ${one}\n`).join('')}      END\n`;

describe('what old codes do on purpose', () => {
  it('is legal: an element passed for an array', async () => {
    const sources = {
      's.f': '      SUBROUTINE S(A, N)\n      REAL*8 A(N)\n      END\n',
      'c.f': caller('REAL*8 W(100)', 'S(W(11), 10)'),
    };
    expect(await check(sources)).toEqual([]);
  });

  it('is told once a callee at low gravity: scratch storage of another type', async () => {
    const sources = {
      's.f': '      SUBROUTINE S(IW, N)\n      INTEGER IW(N)\n      END\n',
      'c.f': caller('REAL*8 W(100)', 'S(W, 10)', 'S(W(3), 10)'),
    };
    expect(await check(sources)).toEqual(['c.f:3 note call-type']);
    expect((await findingsIn(sources))[0]!.says).toContain('2 arguments of s are of another type');
  });

  it('is told once a callee at low gravity: a scalar for an array, an array for a scalar', async () => {
    const sources = {
      's.f': '      SUBROUTINE S(A, X)\n      REAL*8 A(1), X\n      END\n',
      'c.f': caller('REAL*8 U, V(3)', 'S(U, V)'),
    };
    expect(await check(sources)).toEqual(['c.f:3 note call-rank']);
  });

  it('is told at low gravity where a procedure is given several types: it moves bytes', async () => {
    const send = '      SUBROUTINE SEND(BUF, N)\n      INTEGER BUF(N)\n      END\n';
    const wide = caller('INTEGER*8 K(4)\n      REAL*8 X(4)', 'SEND(K, 8)', 'SEND(X, 8)');
    expect(await check({ 'send.f': send, 'c.f': wide })).toEqual(['c.f:4 note call-kind', 'c.f:5 note call-type']);
  });

  it('is no matter for a stand-in of the MPI library', async () => {
    const stub = '      SUBROUTINE MPI_SEND(BUF, N)\n      INTEGER BUF(N)\n      END\n';
    expect(await check({ 'stub.f': stub, 'c.f': caller('INTEGER*8 K(4)', 'MPI_SEND(K, 8)') })).toEqual([]);
    expect(await check({ 'stub.f': stub, 'c.f': caller('INTEGER*8 K(4)', 'MPI_SEND(K)') })).toEqual([
      'c.f:3 caution call-count',
    ]);
  });
});

describe('what stands out beside it', () => {
  const s = '      SUBROUTINE S(K, A)\n      INTEGER*8 K\n      REAL*8 A(*)\n      END\n';
  it.each([
    ['a short integer for a long one', 'S(I, A)', 'stop call-kind'],
    ['a short constant for a long integer', 'S(3, A)', 'stop call-kind'],
    ['a wrong count', 'S(L)', 'stop call-count'],
  ])('%s', async (_, call, expected) => {
    const sources = { 's.f': s, 'c.f': caller('INTEGER I\n      INTEGER*8 L\n      REAL*8 A(3)', call) };
    expect(await check(sources)).toEqual([`c.f:5 ${expected}`]);
  });
});

describe('an output', () => {
  const out = 'subroutine out(x)\n real(8), intent(out) :: x(*)\nend subroutine\n';
  const call = (text: string) =>
    `subroutine c(a, n)\n real(8) :: a(n)\n type(t) :: q\n call out(${text})\nend subroutine\n`;
  it.each(['1.0d0', 'a + 1', '-a', '(a)', '2*a', 'a(1)*a(2)'])('can not be %s', async (text) => {
    expect(await check({ 'out.f90': out, 'c.f90': call(text) })).toEqual(['c.f90:4 stop call-constant-out']);
  });
  it.each(['a', 'a(3)', 'a(n-1)', 'a(1:n)', 'q%a', 'q%list(n+1)%a'])('can be %s', async (text) => {
    expect(await check({ 'out.f90': out, 'c.f90': call(text) })).toEqual([]);
  });
});

describe('COMMON blocks', () => {
  const block = (unit: string, members: string, name = 'BLK') =>
    `      SUBROUTINE ${unit}\n      REAL*8 A, B, C, D, E\n      INTEGER I\n      COMMON /${name}/ ${members}\n      END\n`;
  it('that hold the same names in many ways are one block, and every other way is told', async () => {
    const sources = {
      'a.f': block('SA', 'A, B, C, D'),
      'b.f': block('SB', 'A, B, C, D'),
      'c.f': block('SC', 'B, A, C, D'),
      'd.f': block('SD', 'A, B, D, C'),
      'e.f': block('SE', 'A, B, C'),
    };
    expect(await check(sources)).toEqual([
      'c.f:4 stop common-differs',
      'd.f:4 stop common-differs',
      'e.f:4 caution common-differs',
    ]);
  });

  it('whose name says scratch are scratch', async () => {
    expect(await check({ 'a.f': block('SA', 'A, B', 'SCRNS'), 'b.f': block('SB', 'I', 'SCRNS') })).toEqual([
      'a.f:4 note common-scratch',
    ]);
  });

  it('with a member under a condition fit in either branch', async () => {
    const branched =
      '      SUBROUTINE S\n      REAL*8 A, B, C\n      COMMON /BLK/ A,\n#ifdef WET\n     & B,\n#endif\n     & C\n      END\n';
    expect(await check({ 'a.F': branched, 'b.F': branched.replace(' S\n', ' T\n') })).toEqual([]);
    expect(await check({ 'a.F': branched, 'b.f': block('SB', 'A, C') })).toEqual([]);
    expect(await check({ 'a.F': branched, 'b.f': block('SB', 'C, A') })).toHaveLength(1);
  });
});
