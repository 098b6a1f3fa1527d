import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { FileInterface } from '../../../src/model/interface.ts';
import { fortranUnits } from '../../../src/readers/fortran/cut-units.ts';
import { joinFortranUnits } from '../../../src/readers/fortran/join-units.ts';
import { readFortran, readFortranUnit } from '../../../src/readers/fortran/read-fortran.ts';

/** Pieces that real files are made of, put together without sense: most of what goes wrong needs a beginning of something. */
const PIECES = [
  '      subroutine s(a, b)',
  '      real function f(x)',
  'subroutine t(a, &',
  '  b) bind(c, name="x")',
  'module m',
  'contains',
  'interface',
  'abstract interface',
  'end interface',
  'type, extends(b) :: t',
  'end type',
  'end module',
  '      end',
  'end subroutine',
  '#ifdef A',
  '#else',
  '#elif defined(B) && (C > 2',
  '#endif',
  '#define N 3 \\',
  '      include "SIZE"',
  '     & , c(1:n), d*8)',
  '\tinteger x',
  '\t1 , y',
  '      common /blk/ a(2), b // c',
  '      parameter (n = 2**3, m = n/0, k = -(1))',
  '      character*(*) c*8',
  '      data x /3hab(, 2*1.d0/',
  '      implicit real*8 (a-h, o-z)',
  '      x(1) = f(g(2), (/ 1, 2 /)) + 2/3 + 1.e-3_dp',
  `      call a%b(1)%c("it''s", *10, k=v)`,
  '      if (a) call b(c',
  'use m, only: a => b, operator(+)',
  "print *, 'open",
  '! rho :: density [g/cm3] in K (m)',
  '!! more [',
  '10 format(1x, 5hcall)',
  'enum, bind(c); enumerator :: r = 1, g; end enum',
  'submodule (a:b) c',
  'module procedure p',
  'entry e(a, *)',
  'é°µ [Å]',
  '',
];

const anyBytes = fc.uint8Array({ maxLength: 400 });
const anyText = fc
  .array(
    fc.oneof(fc.constantFrom(...PIECES), fc.constantFrom('(', ')', "'", '"', '&', ';', '=', '%', '/', '!', ',', '\r')),
    {
      maxLength: 40,
    },
  )
  .chain((pieces) => fc.constantFrom('\n', '\n', '\n', '', '\r\n', ' ').map((glue) => pieces.join(glue)))
  .map((text) => new TextEncoder().encode(text));
/** A well-formed beginning with some bytes overwritten. */
const damaged = fc
  .tuple(anyText, fc.array(fc.tuple(fc.nat(2000), fc.nat(255)), { maxLength: 6 }))
  .map(([bytes, damage]) => {
    const copy = Uint8Array.from(bytes);
    for (const [at, byte] of damage) if (at < copy.length) copy[at] = byte;
    return copy;
  });

const RUNS = 700;

function places(file: FileInterface): number[] {
  return [
    ...file.procedures.flatMap((one) => [one.line, one.endLine, ...one.args.map(({ line }) => line)]),
    ...file.commons.flatMap((one) => [one.line, ...one.members.map(({ line }) => line)]),
    ...file.calls.flatMap((one) => [one.line, ...one.args.map(({ line }) => line)]),
    ...[...file.variables, ...file.constants, ...file.claims, ...file.literals, ...file.incomplete].map(
      ({ line }) => line,
    ),
  ];
}

describe.each(['a.f', 'a.f90', 'a.F90', 'SIZE'])('any bytes in %s', (path) => {
  it('give a reading whose places are in the file, and the same one unit by unit', () => {
    fc.assert(
      fc.property(fc.oneof(anyText, damaged, anyBytes), (bytes) => {
        const file = readFortran(path, bytes);
        const lines = bytes.reduce((count, byte) => count + (byte === 10 ? 1 : 0), 1);
        for (const line of places(file)) expect(line).toSatisfy((one: number) => one >= 1 && one <= lines);
        if (bytes.includes(0)) return;
        const units = fortranUnits(path, bytes);
        const readings = units.map((unit) => readFortranUnit(path, bytes, unit));
        expect(joinFortranUnits(units, readings)).toEqual(file);
      }),
      { numRuns: RUNS },
    );
  });

  it('are read with names given and with files that include themselves', () => {
    fc.assert(
      fc.property(
        damaged,
        fc.dictionary(fc.constantFrom('A', 'B', 'C'), fc.constantFrom('', '1', 'x')),
        (bytes, define) => {
          expect(readFortran(path, bytes, { define, include: () => bytes }).language).toBe('fortran');
        },
      ),
      { numRuns: RUNS / 4 },
    );
  });
});

describe('large files', () => {
  const large = (line: (index: number) => string, size: number, head = '      subroutine s\n') => {
    let text = head;
    for (let index = 0; text.length < size; index++) text += line(index);
    return new TextEncoder().encode(`${text}      end\n`);
  };

  it('of 200,000 lines are read to their end', () => {
    const file = readFortran(
      'a.f',
      large((index) => `      x(${index % 9}) = f(y) + 0.1\n`, 24 * 200_000),
    );
    expect(file.calls.length).toBeGreaterThan(199_000);
    expect(file.incomplete).toEqual([]);
  });

  it('keep what they show of calls inside calls short', () => {
    const depth = 20_000;
    const file = readFortran(
      'a.f90',
      new TextEncoder().encode(`subroutine s\ncall f(${'g(h, '.repeat(depth)}1${')'.repeat(depth)})\nend\n`),
    );
    expect(file.calls).toHaveLength(depth + 1);
    expect(Math.max(...file.calls.flatMap(({ args }) => args.map(({ text }) => text.length)))).toBeLessThanOrEqual(200);
  });
});
