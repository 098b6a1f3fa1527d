import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ASCII, UNICODE } from '../../src/screens/glyphs.ts';
import { plotProfile } from '../../src/screens/plot.ts';

const whole = { from: 0, to: 1, logValue: false };
const profileOf = (along: number[], reference: number[], result: number[]) => ({
  along: { name: 'x', unit: 'cm', values: along },
  reference,
  result,
  band: reference.map((value) => Math.abs(value) * 1e-3),
});

describe('a plotted profile', () => {
  it('fills exactly its place whatever the values are', () => {
    const value = fc.oneof(fc.double(), fc.constantFrom(1, 1 + 2 ** -52, 0, -0, 5e-324, 1.7e308));
    fc.assert(
      fc.property(
        fc.array(fc.tuple(value, value, value), { maxLength: 40 }),
        fc.integer({ min: 1, max: 60 }),
        fc.integer({ min: 1, max: 20 }),
        fc.boolean(),
        fc.boolean(),
        (points, width, height, logValue, ascii) => {
          const profile = profileOf(
            points.map(([x]) => x),
            points.map(([, y]) => y),
            points.map(([, , y]) => y),
          );
          const plot = plotProfile(profile, { ...whole, logValue }, width, height, ascii ? ASCII : UNICODE);
          expect(plot.rows).toHaveLength(height);
          for (const row of plot.rows) expect([...row]).toHaveLength(width);
          expect([...plot.used]).toHaveLength(width);
          expect(plot.worstColumn).toBeGreaterThanOrEqual(0);
          expect(plot.worstColumn).toBeLessThan(width);
        },
      ),
    );
  });

  it('sets a point where it stands on the axis, not by its number', () => {
    // Nine points crowd in the first tenth of the axis and the worst is the last of them.
    const along = [0, 1, 2, 3, 4, 5, 6, 7, 8, 100];
    const reference = along.map(() => 1);
    const result = along.map((_, index) => (index === 8 ? 2 : 1));
    expect(plotProfile(profileOf(along, reference, result), whole, 50, 5, UNICODE).worstColumn).toBe(4);
  });
});
