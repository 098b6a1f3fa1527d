// Published values: NPARC Alliance tutorial on examining spatial grid convergence; Celik et al., J. Fluids Eng. 130 (2008)
// 078001, Table 1; closed forms of the trapezoid rule. Each entry of the table names its own source.
import { describe, expect, it } from 'vitest';
import { extrapolate, gridConvergence, gridTolerance, spacingRatio } from '../../src/compare/grid-convergence.ts';
import checks from '../checks/grid-convergence.json' with { type: 'json' };

interface Entry {
  readonly id: string;
  readonly what: string;
  readonly source: string;
  readonly inputs: {
    readonly f_fine_to_coarse?: readonly string[];
    readonly phi?: readonly string[];
    readonly r?: number;
    readonly r21?: string;
    readonly r32?: string;
    readonly N?: readonly number[];
    readonly dimensions?: number;
  };
  readonly expected: Readonly<Record<string, number | string>>;
  readonly tolerance: { readonly absolute: number };
}

describe('grid convergence', () => {
  for (const entry of checks as unknown as readonly Entry[]) {
    it(`${entry.what} (${entry.source})`, () => {
      const values = (entry.inputs.f_fine_to_coarse ?? entry.inputs.phi)!.map(Number) as [number, number, number];
      const cells = entry.inputs.N;
      const ratios: [number, number] =
        cells === undefined
          ? [entry.inputs.r!, entry.inputs.r!]
          : [
              spacingRatio(cells[0]!, cells[1]!, entry.inputs.dimensions!),
              spacingRatio(cells[1]!, cells[2]!, entry.inputs.dimensions!),
            ];
      const found = gridConvergence(values, ratios);
      const measured: Readonly<Record<string, number>> = {
        p: found.order,
        GCI12_percent: found.fineIndex * 100,
        ratio: found.asymptoticRatio,
        inverse: 1 / found.asymptoticRatio,
        e_a: found.relativeError,
        e_ext: found.extrapolatedError,
        phi_ext: found.extrapolated,
        GCI: found.fineIndex,
        richardson_with_p2: extrapolate(values[0], values[1], ratios[0], 2),
      };
      let compared = 0;
      for (const [key, want] of Object.entries(entry.expected)) {
        if (typeof want !== 'number' || !(key in measured)) continue;
        expect(Math.abs(measured[key]! - want), key).toBeLessThanOrEqual(entry.tolerance.absolute);
        compared++;
      }
      expect(compared).toBeGreaterThan(0);
    });
  }

  it('says when values alternate, and gives no tolerance when they move apart', () => {
    expect(gridConvergence([6.0042, 5.9624, 6.0909], [2, 2]).oscillating).toBe(true);
    expect(gridTolerance(gridConvergence([1, 2, 2.1], [2, 2]))).toBeNull();
    expect(gridTolerance(gridConvergence([0.9705, 0.96854, 0.96178], [2, 2]))?.relative).toBeCloseTo(0.00103083, 7);
  });
});
