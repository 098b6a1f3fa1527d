/** The table of constants and the editions read off literals, against tests/checks/constants.json. Sources stand in the entries. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { CONSTANTS } from '../../src/constants/constant-table.ts';
import { digitsOf, literalValue } from '../../src/constants/digits.ts';
import { singleError } from '../../src/constants/doubtful-literals.ts';
import { recognise } from '../../src/constants/recognise.ts';
import { constantFactor, type Edition } from '../../src/units/constant-values.ts';
import { toNumber } from '../../src/units/rational.ts';

interface Entry {
  readonly id: string;
  readonly topic: string;
  readonly inputs: Readonly<Record<string, string>> & {
    readonly defines?: Readonly<Record<string, string>>;
    readonly literals_g?: readonly string[];
  };
  // biome-ignore lint/suspicious/noExplicitAny: every group of entries has its own shape
  readonly expected: any;
  readonly tolerance: { readonly relative?: number };
  readonly source: string;
}

const entries = JSON.parse(readFileSync(new URL('../checks/constants.json', import.meta.url), 'utf8')) as Entry[];
const floating = JSON.parse(readFileSync(new URL('../checks/floating-point.json', import.meta.url), 'utf8')) as Entry[];

/** Digits without trailing zeros, and the power of ten: equal for equal decimals. */
const decimal = (text: string) => {
  const { digits, exponent } = digitsOf(text)!;
  return `${digits.replace(/0+$/, '')} e${exponent}`;
};
const record = (symbol: string) => CONSTANTS.find((constant) => constant.symbol === symbol)!;

describe('values by edition', () => {
  for (const { id, inputs, expected, source } of entries.filter(({ id }) => /^const-(?!arad|consistency)/.test(id))) {
    const edition = inputs.edition!.split(' ')[1]!;
    it(`${id} carries the published digits (${source})`, () => {
      const own = record(inputs.constant!).values[edition]!;
      // Of an exact value that is printed cut off, the table holds as many digits as the entry or a double needs.
      if (expected.si.value_full !== undefined) expect(Number(own)).toBe(Number(expected.si.value_full));
      else expect(decimal(own)).toBe(decimal(expected.si.value));
    });
    for (const { unit, value } of expected.cgs ?? [])
      it(`${id} is read in ${unit}`, () => {
        const found = recognise(
          value.includes('.') && digitsOf(value)!.digits.length > 17 ? String(Number(value)) : value,
          inputs.constant!,
        );
        expect(found?.editions).toContain(edition);
      });
  }
});

describe('relations between the constants of one edition', () => {
  const value = (symbol: string, edition: string) => Number(record(symbol).values[edition]);
  for (const { id, inputs, expected, tolerance, source } of entries.filter(({ id }) => id.startsWith('const-arad')))
    it(`${id}: the radiation constant follows k and h (${source})`, () => {
      const edition = inputs.edition!.split(' ')[1]!;
      expect(Math.abs(value('a_rad', edition) / Number(expected['a_from_k_h_c_J_m-3_K-4']) - 1)).toBeLessThan(
        tolerance.relative!,
      );
      const fromSigma = (4 * value('sigma_SB', edition)) / value('c', edition);
      expect(Math.abs(fromSigma / Number(expected['a_from_4sigma_over_c_J_m-3_K-4']) - 1)).toBeLessThan(
        tolerance.relative!,
      );
      expect(recognise(expected['a_from_k_h_c_erg_cm-3_K-4'], 'arad')?.editions).toContain(edition);
    });
  for (const { id, inputs, expected, tolerance, source } of entries.filter(({ id }) =>
    id.startsWith('const-consistency'),
  ))
    it(`${id}: R is k N_A and hbar is h / 2 pi (${source})`, () => {
      const edition = inputs.edition!.split(' ')[1]!;
      const product = value('k_B', edition) * value('N_A', edition);
      expect(Math.abs(product / Number(expected.k_times_NA) - 1)).toBeLessThan(tolerance.relative!);
      expect(Math.abs(value('R', edition) / product - 1)).toBeLessThan(2e-6);
      const reduced = value('h', edition) / (2 * Math.PI);
      expect(Math.abs(reduced / Number(expected.h_over_2pi) - 1)).toBeLessThan(tolerance.relative!);
      expect(Math.abs(value('hbar', edition) / reduced - 1)).toBeLessThan(2e-6);
    });
});

describe('editions of literals', () => {
  for (const { id, inputs, expected, source } of entries.filter(({ id }) => id.startsWith('literal-')))
    it(`${inputs.literal} for ${inputs.constant} carries ${expected.best.join(', ')} (${source})`, () => {
      const found = recognise(inputs.literal!, inputs.constant!);
      expect(found?.symbol, id).toBe(inputs.constant);
      expect(found?.system).toBe(inputs.unit_system);
      expect([...(found?.editions ?? [])].sort()).toEqual([...expected.best].sort());
    });
  for (const { id, inputs, expected, source } of entries.filter(({ id }) => id === 'mixed-header-gsl-cgsm'))
    it(`${id}: a header of mixed editions (${source})`, () => {
      for (const [name, literal] of Object.entries(inputs.defines!)) {
        const found = recognise(literal, name);
        expect([...(found?.editions ?? [])].sort(), name).toEqual([...expected.editions[name]].sort());
      }
    });
});

describe('a published unit table by its constants', () => {
  const { inputs, source } = entries.find(({ id }) => id === 'table-ucum-21-22')!;
  const SYMBOLS: Readonly<Record<string, string>> = {
    '[h]': 'h',
    '[k]': 'k_B',
    '[e]': 'e',
    '[m_e]': 'm_e',
    '[m_p]': 'm_p',
    '[G]': 'G',
    u: 'm_u',
  };
  for (const [table, edition] of [
    ['ucum-2.1', '1986'],
    ['ucum-2.2', '2018'],
  ] as const)
    it(`${table} stands together in ${edition} (${source})`, () => {
      for (const [name, value] of Object.entries(inputs[table] as unknown as Record<string, string>))
        expect(recognise(value.split(' ')[0]!, SYMBOLS[name]!)?.editions, name).toContain(edition);
    });
});

describe('astronomical constants', () => {
  for (const { id, inputs, expected, source } of entries.filter(({ id }) => id.startsWith('iau-'))) {
    const symbol = inputs.symbol!.replace(/_eq_N$|_N$/, '');
    it(`${id} is ${symbol} of the IAU (${source})`, () => {
      for (const value of Object.values(expected.values) as string[]) {
        const found = recognise(value, symbol);
        expect(found?.symbol).toBe(symbol);
        expect(found?.relativeError).toBeLessThanOrEqual(1e-9);
      }
    });
  }
  for (const { id, inputs, expected, tolerance, source } of entries.filter(({ id }) => /^msun-g-\d/.test(id)))
    it(`${id}: the solar mass follows G (${source})`, () => {
      const edition = id.slice(-4) as Edition;
      expect(toNumber(constantFactor('G', edition).ratio)).toBe(Number(inputs.G));
      const mass = toNumber(constantFactor('GM_sun').ratio) / toNumber(constantFactor('G', edition).ratio);
      expect(Math.abs(mass / Number(expected.M_sun_kg) - 1)).toBeLessThan(tolerance.relative!);
      expect(Math.abs(Number(record('M_sun').values[edition]) / Number(expected.M_sun_kg) - 1)).toBeLessThan(1e-9);
    });
  const { inputs, source } = entries.find(({ id }) => id === 'msun-literals')!;
  for (const literal of inputs.literals_g!)
    it(`${literal} g is a solar mass (${source}; literals are common practice)`, () => {
      expect(recognise(literal, 'msun')?.symbol).toBe('M_sun');
    });
});

describe('literals of source files', () => {
  for (const { id, inputs, expected, source } of floating.filter(
    ({ topic }) => topic === 'floating point: source literals',
  )) {
    if (inputs.kind !== undefined)
      it(`${id}: ${inputs.literal} in single precision (${source})`, () => {
        expect(Math.fround(literalValue(inputs.literal!))).toBe(Number(expected.value));
        expect(singleError(inputs.literal!)).toBeCloseTo(expected.relative_error, 15);
      });
    else if (inputs.literal === '1.5-10')
      it('1.5-10 is a subtraction in source text and no literal', () => {
        expect(digitsOf('1.5-10')).toBeNull();
      });
    else if (!inputs.literal!.startsWith('0x'))
      it(`${id}: ${inputs.literal} (${source})`, () => {
        expect(literalValue(inputs.literal!)).toBe(Number(expected.value));
      });
  }
});

describe('ordinary numbers', () => {
  for (const text of [
    '1.0',
    '9.81',
    '300',
    '6.0',
    '0.5',
    '273.15',
    '100000',
    '1e-6',
    '3.0',
    '2.0d0',
    '1.4',
    '1013.25',
    '287.0',
    '6.5e-3',
    '1.0e-10',
    '3.6e3',
    '0.001',
    '1e30',
    '1.0e-8',
    '2.7',
    '4.2e7',
    '1.5e-24',
  ])
    it(`${text} is no constant`, () => {
      expect(recognise(text, null)).toBeNull();
      expect(recognise(text, 'x')).toBeNull();
    });
});
