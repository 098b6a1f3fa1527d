import { describe, expect, it } from 'vitest';
import { plainKernel } from '../../src/compare/measure-block.ts';
import { noiseFloor, noiseTolerance } from '../../src/compare/noise-floor.ts';

const reference = Float64Array.from({ length: 500 }, (_, i) => 1 + Math.sin(i));
const perturbed = (size: number) => reference.map((value, i) => value * (1 + size * Math.cos(7 * i)));

describe('the noise floor of a code', () => {
  it('keeps the distribution, and lies above every run seen', () => {
    const sizes = [3e-15, 1e-15, 2e-15, 4e-15];
    const noise = noiseFloor(reference, sizes.map(perturbed), 'L2', plainKernel());
    expect(noise.deviations).toHaveLength(4);
    expect([...noise.deviations]).toEqual([...noise.deviations].sort((a, b) => a - b));
    expect(noise.floor).toBeGreaterThanOrEqual(noise.deviations[3]!);
    expect(noiseTolerance(noise)).toMatchObject({ norm: 'L2', relative: noise.floor });
  });

  it('leaves out runs with a NaN or another length, and says how many', () => {
    const broken = perturbed(1e-15);
    broken[7] = Number.NaN;
    const runs = [perturbed(1e-15), perturbed(2e-15), broken, new Float64Array(3)];
    const noise = noiseFloor(reference, runs, 'Linf', plainKernel());
    expect(noise.unusable).toBe(2);
    expect(noiseTolerance(noise)!.reason).toBe('the noise floor of 2 repeated runs, 2 more unusable');
  });

  it('is unknown from a single run', () => {
    expect(noiseTolerance(noiseFloor(reference, [perturbed(1e-15)], 'L2', plainKernel()))).toBeNull();
  });
});
