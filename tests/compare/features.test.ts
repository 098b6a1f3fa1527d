import { describe, expect, it } from 'vitest';
import { takeFeature } from '../../src/compare/features.ts';
import { evaluateFormula } from '../../src/compare/formula.ts';
import type { Series } from '../../src/compare/series.ts';
import type { Feature } from '../../src/model/manifest.ts';

const count = 2001;
const x = Float64Array.from({ length: count }, (_, i) => i / (count - 1));
const series = (name: string, unit: string, of: (x: number) => number): Series => ({
  name,
  unit,
  values: x.map(of),
  shape: [count],
  type: 'float64',
  along: { name: 'x', unit: 'cm', values: x },
});
const sigma = 0.05;
const pulse = series('pulse', 'K', (at) => 3 * Math.exp(-((at - 0.4) ** 2) / (2 * sigma ** 2)));
const wave = series('wave', 'K', (at) => 2 + Math.sin((2 * Math.PI * at) / 0.125));
const line = series('line', 'g', (at) => 4 - 7 * at);

describe('features have their closed forms', () => {
  const cases: readonly [Feature['take'], Series, number, number, number?][] = [
    ['maximum', pulse, 3, 1e-12],
    ['where-maximum', pulse, 0.4, 1e-12],
    // Integral of a Gaussian: height * sigma * sqrt(2 pi).
    ['integral', pulse, 3 * sigma * Math.sqrt(2 * Math.PI), 1e-9],
    // Full width at half maximum of a Gaussian: 2 sqrt(2 ln 2) sigma.
    ['half-width', pulse, 2 * Math.sqrt(2 * Math.log(2)) * sigma, 1e-5],
    ['crossing', line, 4 / 7, 1e-12, 0],
    ['slope', line, -7, 1e-12],
    ['final', line, -3, 1e-12],
    ['minimum', line, -3, 1e-12],
    ['mean', line, 0.5, 1e-12],
    ['period', wave, 0.125, 1e-5],
  ];
  for (const [take, of, expected, within, level] of cases) {
    it(`${take} of a ${of.name} is ${expected}`, () => {
      const taken = takeFeature({ take, ...(level === undefined ? {} : { level }) }, of);
      expect('value' in taken && Math.abs(taken.value - expected)).toBeLessThan(within);
    });
  }

  it('a field with a NaN has none', () => {
    const broken = { ...pulse, values: Float64Array.of(1, Number.NaN) };
    expect(takeFeature({ take: 'maximum' }, broken)).toEqual({ why: 'pulse holds a NaN' });
  });

  it('what never happens is said so', () => {
    expect(takeFeature({ take: 'crossing', level: 99 }, line)).toEqual({ why: 'line never crosses 99' });
    expect(takeFeature({ take: 'half-width' }, line)).toHaveProperty('why');
  });
});

describe('a formula', () => {
  const quantities = new Map([
    ['pulse', pulse],
    ['line', line],
    ['peak-line', line],
  ]);
  const value = (formula: string) => {
    const found = evaluateFormula(formula, quantities);
    if ('why' in found) throw new Error(found.why);
    return found;
  };

  it('follows ordinary notation', () => {
    expect(value('1 + 2 * 3 ^ 2 ^ 0.5').value).toBeCloseTo(1 + 2 * 3 ** (2 ** 0.5), 12);
    expect(value('-2 ** 2').value).toBe(-4);
    expect(value('(1 - 4) / 2e0 - .5').value).toBe(-2);
    expect(value('sqrt(maximum(pulse) * 3 [K])').value).toBeCloseTo(3, 12);
    expect(value('maximum(peak-line) - first(line)').value).toBe(0);
  });

  it('works fields element by element and carries units along', () => {
    expect(value('maximum(line / line)')).toEqual({ value: 1, unit: '' });
    expect(value('integral(pulse) / maximum(pulse)').unit).toBe('(K.cm)/K');
    expect(value('mean(pulse * line)').unit).toBe('K.g');
  });

  it('refuses to add what has different units, and says where', () => {
    expect(evaluateFormula('maximum(pulse) + final(line)', quantities)).toEqual({
      why: 'in "maximum(pulse) + final(line)" at character 29: K and g cannot be added',
    });
  });

  it('says what is wrong with it', () => {
    const why = (formula: string) => (evaluateFormula(formula, quantities) as { why: string }).why;
    expect(why('pulse * 2')).toContain('is a field of 2001 elements');
    expect(why('maximum(nothing)')).toContain('there is no quantity "nothing"; the case has pulse, line, peak-line');
    expect(why('maximum(pulse')).toContain('expected ")"');
    expect(why('2 +')).toContain('at character 4: expected a number');
    expect(why('1'.repeat(5000))).toContain('too long');
    expect(why('2 3')).toContain('expected an operator or the end');
    expect(why(`${'('.repeat(1500)}1${')'.repeat(1500)}`)).toContain('nested too deeply');
  });
});
