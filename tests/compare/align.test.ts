import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ontoCoarser, pairByKey, sameAxis, shiftOf } from '../../src/compare/align.ts';
import type { Series } from '../../src/compare/series.ts';

const series = (x: readonly number[], values: readonly number[]): Series => ({
  name: 'rho',
  unit: 'g/cm3',
  values: Float64Array.from(values),
  shape: [values.length],
  type: 'float64',
  along: { name: 'x', unit: 'cm', values: Float64Array.from(x) },
});
const grid = (count: number) => Array.from({ length: count }, (_, i) => (i + 0.5) / count);

describe('two grids', () => {
  it('are brought onto the coarser one, whichever side has it, and a straight line stays one', () => {
    const [coarse, fine] = [grid(10), grid(37)];
    const line = (x: number) => 3 * x - 1;
    for (const [a, b] of [
      [coarse, fine],
      [fine, coarse],
    ] as const) {
      const aligned = ontoCoarser(series(a, a.map(line)), series(b, b.map(line)), false);
      if ('why' in aligned) throw new Error(aligned.why);
      // The outermost coarse centres lie inside the fine ones, so all ten stay.
      expect([...aligned.reference.along!.values]).toEqual(coarse);
      aligned.reference.values.forEach((value, i) => {
        expect(value).toBeCloseTo(aligned.result.values[i]!, 13);
      });
      expect(aligned.note).toContain(a === coarse ? "10 elements of the reference's" : "10 elements of the result's");
    }
  });

  it('keep the total of an amount, however they cut the same stretch', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 12 }),
        fc.array(fc.double({ min: 0, max: 1e3, noNaN: true }), { minLength: 12, maxLength: 40 }),
        (count, amounts) => {
          const aligned = ontoCoarser(
            series(grid(count), Array(count).fill(1)),
            series(grid(amounts.length), amounts),
            true,
          );
          if ('why' in aligned) throw new Error(aligned.why);
          const total = (values: Iterable<number>) => [...values].reduce((sum, value) => sum + value, 0);
          expect(total(aligned.result.values)).toBeCloseTo(total(amounts), 8);
        },
      ),
    );
  });

  it('may fall as well as rise', () => {
    const x = [3, 2, 1, 0];
    const aligned = ontoCoarser(series(x, [9, 4, 1, 0]), series([0, 1, 2, 3, 4], [0, 1, 4, 9, 16]), false);
    if ('why' in aligned) throw new Error(aligned.why);
    expect([...aligned.reference.values]).toEqual([...aligned.result.values]);
  });

  it('that do not overlap, or are no line of positions, cannot be compared', () => {
    expect(ontoCoarser(series([0, 1], [1, 1]), series([2, 3], [1, 1]), false)).toEqual({
      why: 'the axes differ and do not overlap',
    });
    expect(ontoCoarser(series([0, 1, 0.5], [1, 1, 1]), series([0, 1], [1, 1]), false)).toHaveProperty('why');
  });

  it('are the same when positions differ by rounding only', () => {
    const x = series(grid(100), grid(100)).along!;
    expect(sameAxis(x, { ...x, values: x.values.map((value) => value * (1 + 1e-15)) })).toBe(true);
    expect(sameAxis(x, { ...x, values: x.values.map((value) => value * 1.001) })).toBe(false);
  });
});

describe('elements in another order', () => {
  it('are paired by their keys', () => {
    fc.assert(
      fc.property(fc.uniqueArray(fc.integer(), { minLength: 1, maxLength: 50 }), fc.integer(), (keys, seed) => {
        const order = keys.map((_, i) => i).sort((i, j) => Math.sin(i + seed) - Math.sin(j + seed));
        const values = keys.map((key) => key * 0.5);
        const reference = { ...series(keys, values), along: null };
        const result = {
          ...series(
            keys,
            order.map((i) => values[i]!),
          ),
          along: null,
        };
        const paired = pairByKey(
          reference,
          result,
          Float64Array.from(keys),
          Float64Array.from(order, (i) => keys[i]!),
        );
        if ('why' in paired) throw new Error(paired.why);
        expect(paired.result.values).toEqual(reference.values);
      }),
    );
  });

  it('cannot be paired when some are lost or doubled', () => {
    const three = { ...series([0, 1, 2], [1, 2, 3]), along: null };
    const keys = Float64Array.of(10, 11, 12);
    expect(pairByKey(three, three, keys, Float64Array.of(10, 11, 13))).toEqual({
      why: '1 of 3 elements of the reference are not in the result, the first with the key 12',
    });
    expect(pairByKey(three, three, keys, Float64Array.of(10, 11, 11))).toHaveProperty('why');
  });
});

describe('a shift along the axis', () => {
  it('is found, within what is allowed', () => {
    const x = grid(400);
    const pulse = (at: number) => x.map((position) => Math.exp(-(((position - at) / 0.05) ** 2)));
    for (const shift of [0, 0.0123, -0.04]) {
      const found = shiftOf(series(x, pulse(0.5)), series(x, pulse(0.5 + shift)), 0.1);
      expect(found).toBeCloseTo(shift, 4);
    }
    expect(Math.abs(shiftOf(series(x, pulse(0.5)), series(x, pulse(0.8)), 0.1)!)).toBeLessThanOrEqual(0.1);
  });
});
