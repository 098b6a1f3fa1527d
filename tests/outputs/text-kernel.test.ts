import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import type { KernelModule } from '../../src/outputs/kernel-module.edge.ts';
import { vectorTextParser } from '../../src/outputs/text-kernel.edge.ts';
import { plainTextParser, type TextParser } from '../../src/outputs/text-parser.ts';
import { kernelFrom } from '../support/kernels.ts';

let module: KernelModule;
let parser: TextParser;
beforeAll(() => {
  module = kernelFrom('src/outputs/text-parser.as.ts');
  parser = vectorTextParser(module, null, [true]);
});

const bytes = (text: string) => new TextEncoder().encode(text);
const bitsOf = (values: Float64Array) => [...new BigUint64Array(values.slice().buffer)];

function parseOne(text: string): number {
  const { rows } = parser.parse(bytes(text), true);
  return rows === 1 ? parser.columns[0]![0]! : Number.NaN;
}

describe('a decimal is read as the nearest double, to the last bit', () => {
  it('for any double, however it is written', () => {
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, noDefaultInfinity: true }),
        fc.integer({ min: 0, max: 20 }),
        (value, digits) => {
          for (const text of [String(value), value.toExponential(digits), value.toPrecision(digits + 1)]) {
            expect(Object.is(parseOne(text), Number(text)), text).toBe(true);
          }
        },
      ),
      { numRuns: 2000 },
    );
  });

  it('for any digits and exponent', () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: 0n, max: 10n ** 19n - 1n }),
        fc.integer({ min: -370, max: 330 }),
        (digits, exponent) => {
          const text = `${digits}e${exponent}`;
          expect(Object.is(parseOne(text), Number(text)), text).toBe(true);
        },
      ),
      { numRuns: 2000 },
    );
  });

  it('for numbers half way between two doubles, and next to them', () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: 2n ** 52n, max: 2n ** 53n - 1n }),
        fc.integer({ min: 1, max: 10 }),
        (mantissa, shift) => {
          const half = (2n * mantissa + 1n) << BigInt(shift - 1);
          for (const near of [half - 1n, half, half + 1n]) {
            for (const text of [String(near), `${near}0000`, `${near}.0000000000000000000001`]) {
              expect(parseOne(text), text).toBe(Number(text));
            }
          }
        },
      ),
      { numRuns: 400 },
    );
  });

  // The limits of the format: least and largest denormal and normal, and numbers half way to them. IEEE Std 754-2019, 3.4
  it.each([
    '4.9406564584124654e-324',
    '2.4703282292062327e-324',
    '2.4703282292062328e-324',
    '2.2250738585072011e-308',
    '2.2250738585072014e-308',
    '2.225073858507201136057409796709131975934819546351645648023426109724822222021076945516529523908135087914149158913039621106870086438694594645527657207407820621743379988141063267329253552286881372149012981122451451889849057222307285255133155755015914397476397983411801999323962548289017107081850690630666655994938275772572015763062690663332647565300009245888316433037779791869612049497390377829704905051080609940730262937128958950003583799967207254304360284078895771796150945516748243471030702609144621572289880258182545180325707018860872113128079512233426288368622321503775666622503982534335974568884423900265498198385487948292206894721689831099698365846814022854243330660339850886445804001034933970427567186443383770486037861622771738545623065874679014086723327636718751234567890123456789012345678901e-308',
    '1.7976931348623157e308',
    '1.7976931348623158e308',
    '1.7976931348623159e308',
    '9007199254740993',
    '9007199254740992.9999999999',
    '1e23',
    '8.5e22',
    '0.000000000000000000000000000000000000000000000000000000000000001',
    '123456789012345678901234567890e-10',
    '0e400',
    '-0.0',
    '1e400',
    '1e-400',
  ])('%s', (text) => {
    expect(Object.is(parseOne(text), Number(text))).toBe(true);
  });

  it('with the exponents of Fortran, and without a number where its field was too narrow', () => {
    expect(parseOne('1.5D+02')).toBe(150);
    expect(parseOne('-1.5-110')).toBe(-1.5e-110);
    expect(parseOne('.5q0')).toBe(0.5);
    expect(parseOne('********')).toBeNaN();
    expect(parseOne('-Infinity')).toBe(Number.NEGATIVE_INFINITY);
  });
});

describe('the kernel reads what its plain twin reads', () => {
  const token = fc.oneof(
    { weight: 8, arbitrary: fc.double().map(String) },
    { weight: 3, arbitrary: fc.constantFrom('1.0D+00', '-1.5-110', 'nan', 'inf', '***', '', '1_8', '+.5e3', '5.') },
    {
      weight: 2,
      arbitrary: fc.constantFrom('word', '"7.5"', '1e', '1.2.3', '--1', 'e5', '.', '"a b"', '"1,2"', '1e9999999'),
    },
  );
  const line = (separator: string) =>
    fc.oneof(
      { weight: 6, arbitrary: fc.array(token, { minLength: 1, maxLength: 4 }).map((cells) => cells.join(separator)) },
      { weight: 6, arbitrary: fc.tuple(fc.double(), fc.double(), fc.double()).map((cells) => cells.join(separator)) },
      { weight: 1, arbitrary: fc.constantFrom('', '   ', '# note', '  ! note', '% note', '\t', '\r') },
    );
  for (const [name, separator] of [
    ['blanks', null],
    ['commas', ','],
    ['semicolons', ';'],
  ] as const) {
    it(`in tables with ${name}, whole, broken or cut anywhere`, () => {
      const wanted = fc.array(fc.boolean(), { minLength: 3, maxLength: 3 });
      fc.assert(
        fc.property(
          fc.array(line(separator ?? '  '), { maxLength: 12 }),
          fc.constantFrom('\n', '\r\n'),
          fc.boolean(),
          fc.nat(),
          wanted,
          (lines, newline, final, cut, columns) => {
            const all = bytes(lines.join(newline));
            const piece = all.subarray(0, cut % (all.length + 1));
            const code = separator === null ? null : separator.charCodeAt(0);
            const [plain, fast] = [plainTextParser(code, columns), vectorTextParser(module, code, columns)];
            const want = plain.parse(piece, final);
            expect(fast.parse(piece, final)).toEqual(want);
            const values = (parser: TextParser) =>
              parser.columns.map((column) => bitsOf(column.subarray(0, want.rows)));
            expect(values(fast)).toEqual(values(plain));
          },
        ),
        { numRuns: 400 },
      );
    });
  }
});
