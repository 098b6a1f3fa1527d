import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dividends, sampledShares, shapleyShares, subsetsOf } from '../../src/runs/factorial.ts';

const values = (count: number) =>
  fc.array(fc.integer({ min: -50, max: 50 }), { minLength: 2 ** count, maxLength: 2 ** count });

describe('shapleyShares', () => {
  it('splits a left glove and two right ones as 2/3, 1/6, 1/6 (the glove game of the textbooks, from memory)', () => {
    const worth = subsetsOf(3).map((subset) => (subset & 1 && subset & 6 ? 1 : 0));
    const shares = shapleyShares(worth);
    expect(shares[0]).toBeCloseTo(2 / 3, 12);
    expect(shares[1]).toBeCloseTo(1 / 6, 12);
    expect(shares[2]).toBeCloseTo(1 / 6, 12);
  });

  it('shares out exactly the whole', () => {
    fc.assert(
      fc.property(values(4), (value) => {
        const sum = shapleyShares(value).reduce((a, b) => a + b, 0);
        expect(sum).toBeCloseTo(value.at(-1)! - value[0]!, 9);
      }),
    );
  });

  it('agrees with the average of marginal effects over all orders', () => {
    fc.assert(
      fc.property(values(3), (value) => {
        const orders = [
          [0, 1, 2],
          [0, 2, 1],
          [1, 0, 2],
          [1, 2, 0],
          [2, 0, 1],
          [2, 1, 0],
        ];
        const expected = [0, 0, 0];
        for (const order of orders) {
          let subset = 0;
          for (const thing of order) {
            expected[thing]! += (value[subset | (1 << thing)]! - value[subset]!) / 6;
            subset |= 1 << thing;
          }
        }
        for (const [i, share] of shapleyShares(value).entries()) expect(share).toBeCloseTo(expected[i]!, 9);
      }),
    );
  });
});

describe('dividends', () => {
  it('are zero beyond single exchanges when effects only add up', () => {
    const value = subsetsOf(3).map((subset) => 2 * (subset & 1) + 5 * ((subset >> 1) & 1) - 3 * ((subset >> 2) & 1));
    expect(dividends(value)).toEqual([0, 2, 5, 0, -3, 0, 0, 0]);
  });

  it('show an interaction of two at their pair', () => {
    expect(dividends([0, 1, 1, 5])).toEqual([0, 1, 1, 3]);
  });
});

describe('sampledShares', () => {
  it('is exact when effects only add up, whatever the orders', async () => {
    const weights = [1, -2, 3, 4, 0, 6, 7];
    let asked = 0;
    const value = async (subset: number) => {
      asked++;
      return weights.reduce((sum, weight, i) => sum + ((subset >> i) & 1) * weight, 0);
    };
    const { shares } = await sampledShares(7, value, 40, () => 0.3);
    for (const [i, share] of shares.entries()) expect(share).toBeCloseTo(weights[i]!, 12);
    expect(asked).toBeLessThanOrEqual(40);
  });
});
