import { describe, expect, it } from 'vitest';
import type { Argument, FileInterface } from '../../../src/model/interface.ts';
import { type FortranOptions, readFortran } from '../../../src/readers/fortran/read-fortran.ts';

function read(path: string, text: string, options: FortranOptions = {}): FileInterface {
  return readFortran(path, new TextEncoder().encode(text), options);
}
const fixed = (text: string, options?: FortranOptions) => read('a.f', text, options);
const free = (text: string, options?: FortranOptions) => read('a.f90', text, options);

/** `name(type*bytes(bounds) intent, ...)`, one a procedure. */
function signatures(file: FileInterface): string[] {
  return file.procedures.map(
    ({ kind, name, args, result, condition }) =>
      `${kind} ${name}(${args.map(argument).join(', ')})${result === null ? '' : `: ${argument(result as Argument)}`}${condition === undefined ? '' : ` if ${condition}`}`,
  );
}

function argument({ name, type, bytes, bounds, rank, intent, optional }: Argument): string {
  const shape = rank === 0 ? '' : `(${bounds.join(',')})`;
  return `${name}${shape} ${type}${bytes === null ? '' : `*${bytes}`}${intent == null ? '' : ` ${intent}`}${optional === true ? ' optional' : ''}`;
}

const calls = (file: FileInterface) =>
  file.calls.map(({ callee, args, line }) => `${line} ${callee}(${args.map(({ text }) => text).join(', ')})`);

describe('fixed form', () => {
  it('takes blanks inside names and keywords for nothing', () => {
    const file = fixed(`      SUB ROUTINE FO O(A, B)
      DO UBLE PRECISION A, B Z
      INTE GER B
      CA LL X(1)
      IF (A .GT. 1) CA L LY (A , B)
      E ND
`);
    expect(signatures(file)).toEqual(['subroutine foo(a real*8, b integer*4)']);
    expect(calls(file)).toEqual(['4 x(1)', '5 y(A, B)']);
    expect(file.incomplete).toEqual([]);
  });

  it('tells DO from an assignment as the comma does', () => {
    const file = fixed(`      subroutine s(f)
      do 10 i = 1, n(2)
      do 10 j = 1
   10 continue
      end
`);
    expect(calls(file)).toEqual(['2 n(2)']);
  });

  it('joins lines by any mark in column 6, over comments and blank lines', () => {
    const file = fixed(`      subroutine s(a,
C a comment
     1             b,

     $ c
     &)
      real*8 a, b,
* another
     +   c
      end
`);
    expect(signatures(file)).toEqual(['subroutine s(a real*8, b real*8, c real*8)']);
  });

  it('reads tab form: a digit behind the tab continues', () => {
    const file = fixed('\tsubroutine s(a,\n\t1 b)\n\tinteger a, b\n\tcall t(a)\n10\tcontinue\n\tend\n');
    expect(signatures(file)).toEqual(['subroutine s(a integer*4, b integer*4)']);
    expect(calls(file)).toEqual(['4 t(a)']);
  });

  it('stops at column 72: sequence numbers are no code', () => {
    const file = fixed(
      [
        '      subroutine s(a, b)                                                00000010',
        '      real a                                                            00000020',
        '      call t(a, b)                                                      00000030',
        '      end                                                               00000040',
        '',
      ].join('\n'),
    );
    expect(signatures(file)).toEqual(['subroutine s(a real*4, b real*4)']);
    expect(file.incomplete).toEqual([]);
  });

  it('goes on to column 132 where the code plainly does, or the build says so', () => {
    const text = `      subroutine s(first_argument, second_argument, third_argument, fourth_argument, fifth_argument)
      call t(first_argument, second_argument, third_argument, fourth_argument, fifth_argument)
      end
`;
    expect(fixed(text).procedures[0]!.args).toHaveLength(5);
    expect(fixed(text, { columns: 132 }).procedures[0]!.args).toHaveLength(5);
    expect(fixed(text, { columns: 72 }).procedures[0]!.args).toHaveLength(4);
  });

  it('knows every comment mark, and debug lines', () => {
    const file = fixed(`c call a
C call b
* call c
! call d
d     call e
      call f ! call g
      end
`);
    expect(calls(file)).toEqual(['6 f()']);
  });

  it('leaves Hollerith constants alone', () => {
    const file = fixed(`      subroutine s
      real*8 height
      call x(5Hcall , 3h(a!, 1)
      data h /4habc'/, k /2*3h),(/
  100 format(10hf(x) isn't, 3x, f(2))
      call y(height)
      end
`);
    expect(calls(file)).toEqual(['3 x(5Hcall, 3h(a!, 1)', '6 y(height)']);
    expect(file.incomplete).toEqual([]);
  });

  it('reads statements behind a semicolon and behind a label', () => {
    const file = fixed(`      subroutine s; integer k; call a(k)
   10 call b; if (k.eq.1) call c(';'); end
`);
    expect(calls(file)).toEqual(['1 a(k)', '2 b()', "2 c(';')"]);
    expect(file.procedures[0]!.endLine).toBe(2);
  });

  it('reads exponents behind a macro as the number that they are', () => {
    const file = fixed(`      subroutine s
      parameter (a = 1.5 _d -3, b = 2. _d 0)
      end
`);
    expect(file.constants.map(({ name, value }) => [name, value])).toEqual([
      ['a', 1.5e-3],
      ['b', 2],
    ]);
  });

  it('does not take prose after a lost END for a continuation', () => {
    const file = fixed(`      subroutine one(a)
      end
      subroutine two
      end
Davids version of this:
A parallel version
      subroutine three
      end
`);
    expect(file.procedures.map(({ name }) => name)).toEqual(['one', 'two', 'three']);
    expect(file.incomplete).toEqual([]);
  });

  it('says which procedure has no END', () => {
    expect(fixed('      subroutine a\n      x = 1\n      subroutine b(\n').incomplete).toEqual([
      { line: 1, why: 'subroutine a has no end' },
      { line: 3, why: 'subroutine b has no end' },
    ]);
  });
});

describe('free form', () => {
  it('joins lines by ampersands, inside words and constants too', () => {
    const file = free(`subroutine s(a, & ! [K]
  & b, &

  ! a comment
    c)
  real :: a, b, c
  call t('it''s & &
     &call x(1)', a) ; call u(lo&
  &ng)
end subroutine
`);
    expect(signatures(file)).toEqual(['subroutine s(a real*4, b real*4, c real*4)']);
    expect(file.calls.map(({ callee, args }) => [callee, args.length])).toEqual([
      ['t', 2],
      ['u', 1],
    ]);
    expect(file.calls[1]!.args[0]!.name).toBe('long');
  });

  it('keeps keywords and names apart by their blanks', () => {
    const file = free(`subroutine s
  integer :: endif_count, callx, realx
  callx = 1
  endif_count = f(callx)
  real_part = g(1)
  if (callx > 0) call_count = h(2)
end subroutine s
`);
    expect(calls(file)).toEqual(['4 f(callx)', '5 g(1)', '6 h(2)']);
  });

  it('finds calls behind logical operators and in conditions', () => {
    const file = free(`subroutine s(x)
  if (.not. a(x) .and. b(x)) call c(d(x), y=e(x))
  select case (f(x))
  case (1)
    do while (g(x) > 0)
    end do
  end select
  allocate (t(h(x)), source=i(x))
  select type (x)
  class is (real_type)
  type is (integer)
  end select
end subroutine
`);
    expect(file.calls.map(({ callee }) => callee).sort()).toEqual(['a', 'b', 'c', 'd', 'e', 'f', 'g', 'h', 'i']);
  });

  it('follows a call through components to the bound procedure', () => {
    const file = free(`subroutine s(x)
  call x%list(3) % push(1, key=2)
  y = x%value(2) + state % xn(:)
end subroutine
`);
    expect(file.calls).toMatchObject([
      { callee: 'push', how: 'method', args: [{ text: '1' }, { text: 'key=2', keyword: 'key' }] },
    ]);
    expect(file.calls).toHaveLength(1);
  });
});

describe('declarations', () => {
  it('give type, kind, bounds, intent and attributes of every spelling', () => {
    const file = free(`subroutine s(a, b, c, d, e, f, g, h, i, j, k, l, m)
  use iso_fortran_env, only: real64
  integer, parameter :: dp = kind(1.d0), wp = selected_real_kind(15, 307)
  real(dp), intent(in), dimension(:, 2) :: a
  real*8 b*4, c(3)
  complex(wp), intent(in out), optional :: d
  complex*16 e
  character(len=*), intent(in) :: f
  character*8 g*(*)
  class(*), intent(in) :: h
  type(box_t), allocatable, target :: i(:)
  procedure(func), pointer :: j
  real(real64) :: k(0:n, *)
  integer(kind=8) l(..)
  double complex :: m
end subroutine
`);
    expect(signatures(file)).toEqual([
      'subroutine s(a(:,2) real*8 in, b real*4, c(3) real*8, d complex*16 inout optional, e complex*16, f character*1 in, ' +
        'g character*1, h class(*) in, i(:) type(box_t), j procedure, k(0:n,*) real*8, l(..) integer*8, m complex*16)',
    ]);
    const args = file.procedures[0]!.args;
    expect(args.map(({ rank }) => rank)).toEqual([2, 0, 1, 0, 0, 0, 0, 0, 1, 0, 2, -1, 0]);
    expect(args[0]!.shape).toEqual([null, 2]);
    expect(args[5]!.length).toBe('*');
    expect(args[6]!.length).toBe('*');
    expect(args[8]!.attributes).toEqual(['allocatable', 'target']);
    expect(args[9]!).toMatchObject({ kind: 'func', attributes: ['pointer'] });
  });

  it('keep a declared default apart from a declared kind', () => {
    const [arg, other] = free('subroutine s(a, b)\n  real :: a\n  real*4 :: b\nend\n').procedures[0]!.args;
    expect(arg).toMatchObject({ bytes: 4 });
    expect(arg!.kind).toBeUndefined();
    expect(other).toMatchObject({ bytes: 4, kind: '4' });
  });

  it('follow the implicit rule and IMPLICIT statements', () => {
    const file = fixed(`      subroutine s(i, x, q, z, c)
      implicit real*8 (a-h, o-y), complex (z), character*8 (c)
      end
      function n(x)
      implicit integer (a-z)
      end
      real function f(x)
      end
      subroutine t(x)
      implicit none
      end
`);
    expect(signatures(file)).toEqual([
      'subroutine s(i integer*4, x real*8, q real*8, z complex*8, c character*1)',
      'function n(x integer*4): n integer*4',
      'function f(x real*4): f real*4',
      'subroutine t(x unknown)',
    ]);
    expect(file.procedures[0]!.args[4]!.length).toBe('8');
  });

  it('evaluate PARAMETER arithmetic in bounds, as far as values are known', () => {
    const file = fixed(`      subroutine s(a, b, c, d)
      parameter (lx = 8, ly = lx+2, lz = 2**3/5, lt = lx*ly*(lz - 3) + mod(7, 4))
      dimension a(lx, ly), b(-lx:lx), c(lt), d(1), e(lelt*2)
      end
`);
    expect(file.procedures[0]!.args.map(({ shape }) => shape)).toEqual([[8, 10], [17], [-157], [null]]);
    expect(file.constants.map(({ value }) => value)).toEqual([8, 10, 1, -157]);
  });

  it('put COMMON blocks together in storage order, over several statements and types anywhere', () => {
    const file = fixed(`      subroutine s
      common /blk/ a, b(10), /other/ i // x
      real*8 a
      common /blk/ c
      integer c
      end
`);
    expect(
      file.commons.map(({ name, members }) => `${name}: ${members.map((one) => argument(one as Argument)).join(', ')}`),
    ).toEqual(['blk: a real*8, b(10) real*4, c integer*4', 'other: i integer*4', ': x real*4']);
  });

  it('take included files for the types of what they declare, and tell only that they are included', () => {
    const file = fixed("      subroutine s(a, q)\n      include 'SIZE'\n      call t(fld(1), a)\n      end\n", {
      include: (path) =>
        path === 'SIZE'
          ? new TextEncoder().encode(
              "      parameter (lx = 4)\n      real*8 a(lx), fld(lx)\n      common /f/ fld\n      include 'SIZE'\n",
            )
          : null,
    });
    expect(signatures(file)).toEqual(['subroutine s(a(lx) real*8, q real*4)']);
    expect(file.procedures[0]!.args[0]!.shape).toEqual([4]);
    expect(file.includes).toMatchObject([{ path: 'SIZE', how: 'include', parent: 's', line: 2 }]);
    expect(file.commons).toEqual([]);
    expect(file.constants).toEqual([]);
    expect(file.calls).toMatchObject([{ callee: 't', args: [{ form: 'element', name: 'fld', bytes: 8 }, {}] }]);
  });

  it('name what DATA, SAVE, EQUIVALENCE and NAMELIST bind, not the values', () => {
    const file = fixed(`      block data init
      data a, b(1) /1.d0, zero/, (c(i), i = 1, 3) /3*0/
      save x, /blk/
      equivalence (p, q(1)), (r, s)
      namelist /nml/ alpha, beta
      end
`);
    expect(file.storage.map(({ kind, names }) => [kind, names])).toEqual([
      ['data', ['a', 'b', 'c', 'i']],
      ['save', ['x', 'blk']],
      ['equivalence', ['p', 'q', 'r', 's']],
      ['namelist', ['nml', 'alpha', 'beta']],
    ]);
    expect(signatures(file)).toEqual(['block-data init()']);
  });
});

describe('program units', () => {
  it('are told with hosts, ends, entries, results and link names', () => {
    const file = free(`module m
  implicit none
  private
  public :: f
  interface norm
    module procedure norm_r, norm_c
  end interface
  abstract interface
    pure real function func(x) bind(c)
      real, intent(in) :: x
    end function
  end interface
  enum, bind(c)
    enumerator :: red = 4, green, blue = 9
  end enum
  type, extends(base), abstract :: box_t
    real :: w(3) = 0., h
    procedure(func), pointer, nopass :: p => null()
  contains
    procedure :: area, wide => box_wide
    procedure(func), deferred :: later
    generic :: operator(+) => add_one, add_two
    final :: destroy
  end type box_t
contains
  elemental recursive function f(x) result(y)
    real, intent(in) :: x
    real(8) :: y
    y = inner(x)
  contains
    real function inner(z)
      real :: z
    end function inner
  end function f
  subroutine g() bind(C, name="Outer_G")
  end subroutine
end module m
submodule (m:child) grand
contains
  module procedure later_proc
  end procedure later_proc
  module subroutine there(a)
    integer :: a
  end subroutine
end submodule
program main
  call g
end program
`);
    expect(file.procedures.map((one) => [one.kind, one.parent, one.name, one.visibility, one.attributes])).toEqual([
      ['function', 'm', 'func', undefined, ['pure', 'bind(c)', 'abstract']],
      ['function', 'm', 'f', 'public', ['elemental', 'recursive']],
      ['function', 'm::f', 'inner', undefined, []],
      ['subroutine', 'm', 'g', 'private', ['bind(c)']],
      ['separate-module-procedure', 'grand', 'later_proc', 'public', []],
      ['subroutine', 'grand', 'there', 'public', ['module']],
      ['program', null, 'main', undefined, []],
    ]);
    expect(file.procedures[1]).toMatchObject({ result: { name: 'y', bytes: 8 }, endLine: 34 });
    expect(file.procedures[3]!.linkName).toBe('Outer_G');
    expect(file.procedures[0]!.prototype).toBe(true);
    expect(file.generics).toMatchObject([{ name: 'norm', procedures: ['norm_r', 'norm_c'], kind: 'generic' }]);
    expect(file.types).toMatchObject([
      {
        name: 'box_t',
        parent: 'm',
        extends: 'base',
        fields: [{ name: 'w', rank: 1 }, { name: 'h' }, { name: 'p', type: 'procedure' }],
        bindings: [
          { name: 'area', procedure: 'area' },
          { name: 'wide', procedure: 'box_wide' },
          { name: 'later', procedure: 'func' },
          { name: 'operator(+)', procedure: 'add_one' },
          { name: 'operator(+)', procedure: 'add_two' },
        ],
      },
    ]);
    expect(file.constants.map(({ name, value }) => [name, value])).toEqual([
      ['red', 4],
      ['green', 5],
      ['blue', 9],
    ]);
    expect(file.uses.map(({ module, parent }) => [module, parent])).toEqual([
      ['m', 'grand'],
      ['child', 'grand'],
    ]);
    expect(file.incomplete).toEqual([]);
  });

  it('have entries with arguments of their own, and alternate returns', () => {
    const file = fixed(`      subroutine s(a, *, *)
      integer b
      entry other(b, a, *)
      return 1
      end
      function f(x)
      real*8 f, g
      entry g(y)
      end
`);
    expect(signatures(file)).toEqual([
      'subroutine s(a real*4, * alternate-return, * alternate-return)',
      'entry other(b integer*4, a real*4, * alternate-return)',
      'function f(x real*4): f real*8',
      'entry g(y real*4): g real*8',
    ]);
  });

  it('hold statement functions, told from arrays', () => {
    const file = fixed(`      subroutine s(n)
      real x(10), f, g
      f(a, b) = a*b + g(a)
      dist(p) = sqrt(p)
      x(n) = f(1., 2.)
      h(i) = 1.
      end
`);
    expect(file.procedures.map(({ kind, name, parent, args }) => [kind, name, parent, args.length])).toEqual([
      ['subroutine', 's', null, 1],
      ['statement-function', 'f', 's', 2],
      ['statement-function', 'dist', 's', 1],
    ]);
    expect(file.calls.map(({ callee, line }) => [callee, line])).toEqual([
      ['g', 3],
      ['f', 5],
    ]);
    // With declarations out of sight it may as well be an array.
    expect(fixed("      subroutine s\n      include 'X'\n      y(i) = 2.\n      end\n").procedures).toHaveLength(1);
    expect(free('subroutine s\n  use m\n  y(i) = 2.\nend\n').procedures).toHaveLength(1);
  });

  it('end where their END stands, whatever is left open inside', () => {
    const file = free(`module m
contains
  subroutine s
    if (x) then
    enddo
  end subroutine
  subroutine t
    endfile 10
    end_time = 3
  end subroutine
end module
`);
    expect(file.procedures.map(({ name, endLine }) => [name, endLine])).toEqual([
      ['s', 6],
      ['t', 10],
    ]);
  });
});

describe('preprocessor branches', () => {
  it('inside an argument list are alternatives with their conditions', () => {
    const text = `subroutine s(a, &
#ifdef MPI
  comm, &
#else
  rank, size, &
#endif
  b)
  integer :: a, b, comm
end subroutine
`;
    const file = free(text);
    expect(file.procedures.map(({ args, condition }) => [args.map(({ name }) => name), condition])).toEqual([
      [['a', 'comm', 'b'], 'defined(MPI)'],
      [['a', 'rank', 'size', 'b'], '!defined(MPI)'],
    ]);
    expect(free(text, { define: { MPI: '1' } }).procedures.map(({ args }) => args.length)).toEqual([3]);
    expect(free(text, { define: {} }).procedures.map(({ args }) => args.length)).toEqual([4]);
    expect(free(text, { define: {} }).procedures[0]!.condition).toBeUndefined();
  });

  it('with a header each and one body are alternatives, too', () => {
    const file = fixed(`#if defined(A) && N > 2
      subroutine s(a)
#elif defined(B)
      subroutine s(a, b)
#else
      subroutine s(a, b, c)
#endif
      real*8 a, b
      integer c
      call t(a)
      end
`);
    expect(signatures(file)).toEqual([
      'subroutine s(a real*8) if defined(A) && N > 2',
      'subroutine s(a real*8, b real*8) if !(defined(A) && N > 2) && defined(B)',
      'subroutine s(a real*8, b real*8, c integer*4) if !(defined(A) && N > 2) && !defined(B)',
    ]);
    expect(file.incomplete).toEqual([]);
    expect(file.calls).toHaveLength(1);
  });

  it('that declare an argument differently give a procedure each', () => {
    const file = fixed(`      subroutine s(x, n)
#ifdef SINGLE
      real*4 x(n)
#else
      real*8 x(n, 2)
#endif
      end
`);
    expect(signatures(file)).toEqual([
      'subroutine s(x(n) real*4, n integer*4) if defined(SINGLE)',
      'subroutine s(x(n,2) real*8, n integer*4) if !defined(SINGLE)',
    ]);
  });

  it('inside a call give a call for each', () => {
    const file = fixed(`      subroutine s(a)
      call t(a,
#ifdef X
     &  b, f(1),
#endif
     &  c)
      end
`);
    expect(file.calls.map(({ callee, args, condition }) => [callee, args.length, condition])).toEqual([
      ['t', 4, 'defined(X)'],
      ['f', 1, 'defined(X)'],
      ['t', 2, '!defined(X)'],
    ]);
  });

  it('around words that do not change the header leave one procedure', () => {
    const file = free(`module m
contains
#if defined(GPU)
  attributes(device) &
#endif
  subroutine s(a)
    real :: a
  end subroutine
end module
`);
    expect(signatures(file)).toEqual(['subroutine s(a real*4)']);
    expect(file.incomplete).toEqual([]);
  });

  it('of whole procedures are kept apart, and values that differ between them are not known', () => {
    const file = free(`#ifdef BIG
integer, parameter :: n = 100
#else
integer, parameter :: n = 10
#endif
real :: a(n)
`);
    expect(file.constants.map(({ value, condition }) => [value, condition])).toEqual([
      [100, 'defined(BIG)'],
      [10, '!defined(BIG)'],
    ]);
    expect(file.variables[0]!.shape).toEqual([null]);
  });

  it('follow macros of the file and arithmetic when names are given', () => {
    const text = `#define LEVEL 3
#if LEVEL >= 3 && !defined(OFF)
subroutine deep
end
#else
subroutine flat
end
#endif
`;
    expect(free(text, { define: {} }).procedures.map(({ name }) => name)).toEqual(['deep']);
    expect(free(text, { define: { OFF: '' } }).procedures.map(({ name }) => name)).toEqual(['flat']);
    expect(free(text).procedures.map(({ name }) => name)).toEqual(['deep', 'flat']);
  });
});

describe('call sites', () => {
  it('tell form, type, bytes, rank and keyword of what is passed', () => {
    const file = fixed(`      subroutine s(a, n, ext)
      real*8 a(10, 10), t
      integer*8 n
      character*4 c
      external ext
      call u(a, a(1,1), a(:,2), n, 2, 1.5, 1.d0, -3, 'x', .true.,
     &  t*2, *10, f(t), c(1:2), ext, undeclared)
   10 continue
      end
`);
    expect(
      file.calls[0]!.args.map(({ form, type, bytes, rank }) => [form, type ?? '', bytes ?? '', rank ?? '']),
    ).toEqual([
      ['name', 'real', 8, 2],
      ['element', 'real', 8, 0],
      ['section', 'real', 8, 1],
      ['name', 'integer', 8, 0],
      ['literal', 'integer', 4, 0],
      ['literal', 'real', 4, 0],
      ['literal', 'real', 8, 0],
      ['literal', 'integer', 4, 0],
      ['literal', 'character', '', 0],
      ['literal', 'logical', 4, 0],
      ['expression', '', '', ''],
      ['alternate-return', '', '', ''],
      ['expression', '', '', ''],
      ['section', 'character', 1, 1],
      ['name', 'procedure', '', 0],
      ['name', '', '', ''],
    ]);
  });

  it('stand at the line and column of the source, in characters', () => {
    const file = free("subroutine s\n  print *, 'é'; call t( ü, b )\nend\n");
    expect(file.calls[0]).toMatchObject({ line: 2, column: 17, args: [{ column: 25 }, { column: 28, text: 'b' }] });
  });

  it('know files and environment variables that are named', () => {
    const file = free(`subroutine s
  open (unit=10, file='table.dat', status='old')
  open (11, file=name)
  call get_environment_variable('TABLE_DIR', dir)
  call getenv("HOME", home)
end
`);
    expect(file.externals.map(({ kind, name }) => [kind, name])).toEqual([
      ['file', 'table.dat'],
      ['environment', 'TABLE_DIR'],
      ['environment', 'HOME'],
    ]);
  });
});

describe('literals', () => {
  it('are told with kind, role and what they are given to', () => {
    const file = fixed(`      subroutine s
      real*8 x, y(3)
      x = 0.1
      x = y(1) + 1.5e0*2.d0
      y(2) = x**(-0.5) + 2/3
      if (x .gt. 1.eq.2) x = 1e-3
      end
`);
    expect(file.literals.map(({ text, bytes, role, target }) => [text, bytes, role, target])).toEqual([
      ['0.1', 4, 'assigned', 'x'],
      ['1.5e0', 4, 'mixed', 'x'],
      ['2.d0', 8, 'mixed', 'x'],
      ['0.5', 4, 'exponent', 'y'],
      ['2/3', 4, 'integer-division', 'y'],
      ['1e-3', 4, 'assigned', 'x'],
    ]);
  });
});

describe('claims', () => {
  it('come from the end of the line, lines below, blocks above and names', () => {
    const file = free(`! temp :: temperature (in K)
!..rho = density [g/cm3]
subroutine s(temp, rho, &
             p, & ! pressure [erg/cm3]
             log10_e)
  real, intent(in) :: temp, rho
  real :: p
  real :: log10_e !! energy, relative to the ground state
                  !! [erg/g]
end subroutine
`);
    expect(file.claims.map(({ name, what, value, line, parent }) => [name, what, value, line, parent])).toEqual([
      ['p', 'unit', 'erg/cm3', 4, 's'],
      ['log10_e', 'reference-state', 'ground state', 8, 's'],
      ['log10_e', 'unit', 'erg/g', 9, 's'],
      ['temp', 'unit', 'K', 1, 's'],
      ['rho', 'unit', 'g/cm3', 2, 's'],
      ['log10_e', 'log-base', '10', 8, 's'],
    ]);
  });

  it('take one letter as the mark of a comment, not more', () => {
    const file = fixed('C cosmic ray rate: crr [1/s]\n      subroutine s(crr)\n      end\n');
    expect(file.claims).toMatchObject([{ name: 'crr', value: '1/s', text: 'cosmic ray rate: crr [1/s]', column: 24 }]);
  });
});

describe('the form of a file', () => {
  it('is judged by its content where the name says too little or the wrong thing', () => {
    expect(read('a.F', 'subroutine s(a, &\n  b)\n  real :: a\nreal :: b\nx = 1\ny = 2\nend subroutine\n').form).toBe(
      'free',
    );
    expect(read('a.f90', `C one\n${'C two\n      x = 1\n'.repeat(12)}`).form).toBe('fixed');
    expect(read('SIZE', '      parameter (lx=1)\n     $  ,(ly=2)\n').form).toBe('fixed');
    expect(read('a.f', 'subroutine s\nend\n', { form: 'free' }).procedures).toHaveLength(1);
  });
});
