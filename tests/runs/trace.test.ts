import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { EndUnmeasurable, traceChain } from '../../src/runs/trace.ts';

const chain = (count: number) => Array.from({ length: count }, (_, i) => `c${i}`);
const number = (commit: string) => Number(commit.slice(1));

/** A history in which quantity j moves by `size` tolerances at each commit of `steps[j]`, and some commits can't be built. */
function history(steps: readonly (readonly number[])[], broken: readonly number[] = [], size = 3) {
  const measured: number[] = [];
  return {
    measured,
    measure: async (commit: string) => {
      const at = number(commit);
      measured.push(at);
      return broken.includes(at) ? null : steps.map((places) => size * places.filter((place) => place <= at).length);
    },
    distance: (a: number[], b: number[], quantity: string) => Math.abs(a[Number(quantity)]! - b[Number(quantity)]!),
  };
}

const found = (steps: readonly { quantity: string; after: string }[]) =>
  steps.map((step) => `${step.quantity}@${step.after}`).sort();
const planted = (steps: readonly (readonly number[])[]) =>
  steps.flatMap((places, quantity) => places.map((place) => `${quantity}@c${place}`)).sort();

describe('traceChain', () => {
  it('finds every one of k steps among 1,024 commits with at most 1.3·(k·log2(n/k) + k) runs beside the two ends', async () => {
    const place = fc.integer({ min: 1, max: 1023 });
    await fc.assert(
      fc.asyncProperty(fc.uniqueArray(place, { minLength: 1, maxLength: 64 }), async (places) => {
        const { measure, distance, measured } = history([places]);
        const trace = await traceChain({ commits: chain(1024), quantities: ['0'], measure, distance });
        expect(found(trace.steps)).toEqual(planted([places]));
        expect(new Set(measured).size).toBe(measured.length);
        expect(trace.runs).toBe(measured.length);
        const k = places.length;
        expect(trace.runs - 2).toBeLessThanOrEqual(1.3 * (k * Math.log2(1024 / k) + k));
      }),
      { numRuns: 300 },
    );
  });

  it('asks twice and no more when nothing moved', async () => {
    const { measure, distance, measured } = history([[]]);
    const trace = await traceChain({ commits: chain(1024), quantities: ['0'], measure, distance });
    expect(trace.steps).toEqual([]);
    expect(measured).toEqual([0, 1023]);
  });

  it('shares runs among quantities: two that move together cost no more than one', async () => {
    const one = history([[700]]);
    const two = history([[700], [700]]);
    const first = await traceChain({ commits: chain(1024), quantities: ['0'], ...one });
    const second = await traceChain({ commits: chain(1024), quantities: ['0', '1'], ...two });
    expect(second.runs).toBe(first.runs);
    expect(found(second.steps)).toEqual(['0@c700', '1@c700']);
  });

  it('finds every step of every quantity', async () => {
    const places = fc.uniqueArray(fc.integer({ min: 1, max: 99 }), { maxLength: 8 });
    await fc.assert(
      fc.asyncProperty(fc.array(places, { minLength: 1, maxLength: 4 }), async (steps) => {
        const quantities = steps.map((_, i) => String(i));
        const trace = await traceChain({ commits: chain(100), quantities, ...history(steps) });
        expect(found(trace.steps)).toEqual(planted(steps));
      }),
    );
  });

  it('names all commits that may have made a step when those between can not be built', async () => {
    const broken = Array.from({ length: 30 }, (_, i) => 40 + i);
    const { measure, distance, measured } = history([[55]], broken);
    const trace = await traceChain({ commits: chain(128), quantities: ['0'], measure, distance });
    expect(trace.steps).toMatchObject([{ before: 'c39', after: 'c70' }]);
    expect(trace.steps[0]!.suspects).toEqual(Array.from({ length: 31 }, (_, i) => `c${40 + i}`));
    expect(trace.unmeasurable.map(number).every((one) => broken.includes(one))).toBe(true);
    expect([...trace.unmeasurable, ...trace.assumedUnmeasurable].map(number).sort((a, b) => a - b)).toEqual(broken);
    expect(measured.filter((one) => broken.includes(one)).length).toBeLessThan(30);
  });

  it('never blames a step on the wrong commits, whatever can not be built', async () => {
    const inner = fc.integer({ min: 1, max: 62 });
    await fc.assert(
      fc.asyncProperty(
        fc.uniqueArray(inner, { maxLength: 5 }),
        fc.uniqueArray(inner, { maxLength: 40 }),
        async (steps, broken) => {
          const trace = await traceChain({ commits: chain(64), quantities: ['0'], ...history([steps], broken) });
          for (const step of steps) {
            expect(trace.steps.some((one) => one.suspects.includes(`c${step}`))).toBe(true);
          }
          for (const one of trace.steps)
            expect(one.suspects.some((commit) => steps.includes(number(commit)))).toBe(true);
        },
      ),
    );
  });

  it('follows a quantity that creeps by steps each within tolerance', async () => {
    const steps = [5, 20, 40, 50];
    const trace = await traceChain({ commits: chain(64), quantities: ['0'], ...history([steps], [], 0.4) });
    expect(found(trace.steps)).toEqual(planted([steps]));
    expect(trace.steps.every((step) => step.creeping)).toBe(true);
  });

  it('takes no noise below the threshold for a step', async () => {
    let seed = 1;
    const noise = () => {
      seed = (seed * 16807) % 2147483647;
      return (seed / 2147483647 - 0.5) * 4;
    };
    const measure = async (commit: string) => (number(commit) >= 300 ? 100 : 0) + noise();
    const trace = await traceChain({
      commits: chain(512),
      quantities: ['q'],
      measure,
      distance: (a: number, b: number) => Math.abs(a - b),
      threshold: () => 8,
    });
    expect(found(trace.steps)).toEqual(['q@c300']);
  });

  it('says which end can not be built', async () => {
    const { measure, distance } = history([[3]], [7]);
    await expect(traceChain({ commits: chain(8), quantities: ['0'], measure, distance })).rejects.toThrow(
      EndUnmeasurable,
    );
  });
});
