// clang judges: what its syntax tree holds of the machine's own headers and of generated programs, the reader has to see.
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, expect, it } from 'vitest';
import { describeWith } from '../../support/tools.ts';
import { agreementOn, preprocessed, share } from './agreement.ts';
import { aProgram } from './generated-program.ts';

const folder = mkdtempSync(join(tmpdir(), 'mortise-clang-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function judged(source: string, language: 'c' | 'c++', flags: readonly string[] = []) {
  const file = join(folder, language === 'c' ? 'judged.c' : 'judged.cc');
  writeFileSync(file, preprocessed(source, language, flags));
  return agreementOn(file, language, flags);
}

describeWith(['clang'], 'headers of the machine, judged by clang', () => {
  it('give the procedures, arguments, types and calls of the C library and of the vector intrinsics', () => {
    const headers = [
      'stdio',
      'stdlib',
      'string',
      'math',
      'complex',
      'pthread',
      'signal',
      'sys/socket',
      'time',
      'smmintrin',
    ];
    const {
      procedures,
      arguments: args,
      calls,
    } = judged(headers.map((one) => `#include <${one}.h>\n`).join(''), 'c', ['-msse4.1']);
    expect(procedures.clang).toBeGreaterThan(1500);
    expect([procedures.missed, procedures.invented, args.names, args.types]).toEqual([[], [], [], []]);
    expect(calls.clang).toBeGreaterThan(300);
    expect([calls.missed, calls.invented]).toEqual([[], []]);
  });

  it('give those of the C++ library, which has every way of writing a declaration', () => {
    const source = ['vector', 'map', 'valarray', 'memory'].map((one) => `#include <${one}>\n`).join('');
    const { procedures, arguments: args, calls } = judged(source, 'c++', ['-std=c++17']);
    expect(procedures.clang).toBeGreaterThan(3000);
    const right = procedures.clang - procedures.missed.length;
    expect(share(right - args.names.length, procedures.clang)).toBeGreaterThanOrEqual(0.998);
    expect(share(right - args.names.length, right + procedures.invented.length)).toBeGreaterThanOrEqual(0.998);
    expect(share(args.compared - args.types.length, args.compared)).toBeGreaterThanOrEqual(0.995);
    const hit = calls.clang - calls.missed.length;
    expect(share(hit, calls.clang)).toBeGreaterThanOrEqual(0.99);
    expect(share(hit, hit + calls.invented.length)).toBeGreaterThanOrEqual(0.99);
  }, 300_000);
});

describeWith(['clang'], 'generated programs, judged by clang', () => {
  for (const language of ['c', 'c++'] as const) {
    it(`give the same procedures, arguments, types, calls, fields and enumerators in ${language === 'c' ? 'C' : 'C++'}`, () => {
      fc.assert(
        fc.property(aProgram(language), (program) => {
          const file = join(folder, language === 'c' ? 'generated.c' : 'generated.cc');
          writeFileSync(file, program);
          const flags = language === 'c' ? ['-std=c11'] : ['-std=c++17'];
          const { procedures, arguments: args, calls, says, read } = agreementOn(file, language, flags);
          expect(says.diagnostics).toBe('');
          expect([procedures.missed, procedures.invented, args.names, args.types]).toEqual([[], [], [], []]);
          expect([calls.missed, calls.invented]).toEqual([[], []]);
          const fields = (list: readonly { name: string; fields: readonly { name: string }[] }[]) =>
            list.map((one) => `${one.name}: ${one.fields.map((field) => field.name).join(' ')}`).sort();
          expect(fields(read.types.filter((one) => /^(?:struct|class|union)$/.test(one.kind)))).toEqual(
            fields(says.records),
          );
          const enumerators = says.enumerators.map((one) => `${one.name} = ${one.value}`).sort();
          const values = read.constants.map((one) => `${one.name} = ${one.value}`);
          expect(values.filter((one) => enumerators.includes(one)).sort()).toEqual(enumerators);
          // What each argument may be left out of a call must be known: a call with fewer is then no mistake.
          for (const one of says.functions) {
            const mine = read.procedures.find((each) => each.line === one.line && each.column === one.column)!;
            expect(mine.args.map((arg) => arg.optional)).toEqual(one.args.map((arg) => arg.hasDefault));
          }
        }),
        { numRuns: 10 },
      );
    }, 300_000);
  }

  it('have constants whose values clang finds equal', () => {
    const leaf = fc.oneof(
      fc.integer({ min: 1, max: 5000 }).map(String),
      fc.double({ min: 1e-30, max: 1e30, noNaN: true }).map((value) => value.toExponential()),
      fc.constantFrom('0x1F', '1.5f', '017', '2.', '.25', '1e3', '6.02214076e23'),
    );
    const { expression } = fc.letrec<{ expression: string }>((tie) => ({
      expression: fc.oneof(
        { maxDepth: 4, withCrossShrink: true },
        leaf,
        fc
          .tuple(tie('expression'), fc.constantFrom('+', '-', '*'), tie('expression'))
          .map((parts) => `(${parts.join(' ')})`),
        tie('expression').map((one) => `-(${one})`),
        fc.tuple(tie('expression'), leaf).map(([one, other]) => `${one} / ${other}`),
      ),
    }));
    fc.assert(
      fc.property(fc.array(expression, { minLength: 5, maxLength: 30 }), (expressions) => {
        const lines = expressions.map(
          (one, index) =>
            `constexpr double k${index} = ${index > 0 && index % 3 === 0 ? `k${index - 1} + ` : ''}${one};`,
        );
        const file = join(folder, 'constants.cc');
        writeFileSync(file, `${lines.join('\n')}\n`);
        const { read } = agreementOn(file, 'c++', ['-std=c++17']);
        const checks = read.constants
          .filter((one) => typeof one.value === 'number' && Number.isFinite(one.value))
          .map((one) => `static_assert(${one.name} == ${exact(one.value as number)}, "${one.name}");`);
        expect(read.constants.map((one) => one.name)).toEqual(expressions.map((_, index) => `k${index}`));
        writeFileSync(file, `${lines.join('\n')}\n${checks.join('\n')}\n`);
        const { says } = agreementOn(file, 'c++', ['-std=c++17', '-Wno-everything']);
        // An overflow of int is an error of the program, not of the reader.
        fc.pre(!/integral constant|not a constant expression|overflow|constexpr variable/.test(says.diagnostics));
        expect(says.diagnostics).toBe('');
        // None may be left out for fear of being wrong, but those that divide by a whole number that came to zero.
        expect(checks.length).toBeGreaterThanOrEqual(expressions.length * 0.8);
      }),
      { numRuns: 10 },
    );
  }, 300_000);
});

/** Every bit of a double, so that clang compares what was meant. */
function exact(value: number): string {
  if (value === 0) return Object.is(value, -0) ? '-0.0' : '0.0';
  return Number.isInteger(value) && Math.abs(value) < 1e15
    ? value.toFixed(1)
    : value.toExponential(17).replace('e+', 'e');
}
