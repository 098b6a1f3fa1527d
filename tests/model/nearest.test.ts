import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { didYouMean, nearest } from '../../src/model/nearest.ts';

describe('the nearest name', () => {
  it.each([
    ['expcets', ['expects', 'offers', 'select'], 'expects'],
    ['densty', ['density', 'temperature'], 'density'],
    ['eos-ionizing', ['eos-ionising', 'eos-table'], 'eos-ionising'],
    ['Eos_Table', ['eos-ionising', 'eos-table'], 'eos-table'],
    ['ionising', ['eos-ionising', 'eos-table'], 'eos-ionising'],
    ['form', ['from', 'for'], 'from'],
    ['entropy', ['density', 'pressure'], null],
    ['x', ['density'], null],
    ['', ['density'], null],
    ['anything', [], null],
  ])('to %s among %j is %s', (meant, known, expected) => expect(nearest(meant, known)).toBe(expected));

  it('of a known name is that name, whatever else is known', () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.string({ minLength: 1, maxLength: 20 }), { minLength: 1 }),
        fc.nat(),
        (known, at) => {
          const name = known[at % known.length]!;
          const found = nearest(name, known);
          expect(found?.toLowerCase().replace(/[_ ]/g, '-')).toBe(name.toLowerCase().replace(/[_ ]/g, '-'));
        },
      ),
    );
  });

  it('is found quickly however long the names are', () => {
    const start = performance.now();
    nearest('a'.repeat(1e6), ['b'.repeat(1e6), 'a'.repeat(1e6 - 1)]);
    expect(performance.now() - start).toBeLessThan(5000);
  });

  it('is put into words, or left out', () => {
    expect(didYouMean('chekc', ['check', 'drift'])).toBe(' (did you mean "check"?)');
    expect(didYouMean('zzzzzz', ['check', 'drift'])).toBe('');
  });
});
