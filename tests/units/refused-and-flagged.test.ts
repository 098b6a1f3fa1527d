/** Every string of tests/checks/units-rejects.json: refused, flagged with its readings, or accepted in the syntaxes that know it. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { readUnit, type UnitSyntax } from '../../src/units/read-unit.ts';
import { factorValue } from '../../src/units/unit.ts';

interface Entry {
  readonly id: string;
  readonly inputs: { readonly string: string; readonly syntax?: UnitSyntax };
  readonly expected: {
    readonly valid?: boolean;
    readonly verdict?: string;
    readonly by_syntax?: Readonly<Record<string, boolean>>;
    readonly readings?: Readonly<Record<string, string>>;
  };
  readonly source: string;
}

const entries = JSON.parse(readFileSync(new URL('../checks/units-rejects.json', import.meta.url), 'utf8')) as Entry[];

for (const { id, inputs, expected, source } of entries) {
  const text = inputs.string;
  if (expected.valid !== undefined) {
    it(`${id}: ${text} is ${expected.valid ? '' : 'not '}a unit of UCUM (${source})`, () => {
      expect('unit' in readUnit(text, { syntax: 'ucum' })).toBe(expected.valid);
    });
    continue;
  }
  describe(`${id}: ${text} (${source})`, () => {
    const reading = readUnit(text);
    if (expected.verdict === 'reject')
      it('is refused with a place', () => {
        expect(reading).toHaveProperty('error.column');
      });
    if (expected.verdict === 'accept-in-some-syntaxes')
      it('is read', () => {
        expect(reading).toHaveProperty('unit');
      });
    if (expected.verdict === 'flag') {
      it('is flagged with more than one reading', () => {
        expect('error' in reading ? 0 : reading.readings?.length).toBeGreaterThan(1);
      });
      for (const [reader, words] of Object.entries(expected.readings ?? {})) {
        const value = Number(words.split(' ')[0]);
        if (Number.isNaN(value) || ['gnu', 'cds'].includes(reader)) continue;
        it(`offers ${words} (${reader})`, () => {
          if ('error' in reading) throw new Error(reading.error.says);
          const factors = (reading.readings ?? []).map(({ unit }) => (unit === null ? 0 : factorValue(unit.factor)));
          expect(factors.some((factor) => Math.abs(factor / value - 1) < 1e-5)).toBe(true);
        });
      }
    }
    for (const [name, valid] of Object.entries(expected.by_syntax ?? {})) {
      // Of VOUnits the entry judges the grammar alone, so a string may be refused that the grammar lets pass.
      // UDUNITS reads m^0.5 as the number 5: refused here on purpose, as the entry advises.
      if ((name.startsWith('vounits') && valid) || (expected.verdict === 'reject' && valid)) continue;
      const syntax = name.startsWith('vounits') ? 'vounits' : (name as UnitSyntax);
      it(`is ${valid ? '' : 'not '}${syntax}`, () => {
        expect('unit' in readUnit(text, { syntax })).toBe(valid);
      });
    }
  });
}
