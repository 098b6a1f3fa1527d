import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { smallestSet } from '../../src/runs/smallest-set.ts';

describe('smallestSet', () => {
  it('finds the three of eight that fail together, as in the example of Zeller and Hildebrandt (2002), section 3', async () => {
    // Their figure: configurations fail that hold 1, 7 and 8.
    const set = await smallestSet([1, 2, 3, 4, 5, 6, 7, 8], async (subset) =>
      [1, 7, 8].every((one) => subset.includes(one)),
    );
    expect(set).toEqual([1, 7, 8]);
  });

  it('never keeps an item that could be taken away', async () => {
    const items = Array.from({ length: 10 }, (_, i) => i);
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.subarray(items, { minLength: 1 }), { minLength: 1, maxLength: 4 }),
        async (causes) => {
          const holds = (subset: readonly number[]) =>
            causes.some((cause) => cause.every((one) => subset.includes(one)));
          const set = await smallestSet(items, async (subset) => holds(subset));
          expect(holds(set)).toBe(true);
          for (const item of set) expect(holds(set.filter((one) => one !== item))).toBe(false);
        },
      ),
    );
  });

  it('asks about no subset twice', async () => {
    const asked: string[] = [];
    await smallestSet([1, 2, 3, 4, 5, 6, 7, 8], async (subset) => {
      asked.push(subset.join());
      return subset.includes(2) && subset.includes(5);
    });
    expect(new Set(asked).size).toBe(asked.length);
  });
});
