/** Every published factor in tests/checks/units.json, in every spelling given there. Sources stand in the entries. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { Edition } from '../../src/units/constant-values.ts';
import { conversion } from '../../src/units/conversion.ts';
import { readUnit } from '../../src/units/read-unit.ts';

const entries = JSON.parse(readFileSync(new URL('../checks/units.json', import.meta.url), 'utf8')) as Entry[];

type Side = Readonly<Record<string, string | readonly string[]>>;
interface Entry {
  readonly id: string;
  readonly inputs: { readonly from: Side & string; readonly to: Side & string; readonly value: number };
  readonly expected: {
    readonly factor: number;
    readonly value?: string;
    readonly outcome: string;
    readonly printed_digits: number;
    readonly dimensions_of_from: object;
    readonly constants_edition?: string;
    readonly needs_named_equivalence?: boolean;
  };
  readonly tolerance: { readonly relative: number };
  readonly source: string;
}

/** The relation each entry that changes dimension is converted by; the file says only that one must be named. */
const NAMED: Record<string, object> = {
  'unit-nb-rho-mu22': { massBasis: 'm_u' },
  'unit-mev-c2-g': { equivalence: 'mass-energy' },
  'unit-cm-1-ev': { equivalence: 'photon-wavenumber' },
  'unit-ev-kjmol': { equivalence: 'per-mole' },
  'unit-mevbaryon-ergg-mu18': { massBasis: 'm_u' },
  'unit-kbbaryon-erggk-na': { massBasis: 'N_A' },
  'unit-mevfm3-gcm3': { equivalence: 'mass-energy' },
  'unit-cgs-vs-geom': { equivalence: 'mass-energy' },
  'unit-kev-k': { equivalence: 'thermal' },
  'unit-gk-kev': { equivalence: 'thermal' },
  'unit-fm-mev-1': { equivalence: 'natural-length' },
  'unit-msun-km': { equivalence: 'geometric-mass' },
};

for (const { id, inputs, expected, tolerance, source } of entries) {
  if (id.startsWith('unit-table-')) continue;
  if (id.startsWith('ucum-ft')) {
    // UCUM functional tests (Eclipse Public License): the outcome is rounded to the digits printed.
    it(`${id}: ${inputs.value} ${inputs.from} is ${expected.outcome} ${inputs.to} (${source})`, () => {
      const answer = conversion(inputs.from, inputs.to, { syntax: 'ucum' });
      if ('error' in answer) throw new Error(answer.error.says);
      const value = answer.factor * Number(inputs.value) + answer.offset;
      const digits = Math.min(expected.printed_digits, 15);
      expect(Math.abs(value / Number(expected.outcome) - 1)).toBeLessThan(digits < 15 ? 10 ** (1 - digits) / 2 : 1e-15);
    });
    continue;
  }
  describe(`${id} (${source})`, () => {
    const edition = /CODATA (\d{4})/.exec(expected.constants_edition ?? '')?.[1] as Edition | undefined;
    const named = { ...NAMED[id], ...(edition === undefined ? {} : { edition }) };
    const spellings = (side: Side) =>
      ['ucum', 'vounits', 'udunits', 'freehand', 'freehand_ambiguous'].flatMap((syntax) =>
        [side[syntax] ?? []].flat().map((text) => [syntax, text] as const),
      );
    for (const [syntax, from] of spellings(inputs.from))
      for (const [toSyntax, to] of spellings(inputs.to)) {
        if (syntax !== toSyntax && !(syntax.startsWith('freehand') && toSyntax.startsWith('freehand'))) continue;
        const strict = syntax.startsWith('freehand') ? {} : { syntax: syntax as 'ucum' };
        for (const options of syntax.startsWith('freehand')
          ? [strict, { syntax: 'freehand' as const }]
          : [strict, {}]) {
          it(`${syntax} ${from} to ${to} ${JSON.stringify(options)}`, () => {
            const answer = conversion(from, to, { ...options, ...named });
            if ('error' in answer) throw new Error(JSON.stringify(answer));
            if (expected.value !== undefined)
              expect(Math.abs(answer.factor * inputs.value + answer.offset - Number(expected.value))).toBeLessThan(
                1e-9,
              );
            else {
              expect(Math.abs(answer.factor / expected.factor - 1)).toBeLessThanOrEqual(tolerance.relative);
              expect(answer.dimension).toEqual(expected.dimensions_of_from);
            }
            if (syntax === 'freehand_ambiguous') expect(answer.readings?.length).toBeGreaterThan(1);
            if (syntax === 'freehand') expect(answer.readings).toBeUndefined();
          });
        }
        if (expected.needs_named_equivalence)
          it(`${from} to ${to} is refused while no relation is named`, () => {
            expect(conversion(from, to)).toHaveProperty('error');
          });
      }
  });
}

describe('the readings of ambiguous strings', () => {
  it('names every one of them', () => {
    const reading = readUnit('yr');
    const readings = 'error' in reading ? [] : (reading.readings ?? []);
    expect(readings.map(({ unit }) => unit?.factor.ratio.numerator)).toContain(31557600n);
  });
});
