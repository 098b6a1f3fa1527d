import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readC } from '../../../src/readers/c/read-c.ts';

const bytes = (text: string) => new TextEncoder().encode(text);
const c = (text: string, define?: Record<string, string>) =>
  readC('src/eos.c', bytes(text), { language: 'c', ...(define === undefined ? {} : { define }) });
const cpp = (text: string) => readC('src/eos.H', bytes(text), { language: 'c++' });
const headers = (read: ReturnType<typeof readC>) =>
  read.procedures.map(
    (one) =>
      `${one.parent === null ? '' : `${one.parent}::`}${one.name}(${one.args.map((arg) => arg.name).join(', ')})`,
  );

describe('procedures behind the macros of vendors', () => {
  it.each([
    ['AMREX_GPU_HOST_DEVICE AMREX_INLINE\nvoid eos (const int input, amrex::Real& rho)\n{ }', 'eos(input, rho)'],
    [
      'AMREX_GPU_HOST_DEVICE AMREX_FORCE_INLINE\namrex::Real\nscreen (amrex::Real const T, const int n) noexcept { return T; }',
      'screen(T, n)',
    ],
    ['__attribute__((always_inline)) INLINE static float kernel(const float u) { return u; }', 'kernel(u)'],
    ['extern "C" EXPORT_API int table_open(const char *path);', 'table_open(path)'],
    ['DEPRECATED("use eos2") double eos(double rho);', 'eos(rho)'],
    ['__declspec(dllexport) double * __restrict fill(double *x UNUSED);', 'fill(x)'],
    ['KOKKOS_INLINE_FUNCTION double operator()(const int i) const;', 'operator()(i)'],
    ['[[nodiscard]] constexpr auto square(double x) -> double { return x * x; }', 'square(x)'],
  ])('are seen: %s', (source, header) => {
    expect(headers(cpp(source))).toEqual([header]);
  });

  it('have the name that a macro makes of two spellings', () => {
    const read = c('void FORTRAN_NAME(byte_open, BYTE_OPEN)(char *n, int nlen)\n{\n  f(n);\n}\n');
    expect(headers(read)).toEqual(['byte_open(n, nlen)']);
    expect(read.procedures[0]!.attributes).toContain('name-by-macro FORTRAN_NAME');
    expect(read.calls.map((one) => one.caller)).toEqual(['byte_open']);
  });

  it('that a macro makes out of nothing are told as not seen, with the line', () => {
    const read = c('#define MAKE(T) void set_##T(T x) { }\nMAKE(double)\nMAKE(int)\ndouble after(int n);\n');
    expect(headers(read)).toEqual(['after(n)']);
    expect(read.incomplete).toEqual([{ line: 2, why: expect.stringContaining('MAKE(...)') }]);
  });
});

describe('alternatives of the preprocessor', () => {
  const source = `#ifdef USE_MPI
double total(double x, int comm)
#else
double total(double x)
#endif
{ return x; }
#if NDIM == 3
int ndim(void) { return 3; }
#elif NDIM == 2
int ndim(void) { return 2; }
#endif
int last(void) { return 0; }
`;
  it('are all read, each with its condition', () => {
    expect(c(source).procedures.map((one) => [one.name, one.args.length, one.condition ?? ''])).toEqual([
      ['total', 2, 'defined(USE_MPI)'],
      ['total', 1, '!defined(USE_MPI)'],
      ['ndim', 0, 'NDIM == 3'],
      ['ndim', 0, expect.stringContaining('NDIM == 2')],
      ['last', 0, ''],
    ]);
  });

  it('are chosen by the names that the build sets', () => {
    expect(headers(c(source, { USE_MPI: '1', NDIM: '2' }))).toEqual(['total(x, comm)', 'ndim()', 'last()']);
  });

  it('that close the brackets of one header keep its body, and say whose arguments are given', () => {
    const read = cpp(`template <class T> void shuffle(T first, T last,
#if __cplusplus >= 201103L
             T&& rand)
#else
             T& rand)
#endif
{ swap(first, last); }
MARK_DEPRECATED
namespace detail { int after(int n) { return n; } }
`);
    expect(headers(read)).toEqual(['shuffle(first, last, rand)', 'detail::after(n)']);
    expect(read.calls.map((one) => one.caller)).toEqual(['shuffle']);
    expect(read.incomplete).toEqual([{ line: 1, why: expect.stringContaining('arguments of shuffle differ') }]);
  });

  it('do not take the guard of a header for a condition', () => {
    expect(
      c('#ifndef EOS_H\n#define EOS_H\ndouble eos(double rho);\n#endif\n').procedures[0]!.condition,
    ).toBeUndefined();
  });
});

describe('declarations', () => {
  it('give types, stars, bounds and what may only be read', () => {
    const [one] = c(
      'void f(const double *rho, double T[restrict static 3], float m[][NZ], unsigned long int n, struct part *p, double (*rate)(double));',
    ).procedures;
    expect(
      one!.args.map(({ name, type, bytes, rank, bounds, intent }) => [name, type, bytes, rank, bounds.join(), intent]),
    ).toEqual([
      ['rho', 'double', 8, 0, '', 'in'],
      ['T', 'double', 8, 1, 'restrict static 3', null],
      ['m', 'float', 4, 2, ':,NZ', null],
      ['n', 'unsigned long', 8, 0, '', 'in'],
      ['p', 'part', null, 0, '', null],
      ['rate', 'procedure', 8, 0, '', 'in'],
    ]);
  });

  it('of the oldest style have the types that stand below their brackets', () => {
    const [one] = c('double interp(x, y, n)\n  double *x, y;\n{ return 0; }\n').procedures;
    expect(
      one!.args.map(({ name, type, attributes, implicit }) => [
        name,
        type,
        attributes.includes('pointer'),
        implicit ?? false,
      ]),
    ).toEqual([
      ['x', 'double', true, false],
      ['y', 'double', false, false],
      ['n', 'int', false, true],
    ]);
  });

  it('inside extern "C" carry the name of the linker', () => {
    const read = cpp(
      'extern "C" { double crs_solve_(double *x, int *n); }\nnamespace gas { double p(double rho = 1.0, int n = 2); }\n',
    );
    expect(read.procedures.map((one) => [one.parent, one.name, one.linkName ?? null])).toEqual([
      [null, 'crs_solve_', 'crs_solve_'],
      ['gas', 'p', null],
    ]);
    expect(read.procedures[1]!.args.map((one) => [one.name, one.optional, one.default])).toEqual([
      ['rho', true, '1.0'],
      ['n', true, '2'],
    ]);
  });

  it('of classes give members, bases, visibility and definitions outside the class', () => {
    const read = cpp(`class Ideal : public Gas<double> {
  double gamma_; ///< ratio of specific heats
 public:
  Ideal(double gamma) : Gas<double>(gamma), gamma_(check(gamma)) {}
  ~Ideal() noexcept override;
  double pressure(double rho, double e) const;
  double pressure(double rho) const = delete;
};
double Ideal::pressure(double rho, double e) const { return (gamma_ - 1) * rho * e; }
template <class T> struct Table { T data[NX][3]; int n : 4; union { int i; float f; }; };
`);
    expect(read.procedures.map((one) => [one.kind, one.parent, one.name, one.args.length, one.visibility])).toEqual([
      ['constructor', 'Ideal', 'Ideal', 1, 'public'],
      ['constructor', 'Ideal', '~Ideal', 0, 'public'],
      ['method', 'Ideal', 'pressure', 2, 'public'],
      ['method', 'Ideal', 'pressure', 1, 'public'],
      ['method', 'Ideal', 'pressure', 2, 'public'],
    ]);
    expect(read.calls.map((one) => [one.callee, one.how, one.args.length])).toEqual([
      ['Gas', 'constructor', 1],
      ['check', 'function', 1],
    ]);
    expect(
      read.types.map((one) => [
        one.name,
        one.extends ?? '',
        one.fields.map((field) => `${field.name}${field.bounds.map((bound) => `[${bound}]`).join('')}`).join(),
      ]),
    ).toEqual([
      ['Ideal', 'Gas<double>', 'gamma_'],
      ['Table', '', 'data[NX][3],n,i,f'],
    ]);
  });
});

describe('constants', () => {
  it('of macros, constexpr and enums are evaluated, one from another, in any order', () => {
    const read = cpp(`#define CLIGHT 2.99792458e10 /* cm/s */
#define CLIGHT2 (CLIGHT * CLIGHT)
constexpr double half_pi = pi / 2;
namespace c { constexpr double pi = 3.141592653589793; static const float third = 1.0f / 3; }
enum class Stage { begin, middle = 7, end };
constexpr int NumSpec = 3, NumAux = NumSpec * 2;
#define WRAP(x) ((x) + 1)
`);
    expect(Object.fromEntries(read.constants.map((one) => [one.name, one.value]))).toEqual({
      CLIGHT: 2.99792458e10,
      CLIGHT2: 2.99792458e10 ** 2,
      half_pi: Math.PI / 2,
      pi: Math.PI,
      third: Math.fround(1 / 3),
      begin: 0,
      middle: 7,
      end: 8,
      NumSpec: 3,
      NumAux: 6,
    });
    expect(read.claims.find((one) => one.name === 'CLIGHT')).toMatchObject({ what: 'unit', value: 'cm/s', line: 1 });
  });
});

describe('what comments claim', () => {
  it('is kept beside each argument, field and result, with its line', () => {
    const read = c(`/**
 * Pressure of an ideal gas.
 * @param rho  density [g/cm^3]
 * @return pressure [dyn/cm^2]
 */
double pressure(double rho, /* in */
                double eint /* erg/g */);
struct state {
  double T;   // temperature [K]
  double ye;  /* electrons per baryon */
};
`);
    const said = read.claims
      .filter((one) => one.what === 'unit')
      .map((one) => [one.parent, one.name, one.value, one.line]);
    expect(said).toEqual(
      expect.arrayContaining([
        ['pressure', 'rho', 'g/cm^3', 3],
        ['pressure', 'eint', 'erg/g', 7],
        [null, 'pressure', 'dyn/cm^2', 4],
        ['state', 'T', 'K', 9],
      ]),
    );
  });
});

describe('any bytes', () => {
  const piece = fc.constantFrom(
    '{',
    '}',
    '(',
    ')',
    '<',
    '>',
    ';',
    '::',
    'template<',
    'class A',
    '#if',
    '#else\n',
    '#endif\n',
    '"',
    "'",
    '/*',
    '*/',
    '//',
    '\n',
    'f',
    'operator',
    'double ',
    '= 0',
    ',',
    '\\\n',
    ':',
    '~',
    'R"(',
    '[',
    ']',
    'struct ',
    'using ',
    'namespace ',
    '\u00b5',
  );

  it('give a result, and lines that are in the file', () => {
    const look = (content: Uint8Array) => {
      const lines = content.filter((byte) => byte === 10).length + 1;
      for (const language of ['c', 'c++'] as const) {
        const read = readC('x', content, { language });
        for (const one of [...read.procedures, ...read.calls, ...read.types, ...read.constants, ...read.incomplete]) {
          expect(one.line).toBeGreaterThanOrEqual(1);
          expect(one.line).toBeLessThanOrEqual(lines);
        }
      }
    };
    fc.assert(
      fc.property(
        fc.array(piece, { maxLength: 120 }).map((pieces) => bytes(pieces.join(''))),
        look,
      ),
      { numRuns: 400 },
    );
    fc.assert(fc.property(fc.uint8Array({ maxLength: 300 }), look), { numRuns: 200 });
  });

  it('take time in proportion to their number, also where brackets never close', () => {
    const hard = [
      '(',
      '{',
      '<',
      'a<',
      'f(',
      'template<',
      'struct a {',
      '#if A\n{\n',
      '#if A\n#else\n',
      'x::',
      'A a,',
      'f(a)(',
      '/* ',
      '"a" ',
      'operator ',
      'int f(int a',
      '~',
      ': a(',
      'a = b < c, ',
      '#define a b\n',
      'class A : B<',
      'A() : b(1), c(',
      'enum { a = b, ',
    ];
    for (const one of hard) {
      const timed = (count: number) => {
        const content = bytes(one.repeat(count));
        const start = process.cpuUsage().user;
        readC('x', content, { language: 'c++' });
        return (process.cpuUsage().user - start) / 1000;
      };
      timed(1000);
      const [short, long] = [Math.min(timed(1000), timed(1000)), Math.min(timed(16_000), timed(16_000), timed(16_000))];
      // Processor time: sixteen times the bytes may take sixteen times as long; the square would be 256 times.
      expect({ one, ratio: long / Math.max(short, 10) < 128 }).toEqual({ one, ratio: true });
    }
  }, 300_000);

  it('may be ten million, or two hundred thousand lines', () => {
    const unit =
      '/* specific energy [erg/g] */\nstatic double eint_N(const double rho, double *T, int n)\n{\n  if (n > 3) T[n] = pressure(rho, 1.5e3) / rho;\n  return 0.1f * sqrt(rho);\n}\n';
    let text = '';
    for (let index = 0; text.length < 10_000_000; index++) text += unit.replace('N', String(index));
    const read = readC('large.c', bytes(text), { language: 'c' });
    expect(read.procedures.length).toBe(text.split('static double').length - 1);
    expect(read.calls.length).toBe(read.procedures.length * 2);
    expect(read.incomplete).toEqual([]);
  }, 300_000);
});
