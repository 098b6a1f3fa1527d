import { describe, expect, it } from 'vitest';
import { check } from '../../support/check-sources.ts';

const EOS = `subroutine eos(rho, temp, pres, n)
  real(8), intent(in) :: rho, temp
  real(8), intent(out) :: pres
  integer, intent(in), optional :: n
end subroutine eos
`;
const call = (text: string) =>
  `subroutine caller\n  real(8) :: rho, temp, pres, x\n  real(4) :: single\n  integer(8) :: wide\n  integer :: n\n  ${text}\nend subroutine\n`;

describe('a call that fits', () => {
  it.each([
    ['all arguments', 'call eos(rho, temp, pres, n)'],
    ['an optional one left out', 'call eos(rho, temp, pres)'],
    ['keywords in another order', 'call eos(temp=temp, rho=rho, pres=pres)'],
    ['an expression for an input', 'call eos(2.0d0*rho, temp, pres)'],
    [
      'under a condition, behind a label, after a semicolon',
      'if (n > 0) call eos(rho, temp, pres); call eos(rho, temp, pres)',
    ],
  ])('says nothing: %s', async (_, text) => {
    expect(await check({ 'eos.f90': EOS, 'caller.f90': call(text) })).toEqual([]);
  });
});

describe('a call that does not fit', () => {
  it.each([
    ['too few arguments', 'call eos(rho, temp)', 'stop call-count'],
    ['too many arguments', 'call eos(rho, temp, pres, n, n)', 'stop call-count'],
    ['a keyword that is not taken', 'call eos(rho, temp, pressure=pres)', 'stop call-keyword'],
    ['a constant for an output', 'call eos(rho, temp, 0.0d0)', 'stop call-constant-out'],
    ['an integer of the wrong kind', 'call eos(rho, temp, pres, wide)', 'stop call-kind'],
    ['a real of the wrong kind', 'call eos(single, temp, pres)', 'stop call-kind'],
    ['arguments exchanged', 'call eos(temp, rho, pres)', 'caution call-order'],
    ['a constant of another type', 'call eos(1, temp, pres)', 'caution call-type'],
  ])('is told: %s', async (_, text, expected) => {
    expect(await check({ 'eos.f90': EOS, 'caller.f90': call(text) })).toEqual([`caller.f90:6 ${expected}`]);
  });

  it('is told also where the call stands in another preprocessor branch', async () => {
    const source = call('x = 0\n#ifdef TABLE\n  call eos(rho, temp)\n#else\n  call eos(rho, temp, pres)\n#endif');
    expect(await check({ 'eos.f90': EOS, 'caller.F90': source })).toEqual(['caller.F90:8 stop call-count']);
  });
});

describe('which definition is meant', () => {
  it('is not guessed: with several providers a call is wrong only when it fits none', async () => {
    const other = EOS.replace('rho, temp, pres, n)', 'rho, temp)').replace(/.*(pres|:: n)\n/g, '');
    const sources = { 'eos/a/eos.f90': EOS, 'eos/b/eos.f90': other };
    expect(await check({ ...sources, 'caller.f90': call('call eos(rho, temp)') })).toEqual([]);
    expect(await check({ ...sources, 'caller.f90': call('call eos(rho)') })).toEqual([
      'caller.f90:6 caution call-count',
    ]);
  });

  it('goes by USE, through modules that pass names on, and not by a name in a module out of sight', async () => {
    const module = (name: string, args: string) =>
      `module ${name}\ncontains\nsubroutine eos(${args})\n${args
        .split(',')
        .map((one) => `real(8) :: ${one}\n`)
        .join('')}end subroutine\nend module\n`;
    const sources = {
      'a.f90': module('a', 'x,y'),
      'b.f90': module('b', 'x'),
      'c.f90': 'module c\n use a\nend module\n',
    };
    const use = (name: string) => `subroutine caller\n use ${name}\n real(8) :: x\n call eos(x)\nend subroutine\n`;
    expect(await check({ ...sources, 'caller.f90': use('b') })).toEqual([]);
    expect(await check({ ...sources, 'caller.f90': use('c') })).toEqual(['caller.f90:4 stop call-count']);
    expect(
      await check({
        'a.f90': module('a', 'x,y'),
        'caller.f90': 'subroutine caller\n real(8) :: x\n call eos(x)\nend subroutine\n',
      }),
    ).toEqual([]);
  });

  it('takes every specific procedure of a generic name', async () => {
    const generic = `module m\ninterface eos\n module procedure one, two\nend interface\ncontains\nsubroutine one(a)\nreal(8) :: a\nend subroutine\nsubroutine two(a, b)\nreal(8) :: a, b\nend subroutine\nend module\n`;
    const caller = (args: string) =>
      `subroutine caller\n use m\n real(8) :: a, b\n call eos(${args})\nend subroutine\n`;
    expect(await check({ 'm.f90': generic, 'caller.f90': caller('a, b') })).toEqual([]);
    expect(await check({ 'm.f90': generic, 'caller.f90': caller('a, b, a') })).toEqual([
      'caller.f90:4 caution call-count',
    ]);
  });

  it('leaves a dummy procedure to whoever passes it', async () => {
    const source = 'subroutine caller(eos)\n external eos\n call eos(1)\nend subroutine\n';
    expect(await check({ 'eos.f90': EOS, 'caller.f90': source })).toEqual([]);
  });
});

describe('kinds', () => {
  it('are resolved through USE, with renames', async () => {
    const kinds = 'module kinds\n integer, parameter :: dp = selected_real_kind(15, 307)\nend module\n';
    const eos = 'subroutine eos(rho)\n use kinds, only: wp => dp\n real(wp), intent(in) :: rho\nend subroutine\n';
    const caller = (type: string) => `subroutine caller\n ${type} :: rho\n call eos(rho)\nend subroutine\n`;
    expect(await check({ 'k.f90': kinds, 'eos.f90': eos, 'caller.f90': caller('real(8)') })).toEqual([]);
    expect(await check({ 'k.f90': kinds, 'eos.f90': eos, 'caller.f90': caller('real(4)') })).toEqual([
      'caller.f90:3 stop call-kind',
    ]);
  });

  it('of a declared default are the build’s to say: a note unless the assembly tells', async () => {
    const sources = {
      'eos.f90': EOS,
      'caller.f90': 'subroutine caller\n real :: rho, temp, pres\n call eos(rho, temp, pres)\nend subroutine\n',
    };
    expect(await check(sources)).toEqual(['caller.f90:3 note call-kind']);
  });
});

describe('COMMON blocks', () => {
  const block = (members: string) =>
    `      SUBROUTINE S${members.length}${members[0]}\n      REAL*8 A, B, C\n      INTEGER I\n      COMMON /BLK/ ${members}\n      END\n`;
  it.each([
    ['the same', 'A, B, C', 'A, B, C', []],
    ['members in another order', 'A, B, C', 'B, A, C', ['two.f:4 stop common-differs']],
    ['a member of another type in its place', 'A, B, C', 'I, B, C', ['two.f:4 caution common-differs']],
    ['a member more', 'A, B', 'A, B, C', ['two.f:4 caution common-differs']],
  ])('%s', async (_, one, two, expected) => {
    expect(await check({ 'one.f': block(one), 'two.f': block(two) })).toEqual(expected);
  });

  it('that differ everywhere are scratch storage, told once', async () => {
    const sources = Object.fromEntries(
      ['A', 'B, I', 'C, A, B', 'I', 'I, A'].map((members, index) => [`f${index}.f`, block(members)]),
    );
    expect((await check(sources)).map((one) => one.replace(/^\S+ /, ''))).toEqual(['note common-scratch']);
  });
});

describe('prototypes and interface blocks', () => {
  it('are held against the definition', async () => {
    const declared =
      'subroutine caller\n interface\n  subroutine eos(rho, temp)\n   real(8) :: rho, temp\n  end subroutine\n end interface\nend subroutine\n';
    expect(await check({ 'eos.f90': EOS, 'caller.f90': declared })).toEqual(['caller.f90:3 caution prototype-differs']);
  });
});

describe('Fortran against C', () => {
  it('counts the hidden length of each character argument', async () => {
    const c = 'void open_file_(char *name, int *unit, int length) { }\n';
    const caller = (args: string) =>
      `      SUBROUTINE CALLER\n      CHARACTER*8 NAME\n      INTEGER U\n      CALL OPEN_FILE(${args})\n      END\n`;
    expect(await check({ 'io.c': c, 'caller.f': caller('NAME, U') })).toEqual([]);
    expect(await check({ 'io.c': c, 'caller.f': caller('NAME') })).toEqual(['caller.f:4 stop call-count']);
  });
});

describe('TypeScript', () => {
  it('finds arguments exchanged in a call that compiles', async () => {
    const sources = {
      'cool.ts': 'export function cool(rho: number, temp: number): number { return rho * temp; }\n',
      'run.ts':
        "import { cool } from './cool.ts';\nexport function run(rho: number, temp: number) { return cool(temp, rho); }\n",
    };
    expect(await check(sources)).toEqual(['run.ts:2 caution call-order']);
  });
});
