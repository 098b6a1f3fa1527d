import { describe, expect, it } from 'vitest';
import { check } from '../../support/check-sources.ts';

const EOS = `subroutine eos(rho, temp, n)
  real(8), intent(in) :: rho  ! density [g/cm3]
  real(8), intent(in) :: temp ! temperature [K]
  integer, intent(in) :: n
end subroutine
`;
const caller = (density: string, call: string) =>
  `subroutine run(n)\n  real(8) :: dens  ! density [${density}]\n  real(8) :: t  ! temperature [K]\n  integer :: n\n  ${call}\nend subroutine\n`;

describe('what is said of a unit at the call and at the definition', () => {
  it.each([
    ['agrees', 'g/cm3', 'call eos(dens, t, n)'],
    ['agrees in another spelling', 'g cm^-3', 'call eos(dens, t, n)'],
    ['differs, and the call converts', 'kg/m3', 'call eos(dens*1.0d-3, t, n)'],
    ['agrees, and a physical factor is applied', 'g/cm3', 'call eos(2.0d0*dens, t, n)'],
    ['agrees, and an expression is passed', 'g/cm3', 'call eos(dens + t, t, n)'],
    ['is no unit', 'see below', 'call eos(dens, t, n)'],
  ])('says nothing where it %s', async (_, unit, call) => {
    expect(await check({ 'eos.f90': EOS, 'run.f90': caller(unit, call) })).toEqual([]);
  });

  it.each([
    ['never converted', 'kg/m3', 'call eos(dens, t, n)'],
    ['never converted, by keyword', 'kg/m3', 'call eos(temp=t, rho=dens, n=n)'],
    ['converted twice', 'g/cm3', 'call eos(dens*1.0d-3, t, n)'],
    ['converted twice, by an offset', 'g/cm3', 'call eos(dens, t + 273.15d0, n)'],
  ])('is told where a value is %s', async (_, unit, call) => {
    expect(await check({ 'eos.f90': EOS, 'run.f90': caller(unit, call) })).toEqual(['run.f90:5 caution call-claim']);
  });

  it('says nothing where the build chooses the definition', async () => {
    const sources = { 'a/eos.f90': EOS, 'b/eos.f90': EOS.replace('g/cm3', 'kg/m3') };
    expect(await check({ ...sources, 'run.f90': caller('kg/m3', 'call eos(dens, t, n)') })).toEqual([]);
  });
});

describe('a tuple of Python', () => {
  const eos = 'def eos(rho, temp):\n    pres, ener = rho, temp\n    return pres, ener\n\n';
  it.each([
    ['in the order of the return', 'pres, ener = eos(1, 2)', []],
    ['into other names', 'a, b = eos(1, 2)', []],
    ['into one of the names and another', 'ener, x = eos(1, 2)', []],
    ['in another order', 'ener, pres = eos(1, 2)', ['run.py:6 caution result-order']],
  ])('unpacked %s', async (_, line, expected) => {
    expect(await check({ 'run.py': `${eos}def run():\n    ${line}\n` })).toEqual(expected);
  });
});
