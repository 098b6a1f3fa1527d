import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { procedureBody, RUN_TOKENS, similarity, WINDOW_RUNS, winnow } from '../../src/history/fingerprint.ts';

const FIXED = `      SUBROUTINE BURN(RHO,TEMP,EPS)
C     ENERGY RELEASE
      REAL*8 RHO,TEMP,EPS,T9
      T9 = TEMP/1.0D9
      IF (T9 .GT. 10.0D0) T9 = 10.0D0
      DO 10 I = 1, 4
        EPS = EPS + RHO*T9**(-2.0D0/3.0D0)
     1      *EXP(-3.380D0/T9**0.333D0)
10    CONTINUE
      RETURN
      END`;
/** The same in free form, lower case, other names, another layout. */
const FREE = `subroutine ignite(d, t, q)   ! energy
  real*8 d, t, q, x
  x = t / 1.0_8
  x = t/1.0d9
  if (x > 10.) x = 10.
  do 10 k = 1, 4
    q = q + d*x**(-2.d0/3.d0) &
      * exp(-3.38d0/x**0.333d0)
10 continue
  return
end`.replace('  x = t / 1.0_8\n', '');

describe('procedure fingerprints', () => {
  it('are the same through another source form, layout, case, comments, number spelling and names of variables', () => {
    const fixed = procedureBody('burn', FIXED, 'fortran', 'fixed');
    const free = procedureBody('ignite', FREE, 'fortran', 'free');
    expect(similarity(fixed.prints, free.prints)).toBeGreaterThan(0.9);
    expect(fixed.hash).not.toBe(free.hash);
  });

  it('keep one exact hash through comments, white space and keyword lines, and lose it with a value', () => {
    const plain = procedureBody('burn', FIXED, 'fortran', 'fixed').hash;
    const laid = FIXED.replace('C     ENERGY RELEASE', 'C $Id: burn.f 12 $\n*     more words')
      .replaceAll('      T9', '         T9')
      .toLowerCase();
    expect(procedureBody('burn', laid, 'fortran', 'fixed').hash).toBe(plain);
    expect(procedureBody('burn', FIXED.replace('3.380D0', '3.381D0'), 'fortran', 'fixed').hash).not.toBe(plain);
  });

  it('find every copy of the guaranteed length, wherever it stands (Schleimer, Wilkerson & Aiken 2003, section 3)', () => {
    const symbol = fc.integer({ min: 0, max: 1_000 });
    const guaranteed = RUN_TOKENS + WINDOW_RUNS - 1;
    fc.assert(
      fc.property(
        fc.array(symbol, { maxLength: 60 }),
        fc.array(symbol, { minLength: guaranteed, maxLength: 60 }),
        fc.array(symbol, { maxLength: 60 }),
        (before, copy, after) => {
          const prints = new Set(winnow([...before, ...copy, ...after]));
          expect(winnow(copy).some((print) => prints.has(print))).toBe(true);
        },
      ),
    );
  });

  it('find nothing in common between texts without a common run', () => {
    const text = (seed: number) => Array.from({ length: 200 }, (_, at) => seed + ((at * 7919) % 997));
    expect(similarity(winnow(text(1)), winnow(text(100_000)))).toBe(0);
  });
});
