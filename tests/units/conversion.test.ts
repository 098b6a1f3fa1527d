import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Converted, conversion, dimensionOf, type NotConverted, sameUnit } from '../../src/units/conversion.ts';
import { readUnit } from '../../src/units/read-unit.ts';

const factor = (from: string, to: string, options = {}) => (conversion(from, to, options) as Converted).factor;
const refusal = (from: string, to: string) => conversion(from, to) as NotConverted;

describe('counted things', () => {
  it('never cancel by themselves', () => {
    expect(refusal('MeV/baryon', 'MeV')).toMatchObject({ reason: 'counted' });
    expect(refusal('photon/s', 'Hz')).toMatchObject({ reason: 'counted' });
    expect(refusal('MeV/baryon', 'MeV/nucleon')).toMatchObject({ reason: 'counted' });
  });
  it('convert where both sides count the same', () => {
    expect(factor('MeV/baryon', 'erg/baryon')).toBe(1.602176634e-6);
  });
  it('become masses only by a basis that is named, and different ones differ', () => {
    expect(refusal('MeV/baryon', 'erg/g')).toMatchObject({ reason: 'dimension' });
    expect(refusal('MeV/baryon', 'erg/g').equivalences).toContain('mass basis m_u');
    const ratio =
      factor('MeV/baryon', 'erg/g', { massBasis: 'm_u' }) / factor('MeV/baryon', 'erg/g', { massBasis: 'm_n' });
    // CODATA 2022: m_n / m_u = 1.00866491606
    expect(ratio).toBeCloseTo(1.00866491606, 9);
  });
  it('a mole is a unit of its own', () => {
    expect(refusal('J/mol', 'J')).toMatchObject({ reason: 'dimension' });
  });
});

describe('a change of dimension', () => {
  it('is told apart from what cannot be read', () => {
    expect(refusal('eV', 'K')).toMatchObject({ reason: 'dimension', equivalences: ['thermal'] });
    expect(refusal('eV', 'Kelvi')).toMatchObject({ reason: 'unreadable-to' });
    expect(refusal('g/cm^', 'K')).toMatchObject({ reason: 'unreadable-from', error: { column: 5 } });
  });
  it('refuses an equivalence that does not lead there', () => {
    expect(conversion('eV', 'm', { equivalence: 'thermal' })).toHaveProperty('error');
    expect(conversion('eV', 'K', { equivalence: 'thermic' })).toMatchObject({ reason: 'unknown-option' });
  });
});

describe('exactness', () => {
  it('keeps fractions', () => {
    expect(conversion('km/h', 'cm/s')).toMatchObject({ factorText: '250/9', exact: true });
    expect(conversion('deg', 'rad')).toMatchObject({ factorText: 'pi/180' });
  });
  it('names measured constants with their edition', () => {
    expect(conversion('u', 'g')).toMatchObject({ exact: false, uses: ['m_u (CODATA 2022)'] });
  });
  it('reads fractional powers, exact where the root is', () => {
    expect(conversion('cm^(1/2)', 'm^(1/2)')).toMatchObject({ factorText: '0.1' });
    expect(dimensionOf('g**(1/2) cm^(3/2)/s')).toEqual({ kg: 0.5, m: 1.5, s: -1 });
  });
});

describe('logarithms', () => {
  it('shift by the logarithm of the factor', () => {
    expect(conversion('log10(g/cm3)', 'log10(kg/m3)')).toMatchObject({ factor: 1, offset: 3 });
  });
  it('change base, and magnitudes are -0.4 dex', () => {
    expect(factor('ln(K)', 'log10(K)')).toBeCloseTo(Math.LOG10E, 15);
    // Pogson's ratio: five magnitudes are a factor of 100, brighter is less
    expect(factor('mag', 'dex')).toBeCloseTo(-0.4, 15);
    expect(factor('dB', 'dex')).toBeCloseTo(0.1, 15);
  });
  it('never become the quantity itself', () => {
    expect(refusal('log10(K)', 'K')).toMatchObject({ reason: 'logarithm' });
  });
  it('of no base are read in both', () => {
    const reading = readUnit('log(K)');
    expect('error' in reading ? 0 : reading.readings?.length).toBe(2);
  });
});

describe('spellings of comments', () => {
  for (const [a, b] of [
    ['g/cm3', 'g cm^-3'],
    ['[dyne cm-2]', 'dyn/cm**2'],
    ['erg cm$^{-3}$ s$^{-1}$', 'erg/cm3/s'],
    ['w/m^2', 'W m-2'],
    ['g·cm⁻³', 'g/cc'],
    ['Coulomb-m', 'C.m'],
    ['[Z T-1 ~> m s-1]', 'm/s'],
    ['per second', '1/s'],
    ['cubic centimeter', 'cm3'],
    ['#/cm^3', 'counts/cm3'],
    ['mol ^ -1', '1/mol'],
    ['M_{\\odot}', 'Msun'],
    ['degrees Celsius', 'Cel'],
    ['1/m/(mg/m3)', 'm2/mg'],
    ['gram per cubic centimetre', 'g/cm3'],
    ['ERGS', 'erg'],
  ] as const)
    it(`${a} is ${b}`, () => expect(sameUnit(a, b)).toBe(true));
  it('flags a product behind a solidus, and takes the reading that fits', () => {
    const reading = readUnit('erg/g*s');
    expect('error' in reading ? 0 : reading.readings?.length).toBe(2);
    expect(factor('W/m2 K', 'W.m-2.K-1')).toBe(1);
    expect(factor('mb', 'hPa')).toBe(1);
    expect(factor('mb', 'cm2')).toBe(1e-27);
  });
  it('refuses with the place and what was meant', () => {
    expect(readUnit('erg/Kg')).toMatchObject({ error: { column: 5, width: 2, suggestion: 'kg' } });
  });
});

describe('laws', () => {
  const unit = fc.constantFrom('m', 'cm', 'km', 'Angstrom', 'pc', 'inch', 'um');
  it('there and back again is where one was', () =>
    fc.assert(fc.property(unit, unit, (a, b) => Math.abs(factor(a, b) * factor(b, a) - 1) < 1e-15)));
  it('by way of a third is the same', () =>
    fc.assert(
      fc.property(unit, unit, unit, (a, b, c) => Math.abs((factor(a, b) * factor(b, c)) / factor(a, c) - 1) < 1e-15),
    ));
  it('any text has an answer, and never an exception', () =>
    fc.assert(
      fc.property(
        fc.oneof(fc.string(), fc.string({ unit: fc.constantFrom(...'gcm/s^*-()[]{}0123 .eK10') })),
        (text) => {
          const reading = readUnit(text);
          return 'error' in reading ? reading.error.column >= 1 && reading.error.width >= 1 : reading.unit !== null;
        },
      ),
      { numRuns: 2000 },
    ));
});
