import { describe, expect, it } from 'vitest';
import { fortranUnits } from '../../../src/readers/fortran/cut-units.ts';
import { joinFortranUnits } from '../../../src/readers/fortran/join-units.ts';
import { readFortran, readFortranUnit } from '../../../src/readers/fortran/read-fortran.ts';

const bytes = (text: string) => new TextEncoder().encode(text);

function joined(path: string, text: string, define?: Record<string, string>) {
  const options = define === undefined ? {} : { define };
  const source = bytes(text);
  const units = fortranUnits(path, source);
  const readings = units.map((unit) => readFortranUnit(path, source, unit, options));
  return { units, file: joinFortranUnits(units, readings), whole: readFortran(path, source, options) };
}

const FILE = `! of the first
subroutine one(a)   ! one [K]
  real :: a
  call two(a, 1)
end subroutine

! of the second
#ifdef MPI
subroutine two(b, n)
  real :: b
  integer :: n
end subroutine two
#else
subroutine two(b)
  real :: b
end subroutine two
#endif
module m
  implicit none
  interface
    subroutine outside(x)
      real :: x
    end subroutine
  end interface
contains
  pure &
  real function inner(y)
    real, intent(in) :: y
    inner = y * 0.1
  end function
end module
`;

describe('the top-level units of a Fortran file', () => {
  it('are cut behind each END, comments above going with what they stand above', () => {
    const { units } = joined('a.f90', FILE);
    const lines = FILE.split('\n');
    expect(units.map(({ line }) => lines[line - 1])).toEqual(['! of the first', '', '#else', '#endif']);
  });

  it('are all bytes of the file, without gaps', () => {
    const { units } = joined('a.f90', FILE);
    expect(units[0]!.from).toBe(0);
    expect(units.at(-1)!.to).toBe(bytes(FILE).length);
    for (let at = 1; at < units.length; at++) expect(units[at]!.from).toBe(units[at - 1]!.to);
  });

  it('read one by one and joined are the reading of the file', () => {
    const { file, whole } = joined('a.f90', FILE);
    expect(file).toEqual(whole);
    expect(whole.procedures.map(({ name, condition }) => [name, condition])).toEqual([
      ['one', undefined],
      ['two', 'defined(MPI)'],
      ['two', '!defined(MPI)'],
      ['outside', undefined],
      ['inner', undefined],
    ]);
  });

  it('know the branch that they stand in and the macros defined above', () => {
    const text = `#define LOCAL 1
subroutine a
end
#if LOCAL
subroutine b(x)
end
#else
subroutine b(x, y)
end
#endif
`;
    const { file, whole } = joined('a.f90', text, {});
    expect(file).toEqual(whole);
    expect(whole.procedures.map(({ name, args }) => `${name}/${args.length}`)).toEqual(['a/0', 'b/1']);
  });

  it('have the same id wherever they stand in a file, and another one in another branch or form', () => {
    const unit = '      subroutine x(a)\n      end\n';
    const other = '      subroutine y\n      end\n';
    const first = fortranUnits('a.f', bytes(unit + other));
    const second = fortranUnits('b.f', bytes(`      subroutine z\n      end\n${unit}${other}`));
    expect(second.slice(1).map(({ id }) => id)).toEqual(first.map(({ id }) => id));
    expect(second[1]!.line).toBe(3);
    const branch = fortranUnits('c.f', bytes(`#ifdef Q\n      subroutine z\n      end\n${unit}#endif\n`));
    expect(branch.map(({ id }) => id)).not.toContain(first[0]!.id);
    expect(fortranUnits('a.f90', bytes(unit), { form: 'free' })[0]!.id).not.toBe(first[0]!.id);
  });

  it('are not cut inside a body whose ENDs stand in branches', () => {
    const text = `subroutine x(a)
#ifdef A
  a = 1
end subroutine
#else
  call y(a)
end subroutine
#endif
subroutine z
end
`;
    const { units, file, whole } = joined('a.f90', text);
    expect(units.map(({ line }) => line)).toEqual([1, 9]);
    expect(file).toEqual(whole);
    expect(whole.incomplete).toEqual([]);
    expect(whole.calls.map(({ callee, caller }) => [callee, caller])).toEqual([['y', 'x']]);
  });

  it('of an empty file are one empty unit', () => {
    expect(fortranUnits('a.f', bytes(''))).toMatchObject([{ from: 0, to: 0, line: 1 }]);
    expect(joined('a.f', '').file).toEqual(joined('a.f', '').whole);
  });
});
