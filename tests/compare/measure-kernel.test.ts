import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { SharedLedger } from '../../src/compare/block-sums.ts';
import { BLOCK, type MeasureKernel, plainKernel, type Weighing } from '../../src/compare/measure-block.ts';
import { vectorKernel } from '../../src/compare/measure-kernel.edge.ts';
import { measureSegments } from '../../src/compare/measure-segments.ts';
import { conclude, measureArrays } from '../../src/compare/measuring.ts';
import type { KernelModule } from '../../src/outputs/kernel-module.edge.ts';
import type { ArrayCursor } from '../../src/outputs/output-file.ts';
import { kernelFrom } from '../support/kernels.ts';

let module: KernelModule;
let fast: MeasureKernel;
const plain = plainKernel();
beforeAll(() => {
  module = kernelFrom('src/compare/measure-block.as.ts');
  fast = vectorKernel(module);
});

const bothAgree = (reference: Float64Array, result: Float64Array, weighing: Weighing) =>
  expect(measureArrays(reference, result, weighing, fast)).toEqual(measureArrays(reference, result, weighing, plain));

describe('the vector kernel gives what its plain twin gives, to the last bit', () => {
  const any = fc.oneof(
    { weight: 6, arbitrary: fc.double() },
    { weight: 2, arbitrary: fc.constantFrom(0, -0, 1, -1, 5e-324, -5e-324, 1e-310, Number.MAX_VALUE, 1e200, 1e-200) },
    { weight: 1, arbitrary: fc.constantFrom(Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY) },
  );
  const finite = fc.double({ noNaN: true, noDefaultInfinity: true });
  const weighing = fc.constantFrom(
    { absolute: 1, relative: 0 },
    { absolute: 0, relative: 1e-6 },
    { absolute: 1e-8, relative: 1e-5 },
    { absolute: 1e300, relative: 1e-300 },
    { absolute: 5e-324, relative: 0.3 },
  );

  it('for any doubles whatever', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(any, any), { maxLength: 70 }), weighing, (pairs, weights) => {
        bothAgree(
          Float64Array.from(pairs, (pair) => pair[0]),
          Float64Array.from(pairs, (pair) => pair[1]),
          weights,
        );
      }),
      { numRuns: 500 },
    );
  });

  it('for finite doubles in whole vectors, many equal, over many small blocks', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(finite, finite, fc.boolean()), { minLength: 4, maxLength: 64 }),
        weighing,
        (pairs, weights) => {
          const whole = pairs.slice(0, pairs.length & ~3);
          const reference = Float64Array.from(whole, (pair) => pair[0]);
          const result = Float64Array.from(whole, (pair) => (pair[2] ? pair[0] : pair[1]));
          bothAgree(reference, result, weights);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('for denormals, where products round away their digits', () => {
    const tiny = fc.integer({ min: -40, max: 40 }).map((units) => units * 5e-324);
    fc.assert(
      fc.property(fc.array(fc.tuple(tiny, tiny), { minLength: 8, maxLength: 8 }), weighing, (pairs, weights) => {
        bothAgree(
          Float64Array.from(pairs, (pair) => pair[0]),
          Float64Array.from(pairs, (pair) => pair[1]),
          weights,
        );
      }),
      { numRuns: 500 },
    );
  });

  it('for fields of several blocks in which the worst element comes late', () => {
    const count = 3 * BLOCK + 1234;
    const reference = Float64Array.from({ length: count }, (_, i) => Math.sin(i) * 10 ** (i % 40));
    const result = reference.map((value, i) => value * (1 + (i % 7 === 0 ? 1e-13 * i : 0)));
    for (const weights of [
      { absolute: 1, relative: 0 },
      { absolute: 0, relative: 1e-6 },
    ]) {
      bothAgree(reference, result, weights);
    }
    result[2 * BLOCK + 17] = Number.NaN;
    bothAgree(reference, result, { absolute: 0, relative: 1e-6 });
  });
});

/** A cursor that can skip, as those over files can. */
function skipping(values: Float64Array): ArrayCursor {
  let at = 0;
  return {
    fill(into) {
      const part = values.subarray(at, at + into.length);
      into.set(part);
      at += part.length;
      return part.length;
    },
    skip(count) {
      at += count;
    },
    close() {},
  };
}

describe('measures', () => {
  it('do not depend on how the numbers came in pieces', () => {
    const reference = Float64Array.from({ length: 100_000 }, (_, i) => Math.sin(i));
    const result = reference.map((value, i) => value + 1e-12 * Math.cos(i));
    const whole = measureArrays(reference, result, { absolute: 1, relative: 0 }, fast);
    const small = { ...plain, reference: plain.reference.subarray(0, BLOCK), result: plain.result.subarray(0, BLOCK) };
    expect(measureArrays(reference, result, { absolute: 1, relative: 0 }, small)).toEqual(whole);
  });

  it('do not depend on how threads shared the elements out', async () => {
    const count = 5_000_001;
    const reference = Float64Array.from({ length: count }, (_, i) => Math.sin(i) * (i % 97));
    const result = reference.map((value, i) => value * (1 + 1e-12 * Math.cos(i)));
    const weighing = { absolute: 0, relative: 1e-9 };
    const ledger = SharedLedger.forBlocks(Math.ceil(count / BLOCK));
    const taken = new SharedArrayBuffer(4);
    const work = { count, weighing, fills: {}, resultFactor: 1, sums: ledger.memory, taken };
    const thread = () =>
      measureSegments(
        work,
        skipping(reference),
        skipping(result),
        vectorKernel(module),
        () => new Promise((resolve) => setImmediate(resolve)),
      );
    const found = await Promise.all([thread(), thread(), thread()]);
    // Each took a part, or this shows nothing.
    for (const { part } of found) expect(part.count).toBeLessThan(count);
    const parts = found.map((one) => one.part);
    const shared = conclude(parts.toReversed(), ledger.totals(), weighing);
    expect(shared).toEqual(measureArrays(reference, result, weighing, fast));
  });

  it('keep norms of numbers whose squares overflow or vanish', () => {
    for (const scale of [1e200, 1e-200, 1e307, 1e-310]) {
      const reference = Float64Array.of(3, 4).map((value) => value * scale);
      const result = Float64Array.of(3, 5).map((value) => value * scale);
      const { measures, norms } = measureArrays(reference, result, { absolute: 1, relative: 0 }, fast);
      expect(norms.l2Reference / scale).toBeCloseTo(5, 9);
      expect(measures.l2).toBeCloseTo(0.2, 9);
    }
  });
});
