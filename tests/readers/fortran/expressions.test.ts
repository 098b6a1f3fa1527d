import { describe, expect, it } from 'vitest';
import type { Expression } from '../../../src/model/expression.ts';
import { fortranUnits } from '../../../src/readers/fortran/cut-units.ts';
import { joinFortranUnits } from '../../../src/readers/fortran/join-units.ts';
import { readFortran, readFortranUnit } from '../../../src/readers/fortran/read-fortran.ts';

const bytes = (text: string) => new TextEncoder().encode(text);

/** With every operation in parentheses, so that what binds to what can be seen. */
function shown({ kind, value, parts }: Expression): string {
  const inner = parts.map(shown);
  switch (kind) {
    case 'binary':
      return `(${inner[0]} ${value} ${inner[1]})`;
    case 'unary':
      return `(${value} ${inner[0]})`;
    case 'indexed':
      return `${inner[0]}{${inner.slice(1).join(', ')}}`;
    case 'component':
      return `${inner[0]}%${value}`;
    case 'array':
      return `[${inner.join(', ')}]`;
    case 'complex':
      return `<${inner.join(', ')}>`;
    case 'section':
      return inner.join(':');
    case 'keyword':
      return `${value}=${inner[0]}`;
    case 'text':
      return `"${value}"`;
    default:
      return value;
  }
}

function value(expression: string, form: 'fixed' | 'free' = 'free'): string {
  const head = form === 'free' ? '' : '      ';
  const text = `${head}subroutine s\n${head}r = ${expression}\n${head}end\n`;
  const file = readFortran('a', bytes(text), { form, expressionsOf: ['s'] });
  return shown(file.statements![0]!.parts[1]!);
}

// Precedence: Fortran 2018 (ISO/IEC 1539-1:2018), table 10.1 and 10.1.2.
describe('expressions', () => {
  it.each([
    ['a + b*c', '(a + (b * c))'],
    ['a - b - c', '((a - b) - c)'],
    ['-a**2', '(- (a ** 2))'],
    ['-a*b + c', '((- (a * b)) + c)'],
    ['a**b**c', '(a ** (b ** c))'],
    ['a/b*c', '((a / b) * c)'],
    ['.not. a .and. b .or. c', '(((.not. a) .and. b) .or. c)'],
    ['a + 1 .gt. b .eqv. c', '(((a + 1) > b) .eqv. c)'],
    ["'a' // b == 'c'", '(("a" // b) == "c")'],
    ['(a + b)*c', '((a + b) * c)'],
    ['1.eq.n', '(1 == n)'],
    ['2.5d-3_dp * x(i, 2:n, :)', '(2.5d-3_dp * x{i, 2:n, :})'],
    ['s%eos(3)%rho(i) / f(x, key=y)', '(s%eos{3}%rho{i} / f{x, key=y})'],
    ['(/ 1, 2 /) + [a, b]', '([1, 2] + [a, b])'],
    ['(1., -2.)', '<1., (- 2.)>'],
    ['a .cross. b + c', '(a .cross. (b + c))'],
    ['.true. .or. x /= y', '(.true. .or. (x /= y))'],
  ])('%s binds as the standard says', (text, expected) => {
    expect(value(text)).toBe(expected);
    expect(value(text, 'fixed').replaceAll(' ', '')).toBe(expected.replaceAll(' ', ''));
  });

  it('that can not be read are given as text', () => {
    expect(value('a +* b')).toBe('a +* b');
    expect(value(`${'('.repeat(200)}a${')'.repeat(200)}`)).toHaveLength(200);
  });

  it('come with positions, for the procedures asked about only, unit by unit too', () => {
    const text = `subroutine one
  a = b
end
subroutine two(p)
  if (p > 0. .and. &
      ready(p)) call use(p*2., &
    q)
  do while (p < 1)
  end do
end
`;
    const options = { expressionsOf: ['two'] };
    const file = readFortran('a.f90', bytes(text), options);
    expect(
      file.statements!.map(({ kind, procedure, line, parts }) => [kind, procedure, line, parts.map(shown).join(' = ')]),
    ).toEqual([
      ['condition', 'two', 5, '((p > 0.) .and. ready{p})'],
      ['call', 'two', 6, 'use{(p * 2.), q}'],
      ['condition', 'two', 8, '(p < 1)'],
    ]);
    expect(file.statements![1]!.parts[0]!.parts[2]).toMatchObject({ value: 'q', line: 7, column: 5 });
    const units = fortranUnits('a.f90', bytes(text));
    expect(
      joinFortranUnits(
        units,
        units.map((unit) => readFortranUnit('a.f90', bytes(text), unit, options)),
      ),
    ).toEqual(file);
    expect(readFortran('a.f90', bytes(text)).statements).toBeUndefined();
  });
});

describe('values that the build gives by name', () => {
  it('count in bounds and constants, as macros of the file do', () => {
    const text = '#define NY 4\nsubroutine s(a)\n  integer, parameter :: nx = NXGLOB/2\n  real :: a(nx, NY)\nend\n';
    expect(readFortran('a.F90', bytes(text), { define: { NXGLOB: '10' } }).procedures[0]!.args[0]!.shape).toEqual([
      5, 4,
    ]);
    expect(readFortran('a.F90', bytes(text)).procedures[0]!.args[0]!.shape).toEqual([null, 4]);
  });
});
