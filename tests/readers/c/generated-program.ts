/** Draws programs of C and C++ that compile: declarations in every spelling that old and new codes have. */
import fc from 'fast-check';

const NUMBERS = [
  'double',
  'float',
  'int',
  'long',
  'unsigned long',
  'unsigned',
  'short int',
  'long long',
  'char',
  'unsigned char',
  'long double',
];
const QUALIFIED = ['', 'const ', 'volatile '];

interface Parameter {
  readonly text: (name: string) => string;
  /** May be called with a 0. */
  readonly plain: boolean;
}

const number = fc.constantFrom(...NUMBERS);
const qualifier = fc.constantFrom(...QUALIFIED);

const parameter: fc.Arbitrary<Parameter> = fc.oneof(
  { weight: 4, arbitrary: number.map((type) => ({ text: (name: string) => `${type} ${name}`, plain: true })) },
  {
    weight: 3,
    arbitrary: fc.tuple(qualifier, number, fc.constantFrom('*', ' *', '*const ', '**')).map(([before, type, star]) => ({
      text: (name: string) => `${before}${type}${star}${star.endsWith('*') ? ' ' : ''}${name}`,
      plain: true,
    })),
  },
  {
    weight: 2,
    arbitrary: fc
      .tuple(qualifier, number, fc.constantFrom('[]', '[3]', '[][4]', '[2][NZ]'))
      .map(([before, type, bounds]) => ({
        text: (name: string) => `${before}${type} ${name}${bounds}`,
        plain: true,
      })),
  },
  {
    weight: 1,
    arbitrary: fc.tuple(number, number).map(([result, type]) => ({
      text: (name: string) => `${result} (*${name})(${type}, const ${type} *)`,
      plain: true,
    })),
  },
  { weight: 1, arbitrary: fc.constant({ text: (name: string) => `struct state *${name}`, plain: true }) },
);

interface Drawn {
  readonly parameters: readonly Parameter[];
  readonly result: string;
  readonly layout: 'line' | 'lines' | 'commented';
  readonly named: boolean;
  readonly body: boolean;
  readonly before: string;
  readonly defaults: number;
}

const drawn = (language: 'c' | 'c++'): fc.Arbitrary<Drawn> =>
  fc.record({
    parameters: fc.array(parameter, { maxLength: 7 }),
    result: fc.constantFrom('void', ...NUMBERS, 'double *', 'const char *', 'struct state *'),
    layout: fc.constantFrom('line' as const, 'lines' as const, 'commented' as const),
    named: fc.boolean(),
    body: fc.boolean(),
    before: fc.constantFrom(
      '',
      'static ',
      'static inline ',
      'extern ',
      ...(language === 'c++' ? ['inline ', '[[nodiscard]] '] : []),
    ),
    defaults: language === 'c++' ? fc.nat(3) : fc.constant(0),
  });

/** A whole source: a struct, an enum, functions that call the ones before them; in C++ a namespace, a class, a template as well. */
export function aProgram(language: 'c' | 'c++'): fc.Arbitrary<string> {
  return fc
    .record({
      functions: fc.array(drawn(language), { minLength: 4, maxLength: 14 }),
      fields: fc.array(fc.tuple(number, fc.constantFrom('', '[3]', '[NZ][2]')), { minLength: 1, maxLength: 6 }),
      enumerators: fc.array(fc.option(fc.integer({ min: -50, max: 500 }), { nil: null }), {
        minLength: 1,
        maxLength: 6,
      }),
      crlf: fc.boolean(),
    })
    .map(({ functions, fields, enumerators, crlf }) => {
      const lines = ['enum { NZ = 8 };', 'struct state {'];
      for (const [index, [type, bounds]] of fields.entries())
        lines.push(`  ${type} field${index}${bounds}; /* a field; no more */`);
      lines.push('};');
      lines.push(
        `enum phase { ${enumerators.map((value, index) => `P${index}${value === null ? '' : ` = ${value}`}`).join(', ')} };`,
      );
      const callable: { name: string; count: number; least: number }[] = [];
      for (const [index, one] of functions.entries())
        lines.push(...functionLines(one, `f${index}`, callable, '', language));
      if (language === 'c++') {
        lines.push('namespace outer { namespace inner {');
        for (const [index, one] of functions.slice(0, 3).entries())
          lines.push(...functionLines({ ...one, before: '' }, `g${index}`, [], '  ', language));
        lines.push('} }', 'extern "C" {', '  double linked_(const double *x, int *n);', '}');
        lines.push(
          'class Gas {',
          ' public:',
          '  explicit Gas(double gamma) : gamma_(gamma), n_{3} {}',
          '  virtual ~Gas() = default;',
        );
        for (const [index, one] of functions.slice(0, 3).entries()) {
          const before = /^(?:extern|static)/.test(one.before) ? '' : one.before;
          lines.push(...functionLines({ ...one, before }, `m${index}`, [], '  ', language));
        }
        lines.push(
          '  double operator()(double x) const noexcept { return x * gamma_; }',
          '  bool operator==(const Gas &other) const;',
          ' private:',
          '  double gamma_;',
          '  int n_ = 0;',
          '};',
        );
        lines.push('bool Gas::operator==(const Gas &other) const { return gamma_ == other.gamma_; }');
        lines.push('template <typename T, int N = 3>', 'T power(const T &x, T (&list)[N]) { return x * list[0]; }');
        lines.push('template <> double power<double, 2>(const double &x, double (&list)[2]) { return x; }');
        lines.push('auto trailing(int n) -> double { return linked_(nullptr, &n); }');
      }
      return `${lines.join(crlf ? '\r\n' : '\n')}\n`;
    });
}

function functionLines(
  one: Drawn,
  name: string,
  callable: { name: string; count: number; least: number }[],
  indent: string,
  language: 'c' | 'c++',
): string[] {
  const count = one.parameters.length;
  const body = one.body || /inline/.test(one.before);
  // Definitions in C need names; so does what is called by them in a comment.
  const named = one.named || (body && language === 'c');
  const first = Math.max(0, count - one.defaults);
  const texts = one.parameters.map((parameter, index) => {
    const text = parameter.text(named || /\(\*/.test(parameter.text('')) ? `a${index}` : '').trimEnd();
    return one.defaults > 0 && index >= first ? `${text} = 0` : text;
  });
  const list =
    count === 0
      ? language === 'c'
        ? 'void'
        : ''
      : one.layout === 'line'
        ? texts.join(', ')
        : texts
            .map(
              (text, index) =>
                `\n    ${indent}${text}${index < count - 1 ? ',' : ''}${one.layout === 'commented' ? ' // one, (two), "three"' : ''}`,
            )
            .join('') + (one.layout === 'commented' ? `\n${indent}` : '');
  const before = one.before === 'extern ' && body ? '' : one.before;
  const result = one.result === 'void' && before === '[[nodiscard]] ' ? 'int' : one.result;
  const head = `${indent}${before}${result}${result.endsWith('*') ? '' : ' '}${name}(${list})`;
  const calls = callable.slice(-2).map((other) => `${other.name}(${Array(other.count).fill('0').join(', ')});`);
  if (!named || one.before === 'static ') calls.length = 0;
  const gives = result === 'void' ? '' : ' return 0;';
  callable.push({ name, count, least: first });
  return (body ? `${head} { ${calls.join(' ')}${gives} }` : `${head};`).split('\n');
}
