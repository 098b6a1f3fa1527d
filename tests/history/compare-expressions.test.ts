import { describe, expect, it } from 'vitest';
import { compareSides } from '../../src/history/compare-interfaces.ts';
import { contentOf } from '../../src/history/file-content.ts';
import { sameUnit } from '../../src/history/same-unit.ts';

const changes = async (path: string, before: string, after: string) => {
  const bytes = (text: string) => new TextEncoder().encode(text);
  const [b, a] = [await contentOf(path, bytes(before)), await contentOf(path, bytes(after))];
  return compareSides([b.besides(a)], [a.besides(b)], sameUnit)
    .filter(({ kind }) => kind !== 'implementation')
    .map(({ kind, says }) => `${kind}: ${says}`);
};
const fortran = (...lines: string[]) => `subroutine heat(n, t, q)
  integer, intent(in) :: n
  real(8), intent(in) :: t(n)
  real(8), intent(out) :: q(n)
  real(8) :: area, volume, flux, power, up, down
${lines.map((line) => `  ${line}`).join('\n')}
end subroutine heat
`;
const c = (...lines: string[]) =>
  `double heat(double t, double rho) {\n${lines.map((line) => `  ${line}`).join('\n')}\n}\n`;
const python = (...lines: string[]) => `def heat(t, rho):\n${lines.map((line) => `    ${line}`).join('\n')}\n`;

const FORTRAN: [string, string, string, string[]][] = [
  [
    'a unit factor gained',
    'flux = power/area',
    'flux = 1.0d-3*power/area',
    ['expression-factor: in heat flux has gained the factor 1.0d-3 *'],
  ],
  [
    'a factor lost',
    'flux = power*area',
    'flux = power',
    ['expression-factor: in heat flux has lost the factor * area'],
  ],
  [
    'multiplied for divided',
    'flux = power/1000.',
    'flux = power*1000.',
    ['expression-factor: in heat flux is multiplied by 1000., was the other way round'],
  ],
  [
    'a factor of another power of ten',
    'flux = power*1.d3',
    'flux = power*1.d-3',
    ['expression-factor: in heat a factor in flux is 1.d-3, was 1.d3, a power of ten: 1e-6'],
  ],
  [
    'a term of the other sign',
    'q(1) = up - down',
    'q(1) = up + down',
    ['expression-sign: in heat a term at down in q(1) has the other sign'],
  ],
  ['a term gained', 'power = flux', 'power = flux + t(1)', ['expression-changed: in heat power has gained + t(1)']],
  [
    'min for max',
    'up = max(down, 1.4d10)',
    'up = min(down, 1.4d10)',
    ['expression-changed: in heat up has min where it had max'],
  ],
  [
    'arguments exchanged at a call',
    'call mix(up, down, n)',
    'call mix(down, up, n)',
    ['expression-order: in heat down and up have changed places in the call of mix'],
  ],
  [
    'scaling in place behind a condition',
    'up = 1d0',
    'up = 1d0\n  if (n > 2) flux = flux*area',
    ['expression-factor: in heat flux is scaled by area, was not'],
  ],
  [
    'storage in another COMMON block',
    'common /work1/ scratch(100)',
    'common /work2/ scratch(100)',
    ['common-layout: in heat scratch lies in COMMON /work2/, lay in /work1/'],
  ],
  [
    'a literal taken for a name',
    'flux = 4.6d0*power',
    'flux = area*power',
    ['expression-changed: in heat flux has area where it had 4.6d0'],
  ],
  [
    'a unit in a message',
    "write(*,*) 'depth is ', n, ' hPa above'",
    "write(*,*) 'depth is ', n, ' Pa above'",
    ['unit-changed: in heat the unit in a text is Pa, was hPa'],
  ],
];

/** What looks alike and computes the same. */
const HARMLESS: [string, string, string, string][] = [
  ['heat.f90', 'keywords in another order', fortran('call mix(a=up, b=down)'), fortran('call mix(b=down, a=up)')],
  ['heat.f90', 'a literal spelled otherwise', fortran('flux = 1*power'), fortran('flux = 1._8*power')],
  ['heat.f90', 'a statement wrapped', fortran('flux = power*area'), fortran('flux = power* & ! as before', '  area')],
  ['heat.f90', 'a comment on a factor', fortran('flux = power*1000. ! to W'), fortran('flux = power*1000. ! to kW')],
  [
    'heat.f90',
    'a local renamed everywhere',
    fortran('up = area', 'flux = power*up'),
    fortran('gain = area', 'flux = power*gain'),
  ],
  ['heat.f90', 'max of two in another order', fortran('flux = max(up, down)'), fortran('flux = max(down, up)')],
  ['heat.f90', 'another neighbour', fortran('flux = t(n-1)'), fortran('flux = t(n+1)')],
  ['heat.f90', 'statements in another order', fortran('up = 1d0', 'down = 2d0'), fortran('down = 2d0', 'up = 1d0')],
  ['heat.f90', 'a message reworded', fortran("write(*,*) 'too hot'"), fortran("write(*,*) 'too warm'")],
  ['heat.c', 'parentheses set', c('return t * rho * 2.0;'), c('return (t * rho) * 2.0;')],
  ['heat.c', 'a comment moved', c('return t / 3.0; // a third'), c('// a third', 'return t / 3.0;')],
  ['heat.f90', 'division written as multiplication', fortran('flux = power/100.'), fortran('flux = power*0.01')],
  ['heat.c', 'another pointer declared', c('Packet *first;'), c('Packet *first, *last;')],
  ['heat.py', 'a docstring', python('return t * rho'), python('"""Heat * 1000."""', 'return t * rho')],
];

describe('compareExpressions', () => {
  it.each(FORTRAN)('tells %s', async (_, before, after, expected) => {
    expect(await changes('heat.f90', fortran(before), fortran(after))).toEqual(expected);
  });

  it.each(HARMLESS)('in %s is silent on %s', async (path, _, before, after) => {
    expect(await changes(path, before, after)).toEqual([]);
  });

  it('tells a logarithm, an exchanged comparison and a named unit in C', async () => {
    expect(await changes('heat.c', c('return t / rho;'), c('return log10(t / rho);'))).toEqual([
      'expression-changed: in heat the result is taken through log10, was not',
    ]);
    expect(await changes('heat.c', c('double x = t > rho ? t : rho;'), c('double x = t < rho ? t : rho;'))).toEqual([
      'expression-changed: in heat x has < where it had >',
    ]);
    expect(await changes('heat.c', c('put("t", UNIT_CONV_NO_UNITS, t);'), c('put("t", UNIT_CONV_TIME, t);'))).toEqual([
      'unit-changed: in heat the unit in a text is UNIT_CONV_TIME, was UNIT_CONV_NO_UNITS',
    ]);
  });

  it('tells names unpacked in another order, keys and labels in Python, in scripts too', async () => {
    expect(await changes('run.py', 'rho, vs, vp = speeds(p, t)\n', 'rho, vp, vs = speeds(p, t)\n')).toEqual([
      'expression-order: in run.py vp and vs have changed places in rho,vp,vs',
    ]);
    expect(await changes('heat.py', python('return state("D", rho)'), python('return state("Dmolar", rho)'))).toEqual([
      'expression-changed: in heat the result names "Dmolar", named "D"',
    ]);
    expect(await changes('run.py', 'plt.ylabel("density (kg/m^3)")\n', 'plt.ylabel("density (g/cm^3)")\n')).toEqual([
      'unit-changed: in run.py the unit in a text is g/cm^3, was kg/m^3',
    ]);
    expect(await changes('run.py', 'plt.ylabel("density (kg/m^3)")\n', 'plt.ylabel("density (kg m^-3)")\n')).toEqual(
      [],
    );
  });

  it('tells two cases whose settings were exchanged, and names exchanged far apart in one expression', async () => {
    const cases = (one: string, two: string) =>
      fortran('select case (n)', 'case (1)', one, 'case (2)', two, 'end select');
    expect(
      await changes(
        'heat.f90',
        cases('flux = flux*area', 'flux = flux*area*up'),
        cases('flux = flux*area*up', 'flux = flux*area'),
      ),
    ).toEqual(['expression-order: in heat the ways in which flux is set have changed places']);
    expect(
      await changes('heat.f90', fortran('flux = up*t(1) + down*t(2)'), fortran('flux = down*t(1) + up*t(2)')),
    ).toEqual(['expression-order: in heat down and up have changed places in flux']);
    expect(await changes('heat.f90', fortran('flux = up*down'), fortran('flux = down*up'))).toEqual([]);
  });

  it('says once what happens several times in a procedure', async () => {
    const before = c('double a = t / 1000.0;', 'double b = rho / 1000.0;', 'return a + b;');
    expect(await changes('heat.c', before, before.replaceAll('1000.0', '100.0'))).toEqual([
      'expression-factor: in heat a factor in a is 100.0, was 1000.0, a power of ten: 0.1, and 1 more of the kind',
    ]);
  });

  it('tells a constant that is now taken from elsewhere, but not one that nobody names any more', async () => {
    const text = (head: string, body: string) =>
      `module ice\n${head}\ncontains\nsubroutine s(x)\nreal(8) :: x\n${body}\nend subroutine\nend module\n`;
    const before = text('real(8), parameter :: boltz = 1.38d-23', 'x = boltz');
    expect(await changes('ice.f90', before, text('', 'x = boltz'))).toEqual([
      'constant-value: constant boltz, 1.38d-23, is no longer set here but still used: another place gives its value',
    ]);
    expect((await changes('ice.f90', before, text('', 'x = 0d0'))).filter((one) => one.startsWith('constant'))).toEqual(
      [],
    );
  });

  it('tells a suffix that gives a constant its digits', async () => {
    const text = (value: string) =>
      `module m\ninteger, parameter :: wp = 8\nreal(wp), parameter :: scale = ${value}\nend module\n`;
    expect(await changes('m.f90', text('0.01'), text('0.01_wp'))).toEqual([
      'literal-kind: the value of scale, 0.01_wp, is in double precision, was in single',
    ]);
    expect(await changes('m.f90', text('0.5'), text('0.5_wp'))).toEqual([]);
  });
});
