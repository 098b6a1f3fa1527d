/** The WebAssembly kernel that measures blocks, or its plain twin where it was not built. */
import { type KernelModule, kernelModule, PAGE_BYTES, startKernel } from '../outputs/kernel-module.edge.ts';
import { BLOCK, type BlockTotals, type MeasureKernel, plainKernel, STAGED_BLOCKS } from './measure-block.ts';

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
  const doubles = new Float64Array(memory, TOTALS, 17);
  const longs = new BigUint64Array(memory, TOTALS, 17);
  return {
    reference: new Float64Array(memory, REFERENCE, STAGED_BLOCKS * BLOCK),
    result: new Float64Array(memory, RESULT, STAGED_BLOCKS * BLOCK),
    measure(start, count, weighing, totals) {
      doubles[7] = totals.maxAbsolute;
      doubles[8] = totals.maxRelative;
      longs[9] = totals.maxUlp;
      doubles[10] = totals.maxReference;
      doubles[15] = totals.worstRatio;
      measure(REFERENCE + start * 8, RESULT + start * 8, count, weighing.absolute, weighing.relative, TOTALS);
      for (const [place, name] of PLACES) totals[name] = doubles[place]!;
      totals.maxUlp = longs[9]!;
    },
  };
}

/** Where each total lies; maxUlp, at 9, is an integer and read from `longs`. */
const PLACES: readonly (readonly [number, Exclude<keyof BlockTotals, 'maxUlp'>])[] = [
  [0, 'identical'],
  [1, 'nanInReference'],
  [2, 'nanInResult'],
  [3, 'infInReference'],
  [4, 'infInResult'],
  [5, 'unlike'],
  [6, 'beyond'],
  [7, 'maxAbsolute'],
  [8, 'maxRelative'],
  [10, 'maxReference'],
  [11, 'sumAbsolute'],
  [12, 'sumSquares'],
  [13, 'sumReference'],
  [14, 'sumReferenceSquares'],
  [15, 'worstRatio'],
  [16, 'worstIndex'],
];
