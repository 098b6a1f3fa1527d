import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cUnits } from '../../../src/readers/c/cut-units.ts';
import { joinCUnits } from '../../../src/readers/c/join-units.ts';
import { readC, readCUnit } from '../../../src/readers/c/read-c.ts';
import { aProgram } from './generated-program.ts';

type Language = 'c' | 'c++';

function inUnits(bytes: Uint8Array, language: Language) {
  const units = cUnits(bytes, language);
  let place = 0;
  for (const unit of units) {
    expect(unit.from).toBe(place);
    place = unit.to;
  }
  expect(place).toBe(bytes.length);
  // Each is read from its own bytes alone.
  const readings = units.map((unit) => readCUnit('x', bytes.slice(unit.from, unit.to), unit));
  return { units, joined: joinCUnits(units, readings) };
}

const SOURCE = `#ifndef GAS_H
#define GAS_H
#include <math.h>
/* Boltzmann constant [erg/K] */
#define K_B 1.380649e-16
#define MAKE(T) void set_##T(T x) { }
namespace gas {
namespace { constexpr double twice = 2 * K_B; }
/// pressure [dyn/cm2]
double pressure(double rho, double T)
{
  return rho * K_B * T;
}
struct State : Base {
  double rho; // density [g/cm3]
  State(double r) : Base(r), rho(r) {}
};
MAKE(double)
#ifdef USE_TABLE
double eint(double rho) { return table(rho); }
#else
double eint(double rho) { return twice * rho; }
#endif
} // namespace gas
extern "C" {
  double gas_pressure_(double *rho, double *T) { return gas::pressure(*rho, *T); }
}
gas::State::State() : Base(0.0), rho(0.0) {}
#endif
`;

describe('a file of C or C++ in units', () => {
  it('is read as it is read whole, and is cut at every function outside of alternatives', () => {
    const bytes = new TextEncoder().encode(SOURCE);
    const { units, joined } = inUnits(bytes, 'c++');
    expect(joined).toEqual(readC('x', bytes, { language: 'c++' }));
    expect(units.map((unit) => unit.line)).toEqual([1, 9, 14, 18, 25, 27, 28, 29]);
    expect(joined.procedures.map((one) => one.parent)).toContain('gas');
  });

  it('keeps the id of a unit when only others change', () => {
    const encode = (text: string) => cUnits(new TextEncoder().encode(text), 'c++').map((unit) => unit.id);
    const [before, after] = [
      encode(SOURCE),
      encode(SOURCE.replace('return rho * K_B * T;', 'return\n\n rho * T * K_B;')),
    ];
    expect(after).toHaveLength(before.length);
    expect(after.filter((id, index) => id !== before[index])).toHaveLength(1);
  });

  it('is read so for the headers of the machine', () => {
    const folders = [
      '/usr/include',
      ...(existsSync('/usr/include/c++')
        ? readdirSync('/usr/include/c++').map((one) => join('/usr/include/c++', one, 'bits'))
        : []),
    ];
    let [files, count] = [0, 0];
    for (const folder of folders.filter((one) => existsSync(one))) {
      for (const entry of readdirSync(folder, { withFileTypes: true })) {
        if (!entry.isFile() || ++files % 5 !== 0) continue;
        const bytes = new Uint8Array(readFileSync(join(folder, entry.name)));
        const language = folder === '/usr/include' ? 'c' : 'c++';
        const { units, joined } = inUnits(bytes, language);
        count += units.length;
        expect({ name: entry.name, ...joined }).toEqual({ name: entry.name, ...readC('x', bytes, { language }) });
      }
    }
    if (files > 100) expect(count).toBeGreaterThan(300);
  }, 300_000);

  it('is read so for generated programs and for any bytes', () => {
    for (const language of ['c', 'c++'] as const) {
      const same = (content: Uint8Array) => {
        expect(inUnits(content, language).joined).toEqual(readC('x', content, { language }));
      };
      fc.assert(
        fc.property(aProgram(language), (text) => same(new TextEncoder().encode(text))),
        { numRuns: 30 },
      );
      fc.assert(fc.property(fc.uint8Array({ maxLength: 200 }), same), { numRuns: 200 });
    }
  });
});
