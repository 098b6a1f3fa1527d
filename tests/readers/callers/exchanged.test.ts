import { describe, expect, it } from 'vitest';
import { check } from '../../support/check-sources.ts';

/** A definition and one caller a call, each a subroutine of its own. */
function sources(signature: string, ...calls: string[]): Record<string, string> {
  const names = (text: string) => text.replace(/\(.*?\)(?=[,)])/g, '').match(/[a-z]\w*/g) ?? [];
  const declare = (all: string[]) => `real(8) :: ${[...new Set(all)].join(', ')}\n`;
  const made: Record<string, string> = {
    'f.f90': `subroutine f(${signature})\n${declare(names(signature))}end subroutine\n`,
  };
  for (const [index, call] of calls.entries())
    made[`c${index}.f90`] = `subroutine c${index}\n${declare(names(call))}call f(${call})\nend subroutine\n`;
  return made;
}

describe('two arguments of one type', () => {
  it.each([
    ['by the names of the definition', sources('rho, temp, pres', 'temp, rho, pres')],
    ['with a letter or two more', sources('rho, temp', 'temp0, rhoi')],
    ['by the name of one and what others pass for the other', sources('h, pmass', 'pmass, hsml', 'hsml, m', 'hsml, x')],
    [
      'by what all others pass, where the definition has names that say nothing',
      sources('a, b', 'temp, rho', 'rho, temp', 'rho, temp', 'rho, temp'),
    ],
  ])('look exchanged: %s', async (_, given) => {
    expect(await check(given)).toEqual(['c0.f90:3 caution call-order']);
  });

  it.each([
    ['in order', sources('rho, temp', 'rho, temp')],
    ['one name that fits and one that does not', sources('rho, temp', 'temp, x')],
    ['counterparts: the other way round is asked for', sources('nsend, nrecv', 'nrecv, nsend')],
    ['names that differ in one letter', sources('ci, cj', 'cj, ci')],
    ['leading dimensions that follow their arrays', sources('a, lda, b, ldb', 'b, ldb, a, lda')],
    ['a group that changes sides', sources('urho, utemp, vrho, vtemp', 'utemp, urho, vtemp, vrho')],
    [
      'arguments of a procedure that is given anything',
      sources('a, b', 'temp, rho', 'rho, temp', 'rho, temp', 'p, q', 'r, s', 't, u', 'v, w', 'x, y'),
    ],
    ['a name that others pass for both', sources('h, pmass', 'pmass, hsml', 'hsml, m', 'pmass, m', 'hsml, x')],
  ])('are left alone: %s', async (_, given) => {
    expect(await check(given)).toEqual([]);
  });

  it('are left alone where they are of two kinds: the kinds tell', async () => {
    const given = sources('rho, temp', 'temp, rho');
    given['f.f90'] = 'subroutine f(rho, temp)\nreal(8) :: rho\nreal(4) :: temp\nend subroutine\n';
    expect(await check(given)).toEqual(['c0.f90:3 stop call-kind']);
  });
});
