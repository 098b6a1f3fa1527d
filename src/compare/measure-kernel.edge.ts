/** The WebAssembly kernel that measures blocks, or its plain twin where it was not built. */
import { type KernelModule, kernelModule, PAGE_BYTES, startKernel } from '../outputs/kernel-module.edge.ts';
import { BLOCK, type MeasureKernel, plainKernel, STAGED_BLOCKS } from './measure-block.ts';

// The first page is the module's own; the totals lie in it, above anything that it places there.
const TOTALS = 32_768;
const REFERENCE = PAGE_BYTES;
const RESULT = REFERENCE + STAGED_BLOCKS * BLOCK * 8;

/** A kernel with memory of its own; the fast one when `npm run build` has made it. */
export function measureKernel(): MeasureKernel {
  const module = kernelModule('measure-block');
  return module === null ? plainKernel() : vectorKernel(module);
}

/** @param module measure-block.wasm, compiled */
export function vectorKernel(module: KernelModule): MeasureKernel {
  const { memory, functions } = startKernel(module, RESULT + STAGED_BLOCKS * BLOCK * 8);
  const measure = functions.measure!;
  const doubles = new Float64Array(memory, TOTALS, 16);
  const longs = new BigUint64Array(memory, TOTALS, 16);
  return {
    reference: new Float64Array(memory, REFERENCE, STAGED_BLOCKS * BLOCK),
    result: new Float64Array(memory, RESULT, STAGED_BLOCKS * BLOCK),
    measure(start, count, weighing, totals) {
      doubles[6] = totals.maxAbsolute;
      doubles[7] = totals.maxRelative;
      longs[8] = totals.maxUlp;
      doubles[9] = totals.maxReference;
      doubles[14] = totals.worstRatio;
      measure(REFERENCE + start * 8, RESULT + start * 8, count, weighing.absolute, weighing.relative, TOTALS);
      // In the order of the kernel's own list of places.
      totals.identical = doubles[0]!;
      totals.nanInReference = doubles[1]!;
      totals.nanInResult = doubles[2]!;
      totals.infInReference = doubles[3]!;
      totals.infInResult = doubles[4]!;
      totals.unlike = doubles[5]!;
      totals.maxAbsolute = doubles[6]!;
      totals.maxRelative = doubles[7]!;
      totals.maxReference = doubles[9]!;
      totals.sumAbsolute = doubles[10]!;
      totals.sumSquares = doubles[11]!;
      totals.sumReference = doubles[12]!;
      totals.sumReferenceSquares = doubles[13]!;
      totals.worstRatio = doubles[14]!;
      totals.worstIndex = doubles[15]!;
      totals.maxUlp = longs[8]!;
    },
  };
}
